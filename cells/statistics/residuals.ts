// Residuals of a fit, of one copy of a row where it stands several times. Those of Pearson and of the deviance are not divided by the
// dispersion; whoever draws them divides by √(φ(1 − h)). Quantile residuals are standard normal where the model is right.

import { tails } from "./cumulative.ts"
import { denseColumns, designOf } from "./design.ts"
import type { Fit } from "./fit.ts"
import type { Problem } from "./problem.ts"
import { random } from "./random.ts"
import { type Responses, responsesOf } from "./rows.ts"
import { normalQuantile } from "./special.ts"

/** (y − μ)√(a/V), a = w·m; 0 where the mean has run to an end of its range. */
export const pearsonResiduals = (problem: Problem, fit: Fit): Float64Array =>
  ofRows(problem, fit, ({ difference, a, variance }) => (variance > 0 ? difference * Math.sqrt(a / variance) : 0))

/** sign(y − μ)√(a·u), u the unit deviance. */
export const devianceResiduals = (problem: Problem, fit: Fit): Float64Array => {
  const { family, y } = responsesOf(problem)
  return ofRows(problem, fit, ({ row, difference, a, mu, rest }) => {
    const unit = Math.max(0, family.unitDeviance(y[row] as number, mu, rest))
    return Math.sign(difference) * Math.sqrt(a * unit)
  })
}

/** r = (y − μ)/(dμ/dη), on the scale of η. */
export const workingResiduals = (problem: Problem, fit: Fit): Float64Array => {
  const { link, scale } = responsesOf(problem)
  return ofRows(problem, fit, ({ row, difference, eta }) => difference / ((scale ? (scale[row] as number) : 1) * link.slope(eta)))
}

/**
 * The columns of one variable times their coefficients, less their mean over the rows used, plus the working residual. Columns are those of the
 * terms in which the variable stands alone.
 * @returns null where it stands in none, or a coefficient of its is not told apart or infinite
 */
export function partialResiduals(problem: Problem, fit: Fit, variable: string): Float64Array | null {
  const own = fit.recipe.terms.flatMap((term) =>
    term.pieces.every((piece) => piece.variable === variable) ? Array.from({ length: term.count }, (_, k) => term.from + k) : [],
  )
  if (own.length === 0) return null
  const columns = denseColumns(designOf(fit.recipe, problem.variables, problem.rows))
  const part = new Float64Array(problem.rows)
  for (const j of own) {
    const beta = fit.coefficients[j]?.beta ?? null
    if (beta === null) return null
    const column = columns[j] as Float64Array
    for (let i = 0; i < part.length; i++) part[i] = (part[i] as number) + beta * (column[i] as number)
  }
  let [sum, total] = [0, 0]
  for (let i = 0; i < part.length; i++) {
    const copies = problem.repeat ? (problem.repeat[i] as number) : 1
    sum += copies * (part[i] as number)
    total += copies
  }
  const working = workingResiduals(problem, fit)
  return part.map((value, i) => value - sum / total + (working[i] as number))
}

export type QuantileResiduals =
  | { readonly ok: true; readonly values: Float64Array }
  /** `dispersion`: a discrete law with φ or a precision other than one is no law. */
  | { readonly ok: false; readonly why: "no_law" | "dispersion" }

/**
 * Φ⁻¹(u), u uniform between P(Y < y) and P(Y ≤ y) at μ̂, φ, k and p; each row has a draw of its own, in order, whether it needs one or not.
 * Dunn & Smyth 1996, JCGS 5:236.
 */
export function quantileResiduals(problem: Problem, fit: Fit, seed: number): QuantileResiduals {
  if (!families.has(problem.family.name)) return { ok: false, why: "no_law" }
  const { family } = responsesOf(problem)
  const { precision, trials } = problem
  const phi = fit.dispersion.value
  if (family.discrete ? phi !== 1 || precision?.some((w) => w !== 1) : phi === null || !(phi > 0)) return { ok: false, why: "dispersion" }
  const draws = random(seed)
  const { y } = problem
  const values = ofRows(problem, fit, ({ row, mu, rest }) => {
    const m = trials ? (trials[row] as number) : 1
    const w = precision ? (precision[row] as number) : 1
    const { below, upTo, from, above } = tails(problem.family, y[row] as number, mu, rest, m, (phi as number) / w)
    const share = draws.next()
    const lower = below + share * (upTo - below)
    return lower < 0.5 ? normalQuantile(lower) : -normalQuantile(above + (1 - share) * (from - above))
  })
  return { ok: true, values }
}

const families: ReadonlySet<string> = new Set([
  "normal",
  "binomial",
  "poisson",
  "gamma",
  "inverse_gaussian",
  "negative_binomial",
  "tweedie",
])

type Row = {
  row: number
  eta: number
  mu: number
  rest: number
  /** y − μ, between the failures where that keeps its digits. */
  difference: number
  /** w·m. */
  a: number
  variance: number
}

function ofRows(problem: Problem, fit: Fit, value: (row: Row) => number): Float64Array {
  const responses = responsesOf(problem)
  const row: Row = { row: 0, eta: 0, mu: 0, rest: 0, difference: 0, a: 0, variance: 0 }
  return Float64Array.from({ length: problem.rows }, (_, i) => {
    fillRow(responses, problem, fit, i, row)
    return value(row)
  })
}

function fillRow({ family, link, y, a }: Responses, { repeat }: Problem, fit: Fit, i: number, out: Row): void {
  const eta = fit.eta[i] as number
  const mu = fit.mu[i] as number
  const response = y[i] as number
  const rest = link.complement === null || mu < 0.5 ? 1 - mu : link.complement(eta)
  out.row = i
  out.eta = eta
  out.mu = mu
  out.rest = rest
  out.difference = family.name === "binomial" && response > 0.5 ? rest - (1 - response) : response - mu
  out.a = (a[i] as number) / (repeat ? (repeat[i] as number) : 1)
  out.variance = family.variance(mu, rest)
}
