// Every notice `model` can give. Rows are counted for the reader from 1, the row after the header, and named with their file.

import type { Intent, Level, Notice, Place } from "../../runtime/notice.ts"
import { heading } from "../../runtime/notice.ts"
import type { Clause } from "../../runtime/statement.ts"
import type { Name } from "../../runtime/value.ts"
import { written, writtenCount } from "../figure/number.ts"
import { saidWith } from "../language/slip.ts"
import { parameterRange } from "../language/vocabulary.ts"
import type { NotReduced } from "../statistics/bias-reduced.ts"

const notice = (
  level: Level,
  code: string,
  clause: string | null,
  at: Place,
  text: string,
  hint: string | null,
  mend: Intent | null = null,
): Notice => ({ level, code: `model/${code}`, clause, at, text, hint, mend })

const fault = (code: string, clause: string | null, at: Place, text: string, hint: string | null, mend: Intent | null = null): Notice =>
  notice("fault", code, clause, at, text, hint, mend)

/** Names in a row: `a, b and c`. */
export const list = (words: readonly string[], last: "and" | "or" = "and"): string =>
  words.length < 2 ? (words[0] ?? "") : `${words.slice(0, -1).join(", ")} ${last} ${words.at(-1)}`

const several = (words: readonly string[], most: number): string =>
  words.length <= most ? list(words) : `${words.slice(0, most).join(", ")} and ${writtenCount(words.length - most)} more`

export const rows = (count: number): string => (count === 1 ? "1 row" : `${writtenCount(count)} rows`)

/** A level or a text as it stands in a statement. */
const quoted = (text: string): string => `"${text.replace(/["\\]/g, "\\$&")}"`

/** A click that writes this clause, in place of what it says or new. */
const writes = (clause: string, says: string): Intent => ({
  label: `Write ${clause} ${says}`,
  edits: [{ cell: null, clause, nth: 0, says }],
})

const takesAway = (clause: string): Intent => ({ label: `Take ${clause} away`, edits: [{ cell: null, clause, nth: 0, says: null }] })

/** A click that puts another word in place of one token; null where the place is more than that. */
const puts = (clause: Clause | undefined, at: Place, word: string): Intent | null => {
  if (clause === undefined || at.to - at.from !== 1) return null
  const says = saidWith(clause, [{ from: at.from, to: at.to, text: word }])
  return { label: `Write ${word}`, edits: [{ cell: null, clause: clause.keyword, nth: 0, says }] }
}

/** A place in the data as a person counts: `row 17 of terrace.csv`. */
export type RowName = (row: number) => string

/** Rows at fault, and the first of them with what it holds. */
export type RowsAt = { readonly count: number; readonly first: number; readonly value: number }

/** `buds is −1 in row 12 of terrace.csv`, or `buds is below 0 in 3 rows (first: row 12 of terrace.csv, with −1)`. */
const isIn = (name: string, otherwise: string, at: RowsAt, row: RowName): string =>
  at.count === 1
    ? `${name} is ${numberSays(at.value)} in ${row(at.first)}`
    : `${name} is ${otherwise} in ${rows(at.count)} (first: ${row(at.first)}, with ${numberSays(at.value)})`

const numberSays = (value: number): string => written(value, Math.max(1, Math.min(12, significant(value))))
const significant = (value: number): number => value.toExponential().split("e")[0]?.replace(/[-.]/g, "").length ?? 1

const capital = (text: string): string => `${text.slice(0, 1).toUpperCase()}${text.slice(1)}`

// The statement as text.

const clauseHints: Readonly<Record<"data" | "response" | "family" | "predictor", string>> = {
  data: "Add a clause such as data, and the name of a data cell.",
  response: "Add a clause such as response killed out of n, or response buds.",
  family: "Add a clause such as family binomial; counts have poisson and negative_binomial, amounts normal, gamma and others.",
  predictor: "Add a clause such as predictor dose; predictor intercept is the model without predictors.",
}

export const clauseMissing = (clause: "data" | "response" | "family" | "predictor"): Notice =>
  fault("clause-missing", null, heading, `This model does not say its ${clause}.`, clauseHints[clause])

export const twoWeights = (at: Place): Notice =>
  fault(
    "two-weights",
    "precision",
    at,
    "A row is either repeated or of known precision, and here it is said to be both.",
    "Keep repeat where a row stands for several alike, and precision where it is one observation known better or worse.",
    takesAway("precision"),
  )

export const samplingAndWeight = (other: "repeat" | "precision", at: Place): Notice =>
  fault(
    "two-weights",
    "sampling",
    at,
    other === "repeat"
      ? "Sampling weights say how many others a row stands for, and here it is also said how often it stands itself."
      : "Sampling weights say how many others a row stands for, and here it is also said how well each is known.",
    `Keep sampling where the rows were drawn with unequal chances, and ${other} otherwise.`,
    takesAway("sampling"),
  )

