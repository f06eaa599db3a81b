// Coefficients that run to infinity: directions along which the likelihood never falls and some means tend to the end of their range. A
// direction is proposed by where the iterations were going and then verified row by row, so that nothing is called infinite on the strength of large
// numbers. Albert & Anderson 1984 (shares); Correia, Guimarães & Zylkin 2019 (counts); conventions, certificates.

import { Factor, gramOf, rangeSums, scoreSums } from "./gram.ts"
import type { Responses } from "./rows.ts"
import { cellTerms, type Equations, linearPredictor } from "./scoring.ts"

export type Recession = {
  /** The direction in the basis. */
  readonly gamma: Float64Array
  /** x'b of each row, 0 where the mean stays; the largest is 1 in size. */
  readonly along: Float64Array
}

/** The mean reached as η grows without limit in either direction, where that mean is 0 or 1; null where it is neither. */
export function endsOf({ link }: Pick<Responses, "link">): { readonly plus: 0 | 1 | null; readonly minus: 0 | 1 | null } {
  const { range, reach } = link
  const end = (eta: number): 0 | 1 | null => {
    const mu = link.mean(eta)
    // Between limits a failure agrees with the lower and a success with the upper one: no other mean gives it more likelihood.
    return mu === range.low && range.low >= 0 ? 0 : mu === range.high && range.high <= 1 ? 1 : null
  }
  return { plus: reach.high === Infinity ? end(Infinity) : null, minus: reach.low === -Infinity ? end(-Infinity) : null }
}

/** Whether any direction can lead to infinity under this family and link: a gamma has no response that agrees with an end. */
const mayRecede = (of: Responses): boolean => {
  const { plus, minus } = endsOf(of)
  return of.family.name !== "gamma" && (plus !== null || minus !== null)
}

/** Steps in η below this are those of a search that has arrived. */
const stillMoving = 1e-5

/** What a row may miss of its condition, as a share of the largest x'b. */
const exactly = 1e-9

/**
 * The direction `step` points to, if it is one of recession: rows that hardly move are made not to move at all, then every row is checked.
 * @param step  last whole step of the search, in the basis
 */
export function recessionAlong(equations: Equations, step: Float64Array): Recession | null {
  const { basis, responses } = equations
  if (!mayRecede(responses) || step.some((x) => !Number.isFinite(x))) return null
  const first = directionOf(equations, step)
  const largest = largestOf(first, responses.a)
  if (!(largest > stillMoving)) return null
  for (const still of [1e-7, 1e-5, 1e-3, 3e-2]) {
    const gamma = step.map((x) => x / largest)
    const hold = new Float64Array(basis.rows)
    for (let i = 0; i < basis.rows; i++) hold[i] = (responses.a[i] as number) > 0 && Math.abs(first[i] as number) <= still * largest ? 1 : 0
    const held = heldStill(equations, gamma, hold)
    if (!held) continue
    const along = directionOf(equations, held)
    const size = largestOf(along, responses.a)
    if (!(size > 0.05)) continue
    for (let i = 0; i < basis.rows; i++) along[i] = Math.abs(along[i] as number) <= exactly * size ? 0 : (along[i] as number) / size
    if (verified(responses, along)) return { gamma: held.map((x) => x / size), along }
  }
  return null
}

/** Row by row: may this mean go where it is taken? Only if the response is at that end, or for a normal one beyond it. */
function verified(of: Responses, along: Float64Array): boolean {
  const { family, y, a, rows } = of
  const { plus, minus } = endsOf(of)
  const beyond = family.name === "normal"
  let moved = false
  for (let i = 0; i < rows; i++) {
    const t = along[i] as number
    if ((a[i] as number) === 0 || t === 0) continue
    const response = y[i] as number
    const end = t > 0 ? plus : minus
    if (end === 0 ? !(beyond ? response <= 0 : response === 0) : end !== 1 || !(beyond ? response >= 1 : response === 1)) return false
    moved = true
  }
  return moved
}

/**
 * The part of a direction that leaves the held rows where they are: what they move is taken away by least squares over them, with a little
 * of all rows so that the normal matrix can be solved, again and again until nothing is left.
 */
function heldStill(equations: Equations, gamma: Float64Array, hold: Float64Array): Float64Array | null {
  const { basis } = equations
  const weight = hold.map((h) => (h === 1 ? 1 : 1e-7))
  const factor = Factor.of(gramOf(basis.layout, rangeSums(basis.layout, weight, new Float64Array(basis.rows))))
  if (!factor) return null
  const out = gamma.slice()
  for (let round = 0; round < 12; round++) {
    const along = directionOf(equations, out)
    const score = along.map((t, i) => ((hold[i] as number) === 1 ? t : 0))
    const off = factor.solve(scoreSums(basis.layout, score))
    for (let j = 0; j < out.length; j++) out[j] = (out[j] as number) - (off[j] as number)
  }
  return out
}

/** Z·γ, no offset. */
export function directionOf(equations: Equations, gamma: Float64Array): Float64Array {
  const { basis } = equations
  const out = new Float64Array(basis.rows)
  linearPredictor(
    basis,
    gamma,
    basis.blocks.map((block) => cellTerms(block, gamma)),
    null,
    0,
    basis.rows,
    out,
  )
  return out
}

const largestOf = (x: Float64Array, a: Float64Array): number =>
  x.reduce((most, v, i) => ((a[i] as number) > 0 ? Math.max(most, Math.abs(v)) : most), 0)
