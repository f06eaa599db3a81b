// Profiles where parameters are estimated beside the coefficients: of a coefficient, everything else minimised again, the parameters included;
// of a parameter, the coefficients and the other parameters. Each point of a profile is a search of its own, begun at the last, and its
// slope is exact, so that an end is found by few of them. Conventions, tests and intervals.

import { basisOf, basisOver } from "./basis.ts"
import { denseColumns, designOf, recipeOf } from "./design.ts"
import { dispersionRule } from "./dispersion.ts"
import { descended, type Spot, Surface, startingValues } from "./estimated.ts"
import { familyOf } from "./families.ts"
import type { Fit } from "./fit.ts"
import { estimatedParameters, shownValue } from "./joint-information.ts"
import type { Problem } from "./problem.ts"
import type { IntervalEnd, ProfileInterval } from "./profile.ts"
import { Pace, type Point } from "./scoring.ts"
import { chiSquareUpperQuantile } from "./special.ts"

/** One point of a profile. */
type Height = { readonly at: number; readonly objective: number; readonly slope: number; readonly inside: boolean; readonly spot: Spot }
type Profile = (at: number, near: Spot) => Promise<Height | null>

/** Errors of an estimate beyond which a profile that has not risen enough never does. */
const farthest = 1e5
const mostPoints = 80

/**
 * Intervals of the coefficients of a fit with estimated parameters.
 * @param rise  what D, in units of φ, or −2ℓ may rise by
 */
export async function jointIntervals(
  asked: Problem,
  fit: Fit,
  rise: number,
  pause: () => Promise<void>,
): Promise<readonly (ProfileInterval | null)[]> {
  const problem = { ...asked, family: fit.family, link: fit.link }
  const pace = new Pace(pause)
  const design = designOf(
    recipeOf(problem.terms, problem.intercept, problem.variables, problem.rows, problem.repeat),
    problem.variables,
    problem.rows,
  )
  const { basis } = await basisOf(design, pace)
  const kept = [...basis.change.column]
  const columns = design.recipe.columns.length
  const phi = heldDispersion(problem, fit)
  const whole = new Surface(problem, basis, design.constant ? 0 : -1, columns, phi, pace)
  const top = await whole.at(startingValues(problem), null)
  const dense = denseColumns(design)
  const cut = whole.ofLikelihood ? rise : rise * (fit.dispersion.value ?? Number.NaN)
  const found: (ProfileInterval | null)[] = []
  for (const [j, { beta, standardError }] of fit.coefficients.entries()) {
    if (beta === null || !top || !(cut > 0) || kept.indexOf(j) < 0) {
      found.push(null)
      continue
    }
    const x = dense[j] as Float64Array
    const without = basisOver(
      design,
      kept.filter((column) => column !== j),
    )
    const profile: Profile = async (at, near) => {
      const offset = x.map((value, i) => (problem.offset ? (problem.offset[i] as number) : 0) + at * value)
      const surface = new Surface({ ...problem, offset }, without, design.constant && j !== 0 ? 0 : -1, columns, phi, pace)
      const start = await surface.at(near.values, near)
      if (!start) return null
      const free = surface.parameters.map((_, k) => k)
      const { spot } = await descended(surface, start, free)
      let slope = 0
      const { score } = spot.point.state
      for (let i = 0; i < x.length; i++) slope += (score[i] as number) * (x[i] as number)
      return { at, objective: spot.objective, slope: (-2 * slope) / spot.phi, inside: spot.inside, spot }
    }
    const error = standardError !== null && standardError > 0 ? standardError : Math.abs(beta) * 0.1 || 1
    const low = await endOf(profile, top, beta, -1, error, cut, [-Infinity, Infinity])
    const high = await endOf(profile, top, beta, 1, error, cut, [-Infinity, Infinity])
    found.push({ low, high })
  }
  return found
}

