// Data for the figures: an intercept and nine numbers, a linear predictor whose standard deviation is 0.8, the same at each run.

import type { Problem, Variable } from "../../cells/statistics/problem.ts"
import { generator } from "../cells/statistics/problems.ts"

export type Case = { readonly family: "binomial" | "poisson" | "gamma"; readonly link: string }

export const cases: readonly Case[] = [
  { family: "binomial", link: "logit" },
  { family: "binomial", link: "cloglog" },
  { family: "poisson", link: "log" },
  { family: "gamma", link: "log" },
]

export const p = 10

/** Nine columns of numbers that are nearly normal: sums of four even ones. */
export function columnsOf(rows: number): readonly Float64Array[] {
  const next = generator(rows)
  return Array.from({ length: p - 1 }, () => {
    const x = new Float64Array(rows)
    for (let i = 0; i < rows; i++) x[i] = Math.sqrt(3) * (next() + next() + next() + next() - 2)
    return x
  })
}

/** The linear predictor: every column counts, and together they have a standard deviation of 0.8. */
export function predictorOf(columns: readonly Float64Array[]): Float64Array {
  const size = 0.8 / Math.sqrt(columns.length)
  const eta = new Float64Array(columns[0]?.length ?? 0).fill(-0.3)
  columns.forEach((x, j) => {
    for (let i = 0; i < eta.length; i++) eta[i] = (eta[i] as number) + (j % 2 === 0 ? size : -size) * (x[i] as number)
  })
  return eta
}

export function responseOf(family: Case["family"], link: string, eta: Float64Array): Float64Array {
  const next = generator(9 + eta.length)
  return eta.map((e) => {
    const u = next()
    if (family === "binomial") return u < (link === "cloglog" ? 1 - Math.exp(-Math.exp(e)) : 1 / (1 + Math.exp(-e))) ? 1 : 0
    const mean = Math.exp(e)
    // A gamma response of shape 2, and a Poisson count by waiting.
    if (family === "gamma") return (-Math.log(1 - u) - Math.log(1 - next())) * (mean / 2)
    let count = 0
    for (let left = Math.exp(-mean), at = u; at > left; count++) {
      at -= left
      left *= mean / (count + 1)
      if (left < 1e-300) break
    }
    return count
  })
}

export function problemOf(family: string, link: string, columns: readonly Float64Array[], y: Float64Array): Problem {
  const variables: Record<string, Variable> = {}
  columns.forEach((values, j) => {
    variables[`x${j + 1}`] = { type: "number", values }
  })
  return {
    family: { name: family, parameters: [] },
    link: { name: link, parameters: [] },
    intercept: true,
    terms: Object.keys(variables).map((variable) => ({ says: variable, pieces: [{ variable, as: "itself", setting: null }] })),
    variables,
    rows: y.length,
    y,
    trials: family === "binomial" ? new Float64Array(y.length).fill(1) : null,
    repeat: null,
    precision: null,
    offset: null,
    exposure: null,
    cluster: null,
    dispersion: family === "gamma" ? "pearson" : "one",
    standardErrors: "expected",
    confidence: 0.95,
  }
}

/** The same problem with a factor of so many levels beside four of the numbers. */
export function withFactor(problem: Problem, levels: number): Problem {
  const next = generator(levels)
  const codes = Int32Array.from(problem.y, () => Math.floor(next() * levels))
  const names = Object.keys(problem.variables).slice(0, 4)
  const variables: Record<string, Variable> = Object.fromEntries(names.map((name) => [name, problem.variables[name] as Variable]))
  variables["level"] = { type: "factor", codes, levels: Array.from({ length: levels }, (_, k) => `l${k}`), coding: "corner" }
  return {
    ...problem,
    variables,
    terms: Object.keys(variables).map((variable) => ({ says: variable, pieces: [{ variable, as: "itself", setting: null }] })),
  }
}

/** Every number of the columns read once. */
export function sumOf(columns: readonly Float64Array[]): number {
  let total = 0
  for (const x of columns) {
    let [a, b, c, d] = [0, 0, 0, 0]
    for (let i = 0; i + 3 < x.length; i += 4) {
      a += x[i] as number
      b += x[i + 1] as number
      c += x[i + 2] as number
      d += x[i + 3] as number
    }
    total += a + b + c + d
  }
  return total
}
