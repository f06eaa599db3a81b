// From a maximum to findings: dispersion, errors, tests, criteria, certificate. Every definition is that of the conventions (README.md);
// nothing here climbs.

import { changeMatrix, designCoefficients, designCovariance, designScore, intoBasis, outOfBasis, outOfScore } from "./change.ts"
import { isConcave } from "./concavity.ts"
import { dispersionByLikelihood, dispersionRule } from "./dispersion.ts"
import type { Edge } from "./edge.ts"
import { log } from "./elementary.ts"
import { controlDeviance, controlPearson, type Estimated } from "./estimated.ts"
import type { Family } from "./family.ts"
import type { Certificate, Coefficient, DependentTerms, Evidence, Fit, Frame, Parameter } from "./fit.ts"
import { cholesky, Factor, type Gram } from "./gram.ts"
import { jointCovariance } from "./joint-covariance.ts"
import { type EstimatedParameter, estimatedParameters, searchedValue, shownValue } from "./joint-information.ts"
import type { Climb, Limit } from "./limits.ts"
import type { NullModel } from "./null-model.ts"
import type { Problem } from "./problem.ts"
import type { Responses } from "./rows.ts"
import { directionScore, spansConstant } from "./score-direction.ts"
import type { Equations, Point } from "./scoring.ts"
import { singularValues } from "./singular-values.ts"
import {
  chiSquareUpperTail,
  fUpperTail,
  halfLogTwoPi,
  normalQuantile,
  normalUpperTail,
  stirlingError,
  tUpperQuantile,
  tUpperTail,
} from "./special.ts"
import { tweedieAtBest } from "./tweedie-fit.ts"

export type Findings = {
  /** The search over all rows. */
  readonly climb: Climb
  readonly limit: Limit
  readonly dependences: DependentTerms["dependent"]
  readonly none: NullModel | null
  /** Deviances of other maxima that other starts led to. */
  readonly others: readonly number[]
  /** What was estimated beside the coefficients. */
  readonly estimated?: Estimated | null
}

/** Below this index the data cannot tell a direction from the columns. */
const leastIndex = 1e-9

/** A fit is perfect where every response is met to this share of its size: what is left is rounding. */
const perfection = 1e-13