export const dispersionNotPositive = (text: string, at: Place): Notice =>
  fault("dispersion-not-positive", "dispersion", at, `A dispersion is above 0, and ${text} is not.`, "Write one, or a number such as 2.5.")

export const confidenceOutside = (text: string, value: number, at: Place): Notice =>
  fault(
    "confidence-outside",
    "confidence",
    at,
    `A level of confidence lies between 0 and 100%, and ${text} does not.`,
    "Write a level such as confidence 95%.",
    value >= 50 && value < 100 ? writes("confidence", `${text}%`) : null,
  )

// Family and link.

export const noSuchFamily = (name: string, near: string | null, known: readonly string[], clause: Clause | undefined, at: Place): Notice =>
  fault(
    "no-such-family",
    "family",
    at,
    `There is no family called ${name}.`,
    near === null ? `The families are ${list(known)}.` : `The nearest name is ${near}.`,
    near === null ? null : puts(clause, at, near),
  )

export const noSuchLink = (name: string, near: string | null, known: readonly string[], clause: Clause | undefined, at: Place): Notice =>
  fault(
    "no-such-link",
    "link",
    at,
    `There is no link called ${name}.`,
    near === null ? `The links are ${list(known)}.` : `The nearest name is ${near}.`,
    near === null ? null : puts(clause, at, near),
  )

const exampleOf = (name: string): string =>
  ({ negative_binomial: "negative_binomial(2)", tweedie: "tweedie(1.5)", stukel: "stukel(0.2, 0.2)" })[name] ?? `${name}(0.5)`

/** `wants` are the names of the parameters. */
export const parametersOff = (clause: "family" | "link", name: string, wants: readonly string[], at: Place): Notice =>
  fault(
    "parameters-off",
    clause,
    at,
    wants.length === 0
      ? `The ${clause} ${name} has no parameter.`
      : `The ${clause} ${name} has ${wants.length === 1 ? "one parameter" : `${wants.length} parameters`}, ${list(wants)}.`,
    wants.length === 0 ? `Write ${clause} ${name}.` : `Write ${exampleOf(name)}, with the number you mean, or the name of a dial.`,
    wants.length === 0 ? writes(clause, name) : null,
  )

export const parameterInfinite = (clause: "family" | "link", name: string, at: Place): Notice =>
  fault(
    "parameter-infinite",
    clause,
    at,
    name === "negative_binomial"
      ? "With an infinite k the negative binomial is the Poisson family."
      : `The parameter of the ${clause} ${name} is a finite number.`,
    name === "negative_binomial" ? "Write family poisson." : `Write one such as ${exampleOf(name)}.`,
    name === "negative_binomial" ? writes("family", "poisson") : null,
  )

/** A number outside of what a parameter can be. */
export const parameterOutside = (clause: "family" | "link", name: string, parameter: string, value: number, at: Place): Notice =>
  fault(
    "parameter-outside",
    clause,
    at,
    `The parameter ${parameter} of ${name} is ${parameterRange(name).says}, and ${numberSays(value)} is not.`,
    name === "tweedie" && familiesOfPower[value] !== undefined
      ? `A variance of μ to the power ${value} is that of the family ${familiesOfPower[value]}.`
      : `Write one such as ${exampleOf(name)}.`,
    name === "tweedie" && familiesOfPower[value] !== undefined ? writes("family", familiesOfPower[value]) : null,
  )

const familiesOfPower: Readonly<Record<number, string>> = { 0: "normal", 1: "poisson", 2: "gamma", 3: "inverse_gaussian" }

export const linkNotLegal = (link: string, family: string, legal: readonly string[], families: readonly string[], at: Place): Notice =>
  fault(
    "link-not-legal",
    "link",
    at,
    `The link ${link} is not defined for every mean that the family ${family} can have.`,
    `Links for ${family} are ${list(legal)}; ${link} goes with ${list(families)}.`,
    legal[0] === undefined ? null : writes("link", legal[0]),
  )

export const notALink = (name: Name, at: Place): Notice =>
  fault("not-a-link", "link", at, `${name} is not a link.`, "Name a link of the language, or a cell that begins with the word link.")

/** `constants` are those of the link that are to be estimated. */
export const constantEstimateNotYet = (name: Name, constants: readonly Name[], at: Place): Notice =>
  fault(
    "not-available-yet",
    "link",
    at,
    `Estimating ${list(constants)} of the link ${name} is not available yet.`,
    `Give ${list(constants)} a number in ${name}, or the name of a dial.`,
  )

