// From a basis to the design's own columns and back: coefficients, covariances, scores. X = Z·N over the columns a basis has, so β = N⁻¹γ.

import type { Basis } from "./basis.ts"
import { exactCoefficients } from "./scoring.ts"

/** β over all columns of the design from γ; columns left out are 0. */
export function designCoefficients(basis: Basis, columns: number, gamma: Float64Array, gammaLow: Float64Array | null = null): Float64Array {
  const beta = new Float64Array(columns)
  const { change } = basis
  if (change.type === "orthogonal") {
    const exact = exactCoefficients(basis, { gamma, gammaLow: gammaLow ?? new Float64Array(gamma.length) })
    change.column.forEach((at, j) => {
      beta[at] = (exact[2 * j] as number) + (exact[2 * j + 1] as number)
    })
    return beta
  }
  for (let j = 0; j < basis.size; j++) {
    const own = (gamma[j] as number) / (change.scale[j] as number)
    const at = change.column[j] as number
    beta[at] = (beta[at] as number) + own
    const on = change.carrier[j] as number
    if (on >= 0) beta[on] = (beta[on] as number) - (change.centre[j] as number) * own
  }
  return beta
}

/** γ = N·β. */
export function basisCoefficients(basis: Basis, beta: Float64Array): Float64Array {
  const { change, size } = basis
  const gamma = new Float64Array(size)
  if (change.type === "orthogonal") {
    for (let i = 0; i < size; i++) {
      let sum = 0
      for (let j = i; j < size; j++) sum += (change.high[i * size + j] as number) * (beta[change.column[j] as number] as number)
      gamma[i] = sum
    }
    return gamma
  }
  const place = placesOf(change.column)
  for (let j = 0; j < size; j++) {
    const b = beta[change.column[j] as number] as number
    gamma[j] = (gamma[j] as number) + b * (change.scale[j] as number)
    const on = change.carrier[j] as number
    if (on >= 0) {
      const at = place.get(on) as number
      gamma[at] = (gamma[at] as number) + b * (change.centre[j] as number) * (change.scale[at] as number)
    }
  }
  return gamma
}

/** N by rows: the design's columns, in the order of the basis', in terms of the basis. */
export function changeMatrix(basis: Basis): Float64Array {
  const { change, size } = basis
  if (change.type === "orthogonal") return change.high
  const N = new Float64Array(size * size)
  const place = placesOf(change.column)
  for (let j = 0; j < size; j++) {
    N[j * size + j] = change.scale[j] as number
    const on = change.carrier[j] as number
    if (on >= 0) {
      const at = place.get(on) as number
      N[at * size + j] = (change.centre[j] as number) * (change.scale[at] as number)
    }
  }
  return N
}

/** Lower triangle by rows of N⁻¹·C·N⁻¹' over all columns of the design; NaN for those left out. */
export function designCovariance(basis: Basis, columns: number, C: Float64Array): Float64Array {
  const { change, size } = basis
  const full = new Float64Array(columns * columns).fill(Number.NaN)
  if (change.type === "orthogonal") {
    const A = new Float64Array(size * size)
    const unit = new Float64Array(size)
    const none = new Float64Array(size)
    for (let j = 0; j < size; j++) {
      unit.fill(0)
      unit[j] = 1
      const column = exactCoefficients(basis, { gamma: unit, gammaLow: none })
      for (let i = 0; i < size; i++) A[i * size + j] = column[2 * i] as number
    }
    const AC = new Float64Array(size * size)
    for (let i = 0; i < size; i++) {
      for (let j = 0; j < size; j++) {
        let sum = 0
        for (let k = i; k < size; k++) sum += (A[i * size + k] as number) * (C[k * size + j] as number)
        AC[i * size + j] = sum
      }
    }
    for (let i = 0; i < size; i++) {
      for (let j = 0; j <= i; j++) {
        let sum = 0
        for (let k = j; k < size; k++) sum += (AC[i * size + k] as number) * (A[j * size + k] as number)
        const a = change.column[i] as number
        const b = change.column[j] as number
        full[a * columns + b] = sum
        full[b * columns + a] = sum
      }
    }
    return lowerTriangle(full, columns)
  }
  // Rows first, then columns: each is divided by its scale, and its centre is charged to its carrier.
  const half = new Float64Array(columns * size)
  for (let j = 0; j < size; j++) {
    const at = (change.column[j] as number) * size
    const on = change.carrier[j] as number
    for (let k = 0; k < size; k++) {
      const own = (C[j * size + k] as number) / (change.scale[j] as number)
      half[at + k] = (half[at + k] as number) + own
      if (on >= 0) half[on * size + k] = (half[on * size + k] as number) - (change.centre[j] as number) * own
    }
  }
  const row = new Float64Array(columns)
  for (const a of change.column) {
    row.fill(0)
    for (let k = 0; k < size; k++) {
      const own = (half[a * size + k] as number) / (change.scale[k] as number)
      const at = change.column[k] as number
      row[at] = (row[at] as number) + own
      const on = change.carrier[k] as number
      if (on >= 0) row[on] = (row[on] as number) - (change.centre[k] as number) * own
    }
    for (const b of change.column) full[a * columns + b] = row[b] as number
  }
  return lowerTriangle(full, columns)
}

