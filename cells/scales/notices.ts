// Every notice `scales` can give.

import type { ClauseEdit, Notice, Place } from "../../runtime/notice.ts"
import { heading } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { written } from "../figure/number.ts"

const fault = (code: string, clause: string | null, at: Place, text: string, hint: string | null, mend: Notice["mend"] = null): Notice => ({
  level: "fault",
  code: `scales/${code}`,
  clause,
  at,
  text,
  hint,
  mend,
})

const list = (names: readonly string[]): string =>
  names.length < 2 ? (names[0] ?? "") : `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`

/** Replaces the whole clause: only offered where the clause says nothing else. */
const instead = (clause: string, says: string): Notice["mend"] => {
  const edit: ClauseEdit = { cell: null, clause, nth: 0, says }
  return { label: `Write ${clause} ${says}`, edits: [edit] }
}

export const noModel = (): Notice =>
  fault(
    "no-model",
    null,
    heading,
    "These scales do not say which model they draw.",
    "Add a clause such as: model, and the name of a model.",
  )

export const notAModel = (name: Name, at: Place): Notice =>
  fault("not-a-model", "model", at, `${name} is not a model.`, "Name a cell that begins with the word model.")

export const nothingAcross = (model: Name): Notice =>
  fault(
    "nothing-across",
    null,
    heading,
    `The predictor of ${model} has no column, so there is nothing to draw it across.`,
    `Add a column to the predictor of ${model}.`,
  )

/** A column that the linear predictor does not read. */
export const notInPredictor = (
  clause: "across" | "split" | "hold",
  name: Name,
  model: Name,
  inPredictor: readonly Name[],
  nearest: Name | null,
  at: Place,
): Notice =>
  fault(
    "not-in-predictor",
    clause,
    at,
    `${name} does not enter the predictor of ${model}.`,
    `Columns that do: ${list(inPredictor)}.`,
    nearest !== null && clause !== "hold" ? instead(clause, nearest) : null,
  )

export const splitNumber = (name: Name, at: Place): Notice =>
  fault(
    "split-number",
    "split",
    at,
    `${name} is a number, and a curve can only be drawn for each level of a category.`,
    `Make a category of it in the data, such as: make ${name}_band = band(${name}, …).`,
  )

export const splitAcross = (name: Name, at: Place): Notice =>
  fault("split-across", "split", at, `${name} is already the horizontal axis.`, "Split by another category, or take this clause out.")

export const holdDrawn = (name: Name, at: Place): Notice =>
  fault("hold-drawn", "hold", at, `${name} is drawn along an axis or split by, so it cannot be held.`, "Take it out of this clause.")

export const noSuchLevel = (name: Name, level: string, levels: readonly string[], at: Place): Notice =>
  fault(
    "no-such-level",
    "hold",
    at,
    `${name} has no level "${level}" among the rows used.`,
    `Its levels are ${list(levels.map((l) => `"${l}"`))}.`,
  )

/** A number taken as a category, held at a value that no row used has. */
export const noSuchValue = (name: Name, value: number, values: Float64Array, at: Place): Notice =>
  fault(
    "no-such-value",
    "hold",
    at,
    `${name} is taken as a category, and none of the rows used has ${name} ${value}.`,
    `They have ${list(Array.from(values.subarray(0, 12), String))}${values.length > 12 ? " and more" : ""}.`,
  )

export const heldWrongly = (name: Name, wants: "a number" | "a level", at: Place): Notice =>
  fault(
    "held-wrongly",
    "hold",
    at,
    `${name} can only be held at ${wants}.`,
    wants === "a number" ? `Write ${name} = 1.5, or the name of a dial.` : `Write ${name} = "…", with one of its levels.`,
  )

export const emptyRange = (from: number, to: number, at: Place): Notice =>
  fault("empty-range", "from", at, `The range from ${from} to ${to} holds nothing.`, "The first number has to be the smaller one.")

export const notANumber = (name: Name, clause: string, at: Place): Notice =>
  fault("not-a-number", clause, at, `${name} is not a number here.`, "Name a dial or a value that is a finite number.")

export const rangeOfLevels = (name: Name, at: Place): Notice =>
  fault("range-of-levels", "from", at, `${name} is a category, so the horizontal axis has levels and no range.`, "Take this clause out.", {
    label: "Take the range out",
    edits: [{ cell: null, clause: "from", nth: 0, says: null }],
  })

export const noSuchLink = (name: string, nearest: string | null, at: Place): Notice =>
  fault(
    "no-such-link",
    "beside",
    at,
    `There is no link called ${name}.`,
    nearest === null ? "Name a link of the language." : `The nearest name is ${nearest}.`,
  )

export const notALink = (name: Name, at: Place): Notice =>
  fault("not-a-link", "beside", at, `${name} is not a link.`, "Name a link of the language, or a cell that begins with the word link.")

/** A link of the user's own with a constant that is still to be estimated. */
export const estimateNotYet = (name: Name, at: Place): Notice =>
  fault(
    "not-available-yet",
    "beside",
    at,
    `Estimating a constant of the link ${name} is not available yet.`,
    `Give it a number in ${name}.`,
  )

/** A number outside of what the parameter of a link can be. */
export const parameterOutside = (name: string, range: string, value: number, at: Place): Notice =>
  fault("parameter-outside", "beside", at, `The parameter of ${name} is ${range}, and ${written(value, 6)} is not.`, null)

export const linkNotLegal = (link: string, family: string, legal: readonly string[], at: Place): Notice =>
  fault(
    "link-not-legal",
    "beside",
    at,
    `The link ${link} is not defined for every mean the family ${family} can have.`,
    `Links that are: ${list(legal)}.`,
  )

/** A binomial model with an exposure has cloglog alone. */
export const linkNotPerUnit = (link: string, exposure: string, at: Place): Notice =>
  fault(
    "link-not-per-unit",
    "beside",
    at,
    `Under the link ${link} a binomial mean has no value per unit of ${exposure}.`,
    "Under an exposure only cloglog has one: leave the others out.",
  )

/** The number of parameters a link wants: none or one here. */
export const linkParameters = (name: string, wants: number, at: Place): Notice =>
  fault(
    "link-parameters",
    "beside",
    at,
    wants === 0 ? `The link ${name} has no parameter.` : `The link ${name} needs its parameter.`,
    wants === 0 ? `Write ${name} alone.` : `Write ${name}(0.5), with the number you mean, or the name of a dial.`,
  )

/** The curve leaves the means that are possible somewhere on the plot. */
export const leavesRange = (link: string, from: string, stated: Place | null): Notice => ({
  level: "warning",
  code: "scales/leaves-range",
  clause: stated === null ? null : "from",
  at: stated ?? heading,
  text: `Under ${link} the line leaves the means that are possible ${from}; there the curve is cut.`,
  hint: "Choose a link that reaches only possible means, or a shorter range.",
  mend: null,
})
