// Fits: a problem in, everything known about its maximum out. The climbing is in scoring.ts, what errors and tests follow from it in
// inference.ts, what is certified about it in certificate.ts; this file puts them in order. Definitions: README.md.

import { type Dependence, mostInflation, reweightedBasis } from "./basis.ts"
import { biasReducedFit } from "./bias-reduced.ts"
import { basisCoefficients, designCoefficients } from "./change.ts"
import { isConcave } from "./concavity.ts"
import { columnsNeeded, type Design, mostColumns } from "./design.ts"
import { dispersionRule } from "./dispersion.ts"
import { bestParameters, type Estimated, Surface, startingValues } from "./estimated.ts"
import { familyOf } from "./families.ts"
import { Factor } from "./gram.ts"
import { groundOf } from "./ground.ts"
import { type Findings, findings, scaledScore } from "./inference.ts"
import { estimatedParameters, problemAt } from "./joint-information.ts"
import { type Climb, type Limit, limitOf } from "./limits.ts"
import { nullModel } from "./null-model.ts"
import type { FamilySpec, LinkSpec, Problem } from "./problem.ts"
import type { Recipe } from "./recipe.ts"
import { responsesOf } from "./rows.ts"
import { Equations, type Maximum, maximum, Pace, type Point, polished, sameWeights } from "./scoring.ts"
import { linkedLeastSquares, startingPoint } from "./start.ts"

export type { Recipe } from "./recipe.ts"

export type Coefficient = {
  /** Its term, such as `night`, `lot is b`, `lot is b . night`, `polynomial(night) 2`, `intercept`. */
  readonly of: string
  /** Which term of the problem it belongs to; −1 for the constant. */
  readonly term: number
  readonly beta: number | null
  readonly toward: "infinity" | "-infinity" | null
  readonly standardError: number | null
  readonly ratio: number | null
  readonly p: number | null
  readonly low: number | null
  readonly high: number | null
}

/** A parameter of link or family that was estimated. */
export type Parameter = {
  /** `a`, `b`, `lower limit`, `upper limit`, `k`, `p`. */
  readonly of: string
  /** Null where it ran to infinity. */
  readonly value: number | null
  readonly standardError: number | null
  /** Whether it is at an end of what it can be: −1 the lower, 1 the upper. */
  readonly end: -1 | 0 | 1
}

export type Certificate = {
  readonly class: "interior" | "boundary" | "infinite" | "unidentified" | "several_maxima" | "gave_up"
  readonly global: boolean
  readonly iterations: number
  readonly scaledScore: number
  readonly condition: number
  /** In words or numbers, what anyone can recheck; null where there is nothing to show. */
  readonly evidence: Evidence | null
}
export type Evidence = DependentTerms & {
  /** Directions along which coefficients run to infinity: η changes by these times, and no likelihood is lost. */
  readonly directions: readonly (readonly { readonly column: string; readonly times: number }[])[]
  /** Rows of the problem whose mean is at the end of its range, each with its multiplier λ ≥ 0. */
  readonly edge: readonly { readonly row: number; readonly multiplier: number }[]
  /** Deviances of other maxima that other starts led to. */
  readonly maxima: readonly number[]
  /** Where a search that did not arrive was left. */
  readonly stopped: {
    readonly because: "stuck" | "singular" | "slow"
    readonly steps: number
    readonly deviance: number
    readonly decrement: number
  } | null
}
/** Columns left out because earlier ones already say what they say: each with the columns and factors that make it. */
export type DependentTerms = {
  readonly dependent: readonly { readonly column: string; readonly on: readonly { readonly column: string; readonly times: number }[] }[]
}