export async function findings(given: Findings): Promise<Fit> {
  const { climb, limit, none, dependences } = given
  const { problem, design, responses } = climb
  const { family, link } = responses
  const rank = climb.equations.basis.size
  const n = rowsCounted(problem)
  const parameters = estimatedParameters(problem)
  const ofLink = parameters.filter(({ part }) => part !== "family").length
  const df = n - rank - ofLink
  const rule = dispersionRule(problem)

  // Likelihood and errors come from the rows whose means stay: all of them, unless coefficients run to infinity.
  const rest = limit.type === "infinite" ? limit.rest : climb
  const edge = edgeOf(limit)
  const point = edge ? edge.point : (rest?.found.point ?? null)
  if (rest && point && !edge && (limit.type === "infinite" || limit.type === "gave_up")) await rest.equations.fill(point, "expected", true)
  const means = wholeMeans(given, point)
  const moved = limit.type === "infinite" ? movedRows(climb, limit.rows, means.mu) : { deviance: 0, pearson: 0 }
  const perfect = !family.discrete && isPerfect(responses, means.mu)
  const endless = family.isEndless !== undefined && responses.y.some((y, i) => (responses.a[i] as number) > 0 && family.isEndless?.(y))
  const control = controlSums(problem)
  const deviance = perfect ? 0 : (point?.deviance ?? 0) + moved.deviance + control.deviance
  const pearson = perfect ? 0 : (point?.pearson ?? 0) + moved.pearson + control.pearson

  const ml =
    problem.family.name === "tweedie" && deviance > 0
      ? (await tweedieAtBest(problem, means.mu, deviance / Math.max(1, n), climb.equations.pace)).phi
      : dispersionByLikelihood(problem, deviance, n)
  const estimate =
    problem.dispersion === "likelihood"
      ? ml
      : problem.dispersion === "deviance" && endless
        ? null
        : df > 0
          ? (problem.dispersion === "deviance" ? deviance : pearson) / df
          : null
  const phi = rule.given ?? estimate

  const clusters = problem.standardErrors === "sandwich" && problem.cluster ? new Set(problem.cluster).size : null
  const lawDf = clusters !== null ? clusters - 1 : rule.estimated ? df : null
  const constant = design.constant || (await spansConstant(climb.equations))
  const certificate = classOf(given)
  const factor = rest && point && !edge ? Factor.of(point.gram) : null
  const hasErrors = !edge && limit.type !== "gave_up" && phi !== null && factor !== null && rest !== null
  // Parameters at an end of what they can be have no errors, and are taken as given for those of the others.
  const ends = given.estimated?.ends ?? []
  const joined = parameters.filter(({ part }, j) => ends[j] === 0 && !(part === "family" && problem.family.name === "tweedie"))
  const joint = hasErrors && joined.length > 0 && point ? await jointCovariance(rest, point, joined, phi, n, clusters) : null
  const covariance = !hasErrors
    ? null
    : joined.length > 0
      ? (joint?.coefficients ?? null)
      : await covarianceOf(rest, factor, phi, n, clusters)
  const { coefficients, lower } = coefficientsOf(given, rest, point, covariance, lawDf)

  const likely = perfect && rule.given === null ? null : point ? await logLikelihoodOf(rest as Climb, point, rule.given ?? ml) : 0
  const logLikelihood =
    likely === null
      ? null
      : controlLikelihood(problem, family) +
        (limit.type !== "infinite" ? likely : likely + movedLikelihood(climb, limit.rows, means.mu, rule.given ?? ml))
  const counted = rank + parameters.length + (family.discrete || rule.given !== null ? 0 : 1)
  const criteria = logLikelihood !== null && limit.type !== "gave_up" && !(family.discrete && phi !== 1)
  const measured = rest && point ? rest.equations : null
  await climb.equations.pace.rest()

  return {
    n,
    rows: problem.rows + (problem.control?.y.length ?? 0),
    rank,
    df,
    parametersCounted: counted,
    coefficients,
    covariance: lower,
    parameters: parameters.map((parameter, j): Parameter => {
      const [value, slope] = shownValue(problem, parameter, searchedValue(problem, parameter))
      const at = joined.indexOf(parameter)
      const variance = at >= 0 ? (joint?.variances[at] ?? Number.NaN) : ends[j] === 0 ? powerVariance(given, parameter) : Number.NaN
      return {
        of: parameter.of,
        value: Number.isFinite(value) ? value : null,
        standardError: variance > 0 && hasErrors ? Math.abs(slope) * Math.sqrt(variance) : null,
        end: ends[j] ?? 0,
      }
    }),
    family: problem.family,
    link: problem.link,
    deviance: Number.isFinite(deviance) && !endless ? deviance : null,
    logLikelihood,
    interceptOnly: constant ? { deviance: none && !endless ? none.deviance + control.deviance : null, df: n - 1 } : null,
    aic: criteria ? 2 * counted - 2 * logLikelihood : null,
    bic: criteria ? log(trialsCounted(problem)) * counted - 2 * logLikelihood : null,
    pearson,
    fitTest: limit.type === "gave_up" ? [] : fitTests(problem, rule.given, deviance, pearson, df),
    dispersion: { value: phi, by: problem.dispersion, estimated: rule.estimated },
    certificate: {
      class: certificate,
      global: (limit.type === "inside" || limit.type === "edge" || limit.type === "infinite") && isConcave(problem.family, problem.link),
      iterations:
        climb.found.iterations + (given.estimated?.steps ?? 0) + (limit.type === "infinite" ? (limit.rest?.found.iterations ?? 0) : 0),
      scaledScore: measured && point ? scaledScore(measured, point, phi === null || phi === 0 ? 1 : phi) : 0,
      condition: measured && point && !edge ? conditionOf(measured, point, factor) : Number.NaN,
      evidence: evidenceOf(given, dependences),
    },
    goodnessOfLink:
      certificate === "interior" && factor && phi !== null && phi > 0 && ofLink === 0
        ? await goodnessOf(climb, factor, phi, constant, df)
        : null,
    meanRange: {
      possible: [Math.max(link.range.low, family.range.low), Math.min(link.range.high, family.range.high)],
      fitted: meanRange(means.mu),
    },
    clusters,
    lawDf,
    eta: means.eta,
    mu: means.mu,
    recipe: design.recipe,
    frame: rest && point ? frameOf(rest.equations, point, covariance) : emptyFrame,
    recession: limit.type === "infinite" ? limit.directions : [],
  }
}

