// Errors of coefficients and of what is estimated beside them, from their joint information, expected or observed, or the joint sandwich.
// An estimated parameter is never taken as known. Conventions, dispersion and errors.

import { rowOf } from "./edge.ts"
import { Factor, type Gram } from "./gram.ts"
import { type EstimatedParameter, type JointSums, jointSums } from "./joint-information.ts"
import type { Climb } from "./limits.ts"
import type { Information } from "./rows.ts"
import type { Point } from "./scoring.ts"

export type JointCovariance = {
  /** Of the coefficients in the basis, by rows. */
  readonly coefficients: Float64Array
  /** Variances of the parameters, on the scale of the search. */
  readonly variances: Float64Array
}

/**
 * @param point     the maximum, filled with expected weights
 * @param clusters  their number under `sandwich by C`
 */
export async function jointCovariance(
  { problem, responses, equations }: Climb,
  point: Point,
  parameters: readonly EstimatedParameter[],
  phi: number,
  n: number,
  clusters: number | null,
): Promise<JointCovariance | null> {
  const other = equations.point()
  other.gamma.set(point.gamma)
  other.gammaLow.set(point.gammaLow)
  if (!(await equations.fill(other, "observed", true))) return null
  const sums = (kind: Information): JointSums => jointSums(problem, responses, parameters, point.state, kind)
  const columns = (of: JointSums): Float64Array[] => of.columns.map((column) => equations.scored(column))
  const observedSums = sums("observed")
  const observed = jointInverse(other.gram, columns(observedSums), observedSums.information)
  if (problem.standardErrors === "expected") {
    // The expected information of k with all else is nought; its own has no closed form, so that its error is the observed one.
    const plain = parameters.flatMap(({ part }, j) => (part === "family" ? [] : [j]))
    const expectedSums = jointSums(
      problem,
      responses,
      plain.map((j) => parameters[j] as EstimatedParameter),
      point.state,
      "expected",
    )
    const expected = jointInverse(point.gram, columns(expectedSums), expectedSums.information)
    if (!expected) return null
    const variances = new Float64Array(parameters.length).fill(Number.NaN)
    const q = parameters.length
    plain.forEach((j, k) => {
      variances[j] = phi * (expected.parameters[k * plain.length + k] as number)
    })
    parameters.forEach(({ part }, j) => {
      if (part === "family" && observed) variances[j] = phi * (observed.parameters[j * q + j] as number)
    })
    return { coefficients: expected.coefficients.map((x) => phi * x), variances }
  }
  if (!observed) return null
  const q = parameters.length
  if (problem.standardErrors === "observed")
    return {
      coefficients: observed.coefficients.map((x) => phi * x),
      variances: Float64Array.from(parameters, (_, j) => phi * (observed.parameters[j * q + j] as number)),
    }
  const p = equations.basis.size
  if (n <= p + q || (clusters !== null && clusters < 2)) return null
  const size = p + q
  const meat = new Float64Array(size * size)
  const add = (u: Float64Array, share: number): void => {
    for (let i = 0; i < size; i++) {
      const own = (u[i] as number) * share
      if (own === 0) continue
      for (let j = 0; j < size; j++) meat[i * size + j] = (meat[i * size + j] as number) + own * (u[j] as number)
    }
  }
  const byCluster = new Map<number, Float64Array>()
  for (let i = 0; i < problem.rows; i++) {
    const u = new Float64Array(size)
    const x = rowOf(equations, i)
    const s = point.state.score[i] as number
    for (let j = 0; j < p; j++) u[j] = s * (x[j] as number)
    observedSums.rowScores.forEach((own, j) => {
      u[p + j] = own[i] as number
    })
    if (!problem.cluster) add(u, 1 / (problem.repeat ? (problem.repeat[i] as number) : 1))
    else {
      const at = byCluster.get(problem.cluster[i] as number)
      if (at) for (let j = 0; j < size; j++) at[j] = (at[j] as number) + (u[j] as number)
      else byCluster.set(problem.cluster[i] as number, u)
    }
    if (equations.pace.due(20 + size * size)) await equations.pace.rest()
  }
  for (const u of byCluster.values()) add(u, 1)
  const factor = clusters === null ? n / (n - size) : (clusters / (clusters - 1)) * ((n - 1) / (n - size))
  const bread = observed.whole
  const spread = times(times(bread, meat, size), bread, size)
  const coefficients = new Float64Array(p * p)
  for (let i = 0; i < p; i++) for (let j = 0; j < p; j++) coefficients[i * p + j] = factor * (spread[i * size + j] as number)
  return { coefficients, variances: Float64Array.from(parameters, (_, j) => factor * (spread[(p + j) * (size + 1)] as number)) }
}

