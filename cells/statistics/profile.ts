// Profile-likelihood intervals of coefficients: where the deviance, minimised over everything else, has risen by φ·c. Each end is followed
// outwards along the ridge, every point on it a constrained maximum found by Newton's method from the last; the ridge and the end are
// solved together, so that few passes over the rows are needed. Venzon & Moolgavkar 1988, Appl. Stat. 37:87.

import { penalisedSearch } from "./bias-reduced.ts"
import { designCoefficients, outOfScore } from "./change.ts"
import { dispersionRule } from "./dispersion.ts"
import { type Fit, searched } from "./fit.ts"
import { Factor } from "./gram.ts"
import type { Findings } from "./inference.ts"
import { jointIntervals } from "./joint-profile.ts"
import type { Problem } from "./problem.ts"
import { edgeProfile } from "./profile-at-edge.ts"
import { Ridge, type RidgeEnd, type Spot, type Surface } from "./ridge.ts"
import { shareOf } from "./ridge-share.ts"
import { dot, type Equations, type Point } from "./scoring.ts"
import { chiSquareUpperQuantile, fUpperQuantile } from "./special.ts"

/** An end of an interval: a number; never reached; or, before it is reached, a fitted mean comes to the end of its range. Null: not to be had. */
export type IntervalEnd = RidgeEnd

export type ProfileInterval = { readonly low: IntervalEnd; readonly high: IntervalEnd }

/** Above this many rows times columns cubed Wald intervals take the place of profiles, unless these are asked for (conventions, intervals). */
export const mostProfileWork = 5e8

/** Whether profiles are to be had without being asked for: by the data, never by the clock. */
export const profilesAreLight = (fit: Fit): boolean => {
  // Where parameters are estimated too, each point of a profile is a search of its own; at an edge each is a search among its rows.
  const times = fit.certificate.class === "boundary" ? 10_000 : fit.parameters.length > 0 ? 100 : 1
  return times * fit.rows * fit.rank * fit.rank * fit.rank <= mostProfileWork
}

/**
 * What the deviance may rise by in units of φ: the point of χ²(1), or of F(1, df) where φ is estimated. Null where there is none.
 */
export function profileCut(problem: Problem, fit: Fit): number | null {
  const tail = 1 - problem.confidence
  if (!dispersionRule(problem).estimated) return chiSquareUpperQuantile(tail, 1)
  return fit.df > 0 ? fUpperQuantile(tail, 1, fit.df) : null
}

/**
 * A profile interval for each coefficient of a fit; null for those that have none (left out, or not told apart from others).
 * @param pause  awaited at least every 50 ms of work
 */
export async function profileIntervals(
  problem: Problem,
  fit: Fit,
  pause: () => Promise<void>,
): Promise<readonly (ProfileInterval | null)[]> {
  const none = fit.coefficients.map(() => null)
  const phi = fit.dispersion.value
  const cut = profileCut(problem, fit)
  if (phi === null || !(phi > 0) || cut === null || fit.deviance === null || fit.certificate.class === "gave_up" || problem.sampling)
    return none
  if (fit.parameters.length > 0) return jointIntervals(problem, fit, cut, pause)
  if (problem.estimate === "bias_reduced") {
    const penalised = await penalisedSearch(problem, fit, pause)
    if (penalised === null) return none
    const { equations, point, surface } = penalised
    const ends: (ProfileInterval | null)[] = []
    for (let column = 0; column < fit.coefficients.length; column++) {
      ends.push(await profileOf(equations, point, column, null, cut, 1, 0, () => surface))
      await pause()
    }
    return ends
  }
  // From the coefficients of the fit, so that it is not searched for again.
  const search = await searched(problem, pause, fit)
  if (!search.ok || search.found.limit.type === "gave_up") return none
  const rise = phi * cut
  const found: (ProfileInterval | null)[] = []
  for (let column = 0; column < fit.coefficients.length; column++) {
    found.push(await intervalOf(search.found, column, rise, phi))
    await pause()
  }
  return found
}

