// The dispersion and the likelihood of a Tweedie fit at given means: φ by maximum likelihood, with the slope in p that its estimation needs.

import { exp, log } from "./elementary.ts"
import type { Problem } from "./problem.ts"
import type { Pace } from "./scoring.ts"
import { tweedieRow, tweedieRowOf } from "./tweedie.ts"

/** ℓ over all rows at one φ, with its slopes in log φ, and in p where that was asked for. */
export type TweedieLikelihood = {
  readonly phi: number
  readonly logLikelihood: number
  readonly byLogPhi: number
  readonly byLogPhiTwice: number
  readonly byPower: number
}

/** A row costs up to this many nanoseconds. */
const workOfRow = 15_000

export async function tweedieLikelihood(
  problem: Problem,
  mu: Float64Array,
  phi: number,
  pace: Pace,
  withPower = false,
): Promise<TweedieLikelihood> {
  const { y, repeat, precision, rows } = problem
  const p = problem.family.parameters[0] as number
  const row = tweedieRowOf()
  let [logLikelihood, byLogPhi, byLogPhiTwice, byPower] = [0, 0, 0, 0]
  for (let i = 0; i < rows; i++) {
    const m = mu[i] as number
    // A mean at 0 agrees with its response, and then with certainty.
    if (m === 0 && y[i] === 0) continue
    const R = repeat ? (repeat[i] as number) : 1
    tweedieRow(y[i] as number, m, p, phi / (precision ? (precision[i] as number) : 1), row, withPower)
    logLikelihood += R * row.logDensity
    byLogPhi += R * row.byLogPhi
    byLogPhiTwice += R * row.byLogPhiTwice
    byPower += R * row.byPower
    if (pace.due(workOfRow)) await pace.rest()
  }
  return { phi, logLikelihood, byLogPhi, byLogPhiTwice, byPower }
}

/** The same at the φ of greatest likelihood: Newton's method in log φ, from a first idea of φ. */
export async function tweedieAtBest(problem: Problem, mu: Float64Array, start: number, pace: Pace): Promise<TweedieLikelihood> {
  let at = await tweedieLikelihood(problem, mu, start, pace)
  for (let k = 0; k < 60; k++) {
    const step = at.byLogPhiTwice < 0 ? -at.byLogPhi / at.byLogPhiTwice : at.byLogPhi > 0 ? 1 : -1
    // So near to the end the likelihood is level to its last digits, and the slope alone says whether a step helps.
    const near = Math.abs(step) < 1e-4
    let share = 1
    let next: TweedieLikelihood | null = null
    for (let halving = 0; halving < 30 && next === null; halving++, share /= 2) {
      const trial = await tweedieLikelihood(problem, mu, exp(log(at.phi) + Math.max(-2, Math.min(2, share * step))), pace)
      if (near ? Math.abs(trial.byLogPhi) < Math.abs(at.byLogPhi) : trial.logLikelihood >= at.logLikelihood) next = trial
      else if (near) return at
    }
    if (next === null) return at
    at = next
    if (Math.abs(step) < 1e-10) return at
  }
  return at
}