/** An interval for each estimated parameter: of a link or limit by D, of k and p by −2ℓ. Null for one at an end of its range, and for limits beyond. */
export async function parameterIntervals(
  asked: Problem,
  fit: Fit,
  pause: () => Promise<void>,
): Promise<readonly (ProfileInterval | null)[]> {
  const problem = { ...asked, family: fit.family, link: fit.link }
  const parameters = estimatedParameters(problem)
  const none = parameters.map(() => null)
  if (parameters.length === 0 || fit.certificate.class === "gave_up" || problem.standardErrors === "sandwich") return none
  const pace = new Pace(pause)
  const design = designOf(
    recipeOf(problem.terms, problem.intercept, problem.variables, problem.rows, problem.repeat),
    problem.variables,
    problem.rows,
  )
  const { basis } = await basisOf(design, pace)
  const rule = dispersionRule(problem)
  // Here alone df leaves the parameters out.
  const df = fit.n - fit.rank
  const phi = rule.given ?? (problem.dispersion === "likelihood" ? fit.dispersion.value : df > 0 ? fit.pearson / df : null)
  if (phi === null || !(phi > 0)) return none
  const swapped = problem.link.name === "power" && design.constant && problem.offset === null
  const of = swapped ? { ...problem, link: { ...problem.link, name: "box_cox" } } : problem
  const surface = new Surface(of, basis, design.constant ? 0 : -1, design.recipe.columns.length, heldDispersion(problem, fit), pace)
  const top = await surface.at(startingValues(problem), null)
  if (!top) return none
  const cut = chiSquareUpperQuantile(1 - problem.confidence, 1) * (surface.ofLikelihood ? 1 : phi)
  const found: (ProfileInterval | null)[] = []
  for (const [j, parameter] of parameters.entries()) {
    const others = parameters.flatMap((_, k) => (k === j ? [] : [k]))
    const profile: Profile = async (at, near) => {
      const values = near.values.map((value, k) => (k === j ? at : value))
      const start = await surface.at(values, near)
      if (!start) return null
      const spot = others.length === 0 ? start : (await descended(surface, start, others)).spot
      return { at, objective: spot.objective, slope: spot.gradient[j] as number, inside: spot.inside, spot }
    }
    const best = top.values[j] as number
    const q = parameters.length
    const curvature = top.hessian[j * q + j] as number
    const bounds = surface.bounds[j] as readonly [number, number]
    const error = curvature > 0 ? Math.sqrt((2 * (surface.ofLikelihood ? 1 : phi)) / curvature) : 0.1 * (Math.abs(best) || 1)
    const ends: IntervalEnd[] = []
    for (const side of [-1, 1] as const) {
      const atBound = best === (side === -1 ? bounds[0] : bounds[1])
      const end = atBound ? null : await endOf(profile, top, best, side, error, cut, bounds)
      ends.push(typeof end === "number" ? shownValue(problem, parameter, end)[0] : end === "edge" ? null : end)
    }
    const inverse = parameter.part === "family" && problem.family.name !== "tweedie"
    const [low = null, high = null] = inverse ? [ends[1], ends[0]] : ends
    // A k of any size is as good once Poisson's law is within reach.
    found.push(inverse ? { low, high: high === null ? "infinity" : high } : { low, high })
  }
  return found
}

/** φ at any point of a profile is the one of the fit. */
const heldDispersion = (problem: Problem, fit: Fit): ((point: Point) => number) => {
  const phi = familyOf(problem.family).discrete ? 1 : (fit.dispersion.value ?? 1)
  return () => phi
}

/**
 * Where a profile has risen by `rise`, on one side of its best. Newton's method for the root of the rise, which is nearly linear, inside a
 * bracket. Null at the end of the range; an infinity where the rise is never reached.
 */
async function endOf(
  profile: Profile,
  top: Spot,
  best: number,
  side: 1 | -1,
  error: number,
  rise: number,
  [lowest, highest]: readonly [number, number],
): Promise<IntervalEnd> {
  const bound = side === 1 ? highest : lowest
  const wanted = Math.sqrt(rise)
  let [inside, outside]: [number, number | null] = [best, null]
  let near = top
  let blocked = false
  let at = best + side * 2 * error
  let last = Number.NaN
  for (let k = 0; k < mostPoints; k++) {
    if (side * (at - bound) > 0) at = bound
    const found = await profile(at, near)
    if (!found?.inside || !Number.isFinite(found.objective)) {
      // Here the coefficients come to an edge: nearer ones may not.
      blocked = true
      outside = at
      if (Math.abs(at - inside) <= 1e-3 * error) return "edge"
      at = inside + 0.5 * (at - inside)
      continue
    }
    const over = found.objective - top.objective
    const root = Math.sqrt(Math.max(0, over))
    near = found.spot
    if (over < rise) {
      inside = at
      if (at === bound) return null
      if (Math.abs(at - best) > farthest * error) return side === 1 ? "infinity" : "-infinity"
    } else {
      outside = at
      blocked = false
    }
    if (Math.abs(root - wanted) <= 1e-12 * wanted || at === last) return at
    last = at
    const slope = root > 0 ? found.slope / (2 * root) : Number.NaN
    let next = at - (root - wanted) / slope
    const farAlready = 4 * Math.abs(at - best) + error
    if (!Number.isFinite(next) || side * (next - best) <= 0) next = outside === null ? at + side * farAlready : (inside + outside) / 2
    if (outside === null && Math.abs(next - at) > farAlready) next = at + side * farAlready
    if (side * (next - inside) <= 0 || (outside !== null && side * (next - outside) >= 0)) {
      // Rounding brought both ends of the bracket together.
      if (outside !== null && Math.abs(outside - inside) <= 4e-15 * (Math.abs(at) + error)) return at
      if (Math.abs(next - at) <= 1e-13 * (Math.abs(at) + error)) return next
      next = outside === null ? at + side * farAlready : (inside + outside) / 2
    }
    at = next
  }
  return blocked ? "edge" : near === top ? null : last
}
