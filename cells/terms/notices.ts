// Every notice `terms` can give.

import type { Intent, Level, Notice, Place } from "../../runtime/notice.ts"
import { heading } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"

const notice = (
  level: Level,
  code: string,
  clause: string | null,
  at: Place,
  text: string,
  hint: string | null,
  mend: Intent | null = null,
): Notice => ({
  level,
  code: `terms/${code}`,
  clause,
  at,
  text,
  hint,
  mend,
})

const list = (names: readonly string[]): string =>
  names.length < 2 ? (names[0] ?? "") : `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`

/** A click that rewrites one of the `without` clauses, or takes it away. */
const rewrites = (nth: number, says: string | null): Intent => ({
  label: says === null ? "Take the clause away" : `Write without ${says}`,
  edits: [{ cell: null, clause: "without", nth, says }],
})

export const noModel = (): Notice =>
  notice(
    "fault",
    "no-model",
    null,
    heading,
    "This cell does not say whose terms it takes out.",
    "Add a clause such as: model, and the name of a model.",
  )

export const notAModel = (name: Name, at: Place): Notice =>
  notice("fault", "not-a-model", "model", at, `${name} is not a model.`, "Name a cell that begins with the word model.")

export const constantStays = (at: Place): Notice =>
  notice(
    "fault",
    "constant-stays",
    "without",
    at,
    "The constant is taken out of the model, not here.",
    "Write the terms that go, joined by +, such as: without dose + lot.",
  )

export const nothingTakenOut = (at: Place): Notice =>
  notice(
    "fault",
    "nothing-taken-out",
    "without",
    at,
    "The constant alone is no term that could go.",
    "Name a term of the predictor, such as: without dose.",
  )

export const noTerms = (model: Name, at: Place): Notice =>
  notice(
    "fault",
    "no-terms",
    "model",
    at,
    `The model ${model} has no terms that could be taken out.`,
    "Its predictor is the constant alone.",
  )

export const notInPredictor = (
  term: string,
  model: Name,
  terms: readonly string[],
  near: string | null,
  nth: number,
  alone: boolean,
  at: Place,
): Notice =>
  notice(
    "fault",
    "not-in-predictor",
    "without",
    at,
    `The predictor of ${model} has no term ${term}.`,
    near === null ? `Its terms are ${list(terms)}.` : `The nearest of its terms is ${near}.`,
    near !== null && alone ? rewrites(nth, near) : null,
  )

/** `left` are terms that contain it and would stay; `whole` is what may go together. */
export const contained = (term: string, left: readonly string[], whole: string, nth: number, at: Place): Notice =>
  notice(
    "fault",
    "contained",
    "without",
    at,
    `${term} is contained in ${list(left)}, which would have another meaning without it.`,
    `Take them out together: without ${whole}.`,
    rewrites(nth, whole),
  )

export const noFit = (terms: string, detail: string): Notice =>
  notice(
    "warning",
    "no-fit",
    null,
    heading,
    `Without ${terms} there is no fit: ${detail}.`,
    "The model's own link may not reach the means of the smaller fit.",
  )

export const noTest = (terms: string): Notice =>
  notice(
    "warning",
    "no-test",
    null,
    heading,
    `Without ${terms} there is a fit, and no test against it.`,
    "A test needs coefficients that are apart, a dispersion that is known or can be estimated, and fits that are both maxima.",
  )

export const nothingApart = (terms: string): Notice =>
  notice("remark", "nothing-apart", null, heading, `${terms} can go without loss: the other terms already say what it says.`, null)
