// Small problems for the tests of this folder: a statement-like shorthand, and data made by a fixed generator.

import type { Fit } from "../../../cells/statistics/fit.ts"
import { fit } from "../../../cells/statistics/index.ts"
import type { Piece, Problem, Term, Variable } from "../../../cells/statistics/problem.ts"

export const numbers = (values: Iterable<number>): Variable => ({ type: "number", values: Float64Array.from(values) })

/** A factor from its level in each row; levels in order of the alphabet unless stated. */
export function factor(rows: readonly string[], coding: "corner" | "sum_to_zero" = "corner", levels = [...new Set(rows)].sort()): Variable {
  return { type: "factor", codes: Int32Array.from(rows, (level) => levels.indexOf(level)), levels, coding }
}

/** A term from text such as `x`, `lot.x`, `log(x)`, `polynomial(x, 3)`. */
export const term = (says: string): Term => ({
  says,
  pieces: says.split(/\.(?![^(]*\))/).map((text): Piece => {
    const [, call, variable, setting] = /^(\w+)\((\w+)(?:,\s*([-\d.]+))?\)$/.exec(text) ?? []
    return variable === undefined
      ? { variable: text, as: "itself", setting: null }
      : { variable, as: call as Piece["as"], setting: setting === undefined ? null : Number(setting) }
  }),
})

export type Stated = Partial<Omit<Problem, "family" | "link" | "terms" | "y">> & {
  readonly family: string
  readonly link: string
  readonly power?: number
  readonly terms: readonly string[]
  readonly y: Iterable<number>
}

export function problem(stated: Stated): Problem {
  const y = Float64Array.from(stated.y)
  const { power, ...rest } = stated
  return {
    intercept: true,
    variables: {},
    rows: y.length,
    trials: stated.family === "binomial" ? new Float64Array(y.length).fill(1) : null,
    repeat: null,
    precision: null,
    offset: null,
    exposure: null,
    cluster: null,
    dispersion: stated.family === "binomial" || stated.family === "poisson" ? "one" : "pearson",
    standardErrors: "expected",
    confidence: 0.95,
    ...rest,
    family: { name: stated.family, parameters: [] },
    link: { name: stated.link, parameters: power === undefined ? [] : [power] },
    terms: stated.terms.map(term),
    y,
  }
}

export async function fitted(of: Problem, near: Fit | null = null): Promise<Fit> {
  const found = await fit(of, async () => {}, near)
  if (!found.ok) throw new Error(`${found.why}: ${found.detail}`)
  return found.fit
}

export const betas = (found: Fit): (number | null)[] => found.coefficients.map(({ beta }) => beta)
export const errors = (found: Fit): (number | null)[] => found.coefficients.map(({ standardError }) => standardError)

/** Numbers in [0, 1), the same at each run: a linear congruential generator (Knuth, TAOCP vol. 2, §3.3.4). */
export function generator(seed: number): () => number {
  let state = seed
  return () => {
    state = (state * 1664525 + 1013904223) % 4294967296
    return state / 4294967296
  }
}
