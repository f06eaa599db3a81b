// How far a step along a ridge may go at once: under links whose means run to the ends of their range fast, a long step would leave every
// weight at nought, from where there is no way back.

import { directionOf } from "./recession.ts"
import type { Equations } from "./scoring.ts"

/** Under links with an exponential or normal tail, η moves by no more than this in one step outwards. */
const longestStep = 4

/** The share of a move that keeps each row's step in η short, where means run to the ends of their range fast. */
export function shareOf(equations: Equations, v: Float64Array): number {
  const { link, a } = equations.responses
  if (link.reach.low > Number.NEGATIVE_INFINITY || link.reach.high < Number.POSITIVE_INFINITY || link.name === "identity") return 1
  let most = 0
  directionOf(equations, v).forEach((t, i) => {
    if ((a[i] as number) > 0) most = Math.max(most, Math.abs(t))
  })
  return most > longestStep ? longestStep / most : 1
}
