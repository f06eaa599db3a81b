// The words of `model`: data, response, family, link and linear predictor, and how errors and intervals are to be had. Reading the clauses
// says what is wrong with them as text, families and links included; whether the data agree is found out by find.ts.

import type { Names, Use, Words } from "../../runtime/kind.ts"
import { heading, type Notice, type Place } from "../../runtime/notice.ts"
import type { Clause, Statement } from "../../runtime/statement.ts"
import type { Name } from "../../runtime/value.ts"
import { type Expression, namesIn } from "../language/expression.ts"
import { type Bound, type Filled, type Matched, readClauses } from "../language/form.ts"
import { type Terms, variablesOf } from "../language/predictor.ts"
import { canonicalLink, links } from "../language/vocabulary.ts"
import { rowsPart } from "../table/column.ts"
import * as say from "./notices.ts"
import { familySaid, linkSaid } from "./pair.ts"

export type Named = { readonly name: Name; readonly at: Place }

export type ResponseSaid =
  | { readonly type: "column"; readonly column: Named }
  | { readonly type: "successes"; readonly successes: Named; readonly trials: Named }
  | { readonly type: "level"; readonly column: Named; readonly level: string; readonly at: Place }

/** A family or a link by name; parameters are numbers or the names of dials. */
export type CallSaid = {
  readonly name: string
  readonly parameters: readonly Bound[]
  /** The variance of quasi_likelihood, in mu. */
  readonly expression?: Expression
  readonly at: Place
}

export type DispersionSaid = "one" | "pearson" | "deviance" | "likelihood" | number

export type ModelSaid = {
  readonly name: Name | null
  readonly data: Named | null
  readonly response: ResponseSaid | null
  readonly family: CallSaid | null
  /** Null where no link is said: the canonical one is taken. */
  readonly link: CallSaid | null
  readonly predictor: Terms | null
  /** Which clause the predictor is. */
  readonly predictorAt: number
  readonly offset: { readonly expression: Expression; readonly at: Place } | null
  readonly exposure: Named | null
  readonly repeat: Named | null
  readonly precision: Named | null
  readonly limits: { readonly low: Bound; readonly high: Bound; readonly at: Place } | null
  /** Rows of no dose, where this is true. */
  readonly control: { readonly expression: Expression; readonly at: Place } | null
  readonly sampling: Named | null
  readonly dispersion: { readonly value: DispersionSaid; readonly at: Place } | null
  readonly standardErrors: "expected" | "observed" | "sandwich"
  /** Where errors of the model were asked for by name; null for sandwich, and where nothing is said. */
  readonly modelErrors: Place | null
  /** `sandwich by` this column. */
  readonly cluster: Named | null
  /** Null where nothing is said. */
  readonly estimate: { readonly by: "likelihood" | "bias_reduced"; readonly at: Place } | null
  /** Null where nothing is said. */
  readonly interval: { readonly by: "profile" | "wald"; readonly at: Place } | null
  readonly confidence: number
  /** The clauses by keyword, for mends. */
  readonly clauses: Readonly<Record<string, Clause>>
}

/** The level of the intervals where nothing is said. */
const usualConfidence = 0.95