/** The edge a fit is at: that of all rows, or of those that stay where coefficients run to infinity. */
const edgeOf = (limit: Limit): Edge | null => (limit.type === "edge" || limit.type === "infinite" ? limit.edge : null)

function classOf({ limit, dependences, others, estimated }: Findings): Certificate["class"] {
  if (limit.type === "gave_up") return "gave_up"
  if (dependences.length > 0) return "unidentified"
  if (limit.type === "infinite") return "infinite"
  if (limit.type === "edge" || estimated?.ends.some((end) => end !== 0)) return "boundary"
  return others.length > 0 ? "several_maxima" : "interior"
}

/** Everything that anyone can recheck, whichever class it is of. */
function evidenceOf({ climb, limit, others }: Findings, dependent: DependentTerms["dependent"]): Evidence | null {
  const { found, design } = climb
  const directions =
    limit.type === "infinite"
      ? limit.directions.map((direction) =>
          design.recipe.columns.flatMap((column, j) => (direction[j] === 0 ? [] : [{ column, times: direction[j] as number }])),
        )
      : []
  const rows = limit.type === "infinite" ? limit.rows : null
  const edge = (edgeOf(limit)?.active ?? []).map(({ row, multiplier }) => ({ row: rows ? (rows[row] as number) : row, multiplier }))
  const stopped =
    limit.type === "gave_up"
      ? {
          because: found.end === "arrived" ? ("slow" as const) : found.end,
          steps: found.iterations,
          deviance: found.point.deviance,
          decrement: found.decrement,
        }
      : null
  if (dependent.length + directions.length + edge.length + others.length === 0 && stopped === null) return null
  return { dependent, directions, edge, maxima: others, stopped }
}

/** η and μ of all rows: those that move are at the end of their range. */
function wholeMeans({ climb, limit }: Findings, point: Point | null): { readonly eta: Float64Array; readonly mu: Float64Array } {
  if (limit.type !== "infinite") return { eta: (point as Point).state.eta.slice(), mu: (point as Point).state.mu.slice() }
  const { link } = climb.responses
  const eta = new Float64Array(climb.problem.rows)
  const mu = new Float64Array(climb.problem.rows)
  limit.along.forEach((t, i) => {
    eta[i] = t > 0 ? Number.POSITIVE_INFINITY : Number.NEGATIVE_INFINITY
    mu[i] = link.mean(eta[i])
  })
  limit.rows.forEach((row, k) => {
    eta[row] = (point as Point).state.eta[k] as number
    mu[row] = (point as Point).state.mu[k] as number
  })
  return { eta, mu }
}

/** What the rows at an end of their range add to D and X²: nothing where they agree with it. */
function movedRows(climb: Climb, stay: Int32Array, mu: Float64Array): { readonly deviance: number; readonly pearson: number } {
  const { family, y, a, rows } = climb.responses
  const staying = new Set(stay)
  let [deviance, pearson] = [0, 0]
  for (let i = 0; i < rows; i++) {
    const own = a[i] as number
    if (staying.has(i) || own === 0) continue
    const m = mu[i] as number
    const residual = (y[i] as number) - m
    deviance += own * family.unitDeviance(y[i] as number, m, 1 - m)
    if (residual !== 0) pearson += (own * residual * residual) / family.variance(m, 1 - m)
  }
  return { deviance, pearson }
}