export const linkUndecided = (name: Name, properties: readonly string[], at: Place): Notice =>
  notice(
    "warning",
    "link-undecided",
    "link",
    at,
    `Whether ${name} is ${list(properties)} was not decided, and this fit rests on it.`,
    `${name} says where the doubt is.`,
  )

/** Ends of the possible means that the link goes beyond; null where it does not. */
export const linkReachesBeyond = (name: Name, family: string, low: number | null, high: number | null, at: Place): Notice => {
  const ends = [...(low === null ? [] : [`below ${low}`]), ...(high === null ? [] : [`above ${high}`])]
  return notice(
    "remark",
    "link-reaches-beyond",
    "link",
    at,
    `${name} is a link, but some η give it means ${list(ends, "or")}, which ${family} cannot have.`,
    "The fit keeps to the others; beyond the data a line may leave them.",
  )
}

/** The link these families take when none is said is not their canonical one, which few would choose. */
const withoutCanonical = /^(negative_binomial|tweedie|quasi_likelihood)\b/

export const linkNotChosen = (link: string, family: string): Notice =>
  notice(
    "remark",
    "link-not-chosen",
    null,
    heading,
    withoutCanonical.test(family)
      ? `Nobody chose a link, so ${link} was taken, as for every model of ${family} that names none.`
      : `Nobody chose a link, so the canonical one of ${family} was taken: ${link}.`,
    "Write it out if it is meant, or compare others on the two scales.",
    writes("link", link),
  )

export const notANumber = (name: Name, clause: string, at: Place): Notice =>
  fault("not-a-number", clause, at, `${name} is not a number here.`, "Name a dial or a value that is a finite number.")

// The variance of quasi-likelihood.

export const varianceMissing = (at: Place): Notice =>
  fault(
    "variance-missing",
    "family",
    at,
    "Quasi-likelihood needs the variance as an expression of the mean mu.",
    "Write such as family quasi_likelihood(mu), or quasi_likelihood(mu*(1 - mu)) for shares.",
    writes("family", "quasi_likelihood(mu)"),
  )

export const varianceNotSmooth = (part: string, at: Place): Notice =>
  fault(
    "variance-not-smooth",
    "family",
    at,
    `A variance is a smooth function of mu, and ${part} has no place in it.`,
    "Signs, powers, exp, log, square_root and their like can stand there.",
  )

export const varianceNotPositive = (says: string, at: Place): Notice =>
  fault(
    "variance-not-positive",
    "family",
    at,
    `The variance ${says} is not above 0 for all numbers, nor for all above 0, nor for all shares between 0 and 1.`,
    "Write a variance that is above 0 wherever a mean can be, such as mu, mu^2 or mu*(1 - mu).",
  )

export const outsideVariance = (
  name: Name,
  { says, range }: { readonly says: string; readonly range: readonly [number, number] },
  at: RowsAt,
  row: RowName,
  place: Place,
): Notice =>
  fault(
    "outside-variance",
    "response",
    place,
    `With the variance ${says} a response is ${rangeSays(range)}, but ${isIn(name, "not", at, row)}.`,
    "If the entry stands for a missing value, say so in the data with a missing clause.",
  )

const rangeSays = ([low, high]: readonly [number, number]): string =>
  high === 1 ? "between 0 and 1" : low === 0 ? "0 or above" : "any number"

export const linkNotOfVariance = (
  link: string,
  says: string,
  range: readonly [number, number],
  legal: readonly string[],
  at: Place,
): Notice =>
  fault(
    "link-not-legal",
    "link",
    at,
    `The link ${link} is not defined wherever the variance ${says} is above 0, which is ${range[1] === 1 ? "between 0 and 1" : range[0] === 0 ? "above 0" : "everywhere"}.`,
    `Links for it are ${list(legal)}.`,
    legal[0] === undefined ? null : writes("link", legal[0]),
  )

export const dispersionWithoutLikelihood = (at: Place): Notice =>
  fault(
    "dispersion-without-likelihood",
    "dispersion",
    at,
    "Quasi-likelihood has no likelihood from which a dispersion could come.",
    "Write dispersion pearson, which is also taken where nothing is said.",
    writes("dispersion", "pearson"),
  )

// Limits of the mean.

export const limitsNotOfFamily = (family: string, at: Place): Notice =>
  fault(
    "limits-not-of-family",
    "limits",
    at,
    `Limits are of a share, and the means of the family ${family} are none.`,
    "Take the limits away, or choose family binomial.",
    takesAway("limits"),
  )