export const modelWords: Words<ModelSaid> = {
  word: "model",
  name: "needed",
  says: "A generalized linear model: a response, its family, the link and the linear predictor",
  example: "model m\n  data \n  response \n  family \n  link \n  predictor ",
  clauses: {
    data: { forms: ["CELL:data"], says: "The table that is modelled" },
    response: {
      forms: ["NAME:response", "NAME:successes out of NAME:trials", "NAME:category is TEXT:level", "NAME:truth is true|false:value"],
      says: "What is modelled: a number, a count or a truth; successes out of trials; or that a category has one of its two levels",
    },
    family: { forms: ["CALL:family"], says: "How the response varies about its mean" },
    link: {
      forms: ["CALL:link"],
      says: "The function of the mean that is linear in the predictors; left out, the canonical one of the family",
    },
    predictor: { forms: ["TERMS:terms"], says: "The linear predictor, as terms: A + B, A.B for an interaction, A*B for both" },
    offset: { forms: ["EXPR:offset"], says: "Added to the linear predictor with coefficient one" },
    exposure: { forms: ["NAME:exposure"], says: "Time, area or effort at risk: the mean per unit of it is linked" },
    repeat: { forms: ["NAME:repeat"], says: "How many times each row stands" },
    precision: { forms: ["NAME:precision"], says: "Known precision of each row: the variance is divided by it" },
    sampling: { forms: ["NAME:weight"], says: "Sampling weights: the estimate is weighted, and standard errors are sandwich" },
    limits: {
      forms: ["BOUND+estimate:lowest to BOUND+estimate:highest"],
      says: "Lowest and highest possible mean of a binomial response, where they are not 0 and 1",
    },
    control: { forms: ["EXPR:rows"], says: "Rows of no dose: their mean is the lower limit" },
    dispersion: {
      forms: ["one", "pearson", "deviance", "likelihood", "NUMBER:dispersion"],
      says: "How the dispersion is had; left out, one for binomial and poisson, pearson for the rest",
    },
    standard_errors: {
      forms: ["expected", "observed", "sandwich", "sandwich by NAME:cluster"],
      says: "From the expected or the observed information, or the sandwich, which trusts the mean only; by clusters where they are named",
    },
    estimate: {
      forms: ["likelihood", "bias_reduced"],
      says: "By maximum likelihood, or by a penalised one that reduces the bias and keeps coefficients finite",
    },
    interval: { forms: ["profile", "wald"], says: "How the intervals of the coefficients are had" },
    confidence: { forms: ["NUMBER:level"], says: "The level of the intervals, 95% unless said otherwise" },
  },
  parse(statement) {
    const { clauses, notices } = readClauses(statement, modelWords)
    const found: Notice[] = []
    const one = (keyword: string): Matched | null => clauses.find((clause) => clause.keyword === keyword) ?? null
    for (const keyword of ["data", "response", "family", "predictor"] as const) {
      if (!statement.clauses.some((clause) => clause.keyword === keyword)) found.push(say.clauseMissing(keyword))
    }
    const family = familySaid(call(one("family")), statement, found)
    const said: ModelSaid = {
      name: statement.name,
      data: named(one("data"), "data"),
      response: responseSaid(one("response")),
      family,
      link: linkSaid(call(one("link")), family, statement, found),
      predictor: termsSaid(one("predictor")),
      predictorAt: one("predictor")?.clause ?? -1,
      offset: expressionSaid(one("offset"), "offset"),
      exposure: named(one("exposure"), "exposure"),
      repeat: named(one("repeat"), "repeat"),
      precision: named(one("precision"), "precision"),
      limits: limitsSaid(one("limits"), statement),
      control: expressionSaid(one("control"), "rows"),
      sampling: named(one("sampling"), "weight"),
      dispersion: dispersionSaid(one("dispersion"), found),
      standardErrors: errorsSaid(one("standard_errors")),
      modelErrors: modelErrorsSaid(one("standard_errors")),
      cluster: named(one("standard_errors"), "cluster"),
      estimate: estimateSaid(one("estimate")),
      interval: intervalSaid(one("interval")),
      confidence: confidenceSaid(one("confidence"), found),
      clauses: Object.fromEntries(statement.clauses.map((clause) => [clause.keyword, clause])),
    }
    together(said, found)
    if (said.repeat !== null && said.precision !== null) found.push(say.twoWeights(wholeClause(one("precision"), statement)))
    const other = said.repeat !== null ? "repeat" : said.precision !== null ? "precision" : null
    if (said.sampling !== null && other !== null) found.push(say.samplingAndWeight(other, wholeClause(one("sampling"), statement)))
    return { said, notices: [...notices, ...found] }
  },
  names(said): Names {
    const uses: Use[] = []
    const offset = [said.offset, said.control].flatMap((of) => (of === null ? [] : namesIn(of.expression)))
    if (said.data !== null) {
      const parts = new Set([rowsPart, ...columnsOf(said).map(({ name }) => name), ...offset.map(({ name }) => name)])
      uses.push({ name: said.data.name, parts: [...parts].sort(), either: false, at: said.data.at })
    }
    // A bare name in an expression is a column or a cell; which, the table decides.
    for (const { name, at } of offset) if (name !== said.name) uses.push({ name, parts: "all", either: true, at })
    for (const { name, at } of said.family?.expression === undefined ? [] : namesIn(said.family.expression)) {
      if (name !== "mu") uses.push({ name, parts: "all", either: false, at })
    }
    const limits = said.limits === null ? [] : [said.limits.low, said.limits.high]
    for (const bound of [...(said.family?.parameters ?? []), ...(said.link?.parameters ?? []), ...limits]) {
      if (bound.type === "cell") uses.push({ name: bound.name, parts: "all", either: false, at: bound.at })
    }
    // A cell that is not there is for the evaluation to say: the name may be a misspelt link of the language.
    if (said.link !== null && isOwnName(said.link.name) && said.link.name !== said.name)
      uses.push({ name: said.link.name, parts: "all", either: true, at: said.link.at })
    return { defines: said.name, uses, files: [] }
  },
}

/** Clauses that read well, each by itself, and cannot be meant together. */
function together(said: ModelSaid, notices: Notice[]): void {
  const { family, link, response, exposure } = said
  if (family === null) return
  if (family.name !== "binomial" && response?.type === "successes") notices.push(say.trialsNotOfFamily(family.name, response.trials.at))
  if (family.name !== "binomial" && response?.type === "level") notices.push(say.levelNotOfFamily(family.name, response.at))
  if (said.limits !== null && family.name !== "binomial") notices.push(say.limitsNotOfFamily(family.name, said.limits.at))
  if (said.control !== null && said.limits === null && said.clauses["limits"] === undefined)
    notices.push(say.controlWithoutLimits(said.control.at))
  if (said.control !== null && said.sampling !== null) notices.push(say.controlWithSampling(said.control.at))
  if (exposure === null) return
  if (family.name === "normal") notices.push(say.exposureNotOfFamily(family.name, exposure.at))
  const linked = link?.name ?? canonicalLink(family.name)
  if (family.name === "binomial" && linked !== null && linked !== "cloglog") notices.push(say.exposureNotOfLink(linked, exposure.at))
}