/** The log-densities of the rows that moved: 0 for counts, which agree with the end. */
function movedLikelihood(climb: Climb, stay: Int32Array, mu: Float64Array, phi: number): number {
  const { family, y, rows } = climb.responses
  // Between limits even a row at an end is not certain.
  if (family.discrete && !climb.problem.link.limits) return 0
  const { repeat, precision, trials } = climb.problem
  const staying = new Set(stay)
  let sum = 0
  for (let i = 0; i < rows; i++) {
    if (staying.has(i)) continue
    const m = mu[i] as number
    const f = family.logDensity(
      y[i] as number,
      m,
      1 - m,
      trials ? (trials[i] as number) : 1,
      phi / (precision ? (precision[i] as number) : 1),
    )
    sum += (repeat ? (repeat[i] as number) : 1) * f
  }
  return sum
}

function coefficientsOf(
  { climb, limit }: Findings,
  rest: Climb | null,
  point: Point | null,
  covariance: Float64Array | null,
  lawDf: number | null,
): { readonly coefficients: readonly Coefficient[]; readonly lower: Float64Array } {
  const { design, problem } = climb
  const columns = design.recipe.columns.length
  const inside = new Uint8Array(columns)
  const beta = rest && point ? designCoefficients(rest.equations.basis, columns, point.gamma, point.gammaLow) : new Float64Array(columns)
  if (rest) for (const at of rest.equations.basis.change.column) inside[at] = 1
  const sign = (j: number): number => (limit.type === "infinite" ? (limit.directions.find((direction) => direction[j] !== 0)?.[j] ?? 0) : 0)
  const lower =
    rest && covariance
      ? designCovariance(rest.equations.basis, columns, covariance)
      : new Float64Array((columns * (columns + 1)) / 2).fill(Number.NaN)
  for (let i = 0; i < columns && limit.type === "infinite"; i++) {
    for (let j = 0; j <= i; j++) if (sign(i) !== 0 || sign(j) !== 0) lower[(i * (i + 1)) / 2 + j] = Number.NaN
  }
  const critical = criticalOf(lawDf, problem.confidence)
  const none = { beta: null, toward: null, standardError: null, ratio: null, p: null, low: null, high: null }
  const coefficients = design.recipe.columns.map((of, j): Coefficient => {
    const term = design.termOf[j] as number
    if (sign(j) !== 0) return { ...none, of, term, toward: sign(j) > 0 ? "infinity" : "-infinity" }
    if (inside[j] !== 1) return { ...none, of, term }
    const b = beta[j] as number
    const variance = lower[(j * (j + 1)) / 2 + j] as number
    const error = variance >= 0 ? Math.sqrt(variance) : null
    const ratio = error !== null && error > 0 ? b / error : null
    const known = error !== null && critical !== null
    return {
      of,
      term,
      beta: b,
      toward: null,
      standardError: error,
      ratio,
      p: ratio === null ? null : twoSided(ratio, lawDf),
      low: known ? b - critical * error : null,
      high: known ? b + critical * error : null,
    }
  })
  return { coefficients, lower }
}

/** The score of η²: does the model gain by the square of its own predictor? */
async function goodnessOf(climb: Climb, factor: Factor, phi: number, constant: boolean, df: number): Promise<Fit["goodnessOfLink"]> {
  const { problem, equations, found } = climb
  const v = found.point.state.eta.map((eta) => eta * eta)
  const sandwich = problem.standardErrors === "sandwich" ? { repeat: problem.repeat, cluster: problem.cluster } : null
  const score = await directionScore(equations, found.point, factor, v, phi, constant, sandwich)
  if (!(score.index >= leastIndex) || !Number.isFinite(score.statistic)) return null
  const { estimated } = dispersionRule(problem)
  const p = estimated && !sandwich ? fUpperTail(score.statistic, 1, df) : chiSquareUpperTail(score.statistic, 1)
  return { statistic: score.statistic, df: 1, p }
}

/** The point beyond which half of (1 − confidence) lies, on the law of a fit's Wald ratios: half-widths are this many errors. */
export const criticalValue = (fit: Fit, confidence: number): number => criticalOf(fit.lawDf, confidence) ?? Number.NaN

