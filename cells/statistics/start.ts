// Where a fit starts: at the null model if its means are possible, else at a least-squares fit to the linked responses, pushed until every
// mean is possible. A fit that cannot start says so; it is never started outside.

import { basisCoefficients } from "./change.ts"
import { Factor, gramOf, rangeSums, scoreOf } from "./gram.ts"
import type { NullModel } from "./null-model.ts"
import type { Responses } from "./rows.ts"
import { cellTerms, type Equations, linearPredictor, type Point } from "./scoring.ts"

/** Coefficients of the design to start from, tried in order; the first whose means are all possible is filled and returned. */
export async function startingPoint(
  equations: Equations,
  constant: number,
  columns: number,
  none: NullModel | null,
  near: Float64Array | null,
): Promise<Point | null> {
  const { basis, responses } = equations
  const tries: Float64Array[] = []
  if (near && near.length === columns) tries.push(basisCoefficients(basis, near))
  if (constant >= 0 && none && Number.isFinite(none.eta)) {
    const beta = new Float64Array(columns)
    beta[constant] = none.eta
    tries.push(basisCoefficients(basis, beta))
  }
  const point = equations.point()
  if (tries.length === 1 && none && constant >= 0 && nullPoint(equations, point, tries[0] as Float64Array, none)) return point
  for (const gamma of tries) {
    point.gamma.set(gamma)
    point.gammaLow.fill(0)
    if (await equations.fill(point, "expected")) return point
  }
  const squares = linkedLeastSquares(equations)
  if (squares) {
    point.gamma.set(squares)
    if (await equations.fill(point, "expected")) return point
    const pushed = pushedInside(equations, squares, responses)
    if (pushed) {
      point.gamma.set(pushed)
      if (await equations.fill(point, "expected")) return point
    }
  }
  // The constant may also be put where it is possible, whatever the data say.
  if (constant >= 0) {
    for (const eta of insideValues(responses)) {
      const beta = new Float64Array(columns)
      beta[constant] = eta
      point.gamma.set(basisCoefficients(basis, beta))
      if (await equations.fill(point, "expected")) return point
    }
  }
  return null
}

/**
 * Fills a point at the null model without a pass: where all rows weigh the same, X'WX is X'X but for a factor. False where they do not, or where
 * X'X is not known.
 */
function nullPoint(equations: Equations, point: Point, gamma: Float64Array, none: NullModel): boolean {
  const { basis, responses } = equations
  const { family, link, y, weight: own, offset, scale, rows, low, high } = responses
  if (!basis.products || own === null || offset !== null || scale !== null || !(none.eta > low && none.eta < high)) return false
  const mean = link.mean(none.eta)
  const rest = link.complement === null || mean < 0.5 ? 1 - mean : link.complement(none.eta)
  const v = family.variance(mean, rest)
  const ratio = link.slope(none.eta) / v
  const weight = own * ratio * ratio * v
  if (!(v > 0) || !(weight > 0) || !Number.isFinite(weight)) return false
  const { state } = point
  state.eta.fill(none.eta)
  state.etaLow?.fill(0)
  state.mu.fill(mean)
  state.weight.fill(weight)
  let squares = 0
  for (let i = 0; i < rows; i++) {
    const residual = (y[i] as number) - mean
    squares += residual * residual
    state.score[i] = own * residual * ratio
  }
  point.gamma.set(gamma)
  point.gammaLow.fill(0)
  point.deviance = none.deviance
  point.pearson = (own * squares) / v
  point.score = equations.scored(state.score)
  point.gram = basis.products.multiplied(weight)
  return true
}

