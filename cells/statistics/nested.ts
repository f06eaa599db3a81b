// Two nested fits on the same rows: what a set of terms leaves behind, by likelihood ratio or F, by Wald's quadratic form where errors are
// sandwich, and by the score at the smaller fit, which needs no larger one. Also which terms may go at all: one that is contained in another
// has no meaning without it.

import { basisOf } from "./basis.ts"
import { designCoefficients } from "./change.ts"
import { denseColumns, designOf, recipeOf } from "./design.ts"
import { dispersionRule } from "./dispersion.ts"
import { type Fit, type Fitted, fit } from "./fit.ts"
import { cholesky, Factor } from "./gram.ts"
import type { Piece, Problem, Term } from "./problem.ts"
import { responsesOf } from "./rows.ts"
import { dot, Equations, Pace } from "./scoring.ts"
import { chiSquareUpperTail, fUpperTail } from "./special.ts"

export type NestedTest = {
  readonly by: "likelihood_ratio" | "F" | "wald" | "score"
  /** How many coefficients apart. */
  readonly terms: number
  readonly statistic: number
  readonly p: number
}

/** The same problem without some of its terms, given by their places. */
export const without = (problem: Problem, terms: readonly number[]): Problem => ({
  ...problem,
  terms: problem.terms.filter((_, t) => !terms.includes(t)),
})

/** For each term the places of those that contain it: it may go only with all of them. */
export const containing = (terms: readonly Term[]): readonly (readonly number[])[] =>
  terms.map((term, t) => terms.flatMap((other, o) => (o !== t && isContained(term, other) ? [o] : [])))

/** Every piece of one is in the other, as itself or in a higher power. */
const isContained = (term: Term, other: Term): boolean =>
  term.pieces.every((piece) => other.pieces.some((of) => pieceKey(of) === pieceKey(piece) || isPowerOf(piece, of))) &&
  (term.pieces.length < other.pieces.length || term.pieces.some((piece) => !other.pieces.some((of) => pieceKey(of) === pieceKey(piece))))

const pieceKey = ({ variable, as, setting }: Piece): string => `${as}(${variable}, ${setting})`

/** Whether a number, or a whole power of it, stands below a higher whole power: moving its zero mixes the two. */
function isPowerOf(piece: Piece, of: Piece): boolean {
  const [low, high] = [wholePower(piece), wholePower(of)]
  return piece.variable === of.variable && low !== null && high !== null && low < high
}

const wholePower = ({ as, setting }: Piece): number | null =>
  as === "itself" ? 1 : as === "power" && setting !== null && setting > 1 && Number.isInteger(setting) ? setting : null

/**
 * What is lost from the larger fit to the smaller. With φ known ΔD/φ on χ²(t), with φ estimated (ΔD/t)/φ on F(t, df), φ and df of the larger;
 * Wald's form where errors are sandwich or the fit is penalised. Where k or p of a family is estimated, so that deviances are not comparable, −2Δℓ on χ²(t).
 * Null where there is none: no coefficient apart, a fit that gave up, φ not known.
 */
export async function nestedTest(
  problem: Problem,
  larger: Fit,
  smaller: { readonly problem: Problem; readonly fit: Fit },
  pause: () => Promise<void>,
): Promise<NestedTest | null> {
  const terms = larger.rank - smaller.fit.rank
  if (terms <= 0) return null
  if (problem.standardErrors === "sandwich" || problem.estimate === "bias_reduced") return waldTest(problem, larger, smaller.problem, pause)
  if (larger.certificate.class === "gave_up" || smaller.fit.certificate.class === "gave_up") return null
  if ((problem.family.estimated?.length ?? 0) > 0) {
    if (larger.logLikelihood === null || smaller.fit.logLikelihood === null) return null
    return likelihoodRatio(2 * (larger.logLikelihood - smaller.fit.logLikelihood), terms, Math.abs(larger.logLikelihood))
  }
  const phi = larger.dispersion.value
  if (phi === null || !(phi > 0) || larger.deviance === null || smaller.fit.deviance === null) return null
  const rise = (smaller.fit.deviance - larger.deviance) / phi
  if (!dispersionRule(problem).estimated) return likelihoodRatio(rise, terms, smaller.fit.deviance / phi)
  if (!(larger.df > 0) || !(rise >= -leastRise * (smaller.fit.deviance / phi))) return null
  const statistic = Math.max(0, rise) / terms
  return { by: "F", terms, statistic, p: fUpperTail(statistic, terms, larger.df) }
}

/** A smaller fit that is better by more than rounding is no smaller fit: the larger has another maximum. */
const leastRise = 1e-9

function likelihoodRatio(rise: number, terms: number, size: number): NestedTest | null {
  if (!(rise >= -leastRise * (1 + size))) return null
  const statistic = Math.max(0, rise)
  return { by: "likelihood_ratio", terms, statistic, p: chiSquareUpperTail(statistic, terms) }
}

/**
 * Wald's form of the distance from the larger fit to the columns of the smaller, in the errors of the larger:
 *     min over b of (β̂ − C·b)'V⁻¹(β̂ − C·b),   X₀ = X·C.
 * On χ²(t), or a t-th of it on F(t, df) where single ratios go by t.
 */