export type Fit = {
  readonly n: number
  readonly rows: number
  readonly rank: number
  readonly df: number
  readonly parametersCounted: number
  readonly coefficients: readonly Coefficient[]
  /** Lower triangle by rows over all coefficients; NaN for those left out. */
  readonly covariance: Float64Array
  /** What was estimated beside the coefficients, in the order of the link, its limits and the family. */
  readonly parameters: readonly Parameter[]
  /** As they were fitted: what was estimated of them in its place. */
  readonly family: FamilySpec
  readonly link: LinkSpec
  readonly deviance: number | null
  readonly logLikelihood: number | null
  readonly interceptOnly: { readonly deviance: number | null; readonly df: number } | null
  readonly aic: number | null
  readonly bic: number | null
  readonly pearson: number
  readonly fitTest: readonly { readonly by: "deviance" | "pearson"; readonly df: number; readonly p: number }[]
  readonly dispersion: { readonly value: number | null; readonly by: Problem["dispersion"]; readonly estimated: boolean }
  readonly certificate: Certificate
  readonly goodnessOfLink: { readonly statistic: number; readonly df: number; readonly p: number } | null
  readonly meanRange: { readonly possible: readonly [number, number]; readonly fitted: readonly [number, number] }
  /** Clusters of `sandwich by C`; null otherwise. */
  readonly clusters: number | null
  /** Degrees of freedom of the t of Wald ratios and intervals; null for the normal law. */
  readonly lawDf: number | null
  readonly eta: Float64Array
  readonly mu: Float64Array
  readonly recipe: Recipe
  /** What `predicted` needs beside the coefficients. */
  readonly frame: Frame
  /** Directions along which coefficients run to infinity, over all coefficients; mostly none. */
  readonly recession: readonly Float64Array[]
}

/** The basis a fit was made in, so that standard errors elsewhere lose nothing to the distance from the origin. */
export type Frame =
  | {
      readonly type: "scaled"
      readonly column: Int32Array
      readonly centre: Float64Array
      readonly scale: Float64Array
      readonly carrier: Int32Array
      readonly gamma: Float64Array
      /** Covariance in the basis by rows; empty where there are no errors. */
      readonly covariance: Float64Array
    }
  | {
      readonly type: "orthogonal"
      readonly column: Int32Array
      readonly high: Float64Array
      readonly low: Float64Array
      readonly gamma: Float64Array
      readonly covariance: Float64Array
    }

/** A fit in the way of the world: to be told apart from a fit. */
export type Fitted =
  | { readonly ok: true; readonly fit: Fit }
  | { readonly ok: false; readonly why: "no_rows" | "no_start" | "gave_up"; readonly detail: string }

/** A scaled score above this is no maximum, whatever the steps say: where means run to an end, observed weights can make them small. */
const arrivedScore = 1e-6

/** `pause` is awaited at least every 50 ms of work; `near` is a fit of the same design to start from (gestures only). */
export async function fit(problem: Problem, pause: () => Promise<void>, near: Fit | null = null): Promise<Fitted> {
  if (problem.estimate === "bias_reduced") return biasReducedFit(problem, pause)
  const search = await searched(problem, pause, near)
  if (!search.ok) return search
  const found = await findings(search.found)
  return { ok: true, fit: problem.sampling ? asSampled(found) : found }
}

/** Weights that say how many others a row stands for make a weighted estimate of a score, and no likelihood: Binder 1983. */
const asSampled = (of: Fit): Fit => ({ ...of, logLikelihood: null, aic: null, bic: null, fitTest: [] })

/** Weights of mean one, as a sample's are used. */
export function samplingWeights(weights: Float64Array): Float64Array {
  const mean = weights.reduce((sum, w) => sum + w, 0) / weights.length
  return weights.map((w) => w / mean)
}