export const limitsOutside = (low: number, high: number, at: Place): Notice =>
  fault(
    "limits-outside",
    "limits",
    at,
    low >= high
      ? `The lower limit is below the upper one, and ${numberSays(low)} is not below ${numberSays(high)}.`
      : `Limits of a share lie between 0 and 1, and ${numberSays(low < 0 ? low : high)} does not.`,
    "Write such as limits 0.05 to 1, or limits estimate to 1.",
  )

export const controlWithoutLimits = (at: Place): Notice =>
  fault(
    "control-without-limits",
    "control",
    at,
    "The mean of rows of no dose is the lower limit, and no limits are said.",
    "Write limits estimate to 1 to estimate it, or a number in its place.",
    writes("limits", "estimate to 1"),
  )

export const controlWithSampling = (at: Place): Notice =>
  fault(
    "control-with-sampling",
    "control",
    at,
    "Rows of no dose weigh by their trials, and sampling weights have no place among them yet.",
    "Take control or sampling away.",
    takesAway("control"),
  )

export const controlWantsTruth = (is: string, at: Place): Notice =>
  fault(
    "control-wants-truth",
    "control",
    at,
    `Which rows have no dose is a question, and this is a ${is}.`,
    "Write a comparison such as control dose = 0.",
  )

export const noControlRows = (at: Place): Notice =>
  notice("warning", "no-control-rows", "control", at, "No row used is one of no dose.", "Take control away, or look at what it asks.")

/** A dose of nothing cannot have been given to rows that all have the lower limit for their mean. */
export const controlAboveLimit = (low: number, at: Place): Notice =>
  fault(
    "control-above-limit",
    "control",
    at,
    `With a lower limit of ${numberSays(low)} no row of no dose can have ${low === 0 ? "a success" : "a failure"}, but some have.`,
    "Write limits estimate to 1, so that the lower limit comes from the data.",
    writes("limits", "estimate to 1"),
  )

/** A parameter that was estimated and ended where it can go no farther. */
export const parameterAtEnd = (of: string, clause: "family" | "link" | "limits", value: number | null): Notice =>
  notice(
    "warning",
    "parameter-at-end",
    clause,
    heading,
    of === "k"
      ? "The likelihood grows with k without end: these counts vary no more than Poisson's, and the fit is that of the Poisson family."
      : `The best ${of} is ${value === null ? "at infinity" : written(value, 6)}, at the end of what it can be, so it has no standard error; those of the coefficients take it as given.`,
    of === "k" ? "Write family poisson." : null,
    of === "k" ? writes("family", "poisson") : null,
  )

// The table and its columns.

export const notATable = (name: Name, at: Place): Notice =>
  fault("not-a-table", "data", at, `${name} is not a table.`, "Name a cell that begins with the word data.")

export const noSuchColumn = (
  name: Name,
  table: Name,
  clause: string,
  at: Place,
  near: Name | null,
  columns: readonly Name[],
  written: Clause | undefined,
): Notice =>
  fault(
    "no-such-column",
    clause,
    at,
    `${table} has no column ${name}.`,
    near === null ? `Its columns are ${several(columns, 12)}.` : `The nearest of its columns is ${near}.`,
    near === null ? null : puts(written, at, near),
  )

export const columnAndCell = (name: Name, table: Name, at: Place): Notice =>
  fault(
    "column-and-cell",
    "offset",
    at,
    `${name} is a column of ${table} and the name of a cell, so it cannot be told which is meant.`,
    "Give one of the two another name.",
  )

export const textColumn = (name: Name, clause: string, at: Place): Notice =>
  fault(
    "text-column",
    clause,
    at,
    `${name} is text, and a text says nothing that can be counted or measured.`,
    `If its entries are kinds of something, make it a category in the data: column ${name} category.`,
  )

export const wantsNumber = (name: Name, is: string, what: string, clause: string, at: Place): Notice =>
  fault("wants-number", clause, at, `${capital(what)} needs a number, and ${name} is a ${is}.`, `Name a column of numbers or counts.`)

export const callOfCategory = (name: Name, is: string, call: string, at: Place): Notice =>
  fault(
    "call-of-category",
    "predictor",
    at,
    `${call} makes columns from a number, and ${name} is a ${is}.`,
    `Write ${name} alone: it enters by differences from its first level.`,
  )

// The response.

export const needsLevel = (name: Name, is: string, levels: readonly string[], at: Place): Notice =>
  fault(
    "needs-level",
    "response",
    at,
    `${name} is a ${is}, and which of its levels counts as success is not said.`,
    levels.length === 2 ? `Write ${name} is "…", with ${list(levels.map(quoted), "or")}.` : `Write ${name} is "…", with one of its levels.`,
    levels.length === 2 ? writes("response", `${name} is ${quoted(levels[1] as string)}`) : null,
  )

