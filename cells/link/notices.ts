// Every notice `link` can give: about the statement as text, about what it is given, and what was proved, refuted or left undecided.

import type { Level, Notice, Place } from "../../runtime/notice.ts"
import { heading } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { writtenInFull } from "../figure/number.ts"
import type { Trouble } from "../language/expression.ts"
import type { LinkVerdict } from "../link-finding.ts"

const notice = (level: Level, code: string, clause: string | null, at: Place, text: string, hint: string | null): Notice => ({
  level,
  code: `link/${code}`,
  clause,
  at,
  text,
  hint,
  mend: null,
})

const fault = (code: string, clause: string | null, at: Place, text: string, hint: string | null): Notice =>
  notice("fault", code, clause, at, text, hint)

// The statement as text.

const clauseHints = {
  mean: "Add the open range of means, such as mean from 0 to 1.",
  eta: "Add the formula, such as eta = log(mu/(1 - mu)).",
} as const

export const clauseMissing = (clause: "mean" | "eta"): Notice =>
  fault("clause-missing", null, heading, `This link does not say its ${clause}.`, clauseHints[clause])

export const nameTaken = (name: Name): Notice =>
  fault(
    "name-taken",
    null,
    { clause: -1, from: 1, to: 2 },
    `The language has a link called ${name} already.`,
    "Give this one a name of its own, so that a model says which of both it means.",
  )

export const givenTwice = (name: Name, at: Place): Notice =>
  fault("given-twice", "given", at, `The constant ${name} is given twice.`, "Each constant is given once.")

export const givenInfinite = (name: Name, at: Place): Notice =>
  fault(
    "given-infinite",
    "given",
    at,
    `The constant ${name} is given as infinity.`,
    "A constant is a finite number, or the name of a dial.",
  )

export const unknownName = (name: Name, near: string | null, clause: "eta" | "inverse", at: Place): Notice =>
  fault(
    "unknown-name",
    clause,
    at,
    `${name} is no constant of this link.`,
    near === null || near === "mu" || near === "eta"
      ? `Give it a value: given ${name} = 0.5, or the name of a dial.`
      : `The nearest name is ${near}.`,
  )

export const notSmooth = (name: string, clause: "eta" | "inverse", at: Place): Notice =>
  fault(
    "not-smooth",
    clause,
    at,
    `${name} has corners or steps, and a link has a derivative everywhere.`,
    "Pieces that meet smoothly are joined by if(mu < 0.5, …, …).",
  )

export const noPlace = (what: string, clause: "eta" | "inverse", at: Place): Notice =>
  fault(
    "no-place",
    clause,
    at,
    `${what} has no place in a link.`,
    `A link is made of numbers, ${clause === "eta" ? "mu" : "eta"}, constants, + - * / ^ and smooth functions such as log, exp and tan; truths stand in the condition of an if only.`,
  )

export const condition = (trouble: Trouble): Notice =>
  fault(trouble.code === "condition" ? "condition" : "no-derivative", "eta", trouble.at, trouble.text, trouble.hint)

// What it is given.

export const notANumber = (name: Name, clause: "mean" | "given", at: Place): Notice =>
  fault("not-a-number", clause, at, `${name} is not a number here.`, "Name a dial or a value that is a finite number.")

export const rangeTurned = (clause: "mean" | "given", from: string, to: string, at: Place): Notice =>
  fault(
    clause === "mean" ? "empty-range" : "estimate-range",
    clause,
    at,
    `The range from ${from} to ${to} holds nothing.`,
    "The lower end comes first and lies below the upper.",
  )

// What was found out.

type Property = "defined" | "strictly monotone" | "differentiable"

const codes: Readonly<Record<Property, string>> = {
  defined: "not-defined",
  "strictly monotone": "not-monotone",
  differentiable: "not-differentiable",
}

/** A number as it is written in a statement. */
const said = (value: number): string => writtenInFull(value)

const refutations: Readonly<Record<Property, (at: string) => string>> = {
  defined: (at) => `It is not defined at μ = ${at}, so it is no link on this range.`,
  "strictly monotone": (at) => `It does not go one way: it turns at μ = ${at}, so one η would stand for several means.`,
  differentiable: (at) => `It has no derivative at μ = ${at}.`,
}

const remedies: Readonly<Record<Property, string>> = {
  defined: "State a range on which it is defined at every mean.",
  "strictly monotone": "State a range on which it only rises or only falls, or another formula.",
  differentiable: "Pieces joined by if have to meet in value and in slope.",
}

export const refuted = (property: Property, witness: number, at: Place): Notice =>
  fault(codes[property], "eta", at, refutations[property](said(witness)), remedies[property])

export const undecided = (property: Property, { witness }: LinkVerdict, at: Place): Notice =>
  notice(
    "warning",
    `${codes[property]}-undecided`,
    "eta",
    at,
    `Whether it is ${property}${property === "defined" ? " and finite" : ""} could not be decided ${placeSays(witness)}.`,
    "Another way of writing the same formula may be decided; every model that uses it says so until then.",
  )

const placeSays = (witness: LinkVerdict["witness"]): string => {
  if (witness === null) return "on the whole range"
  if (typeof witness === "number") return `at μ = ${said(witness)}`
  return witness[0] === witness[1] ? `at μ = ${said(witness[0])}` : `between μ = ${said(witness[0])} and ${said(witness[1])}`
}

export const inverseOff = (eta: number, mean: number, says: number, at: Place): Notice =>
  fault(
    "inverse-off",
    "inverse",
    at,
    `The inverse gives ${Number.isNaN(says) ? "no mean" : `the mean ${said(says)}`} at η = ${said(eta)}, where the formula has ${said(mean)}.`,
    "Mend the inverse, or leave the clause out: then the mean is found numerically.",
  )

export const level = (at: readonly number[], place: Place): Notice =>
  notice(
    "warning",
    "level",
    "eta",
    place,
    `Its derivative is 0 at μ = ${at.map(said).join(", ")}, so the mean would change without bound there.`,
    "A fit whose means come near cannot be trusted.",
  )

export const flat = (stretches: readonly (readonly [number, number])[], place: Place): Notice =>
  notice(
    "warning",
    "flat",
    "eta",
    place,
    `Its derivative is too small for a double from μ = ${stretches.map(([from, to]) => `${said(from)} to ${said(to)}`).join(", and from ")}.`,
    "Means there cannot be told apart by their η; a narrower range leaves them out.",
  )

export const reachUnknown = (end: "lower" | "upper", place: Place): Notice =>
  notice(
    "remark",
    "reach-unknown",
    "eta",
    place,
    `How far η goes towards the ${end} end of the range could not be decided; it is taken as far as doubles show.`,
    null,
  )