/** Whether a link by this name is none of the language, and so that of a cell. */
export const isOwnName = (name: string): boolean => !Object.hasOwn(links, name)

/** Every column that a clause names outside of the offset, with the clause it stands in. */
export function columnsOf(said: ModelSaid): readonly (Named & { readonly clause: string })[] {
  const { response, predictor, exposure, repeat, precision, sampling, cluster } = said
  const of = (clause: string, ...columns: readonly (Named | null)[]) =>
    columns.flatMap((column) => (column === null ? [] : [{ ...column, clause }]))
  return [
    ...(response === null
      ? []
      : response.type === "successes"
        ? of("response", response.successes, response.trials)
        : of("response", response.column)),
    ...(predictor === null ? [] : of("predictor", ...variablesOf(predictor))),
    ...of("exposure", exposure),
    ...of("repeat", repeat),
    ...of("precision", precision),
    ...of("sampling", sampling),
    ...of("standard_errors", cluster),
  ]
}

const filled = (matched: Matched | null, label: string): Filled | null => matched?.slots[label]?.[0] ?? null

function named(matched: Matched | null, label: string): Named | null {
  const slot = filled(matched, label)
  return slot !== null && (slot.type === "NAME" || slot.type === "CELL") ? { name: slot.name, at: slot.at } : null
}

function call(matched: Matched | null): Extract<Filled, { type: "CALL" }> | null {
  const slot = filled(matched, matched?.keyword ?? "")
  return slot?.type === "CALL" ? slot : null
}

function responseSaid(matched: Matched | null): ResponseSaid | null {
  if (matched === null) return null
  const successes = named(matched, "successes")
  const trials = named(matched, "trials")
  if (successes !== null && trials !== null) return { type: "successes", successes, trials }
  const level = filled(matched, "level") ?? filled(matched, "value")
  const column = named(matched, "category") ?? named(matched, "truth") ?? named(matched, "response")
  if (column === null) return null
  if (level === null) return { type: "column", column }
  const text = level.type === "TEXT" ? level.text : level.type === "ID" ? level.name : ""
  return { type: "level", column, level: text, at: level.at }
}

function termsSaid(matched: Matched | null): Terms | null {
  const slot = filled(matched, "terms")
  return slot?.type === "TERMS" ? slot.terms : null
}

function limitsSaid(matched: Matched | null, statement: Statement): ModelSaid["limits"] {
  const [low, high] = [filled(matched, "lowest"), filled(matched, "highest")]
  if (low?.type !== "BOUND" || high?.type !== "BOUND") return null
  const whole = wholeClause(matched, statement)
  return { low: low.bound, high: high.bound, at: { ...whole, from: 1 } }
}

function expressionSaid(matched: Matched | null, label: string): ModelSaid["offset"] {
  const slot = filled(matched, label)
  return slot?.type === "EXPR" ? { expression: slot.expression, at: slot.at } : null
}

function dispersionSaid(matched: Matched | null, notices: Notice[]): ModelSaid["dispersion"] {
  if (matched === null) return null
  const slot = filled(matched, "dispersion")
  if (slot?.type === "NUMBER") {
    if (!(slot.value > 0)) notices.push(say.dispersionNotPositive(slot.text, slot.at))
    return { value: slot.value, at: slot.at }
  }
  const at: Place = { clause: matched.clause, from: 1, to: 2 }
  const word = (["one", "pearson", "deviance", "likelihood"] as const)[matched.form]
  return word === undefined ? null : { value: word, at }
}

const errorsSaid = (matched: Matched | null): ModelSaid["standardErrors"] =>
  matched === null ? "expected" : ((["expected", "observed"] as const)[matched.form] ?? "sandwich")

function modelErrorsSaid(matched: Matched | null): Place | null {
  if (matched === null || matched.form < 0 || matched.form > 1) return null
  return { clause: matched.clause, from: 1, to: 2 }
}

const estimateSaid = (matched: Matched | null): ModelSaid["estimate"] =>
  matched === null ? null : { by: matched.form === 1 ? "bias_reduced" : "likelihood", at: { clause: matched.clause, from: 1, to: 2 } }

const intervalSaid = (matched: Matched | null): ModelSaid["interval"] =>
  matched === null ? null : { by: matched.form === 0 ? "profile" : "wald", at: { clause: matched.clause, from: 1, to: 2 } }

function confidenceSaid(matched: Matched | null, notices: Notice[]): number {
  const slot = filled(matched, "level")
  if (slot?.type !== "NUMBER") return usualConfidence
  if (slot.value > 0 && slot.value < 1) return slot.value
  notices.push(say.confidenceOutside(slot.text, slot.value, slot.at))
  return usualConfidence
}

/** A clause from its keyword to its end. */
const wholeClause = (matched: Matched | null, statement: Statement): Place =>
  matched === null ? heading : { clause: matched.clause, from: 0, to: (statement.clauses[matched.clause]?.tokens.length ?? 0) + 1 }