export const noSuchLevel = (name: Name, level: string, levels: readonly string[], near: string | null, at: Place): Notice =>
  fault(
    "no-such-level",
    "response",
    at,
    `${name} has no level ${quoted(level)}.`,
    `Its levels are ${several(levels.map(quoted), 8)}.`,
    near === null ? null : writes("response", `${name} is ${quoted(near)}`),
  )

export const moreThanTwoLevels = (name: Name, levels: readonly string[], at: Place): Notice =>
  fault(
    "more-than-two-levels",
    "response",
    at,
    `${name} has ${levels.length} levels in the rows used (${several(levels.map(quoted), 4)}), and a binomial response has two.`,
    `Make a truth of it in the data, such as: make is_first = ${name} = ${quoted(levels[0] ?? "")}.`,
  )

export const levelOfNumber = (name: Name, is: string, at: Place): Notice =>
  fault(
    "level-of-number",
    "response",
    at,
    `${name} is a ${is} and has no levels.`,
    `Write response ${name}, or make a truth of it in the data.`,
    writes("response", name),
  )

export const responseNotOfFamily = (name: Name, is: string, family: string, wants: string, at: Place, mend: string | null = null): Notice =>
  fault(
    "response-not-of-family",
    "response",
    at,
    `${capital(wants)} is what the family ${family} is for, and ${name} is a ${is}.`,
    mend === null ? "Name a column of numbers or counts, or choose another family." : `The family ${mend} is for a ${is}.`,
    mend === null ? null : writes("family", mend),
  )

export const trialsNotOfFamily = (family: string, at: Place): Notice =>
  fault(
    "trials-not-of-family",
    "response",
    at,
    `Successes out of trials have the family binomial, and this one is ${family}.`,
    "Choose family binomial, or name one column as the response.",
    writes("family", "binomial"),
  )

export const levelNotOfFamily = (family: string, at: Place): Notice =>
  fault(
    "level-not-of-family",
    "response",
    at,
    `Whether a category has a level is a matter for the family binomial, and this one is ${family}.`,
    "Choose family binomial, or name a column of numbers as the response.",
    writes("family", "binomial"),
  )

export const notZeroOrOne = (name: Name, at: RowsAt, row: RowName, shares: boolean, place: Place): Notice =>
  fault(
    "not-zero-or-one",
    "response",
    place,
    `A binomial response without trials is 0 or 1, but ${isIn(name, "neither", at, row)}.`,
    shares
      ? `Say successes out of trials, such as: response killed out of n; a share whose trials are not known is family quasi_likelihood(mu*(1 - mu)).`
      : `Say the trials, such as: response ${name} out of n.`,
  )

export const notWhole = (name: Name, at: RowsAt, row: RowName, place: Place): Notice =>
  fault(
    "not-whole",
    "response",
    place,
    `${name} counts something, but ${isIn("it", "not whole", at, row)}.`,
    "Name the column of counts; for shares the counts behind them are wanted.",
  )

export const countNotWhole = (name: Name, family: string, at: RowsAt, row: RowName, place: Place): Notice =>
  fault(
    "count-not-whole",
    "response",
    place,
    `The family ${family} is for counts, but ${isIn(name, "not whole", at, row)}.`,
    "A rate is a count with an exposure clause; other amounts with variance μ are family quasi_likelihood(mu).",
  )

export const countNegative = (name: Name, at: RowsAt, row: RowName, place: Place): Notice =>
  fault(
    "count-negative",
    "response",
    place,
    `${name} counts something, but ${isIn("it", "below 0", at, row)}.`,
    "If the entry stands for a missing value, say so in the data with a missing clause.",
  )

export const moreThanTrials = (
  successes: Name,
  trials: Name,
  at: RowsAt & { readonly trials: number },
  row: RowName,
  place: Place,
): Notice =>
  fault(
    "more-than-trials",
    "response",
    place,
    at.count === 1
      ? `${capital(row(at.first))} has ${successes} ${numberSays(at.value)} out of ${trials} ${numberSays(at.trials)}.`
      : `${rows(at.count)} have more ${successes} than ${trials} (first: ${row(at.first)}, with ${numberSays(at.value)} out of ${numberSays(at.trials)}).`,
    "There are at most as many successes as trials; the two columns may stand the wrong way round.",
  )

export const notPositive = (name: Name, family: string, at: RowsAt, row: RowName, place: Place): Notice =>
  fault(
    "not-positive",
    "response",
    place,
    `The family ${family} is for amounts above 0, but ${isIn(name, "0 or below", at, row)}.`,
    at.value === 0
      ? "Amounts with exact zeros are family tweedie(1.5) or another number between 1 and 2; rows without an amount can be left out in the data with a where clause."
      : "If the entry stands for a missing value, say so in the data with a missing clause.",
  )

