// Fits by penalised likelihood, ℓ + ½ln|X'WX|: the first-order bias of maximum likelihood is taken away, and coefficients stay finite where
// successes and failures are separated. Allowed where the weights vanish at both ends of the means, so that the penalty has an upper limit.
// Firth 1993, Biometrika 80:27; Kosmidis & Firth 2021, Biometrika 108:71; conventions, bias_reduced.

import { basisOf } from "./basis.ts"
import { type Design, designOf, recipeOf } from "./design.ts"
import { log } from "./elementary.ts"
import type { Fit, Fitted } from "./fit.ts"
import { cholesky, Factor } from "./gram.ts"
import { findings } from "./inference.ts"
import { nullModel } from "./null-model.ts"
import type { Problem } from "./problem.ts"
import type { Spot, Surface } from "./ridge.ts"
import { shareOf } from "./ridge-share.ts"
import { rowLeverages } from "./row-leverages.ts"
import { responsesOf } from "./rows.ts"
import { dot, Equations, type Maximum, Pace, type Point } from "./scoring.ts"
import { startingPoint } from "./start.ts"
import { weightSlopes } from "./weight-slopes.ts"

/** Links under which the penalty has an upper limit, by family. */
const allowed: Readonly<Record<string, readonly string[]>> = {
  binomial: ["logit", "probit", "cauchit", "cloglog", "loglog", "aranda_ordaz", "stukel"],
  poisson: ["log"],
  negative_binomial: ["log"],
}

/** Why the bias cannot be reduced in a problem; null where it can. */
export type NotReduced = "family" | "link" | "dispersion" | "estimated" | "limits" | "sampling"

export function whyNotReduced(problem: Problem): NotReduced | null {
  const { family, link } = problem
  const links = allowed[family.name]
  if (links === undefined) return "family"
  if (problem.sampling) return "sampling"
  if ((family.estimated?.length ?? 0) > 0 || (link.estimated?.length ?? 0) > 0) return "estimated"
  if (link.limits) return "limits"
  if (!links.includes(link.name)) return "link"
  return problem.dispersion === "one" || problem.dispersion === 1 ? null : "dispersion"
}

/** Whether the bias is also gone to first order: only under the canonical link. */
export const biasIsGone = ({ family, link }: Problem): boolean =>
  family.name === "binomial" ? link.name === "logit" : family.name === "poisson"

/** The step of the search is at most this far from rounding when it ends. */
const noMoreToGain = 1e-26
/** Scoring gains a fixed share a step on a penalised likelihood; a search that needs more than this is given up. */
const mostSteps = 2000
const mostColumns = 400

type Penalised = {
  readonly design: Design
  readonly equations: Equations
  readonly found: Maximum
  readonly value: number
  readonly score: Float64Array
}

/** A fit whose coefficients maximise the penalised likelihood; deviance and ℓ are the plain ones there. */
export async function biasReducedFit(problem: Problem, pause: () => Promise<void>): Promise<Fitted> {
  const why = whyNotReduced(problem)
  if (why !== null) return { ok: false, why: "gave_up", detail: "the bias is not reduced under this family and link" }
  const pace = new Pace(pause)
  const search = await penalised(problem, pace)
  if (!search.ok) return search
  const { design, equations, found, score } = search.found
  const dependences = search.dependences
  const none = await penalisedNull(problem, pace)
  const climb = { problem, design, responses: equations.responses, equations, found }
  const limit = found.end === "arrived" ? ({ type: "inside" } as const) : ({ type: "gave_up" } as const)
  const plain = await findings({ climb, limit, dependences, none, others: [] })
  const factor = Factor.of(found.point.gram)
  return { ok: true, fit: asPenalised(plain, factor === null ? Number.NaN : largestShare(score, found.point, equations)) }
}

/** What maximum likelihood means and a penalised fit does not have: criteria, the score of the link, a proof that there is no other. */
const asPenalised = (fit: Fit, scaledScore: number): Fit => ({
  ...fit,
  aic: null,
  bic: null,
  goodnessOfLink: null,
  certificate: { ...fit.certificate, global: false, scaledScore },
})

/** max |U*_j|/√I_jj over the basis. */
function largestShare(score: Float64Array, { gram }: Point, { basis }: Equations): number {
  let most = 0
  for (let j = 0; j < basis.size; j++) most = Math.max(most, Math.abs(score[j] as number) / Math.sqrt(gram.diagonalAt(j)))
  return most
}

type Search =
  | { readonly ok: true; readonly found: Penalised; readonly dependences: Parameters<typeof findings>[0]["dependences"] }
  | Extract<Fitted, { ok: false }>

async function penalised(problem: Problem, pace: Pace, near: Float64Array | null = null): Promise<Search> {
  if (problem.rows === 0) return { ok: false, why: "no_rows", detail: "no row has everything the model needs" }
  const recipe = recipeOf(problem.terms, problem.intercept, problem.variables, problem.rows, problem.repeat)
  const design = designOf(recipe, problem.variables, problem.rows)
  const columns = recipe.columns.length
  if (columns > mostColumns)
    return { ok: false, why: "gave_up", detail: `the predictor has ${columns} columns, and the bias of at most ${mostColumns} is reduced` }
  const responses = responsesOf(problem)
  const { basis, dependences } = await basisOf(design, pace)
  const equations = new Equations(basis, responses, pace)
  const none = await nullModel(responses, pace, () => 1)
  const start = await startingPoint(equations, design.constant ? 0 : -1, columns, none, near)
  if (!start) return { ok: false, why: "no_start", detail: "no coefficients were found under which every mean is possible" }
  const surface = new PenalisedSurface(equations)
  const found = await climbed(surface, start)
  return {
    ok: true,
    found: { design, equations, ...found },
    dependences: dependences.map(({ column, on }) => ({
      column: recipe.columns[column] as string,
      on: on.map((part) => ({ column: recipe.columns[part.column] as string, times: part.times })),
    })),
  }
}