type Inverse = { readonly coefficients: Float64Array; readonly parameters: Float64Array; readonly whole: Float64Array }

/** The inverse of [[F, C], [C', T]] by blocks; null where it is not positive definite. */
function jointInverse(gram: Gram, C: readonly Float64Array[], T: Float64Array): Inverse | null {
  const factor = Factor.of(gram)
  if (!factor) return null
  const q = C.length
  const inverse = factor.inverse()
  const p = gram.rest + gram.last
  const G = C.map((column) => factor.solve(column))
  const S = T.slice()
  for (let j = 0; j < q; j++)
    for (let k = 0; k < q; k++)
      for (let i = 0; i < p; i++) S[j * q + k] = (S[j * q + k] as number) - (C[j]?.[i] as number) * (G[k]?.[i] as number)
  const lower = inverted(S, q)
  if (!lower) return null
  const size = p + q
  const whole = new Float64Array(size * size)
  const coefficients = inverse.slice()
  // G·S⁻¹, of which the cross block is minus.
  const GS = Array.from({ length: q }, (_, k) =>
    Float64Array.from({ length: p }, (_, i) => {
      let sum = 0
      for (let j = 0; j < q; j++) sum += (G[j]?.[i] as number) * (lower[j * q + k] as number)
      return sum
    }),
  )
  for (let i = 0; i < p; i++) {
    for (let j = 0; j < p; j++) {
      let sum = coefficients[i * p + j] as number
      for (let k = 0; k < q; k++) sum += (GS[k]?.[i] as number) * (G[k]?.[j] as number)
      coefficients[i * p + j] = sum
      whole[i * size + j] = sum
    }
    for (let k = 0; k < q; k++) {
      whole[i * size + p + k] = -(GS[k]?.[i] as number)
      whole[(p + k) * size + i] = -(GS[k]?.[i] as number)
    }
  }
  for (let j = 0; j < q; j++) for (let k = 0; k < q; k++) whole[(p + j) * size + p + k] = lower[j * q + k] as number
  return { coefficients, parameters: lower, whole }
}

/** A small symmetric positive definite inverse, scaled to a diagonal of ones first; null where it is not. */
function inverted(S: Float64Array, q: number): Float64Array | null {
  const scale = Float64Array.from({ length: q }, (_, j) => 1 / Math.sqrt(S[j * q + j] as number))
  if (scale.some((x) => !Number.isFinite(x))) return null
  const work = S.map((s, at) => s * (scale[Math.floor(at / q)] as number) * (scale[at % q] as number))
  const out = new Float64Array(q * q)
  for (let j = 0; j < q; j++) out[j * q + j] = 1
  for (let j = 0; j < q; j++) {
    const pivot = work[j * q + j] as number
    if (!(pivot > 1e-14)) return null
    for (let i = 0; i < q; i++) {
      if (i === j) continue
      const by = (work[i * q + j] as number) / pivot
      for (let k = 0; k < q; k++) {
        work[i * q + k] = (work[i * q + k] as number) - by * (work[j * q + k] as number)
        out[i * q + k] = (out[i * q + k] as number) - by * (out[j * q + k] as number)
      }
    }
  }
  for (let i = 0; i < q; i++)
    for (let k = 0; k < q; k++)
      out[i * q + k] = ((out[i * q + k] as number) / (work[i * q + i] as number)) * (scale[i] as number) * (scale[k] as number)
  return out
}

function times(a: Float64Array, b: Float64Array, n: number): Float64Array {
  const out = new Float64Array(n * n)
  for (let i = 0; i < n; i++)
    for (let k = 0; k < n; k++) {
      const x = a[i * n + k] as number
      if (x !== 0) for (let j = 0; j < n; j++) out[i * n + j] = (out[i * n + j] as number) + x * (b[k * n + j] as number)
    }
  return out
}
