// The curve of a link for its figure: η and its derivative over the means of the range, as far as a page shows of it.

import type { Name } from "../../runtime/value.ts"
import type { Given } from "../language/formula.ts"
import { programOf } from "../language/program.ts"
import type { ProvedPiece } from "../language/proof.ts"
import type { LinkFinding } from "../link-finding.ts"
import { placesOf, run } from "../statistics/own-link.ts"

const points = 241

/** What is drawn of a range without an end. */
const farthest = 5

export function curveOf(
  pieces: readonly ProvedPiece[],
  givens: ReadonlyMap<Name, Given>,
  [low, high]: readonly [number, number],
): LinkFinding["curve"] {
  const from = low === -Infinity ? (high === Infinity ? -farthest : high - 2 * farthest) : low
  const to = high === Infinity ? (low === -Infinity ? farthest : low + 2 * farthest) : high
  const mu = new Float64Array(points)
  const eta = new Float64Array(points).fill(Number.NaN)
  const slope = new Float64Array(points).fill(Number.NaN)
  const programs = pieces.map((piece) => ({ from: piece.from, program: programOf([piece.expression, piece.slope], "mu", givens) }))
  for (let i = 0; i < points; i++) {
    const x = from + ((to - from) * (i + 1)) / (points + 1)
    let k = programs.length - 1
    while (k > 0 && x < (programs[k]?.from ?? 0)) k--
    const program = programs[k]?.program
    mu[i] = x
    if (program === undefined) continue
    const places = new Float64Array(placesOf(program))
    run(program, x, places)
    const [value, rate] = [places[program.outputs[0] as number] as number, places[program.outputs[1] as number] as number]
    if (Number.isFinite(value)) eta[i] = value
    if (Number.isFinite(rate)) slope[i] = rate
  }
  return { mu, eta, slope }
}