/** The search itself, for whoever goes on from where it ended (profiles, tests of nested fits). */
export async function searched(
  asked: Problem,
  pause: () => Promise<void>,
  near: Fit | null = null,
): Promise<{ readonly ok: true; readonly found: Findings } | Extract<Fitted, { ok: false }>> {
  let problem = asked
  if (problem.rows === 0) return { ok: false, why: "no_rows", detail: "no row has everything the model needs" }
  const needed = columnsNeeded(problem.terms, problem.intercept, problem.variables)
  if (needed > mostColumns)
    return { ok: false, why: "gave_up", detail: `the predictor makes up to ${needed} columns, and at most ${mostColumns} are fitted` }
  const pace = new Pace(pause)
  const ground = await groundOf(problem, pace)
  if (typeof ground === "string") return { ok: false, why: "gave_up", detail: ground }
  const { design, basis, dependences } = ground
  const phi = provisionalDispersion(problem, familyOf(problem.family).discrete)
  const columns = design.recipe.columns.length
  const constant = design.constant ? 0 : -1
  let estimated: Estimated | null = null
  if (estimatedParameters(problem).length > 0) {
    // Where a constant takes up scale and shift, a power is searched for as box_cox, which is continuous at 0.
    const swapped = problem.link.name === "power" && design.constant && problem.offset === null
    const of = swapped ? { ...problem, link: { ...problem.link, name: "box_cox" } } : problem
    const surface = new Surface(of, basis, constant, columns, phi(basis.size), pace)
    const before = near && near.link.name === problem.link.name && sameParameters(near, problem) ? near : null
    const begin = before ? await surface.at(startingValues({ ...problem, family: before.family, link: before.link }), null) : null
    estimated = await bestParameters(surface, begin)
    if (!estimated) {
      const of = surface.parameters.map((parameter) => parameter.of).join(" and ")
      return {
        ok: false,
        why: "gave_up",
        detail: `no value of ${of} was found for which these rows have a likelihood and every mean is possible`,
      }
    }
    problem = problemAt(problem, surface.parameters, estimated.spot.values)
  }
  const responses = responsesOf(problem)
  const none = await nullModel(responses, pace, phi(1))
  const equations = new Equations(basis, responses, pace)
  const warm = near ? Float64Array.from(near.coefficients, ({ beta }) => beta ?? 0) : null
  const start =
    (estimated && estimated.spot.problem.link.name === problem.link.name ? await filledAt(equations, estimated.spot.point) : null) ??
    (await startingPoint(equations, constant, columns, none, warm))
  if (!start) return { ok: false, why: "no_start", detail: "no coefficients were found under which every mean is possible" }
  const measure = phi(basis.size)
  let climb: Climb = { problem, design, responses, equations, found: await maximum(equations, start, measure) }
  let limit = await limitOf(climb, measure)
  const others: number[] = []
  if (
    !isConcave(givenOnly(problem.family), givenOnly(problem.link)) &&
    !near &&
    limit.type !== "infinite" &&
    !isWholeEdge(limit, problem.rows)
  ) {
    const better = await fromOtherStarts(climb, measure, others)
    if (better) {
      climb = { ...climb, found: better }
      limit = await limitOf(climb, measure)
    }
  }
  if (limit.type === "inside") {
    climb = await sharpened(climb, measure)
    const { point, decrement } = climb.found
    const scaled = scaledScore(climb.equations, point, measure(point))
    // In a perfect fit score and dispersion are both rounding, and their ratio says nothing.
    const perfect = decrement <= 1e4 * responses.rounding && Number.isFinite(scaled)
    if (!perfect && !(scaled <= arrivedScore)) limit = { type: "gave_up" }
  }
  if (estimated && !estimated.arrived && limit.type === "inside") limit = { type: "gave_up" }
  if (estimated) others.push(...estimated.others)
  return { ok: true, found: { climb, limit, dependences: named(dependences, design), none, others, estimated } }
}

/** Whether the same parameters are estimated. */
const sameParameters = (a: Pick<Problem, "family" | "link">, b: Pick<Problem, "family" | "link">): boolean =>
  a.family.name === b.family.name &&
  estimatedParameters(a)
    .map(({ of }) => of)
    .join() ===
    estimatedParameters(b)
      .map(({ of }) => of)
      .join()

/** Whether all means are at an end of what is possible, as all responses are: nothing can be better. */
const isWholeEdge = (limit: Limit, rows: number): boolean => limit.type === "edge" && limit.edge.active.length === rows

/** The same with its parameters taken as given. */
const givenOnly = <S extends FamilySpec | LinkSpec>(spec: S): S => ({ ...spec, estimated: [] })

/** A point of these equations at the coefficients of another. */
async function filledAt(equations: Equations, { gamma }: Point): Promise<Point | null> {
  const point = equations.point()
  point.gamma.set(gamma)
  return (await equations.fill(point, "expected")) ? point : null
}