const criticalOf = (df: number | null, confidence: number): number | null => {
  const tail = (1 - confidence) / 2
  if (df === null) return -normalQuantile(tail)
  return df > 0 ? tUpperQuantile(tail, df) : null
}

const twoSided = (ratio: number, df: number | null): number | null => {
  if (df === null) return 2 * normalUpperTail(Math.abs(ratio))
  return df > 0 ? 2 * tUpperTail(Math.abs(ratio), df) : null
}

/** n: rows used, or the sum of `repeat`. */
const rowsCounted = ({ repeat, rows, control }: Problem): number => {
  const own = repeat ? repeat.reduce((sum, R) => sum + R, 0) : rows
  return own + (control ? (control.repeat ? control.repeat.reduce((sum, R) => sum + R, 0) : control.y.length) : 0)
}

const trialsCounted = (problem: Problem): number => {
  let sum = 0
  for (let i = 0; i < problem.rows; i++)
    sum += (problem.repeat ? (problem.repeat[i] as number) : 1) * (problem.trials ? (problem.trials[i] as number) : 1)
  const { control } = problem
  control?.y.forEach((_, i) => {
    sum += (control.repeat ? (control.repeat[i] as number) : 1) * (control.trials ? (control.trials[i] as number) : 1)
  })
  return sum
}

/** What the rows of no dose add. */
function controlSums({ control, link }: Problem): { readonly deviance: number; readonly pearson: number } {
  const low = link.limits?.low ?? 0
  return control ? { deviance: controlDeviance(control, low), pearson: controlPearson(control, low) } : { deviance: 0, pearson: 0 }
}

function controlLikelihood({ control, link }: Problem, family: Family): number {
  if (!control) return 0
  const low = link.limits?.low ?? 0
  let sum = 0
  control.y.forEach((y, i) => {
    const times = (control.repeat ? (control.repeat[i] as number) : 1) * (control.precision ? (control.precision[i] as number) : 1)
    sum += times * family.logDensity(y, low, 1 - low, control.trials ? (control.trials[i] as number) : 1, 1)
  })
  return sum
}

/** The variance of a Tweedie power, from how its slopes change along the profile; NaN for others. */
const powerVariance = ({ estimated, climb }: Findings, { part }: EstimatedParameter): number =>
  part === "family" && climb.problem.family.name === "tweedie" ? (estimated?.powerVariance ?? Number.NaN) : Number.NaN

/** Whether what is left of every row is rounding. Under the normal law rounding goes by the largest response, else by each. */
function isPerfect({ family, y, a, rows }: Responses, mu: Float64Array): boolean {
  let largest = 0
  if (family.name === "normal") for (let i = 0; i < rows; i++) largest = Math.max(largest, Math.abs(y[i] as number))
  for (let i = 0; i < rows; i++) {
    if ((a[i] as number) === 0) continue
    const size = Math.max(largest, Math.abs(y[i] as number))
    if (!(Math.abs((y[i] as number) - (mu[i] as number)) <= perfection * size)) return false
  }
  return true
}

const meanRange = (mu: Float64Array): readonly [number, number] => {
  let [low, high] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]
  for (const m of mu) {
    if (m < low) low = m
    if (m > high) high = m
  }
  return [low, high]
}

// Errors ---------------------------------------------------------------------------------------------------------------------------------

