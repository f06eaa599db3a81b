// The score of a direction: would the model be better with v as one more column? No refit is needed. This is the test of the link (v = η²),
// of a link family (v = ∂g/∂γ) and of terms left out. Rao 1948; Pregibon 1980; conventions, choosing the link.

import { blockRows, Factor } from "./gram.ts"
import { cellTerms, type Equations, linearPredictor, type Point } from "./scoring.ts"

type DirectionScore = {
  /** (v'Wr)²/(φ·v⊥'Wv⊥), or (Σ v⊥s)²/Σ(v⊥s)² under sandwich errors. */
  readonly statistic: number
  /** v'Wr/v⊥'Wv⊥: the coefficient one step would give v. */
  readonly step: number
  /** v⊥'Wv⊥ as a share of v'Wv, v less its W-mean where the columns span a constant. */
  readonly index: number
  /** v⊥'Wv⊥. */
  readonly information: number
}

/**
 * @param point     filled with expected weights
 * @param v         a value a row
 * @param phi       dispersion
 * @param centred   whether the columns span a constant
 * @param sandwich  how scores are summed where errors are sandwich: copies of each row, and clusters
 */
export async function directionScore(
  equations: Equations,
  point: Point,
  factor: Factor,
  v: Float64Array,
  phi: number,
  centred: boolean,
  sandwich: { readonly repeat: Float64Array | null; readonly cluster: Int32Array | null } | null,
): Promise<DirectionScore> {
  const { weight, score } = point.state
  const n = v.length
  let [total, sum] = [0, 0]
  for (let i = 0; i < n; i++) {
    const w = weight[i] as number
    if (w === 0) continue
    total += w
    sum += w * (v[i] as number)
  }
  const mean = centred ? sum / total : 0
  const rest = new Float64Array(n)
  let whole = 0
  for (let i = 0; i < n; i++) {
    const w = weight[i] as number
    rest[i] = w === 0 ? 0 : (v[i] as number) - mean
    whole += w * (rest[i] as number) * (rest[i] as number)
  }
  await project(equations, weight, factor, rest)
  let information = weightedSquares(weight, rest)
  // What the first time leaves by rounding the second takes; it is felt only where little else is left.
  if (!(information > 1e-4 * whole)) {
    await project(equations, weight, factor, rest)
    information = weightedSquares(weight, rest)
  }
  let u = 0
  for (let i = 0; i < n; i++) u += (rest[i] as number) * (score[i] as number)
  let variance = phi * information
  if (sandwich) {
    variance = 0
    const { repeat, cluster } = sandwich
    if (cluster) {
      const sums = new Map<number, number>()
      for (let i = 0; i < n; i++)
        sums.set(cluster[i] as number, (sums.get(cluster[i] as number) ?? 0) + (rest[i] as number) * (score[i] as number))
      for (const own of sums.values()) variance += own * own
    } else {
      for (let i = 0; i < n; i++) {
        const own = (rest[i] as number) * (score[i] as number)
        variance += (own * own) / (repeat ? (repeat[i] as number) : 1)
      }
    }
  }
  return { statistic: (u * u) / variance, step: u / information, index: whole > 0 ? information / whole : 0, information }
}

const weightedSquares = (weight: Float64Array, x: Float64Array): number => {
  let sum = 0
  for (let i = 0; i < x.length; i++) sum += (weight[i] as number) * (x[i] as number) * (x[i] as number)
  return sum
}

/** v − X(X'WX)⁻¹X'Wv in place. */
async function project(equations: Equations, weight: Float64Array, factor: Factor, v: Float64Array): Promise<void> {
  if (equations.pace.due(v.length * (20 + 4 * equations.basis.size))) await equations.pace.rest()
  const { basis } = equations
  const weighted = new Float64Array(v.length)
  for (let i = 0; i < v.length; i++) weighted[i] = (weight[i] as number) === 0 ? 0 : (weight[i] as number) * (v[i] as number)
  const gamma = factor.solve(equations.scored(weighted))
  const cellValues = basis.blocks.map((block) => cellTerms(block, gamma))
  const fitted = weighted
  for (let from = 0; from < v.length; from += blockRows) {
    const to = Math.min(v.length, from + blockRows)
    linearPredictor(basis, gamma, cellValues, null, from, to, fitted)
    for (let i = from; i < to; i++) v[i] = (v[i] as number) - (fitted[i] as number)
  }
}

/** Whether the columns span a constant: what is left of it after projection is rounding. */
export async function spansConstant(equations: Equations): Promise<boolean> {
  const { rows } = equations.basis
  if (equations.basis.size === 0) return false
  const one = new Float64Array(rows).fill(1)
  const factor = Factor.of(equations.weighted(one))
  if (!factor) return false
  const left = one.slice()
  for (let round = 0; round < 2; round++) await project(equations, one, factor, left)
  let squares = 0
  for (const x of left) squares += x * x
  return squares < 1e-18 * rows
}