export const belowZero = (name: Name, family: string, at: RowsAt, row: RowName, place: Place): Notice =>
  fault(
    "below-zero",
    "response",
    place,
    `The family ${family} is for amounts of 0 and above, but ${isIn(name, "below 0", at, row)}.`,
    "If the entry stands for a missing value, say so in the data with a missing clause.",
  )

// Exposure and weights.

export const exposureNotOfFamily = (family: string, at: Place): Notice =>
  fault(
    "exposure-not-of-family",
    "exposure",
    at,
    `A mean per unit of exposure is for means above 0, and those of the family ${family} can be below.`,
    "Take the exposure away, or divide the response by it in the data.",
    takesAway("exposure"),
  )

export const exposureNotOfLink = (link: string, at: Place): Notice =>
  fault(
    "exposure-not-of-link",
    "exposure",
    at,
    `Under the link ${link} a binomial mean has no value per unit of exposure.`,
    "With cloglog it has: log of the exposure is then added to the linear predictor.",
    writes("link", "cloglog"),
  )

export const exposureNotPositive = (name: Name, at: RowsAt, row: RowName, place: Place): Notice =>
  fault(
    "exposure-not-positive",
    "exposure",
    place,
    `An exposure is above 0, but ${isIn(name, "0 or below", at, row)}.`,
    "Leave rows without exposure out in the data with a where clause.",
  )

export const weightNegative = (clause: "repeat" | "precision" | "sampling", name: Name, at: RowsAt, row: RowName, place: Place): Notice =>
  fault(
    "weight-negative",
    clause,
    place,
    `A ${clause === "sampling" ? "sampling weight" : clause} is not below 0, but ${isIn(name, "below 0", at, row)}.`,
    `Look at the column ${name} in the data.`,
  )

export const repeatNotWhole = (name: Name, at: RowsAt, row: RowName, place: Place): Notice =>
  fault(
    "repeat-not-whole",
    "repeat",
    place,
    `A row is repeated a whole number of times, but ${isIn(name, "not whole", at, row)}.`,
    "For weights that are not counts, precision is meant.",
    { label: "Write precision instead", edits: [{ cell: null, clause: "repeat", nth: 0, says: name, keyword: "precision" }] },
  )

export const samplingErrors = (at: Place): Notice =>
  notice(
    "remark",
    "sampling-errors",
    "standard_errors",
    at,
    "Under sampling weights standard errors are sandwich, whatever is asked for here.",
    "Write standard_errors sandwich, or sandwich by the unit that was drawn.",
    writes("standard_errors", "sandwich"),
  )

const reducedLinks: Readonly<Record<string, string>> = {
  binomial: "logit, probit, cauchit, cloglog, loglog, aranda_ordaz or stukel",
  poisson: "log",
  negative_binomial: "log",
}

/** Why the bias is not reduced, in words, and what would be right. */
export const biasNotReduced = (why: NotReduced, family: string, link: string, at: Place): Notice => {
  const says: Readonly<Record<NotReduced, readonly [string, string, Intent | null]>> = {
    family: [
      `The bias is reduced in fits of binomial, poisson and negative_binomial(k), and this family is ${family}.`,
      "Take the clause away.",
      takesAway("estimate"),
    ],
    link: [
      `Under the link ${link} the penalty of ${family} has no upper limit at the edge of the means, so there is no such estimate.`,
      `Choose the link ${reducedLinks[family] ?? "log"}.`,
      null,
    ],
    dispersion: ["The bias is reduced at a dispersion of one, and another is said.", "Take the dispersion away.", takesAway("dispersion")],
    estimated: [
      "The bias is reduced where nothing is estimated but the coefficients, and here a parameter is.",
      "Give the parameter a number, or the name of a dial.",
      null,
    ],
    limits: ["The bias is not reduced where the mean has limits of its own.", "Take the limits away.", takesAway("limits")],
    sampling: ["Sampling weights make no likelihood that could be penalised.", "Take one of the two clauses away.", takesAway("estimate")],
  }
  const [text, hint, mend] = says[why]
  return fault("bias-not-reduced", "estimate", at, text, hint, mend)
}

/** What the penalty does under a link that is not the canonical one. */
export const biasNotGone = (link: string, family: string, at: Place): Notice =>
  notice(
    "remark",
    "bias-not-gone",
    "estimate",
    at,
    `Under ${link}, which is not canonical for ${family}, the penalty keeps coefficients finite and does not take all of the first-order bias away.`,
    null,
  )