async function intervalOf({ climb, limit }: Findings, column: number, rise: number, phi: number): Promise<ProfileInterval | null> {
  if (limit.type === "edge") return edgeProfile(climb, limit.edge, column, rise, phi)
  if (limit.type !== "infinite") return profileOf(climb.equations, climb.found.point, column, null, rise, phi, 0)
  const moved = limit.directions.find((direction) => direction[column] !== 0)?.[column] ?? 0
  // What stays is profiled over the rows whose means stay: the others are at their limit whatever it is.
  if (limit.edge !== null && limit.rest !== null)
    return moved === 0
      ? edgeProfile(limit.rest, limit.edge, column, rise, phi)
      : { low: moved < 0 ? "-infinity" : null, high: moved > 0 ? "infinity" : null }
  if (moved === 0) return limit.rest === null ? null : profileOf(limit.rest.equations, limit.rest.found.point, column, null, rise, phi, 0)
  return profileOf(climb.equations, climb.found.point, column, limit.rest?.found.point.deviance ?? 0, rise, phi, moved)
}

/**
 * Both ends for one column of the design.
 * @param base   the least deviance, where that is a limit; null for that of the point
 * @param moved  the side on which the coefficient runs to infinity, 0 for none
 * @param surfaceAlong  what is followed; the deviance unless said otherwise
 */
async function profileOf(
  equations: Equations,
  point: Point,
  column: number,
  base: number | null,
  rise: number,
  phi: number,
  moved: number,
  surfaceAlong: (c: Float64Array) => Surface = (c) => likelihoodSurface(equations, c),
): Promise<ProfileInterval | null> {
  const { basis } = equations
  const place = basis.change.column.indexOf(column)
  if (place < 0) return null
  const unit = new Float64Array(basis.size)
  unit[place] = 1
  // β_j = β̂_j + c'(γ − γ̂).
  const c = outOfScore(basis, unit)
  const ridge = await Ridge.from(surfaceAlong(c), point.gamma, c, phi)
  if (ridge === null) return null
  const at = designCoefficients(basis, Math.max(...basis.change.column) + 1, point.gamma, point.gammaLow)[column] as number
  const from = base ?? ridge.value
  const low = moved < 0 ? "-infinity" : await ridge.end(-1, from, rise)
  const high = moved > 0 ? "infinity" : await ridge.end(1, from, rise)
  return { low: typeof low === "number" ? at + low : low, high: typeof high === "number" ? at + high : high }
}

/** So much stiffer is the surface made along the coefficient followed, where it is not convex by itself. */
const stiffening = 100

/**
 * The deviance over the coefficients in the basis, curved as the observed weights say. Along the ridge it need only be convex across: where
 * it is not convex as a whole, c·c' is added, which changes no step that holds c'γ; where that does not help either, the expected weights
 * give the curvature.
 */
function likelihoodSurface(equations: Equations, c: Float64Array): Surface {
  const points = new WeakMap<Spot, Point>()
  const { rest } = equations.point().gram
  const isDense = c.subarray(rest).every((x) => x === 0)
  let stiffness = Number.NaN
  return {
    share: (v) => shareOf(equations, v),
    spot: () => {
      const point = equations.point()
      const spot: Spot = { gamma: point.gamma, value: Number.NaN, score: point.score, factor: null }
      points.set(spot, point)
      return spot
    },
    fill: async (spot) => {
      const point = points.get(spot) as Point
      if (!(await equations.fill(point, "observed", true))) return false
      spot.factor = Factor.of(point.gram)
      if (spot.factor === null && !equations.responses.canonical) {
        if (isDense && stiffness > 0) {
          const { matrix } = point.gram
          for (let i = 0; i < rest; i++) {
            for (let j = 0; j < rest; j++)
              matrix[i * rest + j] = (matrix[i * rest + j] as number) + stiffness * (c[i] as number) * (c[j] as number)
          }
          spot.factor = Factor.of(point.gram)
        }
        if (spot.factor === null) {
          await equations.fill(point, "expected", true)
          spot.factor = Factor.of(point.gram)
        }
      }
      if (Number.isNaN(stiffness) && spot.factor) stiffness = stiffening / dot(c, spot.factor.solve(c))
      spot.value = point.deviance
      spot.score = point.score
      return true
    },
  }
}