/** φ(X'WX)⁻¹, φ(X'JX)⁻¹ or the sandwich, in the basis and by rows; null where there are none. */
async function covarianceOf(climb: Climb, factor: Factor, phi: number, n: number, clusters: number | null): Promise<Float64Array | null> {
  const { problem, equations, found, responses } = climb
  const { basis } = equations
  if (problem.standardErrors === "expected") return times(factor.inverse(), phi)
  // The observed weights go into a point of their own, which keeps the first as it is.
  let bread: Factor | null = factor
  if (!responses.canonical) {
    const other = equations.point()
    other.gamma.set(found.point.gamma)
    other.gammaLow.set(found.point.gammaLow)
    bread = (await equations.fill(other, "observed", true)) ? Factor.of(other.gram) : null
  }
  if (!bread) return null
  if (problem.standardErrors === "observed") return times(bread.inverse(), phi)
  const p = basis.size
  const { score } = found.point.state
  let meat: Float64Array
  let factorOfSample: number
  if (problem.cluster) {
    const G = clusters ?? 0
    if (G < 2 || n <= p) return null
    meat = clusterMeat(equations, score, problem.cluster)
    factorOfSample = (G / (G - 1)) * ((n - 1) / (n - p))
  } else {
    if (n <= p) return null
    const squares = new Float64Array(basis.rows)
    // A row that stands R times has R scores of a share 1/R each.
    for (let i = 0; i < basis.rows; i++) {
      const s = score[i] as number
      squares[i] = problem.repeat ? (s / (problem.repeat[i] as number)) * s : s * s
    }
    meat = equations.weighted(squares).full()
    factorOfSample = n / (n - p)
  }
  const inverse = bread.inverse()
  return times(product(product(inverse, meat, p), inverse, p), factorOfSample)
}

/** Σ over clusters of u·u', u the sum of s·x in the cluster. */
function clusterMeat(equations: Equations, score: Float64Array, cluster: Int32Array): Float64Array {
  const { basis } = equations
  const p = basis.size
  const place = new Map<number, number>()
  for (const c of cluster) if (!place.has(c)) place.set(c, place.size)
  const sums = new Float64Array(place.size * p)
  for (let i = 0; i < basis.rows; i++) {
    const base = (place.get(cluster[i] as number) as number) * p
    const s = score[i] as number
    for (let j = 0; j < basis.plain.length; j++) {
      const x = basis.plain[j] as Float64Array | null
      sums[base + j] = (sums[base + j] as number) + (x === null ? s : s * (x[i] as number))
    }
    for (const block of basis.blocks) {
      const cell = block.cells[i] as number
      const own = block.multiplier === null ? s : s * (block.multiplier[i] as number)
      for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++) {
        const at = base + (block.column[e] as number)
        sums[at] = (sums[at] as number) + own * (block.value[e] as number)
      }
    }
  }
  const meat = new Float64Array(p * p)
  for (let g = 0; g < place.size; g++) {
    for (let i = 0; i < p; i++) {
      const u = sums[g * p + i] as number
      if (u === 0) continue
      for (let j = 0; j < p; j++) meat[i * p + j] = (meat[i * p + j] as number) + u * (sums[g * p + j] as number)
    }
  }
  return meat
}

const times = (matrix: Float64Array, by: number): Float64Array => matrix.map((x) => x * by)

function product(a: Float64Array, b: Float64Array, n: number): Float64Array {
  const out = new Float64Array(n * n)
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const x = a[i * n + k] as number
      if (x === 0) continue
      for (let j = 0; j < n; j++) out[i * n + j] = (out[i * n + j] as number) + x * (b[k * n + j] as number)
    }
  }
  return out
}

const emptyFrame: Frame = {
  type: "orthogonal",
  column: new Int32Array(0),
  high: new Float64Array(0),
  low: new Float64Array(0),
  gamma: new Float64Array(0),
  covariance: new Float64Array(0),
}

function frameOf(equations: Equations, point: Point, covariance: Float64Array | null): Frame {
  const { change } = equations.basis
  const shared = { gamma: point.gamma.slice(), covariance: covariance ?? new Float64Array(0) }
  return change.type === "scaled"
    ? { type: "scaled", column: change.column, centre: change.centre, scale: change.scale, carrier: change.carrier, ...shared }
    : { type: "orthogonal", column: change.column, high: change.high, low: change.low, ...shared }
}

// Criteria -------------------------------------------------------------------------------------------------------------------------------