/** N·x, x in the order of the basis' columns. */
export function intoBasis(basis: Basis, x: Float64Array): Float64Array {
  const { change, size } = basis
  const out = new Float64Array(size)
  if (change.type === "orthogonal") {
    for (let i = 0; i < size; i++) {
      let sum = 0
      for (let j = i; j < size; j++) sum += (change.high[i * size + j] as number) * (x[j] as number)
      out[i] = sum
    }
    return out
  }
  const place = placesOf(change.column)
  for (let j = 0; j < size; j++) {
    out[j] = (out[j] as number) + (x[j] as number) * (change.scale[j] as number)
    const on = change.carrier[j] as number
    if (on < 0) continue
    const at = place.get(on) as number
    out[at] = (out[at] as number) + (x[j] as number) * (change.centre[j] as number) * (change.scale[at] as number)
  }
  return out
}

/** N⁻¹·z, in the order of the basis' columns. */
export function outOfBasis(basis: Basis, z: Float64Array): Float64Array {
  const { change, size } = basis
  if (change.type === "orthogonal") {
    const exact = exactCoefficients(basis, { gamma: z, gammaLow: new Float64Array(size) })
    return Float64Array.from({ length: size }, (_, j) => exact[2 * j] as number)
  }
  const out = new Float64Array(size)
  const place = placesOf(change.column)
  for (let j = 0; j < size; j++) {
    const own = (z[j] as number) / (change.scale[j] as number)
    out[j] = (out[j] as number) + own
    const on = change.carrier[j] as number
    if (on < 0) continue
    const at = place.get(on) as number
    out[at] = (out[at] as number) - (change.centre[j] as number) * own
  }
  return out
}

/** N'·u: X'u from Z'u, in the order of the basis' columns. */
export function designScore(basis: Basis, score: Float64Array): Float64Array {
  const { change, size } = basis
  const out = new Float64Array(size)
  if (change.type === "orthogonal") {
    for (let j = 0; j < size; j++) {
      let sum = 0
      for (let i = 0; i <= j; i++) sum += (change.high[i * size + j] as number) * (score[i] as number)
      out[j] = sum
    }
    return out
  }
  const place = placesOf(change.column)
  for (let j = 0; j < size; j++) {
    const on = change.carrier[j] as number
    const carried =
      on < 0
        ? 0
        : (change.centre[j] as number) * (change.scale[place.get(on) as number] as number) * (score[place.get(on) as number] as number)
    out[j] = (change.scale[j] as number) * (score[j] as number) + carried
  }
  return out
}

/** N'⁻¹·u: Z'u from X'u, in the order of the basis' columns. */
export function outOfScore(basis: Basis, score: Float64Array): Float64Array {
  const { change, size } = basis
  const out = new Float64Array(size)
  if (change.type === "orthogonal") {
    for (let j = 0; j < size; j++) {
      let sum = score[j] as number
      for (let i = 0; i < j; i++) sum -= (change.high[i * size + j] as number) * (out[i] as number)
      out[j] = sum / (change.high[j * size + j] as number)
    }
    return out
  }
  const place = placesOf(change.column)
  for (let j = 0; j < size; j++) {
    const on = change.carrier[j] as number
    const carried = on < 0 ? 0 : (change.centre[j] as number) * (score[place.get(on) as number] as number)
    out[j] = ((score[j] as number) - carried) / (change.scale[j] as number)
  }
  return out
}

/** Where each column of the design is in the basis, found once for each basis. */
function placesOf(column: Int32Array): ReadonlyMap<number, number> {
  const known = places.get(column)
  if (known) return known
  const made = new Map([...column].map((at, j) => [at, j]))
  places.set(column, made)
  return made
}
const places = new WeakMap<Int32Array, ReadonlyMap<number, number>>()

const lowerTriangle = (full: Float64Array, p: number): Float64Array => {
  const lower = new Float64Array((p * (p + 1)) / 2)
  let at = 0
  for (let i = 0; i < p; i++) for (let j = 0; j <= i; j++) lower[at++] = full[i * p + j] as number
  return lower
}
