// What a model finds, as far as other kinds may rely on it: the one place where `model` and its readers (scales, value, and later
// compare, effects and the like) meet, since kinds do not import each other. Plain data, so that a reader can refit with another link.

import type { Name, Value } from "../runtime/value.ts"
import type { Expression } from "./language/expression.ts"
import type { Fit } from "./statistics/fit.ts"
import type { Problem, Variable } from "./statistics/problem.ts"
import type { ProfileInterval } from "./statistics/profile.ts"

/** How a column is called on axes and in sentences. */
export type Label = { readonly label: string; readonly unit: string | null }

/** An offset keeps its expression, so that its columns can be held at a value as the predictors are. */
export type OffsetFinding = {
  readonly expression: Expression
  /** Columns it reads, over the rows used. */
  readonly variables: { readonly [name: Name]: Variable }
  /** Dials and values it reads. */
  readonly numbers: { readonly [name: Name]: number }
}

/** The part of a model's finding that its readers read: it is there before the intervals, and stays as it is when they come. */
export const fitPart = "fit"

/** Intervals of the coefficients, in their order; `ends` is null until they have been found. */
export type IntervalsFound = {
  readonly by: "profile" | "wald"
  readonly ends: readonly (ProfileInterval | null)[] | null
  /** Of what was estimated beside the coefficients, always by profile; null until they have been found. */
  readonly parameters: readonly (ProfileInterval | null)[] | null
}

/** The whole of what a model finds. */
export type ModelFound = { readonly parts: { readonly fit: ModelFinding }; readonly intervals: IntervalsFound }

/** The fit in what was read of a cell, whether the part or the whole was asked for; null where the cell is no model. */
export function modelIn(value: Value | undefined): ModelFinding | null {
  const whole = memberOf(value, "parts")
  const fit = memberOf(whole === null ? value : whole, fitPart)
  return memberOf(fit, "problem") === null ? null : (fit as unknown as ModelFinding)
}

/**
 * The distinct values, rising, of a number that a predictor takes as a category: the model has a mean at these and nowhere between. Null for
 * every other column.
 */
export function valuesTaken({ problem }: ModelFinding, name: Name): Float64Array | null {
  const variable = problem.variables[name]
  if (variable?.type !== "number") return null
  const taken = problem.terms.some(({ pieces }) => pieces.some((piece) => piece.variable === name && piece.as === "category"))
  return taken ? Float64Array.from(new Set(variable.values)).sort() : null
}

function memberOf(value: Value | undefined, member: string): Value {
  if (typeof value !== "object" || value === null || Array.isArray(value) || ArrayBuffer.isView(value)) return null
  return (value as { readonly [member: string]: Value })[member] ?? null
}

export type ModelFinding = {
  readonly problem: Problem
  readonly fit: Fit
  /** The link as a clause would say it, numbers in the place of dials: `cloglog`, `power(0.5)`. */
  readonly link: string
  readonly response: Label & {
    /** What one observation is. */
    readonly measured: "number" | "count" | "share" | "truth"
  }
  /** Every column of the predictor and of the offset. */
  readonly labels: { readonly [name: Name]: Label }
  readonly offset: OffsetFinding | null
  /** The column of the exposure, where there is one. */
  readonly exposure: (Label & { readonly name: Name }) | null
  /** Record numbers (from 0) of the rows used, in the file with this name. */
  readonly records: Uint32Array
  /** Rows of the table that were not used, by why. */
  readonly unused: readonly { readonly by: string; readonly rows: number }[]
}