export async function waldTest(problem: Problem, larger: Fit, smaller: Problem, pause: () => Promise<void>): Promise<NestedTest | null> {
  const inside = larger.coefficients.flatMap(({ beta, standardError }, j) => (beta !== null && standardError !== null ? [j] : []))
  const p = inside.length
  if (p !== larger.rank) return null
  const V = new Float64Array(p * p)
  const scale = inside.map((j) => larger.coefficients[j]?.standardError as number)
  if (scale.some((error) => !(error > 0))) return null
  inside.forEach((a, i) => {
    inside.forEach((b, k) => {
      const [row, column] = a > b ? [a, b] : [b, a]
      V[i * p + k] = (larger.covariance[(row * (row + 1)) / 2 + column] as number) / ((scale[i] as number) * (scale[k] as number))
    })
  })
  if (!cholesky(V, p)) return null
  // L⁻¹ of what is scaled by the errors: distances are then plain lengths.
  const whitened = (beta: Float64Array): Float64Array => {
    const z = Float64Array.from(inside, (j, i) => (beta[j] as number) / (scale[i] as number))
    for (let i = 0; i < p; i++) {
      let sum = z[i] as number
      for (let k = 0; k < i; k++) sum -= (V[i * p + k] as number) * (z[k] as number)
      z[i] = sum / (V[i * p + i] as number)
    }
    return z
  }
  const pace = new Pace(pause)
  const design = designOf(larger.recipe, problem.variables, problem.rows)
  const { basis } = await basisOf(design, pace)
  const equations = new Equations(basis, responsesOf(problem), pace)
  const one = new Float64Array(problem.rows).fill(1)
  const factor = Factor.of(equations.weighted(one))
  if (factor === null) return null
  const columns = design.recipe.columns.length
  const rest = whitened(Float64Array.from(larger.coefficients, ({ beta }) => beta ?? 0))
  const taken: Float64Array[] = []
  const recipe = recipeOf(smaller.terms, smaller.intercept, smaller.variables, smaller.rows, smaller.repeat)
  for (const column of denseColumns(designOf(recipe, smaller.variables, smaller.rows))) {
    await pause()
    const direction = whitened(designCoefficients(basis, columns, factor.solve(equations.scored(column))))
    const length = Math.sqrt(dot(direction, direction))
    for (let round = 0; round < 2; round++) for (const other of taken) subtract(direction, other, dot(direction, other))
    const left = Math.sqrt(dot(direction, direction))
    if (!(left > 1e-9 * length)) continue
    taken.push(direction.map((x) => x / left))
  }
  for (let round = 0; round < 2; round++) for (const other of taken) subtract(rest, other, dot(rest, other))
  const terms = p - taken.length
  if (terms <= 0) return null
  const square = dot(rest, rest)
  if (larger.lawDf === null) return { by: "wald", terms, statistic: square, p: chiSquareUpperTail(square, terms) }
  return larger.lawDf > 0 ? { by: "wald", terms, statistic: square / terms, p: fUpperTail(square / terms, terms, larger.lawDf) } : null
}

function subtract(from: Float64Array, what: Float64Array, times: number): void {
  for (let i = 0; i < from.length; i++) from[i] = (from[i] as number) - times * (what[i] as number)
}

/**
 * The score of the terms that a smaller fit lacks: u'(X'WX)⁻¹u/φ at the smaller fit, over the columns of the larger problem (Rao 1948). On χ²(t),
 * or a t-th of it on F(t, df of the larger) where φ is estimated.
 * @param phi  dispersion, of the larger fit where there is one
 */
export async function scoreTest(
  problem: Problem,
  smaller: { readonly problem: Problem; readonly fit: Fit },
  phi: number,
  pause: () => Promise<void>,
): Promise<NestedTest | null> {
  if (smaller.fit.certificate.class !== "interior" && smaller.fit.certificate.class !== "unidentified") return null
  const pace = new Pace(pause)
  const design = designOf(
    recipeOf(problem.terms, problem.intercept, problem.variables, problem.rows, problem.repeat),
    problem.variables,
    problem.rows,
  )
  const responses = responsesOf(problem)
  const { basis } = await basisOf(design, pace)
  const terms = basis.size - smaller.fit.rank
  if (terms <= 0 || !(phi > 0)) return null
  const equations = new Equations(basis, responses, pace)
  const one = new Float64Array(problem.rows).fill(1)
  const plain = Factor.of(equations.weighted(one))
  if (plain === null) return null
  // η of the smaller fit lies in the span of these columns.
  const point = equations.point()
  for (let round = 0; round < 2; round++) {
    const left = smaller.fit.eta.map(
      (eta, i) =>
        eta -
        (responses.offset ? (responses.offset[i] as number) : 0) -
        (round === 0 ? 0 : (point.state.eta[i] as number) - (responses.offset ? (responses.offset[i] as number) : 0)),
    )
    const step = plain.solve(equations.scored(left))
    for (let j = 0; j < step.length; j++) point.gamma[j] = (point.gamma[j] as number) + (step[j] as number)
    if (!(await equations.fill(point, "expected", true))) return null
  }
  const factor = Factor.of(point.gram)
  if (factor === null) return null
  const square = dot(factor.solve(point.score), point.score) / phi
  const df = smaller.fit.df - terms
  if (!dispersionRule(problem).estimated) return { by: "score", terms, statistic: square, p: chiSquareUpperTail(square, terms) }
  return df > 0 ? { by: "score", terms, statistic: square / terms, p: fUpperTail(square / terms, terms, df) } : null
}

/** A smaller fit, from its own cold start. */
export const fitWithout = (problem: Problem, terms: readonly number[], pause: () => Promise<void>): Promise<Fitted> =>
  fit(without(problem, terms), pause)