/** Σ R·w·log f where discrete, Σ R·log f(…, φ/w) where not; null where a density is infinite. */
async function logLikelihoodOf(climb: Climb, point: Point, phi: number): Promise<number | null> {
  const { family, link, y, rows } = climb.responses
  const { problem } = climb
  const { repeat, precision, trials } = problem
  const { eta, mu } = point.state
  const short = likelihoodByDeviance(climb, point, phi)
  if (short !== null) return Number.isFinite(short) ? short : null
  const density = family.name === "gamma" ? gammaDensity(family) : family.logDensity
  let total = 0
  let part = 0
  for (let i = 0; i < rows; i++) {
    const R = repeat ? (repeat[i] as number) : 1
    const w = precision ? (precision[i] as number) : 1
    const m = mu[i] as number
    const rest = link.complement === null || m < 0.5 ? 1 - m : link.complement(eta[i] as number)
    const f = density(y[i] as number, m, rest, trials ? (trials[i] as number) : 1, family.discrete ? 1 : phi / w)
    part += family.discrete ? R * w * f : R * f
    if (i % 128 === 127) {
      total += part
      part = 0
      if (climb.equations.pace.due(128 * (problem.family.name === "tweedie" ? 15_000 : 60))) await climb.equations.pace.rest()
    }
  }
  total += part
  return Number.isFinite(total) ? total : null
}

/** ℓ = ℓ(y; y) − D/(2φ) where the first part is no more than sums over the responses; null for the other families, and where φ differs by row. */
function likelihoodByDeviance({ responses, problem }: Climb, point: Point, phi: number): number | null {
  const { family, y, a, logY, rows, extremes } = responses
  if (family.name === "binomial") return extremes ? -point.deviance / 2 : null
  const counts = family.name === "poisson"
  if (!counts && (family.name !== "gamma" || problem.precision !== null)) return null
  const constant = counts ? -halfLogTwoPi : family.logDensity(1, 1, 0, 1, phi)
  let saturated = 0
  let part = 0
  for (let i = 0; i < rows; i++) {
    const response = y[i] as number
    const own = a[i] as number
    if (own > 0 && response > 0) {
      const size = logY === null ? log(response) : (logY[i] as number)
      part += own * (counts ? constant - 0.5 * size - stirlingError(response) : constant - size)
    }
    if (i % 128 === 127) {
      saturated += part
      part = 0
    }
  }
  return saturated + part - point.deviance / (2 * (counts ? 1 : phi))
}

/** The gamma density as C(φ) − log y − u/(2φ), the dear C computed once for each φ in turn: a row at μ = y = 1 has nothing else. */
function gammaDensity(family: Family): Family["logDensity"] {
  let [known, constant] = [Number.NaN, Number.NaN]
  return (y, mu, rest, trials, phi) => {
    if (phi !== known) {
      known = phi
      constant = family.logDensity(1, 1, 0, trials, phi)
    }
    return constant - log(y) - family.unitDeviance(y, mu, rest) / (2 * phi)
  }
}

/** D and X² on χ²(df), only where φ is fixed and no row is a single trial. */
function fitTests(problem: Problem, phi: number | null, deviance: number, pearson: number, df: number): Fit["fitTest"] {
  if (phi === null || df <= 0) return []
  if (problem.family.name === "binomial" && (problem.trials === null || problem.trials.some((m) => m === 1))) return []
  return [
    { by: "deviance", df, p: chiSquareUpperTail(deviance / phi, df) },
    { by: "pearson", df, p: chiSquareUpperTail(pearson / phi, df) },
  ]
}

// Certificate's numbers ------------------------------------------------------------------------------------------------------------------

/** max |U_j|/√(φ·I_jj) over the design's own columns. */
export function scaledScore(equations: Equations, point: Point, phi: number): number {
  const { basis } = equations
  const p = basis.size
  if (p === 0) return 0
  const score = designScore(basis, point.score)
  const information = ownInformation(equations, point.gram)
  let most = 0
  for (let j = 0; j < p; j++) {
    const share = Math.abs(score[j] as number) / Math.sqrt(phi * (information[j] as number))
    if (share > most) most = share
  }
  return most
}