export const precisionCounts = (family: string, name: Name, at: Place): Notice =>
  notice(
    "remark",
    "precision-counts",
    "precision",
    at,
    `The dispersion of ${family} is one, so ${name} counts absolutely: doubled, it halves every variance.`,
    null,
  )

export const exposureAsAmount = (exposure: Name, response: Name, power: number, at: Place): Notice =>
  notice(
    "remark",
    "exposure-as-amount",
    "exposure",
    at,
    `Fitted with the whole of ${response}, whose variance goes with ${power === 2 ? `the square of ${exposure}` : `${exposure} to the power ${numberSays(power)}`}.`,
    `That is another model than ${response} per unit of ${exposure} with precision ${exposure}, whose variance goes with ${exposure} itself.`,
  )

// Offset.

export const offsetWantsNumber = (is: string, at: Place): Notice =>
  fault("offset-wants-number", "offset", at, `An offset is a number, and this is a ${is}.`, "Write an expression whose value is a number.")

export const offsetLost = (count: number, at: Place): Notice =>
  notice(
    "warning",
    "offset-lost",
    "offset",
    at,
    `In ${rows(count)} the offset has no finite value although its columns are there; ${count === 1 ? "it is" : "they are"} not used.`,
    "Look for logarithms of 0 and divisions by 0.",
  )

export const pieceLost = (says: string, at: RowsAt, row: RowName, place: Place): Notice =>
  notice(
    "warning",
    "piece-lost",
    "predictor",
    place,
    `${says} has no finite value in ${rows(at.count)} (first: ${row(at.first)}, with ${numberSays(at.value)}); ${at.count === 1 ? "it is" : "they are"} not used.`,
    "Make a column in the data that has a value there, or leave these rows out with a where clause.",
  )

// The rows used.

export const noRows = (table: Name, unused: readonly { readonly by: string; readonly rows: number }[], at: Place): Notice =>
  fault(
    "no-rows",
    "data",
    at,
    unused.length === 0
      ? `${table} has no rows.`
      : `No row of ${table} has everything the model needs: ${list(unused.map(({ by, rows: count }) => `${by} in ${rows(count)}`))}.`,
    unused.length === 0 ? "Look at what its where clauses leave." : "Look at these columns in the data.",
  )

export const levelsDropped = (name: Name, levels: readonly string[], at: Place): Notice =>
  notice(
    "remark",
    "levels-dropped",
    "predictor",
    at,
    levels.length === 1
      ? `The level ${quoted(levels[0] as string)} of ${name} is in none of the rows used and was left out.`
      : `${writtenCount(levels.length)} levels of ${name} are in none of the rows used and were left out: ${several(levels.map(quoted), 6)}.`,
    null,
  )

export const oneLevel = (name: Name, level: string, at: Place): Notice =>
  notice(
    "warning",
    "one-level",
    "predictor",
    at,
    `${name} is ${quoted(level)} in all rows used, so it says nothing about the response.`,
    `Take ${name} out of the predictor.`,
  )

export const constantResponse = (name: string, value: string, at: Place): Notice =>
  notice(
    "warning",
    "constant-response",
    "response",
    at,
    `${name} is ${value} in all rows used, so there is nothing a predictor could explain.`,
    null,
  )

// The fit.

const fitHints = {
  no_start: "Another link may reach the means of these data: log has no such limit, nor have the links onto shares.",
  gave_up: "Look for a predictor on a very large scale, or for rows that stand far from all others.",
} as const

export const noFit = (why: "no_start" | "gave_up", detail: string): Notice =>
  fault(
    why === "no_start" ? "no-start" : "gave-up",
    null,
    heading,
    why === "no_start" ? `No fit could be begun: ${detail}.` : `The fit was given up: ${detail}.`,
    fitHints[why],
  )

/** Some column is a combination of others, so no data could tell their coefficients apart. */
export const dependentTerm = (term: string, on: readonly string[], at: Place): Notice =>
  notice(
    "warning",
    "dependent-term",
    "predictor",
    at,
    on.length === 0
      ? `The term ${term} is nought in all rows used, so it says nothing.`
      : `The term ${term} says nothing that ${several(on, 6)} ${on.length === 1 ? "does" : "do"} not already say.`,
    on.length === 0 ? `Take ${term} out of the predictor.` : `Take ${term} out of the predictor, or one of the others.`,
  )

export const moreDependentTerms = (terms: readonly string[], at: Place): Notice =>
  notice(
    "warning",
    "dependent-term",
    "predictor",
    at,
    `Of ${list(terms.slice(0, 6))}${terms.length > 6 ? ` and ${writtenCount(terms.length - 6)} more` : ""} the same is true: others already say what ${
      terms.length === 1 ? "it says" : "they say"
    }.`,
    "Take terms out of the predictor.",
  )

