// The setting of a plot: which column runs across, which splits, what the others are held at, and the grid of x. It turns these into
// the variables a fit predicts from. Nothing here knows of a link.

import type { Name } from "../../runtime/value.ts"
import { evaluated } from "../language/evaluate.ts"
import type { ModelFinding } from "../model-finding.ts"
import type { Variable } from "../statistics/problem.ts"

/** Points along the horizontal axis: enough for a smooth curve at any width of a page. */
export const gridPoints = 201

export type Setting = {
  readonly across: Name
  readonly split: Name | null
  /** Every other column of predictor and offset, at a number or the code of a level. */
  readonly held: ReadonlyMap<Name, number>
  readonly averaged: boolean
}

/** Columns of the predictor, then those only the offset reads. */
export const variablesOf = (model: ModelFinding): Readonly<Record<Name, Variable>> => ({
  ...(model.offset?.variables ?? {}),
  ...model.problem.variables,
})

/** Weights of rows where something is averaged over the data: R·m. */
export function rowWeight(model: ModelFinding, row: number): number {
  const { repeat, trials } = model.problem
  return (repeat?.[row] ?? 1) * (trials?.[row] ?? 1)
}

/** Mean of a number over the rows used, weighted by R·m. */
export function meanOf(model: ModelFinding, values: Float64Array): number {
  let [sum, total] = [0, 0]
  for (let i = 0; i < values.length; i++) {
    const weight = rowWeight(model, i)
    sum += weight * (values[i] as number)
    total += weight
  }
  return sum / total
}

/** A column that has one value in every row. */
export const constant = (like: Variable, rows: number, at: number): Variable =>
  like.type === "number" ? { type: "number", values: new Float64Array(rows).fill(at) } : { ...like, codes: new Int32Array(rows).fill(at) }

/**
 * The variables of a held curve: `x` along the axis, the split at one code, all others held.
 * @param x  values of a number, or codes of levels
 */
export function heldVariables(model: ModelFinding, setting: Setting, x: Float64Array, level: number | null): Record<Name, Variable> {
  const made: Record<Name, Variable> = {}
  for (const [name, like] of Object.entries(variablesOf(model))) {
    if (name === setting.across)
      made[name] = like.type === "number" ? { type: "number", values: x } : { ...like, codes: Int32Array.from(x) }
    else if (name === setting.split) made[name] = constant(like, x.length, level ?? 0)
    else made[name] = constant(like, x.length, setting.held.get(name) ?? 0)
  }
  return made
}

/** The offset at other rows: 0 where the model has none. */
export function offsetAt(model: ModelFinding, variables: Readonly<Record<Name, Variable>>, rows: number): Float64Array {
  const { offset } = model
  if (offset === null) return new Float64Array(rows)
  const found = evaluated(offset.expression, rows, (name) => {
    const variable = variables[name]
    if (variable !== undefined) {
      return variable.type === "number"
        ? { type: "number", values: variable.values }
        : { type: "category", codes: variable.codes, levels: variable.levels }
    }
    const number = offset.numbers[name]
    return number === undefined ? null : { type: "number", value: number }
  })
  // The same expression was evaluated over the rows used when the model was fitted, so it has a value here too; a row where it has
  // none (a logarithm of zero at the end of the plot) is a gap in the curve.
  if (!found.ok) return new Float64Array(rows).fill(Number.NaN)
  if ("values" in found.vector) return found.vector.values
  return new Float64Array(rows).fill("value" in found.vector ? found.vector.value : Number.NaN)
}

/** Equal steps from one end to the other, both included exactly. */
export function gridOf(from: number, to: number, points: number): Float64Array {
  if (from === to) return Float64Array.of(from)
  const grid = new Float64Array(points)
  for (let i = 0; i < points; i++) grid[i] = from + ((to - from) * i) / (points - 1)
  grid[points - 1] = to
  return grid
}

/** The least and the greatest of values, neither where there are none. */
export function ends(values: Float64Array): readonly [number, number] {
  let [low, high] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]
  for (const value of values) {
    if (value < low) low = value
    if (value > high) high = value
  }
  return [low, high]
}