/**
 * Where ℓ is not known to be concave: the search again from a least-squares fit and from places some standard errors away. Returns a maximum
 * that is better, and adds the deviances of those that are worse.
 */
async function fromOtherStarts({ equations, found }: Climb, phi: (point: Point) => number, others: number[]): Promise<Maximum | null> {
  const { point } = found
  await equations.fill(point, "expected")
  const errors = Factor.of(point.gram)?.inverse()
  const p = equations.basis.size
  const starts: Float64Array[] = []
  const squares = linkedLeastSquares(equations)
  if (squares) starts.push(squares)
  for (let k = 0; k < 4 && errors; k++) {
    const spread = Math.sqrt(phi(point)) * (4 + k)
    starts.push(point.gamma.map((g, j) => g + ((k >> (j % 2)) % 2 === 0 ? 1 : -1) * spread * Math.sqrt(errors[j * p + j] as number)))
  }
  let best: Maximum = found
  for (const start of starts) {
    const begin = equations.point()
    let possible = false
    for (let halving = 0; halving < 5 && !possible; halving++) {
      const share = 1 / (1 << halving)
      start.forEach((g, j) => {
        begin.gamma[j] = (point.gamma[j] as number) + share * (g - (point.gamma[j] as number))
      })
      possible = await equations.fill(begin, "expected")
    }
    if (!possible) continue
    const again = await maximum(equations, begin, phi, best.end === "arrived" ? best.point.gamma : null)
    const gap = again.point.deviance - best.point.deviance
    const noticeable = 1e-7 * phi(best.point) + 1e-10 * Math.abs(best.point.deviance)
    if (gap < -noticeable) {
      if (best.end === "arrived") others.push(best.point.deviance)
      best = again
    } else if (again.end === "arrived" && gap > noticeable && others.every((d) => Math.abs(d - again.point.deviance) > noticeable)) {
      others.push(again.point.deviance)
    }
  }
  return best === found ? null : best
}

/** φ for stopping rules: the number said, or Pearson's X² over what is left, never taken as more than a first idea. */
function provisionalDispersion(problem: Problem, discrete: boolean): (rank: number) => (point: Point) => number {
  const { given } = dispersionRule(problem)
  if (given !== null) return () => () => given
  if (discrete) return () => () => 1
  let n = 0
  for (let i = 0; i < problem.rows; i++) n += problem.repeat ? (problem.repeat[i] as number) : 1
  return (rank) => (point) => point.pearson / Math.max(1, n - rank)
}

/**
 * A maximum inside, its point filled with expected weights; in a basis orthonormal under its own weights, where these have made the columns
 * nearly dependent.
 */
async function sharpened(climb: Climb, phi: (point: Point) => number): Promise<Climb> {
  const { design, equations, found } = climb
  if (!sameWeights(equations) && !found.expected) await equations.fill(found.point, "expected", true)
  const inflation = Factor.of(found.point.gram)?.inflation() ?? Number.POSITIVE_INFINITY
  if (inflation < mostInflation) return climb
  const basis = reweightedBasis(design, equations.basis, found.point.state.weight)
  if (!basis) return climb
  const next = new Equations(basis, equations.responses, equations.pace)
  const point = next.point()
  const beta = designCoefficients(equations.basis, design.recipe.columns.length, found.point.gamma, found.point.gammaLow)
  point.gamma.set(basisCoefficients(basis, beta))
  if (!(await next.fill(point, "expected", true))) return climb
  const again = await polished(next, point, next.point(), phi, found.iterations)
  if (again.end !== "arrived") return climb
  if (!again.expected) await next.fill(again.point, "expected", true)
  return { ...climb, equations: next, found: again }
}

const named = (dependences: readonly Dependence[], design: Design): DependentTerms["dependent"] =>
  dependences.map(({ column, on }) => ({
    column: design.recipe.columns[column] as string,
    on: on.map((part) => ({ column: design.recipe.columns[part.column] as string, times: part.times })),
  }))