export const gaveUp = (iterations: number, score: number): Notice =>
  notice(
    "warning",
    "not-arrived",
    null,
    heading,
    `The fit was given up after ${writtenCount(iterations)} steps with a scaled score of ${written(score, 2)}, so these numbers are not those of a maximum.`,
    fitHints.gave_up,
  )

/** `edge` are the rows whose mean is at the end of its range; `at` is the link clause, null where there is none. */
export const atBoundary = (edge: readonly number[], row: RowName, at: Place | null): Notice =>
  notice(
    "warning",
    "boundary",
    at === null ? null : "link",
    at ?? heading,
    edge[0] === undefined
      ? "The best fit lies where a mean reaches the end of what is possible, so errors in the usual sense do not exist."
      : `The best fit lies where the mean of ${edge.length === 1 ? row(edge[0]) : `${rows(edge.length)} (first: ${row(edge[0])})`} reaches the end of what is possible, so errors in the usual sense do not exist.`,
    "A link that reaches only possible means has no such edge.",
  )

const infiniteHints: Readonly<Record<string, string>> = {
  binomial: "Something separates successes from failures wholly; only data where both occur could say how much.",
  poisson: "Where these predictors differ there is no count above 0; only data where there are some could say how much.",
}

/** `terms` with where each goes; `separated` says which rows make it so. */
export const atInfinity = (
  terms: readonly { readonly of: string; readonly toward: "infinity" | "-infinity" }[],
  separated: string | null,
  family: string,
  at: Place,
): Notice =>
  notice(
    "warning",
    "infinite",
    "predictor",
    at,
    `The fit gets ever better as ${
      terms.length === 0
        ? "a coefficient goes to infinity"
        : several(
            terms.map(({ of, toward }) => `${of} goes to ${toward === "infinity" ? "∞" : "−∞"}`),
            6,
          )
    }${separated === null ? "; what is shown is the limit." : `: ${separated}. What is shown is the limit.`}`,
    infiniteHints[family] ?? "The means run to the end of what the link can reach; another link may have them within.",
  )

export const severalMaxima = (): Notice =>
  notice("warning", "several-maxima", null, heading, "The likelihood has more than one maximum; the highest one found is shown.", null)

const predictorPlace = (clause: number): Place => ({ clause, from: 0, to: 1 })

/** Wald's ratio falls as the coefficient grows, so that it measures nothing any more. */
export const waldCollapses = (terms: readonly string[], clause: number): Notice =>
  notice(
    "warning",
    "wald-collapses",
    "predictor",
    predictorPlace(clause),
    `The Wald ratio of ${several(terms, 6)} would fall if the estimate were farther from 0, so its p says little.`,
    "Go by the profile interval, or by a cell terms, which compares fits with and without the term.",
  )

export const waldDisagrees = (terms: readonly string[], confidence: number, clause: number): Notice =>
  notice(
    "remark",
    "wald-disagrees",
    "predictor",
    predictorPlace(clause),
    `By its Wald p ${several(terms, 6)} ${terms.length === 1 ? "is" : "are"} on the other side of ${shareSays(1 - confidence)} than by the profile interval.`,
    "Where the two disagree the profile is nearer to the truth.",
  )

/** A small share as a percentage, such as `5 %` or `0.1 %`, without the rounding of 1 − 0.999. */
const shareSays = (share: number): string => `${numberSays(Number((share * 100).toPrecision(6)))}\u202f%`

export const profilesOnRequest = (rows: number, rank: number): Notice =>
  notice(
    "remark",
    "profiles-on-request",
    null,
    heading,
    `Wald intervals are shown, since profiles of ${writtenCount(rank)} coefficients over ${writtenCount(rows)} rows take long.`,
    "Write interval profile to have them all the same.",
    writes("interval", "profile"),
  )

export const noProfileUnderSandwich = (at: Place): Notice =>
  notice(
    "remark",
    "no-profile-under-sandwich",
    "interval",
    at,
    "Wald intervals are shown: a profile goes by the likelihood, which sandwich errors do not trust.",
    "Write interval wald to mean these.",
    writes("interval", "wald"),
  )

export const nothingLeft = (): Notice =>
  notice(
    "warning",
    "nothing-left",
    null,
    heading,
    "There are as many coefficients as rows, so nothing is left from which the dispersion could be judged, and errors are not available.",
    "Take terms out of the predictor, or state the dispersion.",
  )

export const oneCluster = (name: Name, at: Place): Notice =>
  notice(
    "warning",
    "one-cluster",
    "standard_errors",
    at,
    `${name} is the same in all rows used, so there is one cluster, from which no sandwich errors can be had.`,
    "Name a column that tells clusters apart.",
  )