/** Responses moved off the ends of the range, linked, and regressed on the columns with the weights they would have. */
export function linkedLeastSquares(equations: Equations): Float64Array | null {
  const { basis, responses } = equations
  const { y, a, offset, scale, family, link, rows } = responses
  let [sum, total, size] = [0, 0, 0]
  for (let i = 0; i < rows; i++) {
    sum += (a[i] as number) * (y[i] as number)
    size += (a[i] as number) * Math.abs(y[i] as number)
    total += (a[i] as number) * (scale ? (scale[i] as number) : 1)
  }
  const mean = sum / total
  const small = Math.max(1e-8, (0.1 * size) / total)
  const w = new Float64Array(rows)
  const s = new Float64Array(rows)
  for (let i = 0; i < rows; i++) {
    const own = a[i] as number
    if (own === 0) continue
    let mu = (y[i] as number) / (scale ? (scale[i] as number) : 1)
    const { low, high } = link.range
    const onShares = high === 1 || family.name === "binomial"
    if (onShares) mu = family.name === "binomial" ? (own * mu + 0.5) / (own + 1) : Math.min(0.95, Math.max(0.05, mu))
    else if (link.range.low === 0 || family.range.low === 0) mu = mu > 0 ? mu : Math.min(small, 0.5 * Math.abs(mean) || small)
    else if (link.range.high === 0) mu = mu < 0 ? mu : -small
    // Between limits a share may lie outside of what the link can take.
    if (high - low < 1) mu = Math.min(high - 0.02 * (high - low), Math.max(low + 0.02 * (high - low), mu))
    const eta = link.eta(mu)
    const d = link.slope(eta)
    const v = family.variance(mu, 1 - mu)
    const weight = v > 0 ? own * (d / v) * d : own
    if (!Number.isFinite(eta) || !(weight > 0) || weight === Number.POSITIVE_INFINITY) continue
    w[i] = weight
    s[i] = weight * (eta - (offset ? (offset[i] as number) : 0))
  }
  const sums = rangeSums(basis.layout, w, s)
  const factor = Factor.of(gramOf(basis.layout, sums))
  return factor ? factor.solve(scoreOf(basis.layout, sums)) : null
}

/** Newton's method on the squares by which η overshoots its interval, less a margin. */
function pushedInside(equations: Equations, from: Float64Array, responses: Responses): Float64Array | null {
  const { basis } = equations
  const { low, high, rows, offset, a } = responses
  const gamma = from.slice()
  const eta = new Float64Array(rows)
  const w = new Float64Array(rows)
  const s = new Float64Array(rows)
  for (let round = 0; round < 60; round++) {
    linearPredictor(
      basis,
      gamma,
      basis.blocks.map((block) => cellTerms(block, gamma)),
      offset,
      0,
      rows,
      eta,
    )
    let size = 0
    for (let i = 0; i < rows; i++) size = Math.max(size, Math.abs(eta[i] as number))
    const margin = Number.isFinite(high - low) ? 0.05 * (high - low) : 0.02 * (size || 1)
    let outside = 0
    for (let i = 0; i < rows; i++) {
      const e = eta[i] as number
      const short = e < low + margin ? low + margin - e : e > high - margin ? high - margin - e : 0
      if ((a[i] as number) > 0 && !(e > low && e < high)) outside++
      // Rows inside hold the rest in place, weakly.
      w[i] = short === 0 ? 1e-3 : 1
      s[i] = short * 1.5
    }
    if (outside === 0) return gamma
    const sums = rangeSums(basis.layout, w, s)
    const step = Factor.of(gramOf(basis.layout, sums))?.solve(scoreOf(basis.layout, sums))
    if (!step) return null
    for (let j = 0; j < gamma.length; j++) gamma[j] = (gamma[j] as number) + (step[j] as number)
  }
  return null
}

function insideValues({ low, high, offset, rows }: Responses): number[] {
  let [least, most] = [0, 0]
  if (offset) {
    least = Number.POSITIVE_INFINITY
    most = Number.NEGATIVE_INFINITY
    for (let i = 0; i < rows; i++) {
      least = Math.min(least, offset[i] as number)
      most = Math.max(most, offset[i] as number)
    }
  }
  const from = low - least
  const to = high - most
  if (!(from < to)) return []
  if (Number.isFinite(from) && Number.isFinite(to)) return [(from + to) / 2]
  if (Number.isFinite(from)) return [from + 1, from + 0.1 * (1 + Math.abs(from)), from + 100]
  if (Number.isFinite(to)) return [to - 1, to - 0.1 * (1 + Math.abs(to)), to - 100]
  return [0]
}