/** The constant alone, by the same likelihood; its deviance is the plain one. */
async function penalisedNull(problem: Problem, pace: Pace): Promise<{ readonly eta: number; readonly deviance: number } | null> {
  const search = await penalised({ ...problem, terms: [], intercept: true, variables: {} }, pace)
  if (!search.ok || search.found.found.end !== "arrived") return null
  const { point } = search.found.found
  return { eta: point.gamma[0] as number, deviance: point.deviance }
}

/** D − ln|X'WX| over the coefficients in a basis, its adjusted score, and the expected information for its curvature. */
export class PenalisedSurface implements Surface {
  private readonly equations: Equations
  private readonly points = new WeakMap<Spot, Point>()

  constructor(equations: Equations) {
    this.equations = equations
  }

  spot(): Spot {
    return this.over(this.equations.point())
  }

  over(point: Point): Spot {
    const spot: Spot = { gamma: point.gamma, value: Number.NaN, score: point.score, factor: null }
    this.points.set(spot, point)
    return spot
  }

  pointOf(spot: Spot): Point {
    return this.points.get(spot) as Point
  }

  share(v: Float64Array): number {
    return shareOf(this.equations, v)
  }

  async fill(spot: Spot): Promise<boolean> {
    const { equations } = this
    const point = this.pointOf(spot)
    spot.factor = null
    if (!(await equations.fill(point, "expected", true))) return false
    const factor = Factor.of(point.gram)
    if (factor === null) return false
    const { eta, mu, weight } = point.state
    // ½·h·W'/W, as ½·W'·x'(X'WX)⁻¹x.
    const bent = await rowLeverages(equations, weightSlopes(equations.responses, eta, mu, weight), factor)
    const adjusted = equations.scored(bent)
    spot.factor = factor
    spot.score = point.score.map((u, j) => u + 0.5 * (adjusted[j] as number))
    spot.value = point.deviance - logDeterminant(point)
    return Number.isFinite(spot.value)
  }
}

function logDeterminant({ gram }: Point): number {
  const p = gram.rest + gram.last
  const lower = gram.full()
  const scale = Float64Array.from({ length: p }, (_, j) => Math.sqrt(gram.diagonalAt(j)))
  for (let i = 0; i < p; i++)
    for (let j = 0; j < p; j++) lower[i * p + j] = (lower[i * p + j] as number) / ((scale[i] as number) * (scale[j] as number))
  if (!cholesky(lower, p)) return Number.NEGATIVE_INFINITY
  let sum = 0
  for (let j = 0; j < p; j++) sum += 2 * log((lower[j * p + j] as number) * (scale[j] as number))
  return sum
}

/** Scoring with step-halving until the adjusted score falls no more. */
async function climbed(surface: PenalisedSurface, start: Point): Promise<{ found: Maximum; value: number; score: Float64Array }> {
  let current = surface.over(start)
  let other = surface.spot()
  const none = { step: new Float64Array(start.gamma.length), decrement: Number.NaN }
  const ended = (end: Maximum["end"], iterations: number, step: Float64Array, decrement: number) => ({
    found: { point: surface.pointOf(current), iterations, end, decrement, step },
    value: current.value,
    score: current.score,
  })
  if (!(await surface.fill(current)) || current.factor === null) return ended("singular", 0, none.step, none.decrement)
  let least = Number.POSITIVE_INFINITY
  let stalled = 0
  for (let iterations = 0; iterations < mostSteps; iterations++) {
    const step: Float64Array = (current.factor as Factor).solve(current.score)
    const decrement = dot(step, current.score)
    if (decrement <= noMoreToGain) return ended("arrived", iterations, step, decrement)
    stalled = decrement < 0.99 * least ? 0 : stalled + 1
    least = Math.min(least, decrement)
    // The last digits move without falling: they are rounding.
    if (decrement < 1e-18 && stalled > 3) return ended("arrived", iterations, step, decrement)
    let share = surface.share(step)
    let taken = false
    for (let halving = 0; halving < 40 && !taken; halving++) {
      for (let j = 0; j < step.length; j++) other.gamma[j] = (current.gamma[j] as number) + share * (step[j] as number)
      taken = (await surface.fill(other)) && other.value <= current.value + 1e-13 * (1 + Math.abs(current.value))
      share /= 2
    }
    if (!taken) return ended(decrement < 1e-14 ? "arrived" : "stuck", iterations, step, decrement)
    ;[current, other] = [other, current]
  }
  return ended("slow", mostSteps, none.step, none.decrement)
}

/** What profiles of a penalised fit need: its surface, its best place, the change to the design. Null where the fit does not arrive. */
export async function penalisedSearch(
  problem: Problem,
  fit: Fit,
  pause: () => Promise<void>,
): Promise<{ readonly equations: Equations; readonly point: Point; readonly surface: PenalisedSurface } | null> {
  const near = Float64Array.from(fit.coefficients, ({ beta }) => beta ?? 0)
  const search = await penalised(problem, new Pace(pause), near)
  if (!search.ok || search.found.found.end !== "arrived") return null
  const { equations, found } = search.found
  return { equations, point: found.point, surface: new PenalisedSurface(equations) }
}