/** I_jj of the design's own columns, in the order of the basis'. */
function ownInformation({ basis }: Equations, gram: Gram): Float64Array {
  const p = basis.size
  const { change } = basis
  if (change.type === "scaled") {
    const place = new Map([...change.column].map((at, j) => [at, j]))
    return Float64Array.from({ length: p }, (_, j) => {
      const s = change.scale[j] as number
      const on = change.carrier[j] as number
      if (on < 0) return s * s * gram.diagonalAt(j)
      const at = place.get(on) as number
      const c = (change.centre[j] as number) * (change.scale[at] as number)
      return s * s * gram.diagonalAt(j) + 2 * s * c * gram.at(j, at) + c * c * gram.diagonalAt(at)
    })
  }
  const out = new Float64Array(p)
  const column = new Float64Array(p)
  for (let j = 0; j < p; j++) {
    for (let i = 0; i < p; i++) column[i] = change.high[i * p + j] as number
    const product = gram.times(column)
    let sum = 0
    for (let i = 0; i < p; i++) sum += (column[i] as number) * (product[i] as number)
    out[j] = sum
  }
  return out
}

/** Most columns whose singular values are found one by one. */
const mostForRotations = 80

/** Ratio of the extreme singular values of √W·X, its columns of length one. */
function conditionOf(equations: Equations, point: Point, factor: Factor | null): number {
  const { basis } = equations
  const { gram } = point
  const p = basis.size
  if (p === 0) return 1
  if (factor === null) return Number.POSITIVE_INFINITY
  if (p > mostForRotations) return conditionByPowers(equations, gram, factor)
  const lower = gram.full()
  const scale = new Float64Array(p)
  for (let j = 0; j < p; j++) scale[j] = Math.sqrt(lower[j * p + j] as number)
  for (let i = 0; i < p; i++)
    for (let j = 0; j < p; j++) lower[i * p + j] = (lower[i * p + j] as number) / ((scale[i] as number) * (scale[j] as number))
  if (!cholesky(lower, p)) return Number.POSITIVE_INFINITY
  // √W·X = Q·(L'·S·N) with Q orthonormal: the singular values are those of the small matrix.
  const N = changeMatrix(basis)
  const B = new Float64Array(p * p)
  for (let i = 0; i < p; i++) {
    for (let k = i; k < p; k++) {
      const l = (lower[k * p + i] as number) * (scale[k] as number)
      if (l === 0) continue
      for (let j = 0; j < p; j++) {
        const n = N[k * p + j] as number
        if (n !== 0) B[i * p + j] = (B[i * p + j] as number) + l * n
      }
    }
  }
  for (let j = 0; j < p; j++) {
    let squares = 0
    for (let i = 0; i < p; i++) squares += (B[i * p + j] as number) * (B[i * p + j] as number)
    const length = Math.sqrt(squares)
    for (let i = 0; i < p; i++) B[i * p + j] = (B[i * p + j] as number) / length
  }
  const values = singularValues(B, p)
  return (values[0] as number) / (values[p - 1] as number)
}

/**
 * The same for many columns, by powers of the scaled information and of its inverse: a few digits, which is what a condition is read to. The
 * diagonal block of a large factor stays diagonal.
 */
function conditionByPowers(equations: Equations, gram: Gram, factor: Factor): number {
  const { basis } = equations
  const lengths = ownInformation(equations, gram).map(Math.sqrt)
  const scaled = (x: Float64Array): Float64Array => x.map((v, j) => v / (lengths[j] as number))
  const most = largestPower(basis.size, (x) => scaled(designScore(basis, gram.times(intoBasis(basis, scaled(x))))))
  const unscaled = (x: Float64Array): Float64Array => x.map((v, j) => v * (lengths[j] as number))
  const least = largestPower(basis.size, (x) => unscaled(outOfBasis(basis, factor.solve(outOfScore(basis, unscaled(x))))))
  return Math.sqrt(most * least)
}

/** The largest eigenvalue of a symmetric operator, by powers of it. */
function largestPower(p: number, times: (x: Float64Array) => Float64Array): number {
  let x = Float64Array.from({ length: p }, (_, i) => 1 + ((i * 7919) % 101) / 101)
  let size = 0
  for (let k = 0; k < 40; k++) {
    const y = times(x)
    let squares = 0
    for (const v of y) squares += v * v
    size = Math.sqrt(squares)
    x = y.map((v) => v / size)
  }
  return size
}
