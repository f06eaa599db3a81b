// Parameters estimated beside the coefficients: of links, limits of the mean, k of the negative binomial, p of Tweedie. For given parameters the
// coefficients are fitted; over the parameters goes a Newton search on what is left, with the scores and the joint information of the rows,
// so that both arrive to the last digits together. Conventions, links and intervals.

import type { Basis } from "./basis.ts"
import { Factor } from "./gram.ts"
import { controlWeight, type EstimatedParameter, estimatedParameters, jointSums, problemAt, searchedValue } from "./joint-information.ts"
import { nullModel } from "./null-model.ts"
import type { Problem } from "./problem.ts"
import { directionOf } from "./recession.ts"
import { type Responses, responsesOf } from "./rows.ts"
import { Equations, maximum, type Pace, type Point } from "./scoring.ts"
import { devianceTerm } from "./special.ts"
import { startingPoint } from "./start.ts"
import { tweedieAtBest, tweedieLikelihood } from "./tweedie-fit.ts"

/** The best coefficients at given parameters, and how the objective goes on from there. */
export type Spot = {
  readonly values: Float64Array
  /** D, or −2ℓ where a parameter of the family is estimated: what is minimised. */
  readonly objective: number
  /** Its slopes in the parameters, all else minimised. */
  readonly gradient: Float64Array
  /** Its second slopes, by rows. */
  readonly hessian: Float64Array
  readonly problem: Problem
  readonly equations: Equations
  readonly point: Point
  /** Whether the coefficients arrived inside; elsewhere slopes mean little. */
  readonly inside: boolean
  /** φ in the likelihood of a Tweedie family, by which slopes are divided; 1 else. */
  readonly phi: number
}

/** Rows, design and dispersion rule are the same at every spot; the responses are not. */
export class Surface {
  readonly problem: Problem
  readonly parameters: readonly EstimatedParameter[]
  readonly bounds: readonly (readonly [number, number])[]
  private readonly basis: Basis
  private readonly constant: number
  private readonly columns: number
  private readonly phi: (point: Point) => number
  private readonly pace: Pace

  constructor(problem: Problem, basis: Basis, constant: number, columns: number, phi: (point: Point) => number, pace: Pace) {
    this.problem = problem
    this.parameters = estimatedParameters(problem)
    this.bounds = this.parameters.map((parameter) => boundsOf(problem, parameter))
    this.basis = basis
    this.constant = constant
    this.columns = columns
    this.phi = phi
    this.pace = pace
  }

  /** What a rise of the objective is measured by: φ for a deviance, 1 for −2ℓ. */
  unit(spot: Spot): number {
    return this.ofLikelihood ? 1 : this.phi(spot.point)
  }

  get ofLikelihood(): boolean {
    return this.parameters.some(({ part }) => part === "family")
  }

  /** The best coefficients at these values of the parameters; null where no coefficients are possible. */
  async at(values: ArrayLike<number>, near: Spot | null): Promise<Spot | null> {
    const { basis, pace, parameters } = this
    const problem = problemAt(this.problem, parameters, values)
    const responses = responsesOf(problem)
    const equations = new Equations(basis, responses, pace)
    const start = (near ? await this.nearby(equations, problem, near) : null) ?? (await this.cold(equations))
    if (!start) return null
    const found = await maximum(equations, start, this.phi)
    const { point } = found
    if (!(await equations.fill(point, "observed", true))) return null
    let objective = point.deviance
    let [byLikelihood, powerSlope] = [1, 0]
    if (this.ofLikelihood) {
      if (problem.family.name === "tweedie") {
        const search = await tweedieAtBest(problem, point.state.mu, near && near.phi !== 1 ? near.phi : this.phi(point), pace)
        const best = await tweedieLikelihood(problem, point.state.mu, search.phi, pace, true)
        objective = -2 * best.logLikelihood
        byLikelihood = best.phi
        powerSlope = best.byPower
      } else objective = -2 * logLikelihood(problem, responses, point)
    }
    if (problem.control) objective += controlDeviance(problem.control, problem.link.limits?.low ?? 0)
    const q = parameters.length
    const sums = jointSums(problem, responses, parameters, point.state, "observed")
    const factor = Factor.of(point.gram)
    const gradient = new Float64Array(q)
    const hessian = new Float64Array(q * q)
    const cross = sums.columns.map((column) => equations.scored(column))
    for (let k = 0; k < q; k++) {
      const solved = factor?.solve(cross[k] as Float64Array)
      for (let j = 0; j < q; j++) {
        let value = sums.information[j * q + k] as number
        const own = cross[j] as Float64Array
        for (let i = 0; i < own.length && solved; i++) value -= (own[i] as number) * (solved[i] as number)
        hessian[j * q + k] = (2 * value) / byLikelihood
      }
      // Row by row less what the coefficients make up for: their score is nought, and summed apart it would leave its rounding.
      const made = solved ? directionOf(equations, solved) : null
      const rowScores = sums.rowScores[k] as Float64Array
      let slope = sums.beside[k] as number
      for (let i = 0; i < rowScores.length; i++)
        slope += (rowScores[i] as number) - (made ? (point.state.score[i] as number) * (made[i] as number) : 0)
      gradient[k] = (-2 * slope) / byLikelihood
    }
    const power = parameters.findIndex(({ part }) => part === "family")
    if (problem.family.name === "tweedie" && power >= 0) {
      gradient[power] = -2 * powerSlope
      // The second slope is not worked out row by row: the search takes it from the slopes it meets, here as last met.
      hessian[power * q + power] = near ? (near.hessian[power * q + power] as number) : Number.NaN
    }
    const inside = found.end === "arrived" && factor !== null && gradient.every(Number.isFinite)
    return { values: Float64Array.from(values), objective, gradient, hessian, problem, equations, point, inside, phi: byLikelihood }
  }

  /** The coefficients of another spot, where the link is the same; else what comes to about the same means. */
  private async nearby(equations: Equations, problem: Problem, near: Spot): Promise<Point | null> {
    const same = near.problem.link === problem.link && near.equations.basis === this.basis && near.problem.offset === problem.offset
    if (!same) return this.relinked(equations, near)
    const point = equations.point()
    point.gamma.set(near.point.gamma)
    return (await equations.fill(point, "expected")) ? point : null
  }

  /** Coefficients under which the new link gives about the means of the old one: one weighted regression of its η. */
  private async relinked(equations: Equations, near: Spot): Promise<Point | null> {
    const { responses } = equations
    const { link, offset, scale, rows } = responses
    const { mu } = near.point.state
    await near.equations.fill(near.point, "expected")
    const weight = near.point.state.weight
    const eta = new Float64Array(rows)
    const w = new Float64Array(rows)
    for (let i = 0; i < rows; i++) {
      const e = link.eta((mu[i] as number) / (scale ? (scale[i] as number) : 1)) - (offset ? (offset[i] as number) : 0)
      const use = Number.isFinite(e) && (weight[i] as number) > 0
      w[i] = use ? (weight[i] as number) : 0
      eta[i] = use ? (weight[i] as number) * e : 0
    }
    const point = equations.point()
    const gamma = Factor.of(equations.weighted(w))?.solve(equations.scored(eta))
    if (!gamma || gamma.some((x) => !Number.isFinite(x))) return null
    point.gamma.set(gamma)
    return (await equations.fill(point, "expected")) ? point : null
  }

  private async cold(equations: Equations): Promise<Point | null> {
    const none = await nullModel(equations.responses, this.pace, this.phi)
    return startingPoint(equations, this.constant, this.columns, none, null)
  }
}

const widest: Readonly<Record<string, readonly [number, number]>> = {
  power: [-10, 10],
  box_cox: [-10, 10],
  aranda_ordaz: [-1, 100],
  symmetric_power: [0, 1],
  stukel: [-10, 10],
}

/** Where a parameter is looked for, on the scale of the search. */
function boundsOf({ family, link }: Problem, { part }: EstimatedParameter): readonly [number, number] {
  if (part === "family") return family.name === "tweedie" ? [1.01, 1.99] : [0, 1e6]
  if (part === "low" || part === "high") return [0, 1]
  return widest[link.name] ?? [-10, 10]
}

/** Places from which a search begins, on its own scale; the first is tried first. */
function beginnings(problem: Problem, parameter: EstimatedParameter): readonly number[] {
  const { family, link } = problem
  if (parameter.part === "family") return family.name === "tweedie" ? [1.5, 1.2, 1.8] : [momentAlpha(problem), 0]
  if (parameter.part === "low") return [0.25 * leastShare(problem, 1), 0.8 * leastShare(problem, 1)]
  if (parameter.part === "high") return [1 - 0.25 * leastShare(problem, -1), 1 - 0.8 * leastShare(problem, -1)]
  switch (link.name) {
    case "aranda_ordaz":
      return [1, 0, -0.5, 3, 10]
    case "symmetric_power":
      return [0.25, 0, 0.7, 1]
    case "stukel":
      return [0, 0.4, -0.4]
    default:
      return [0, 1, -1, 0.5, -2, 2]
  }
}

/** Var = μ + αμ² at the common mean: a first idea of α, above 0. */
function momentAlpha({ y, rows }: Problem): number {
  let [mean, squares] = [0, 0]
  for (const value of y) mean += value / rows
  for (const value of y) squares += ((value - mean) * (value - mean)) / rows
  return Math.max(0.05, Math.min(5, (squares - mean) / (mean * mean || 1)))
}

/** The least observed share from one end, kept inside. */
function leastShare({ y, trials, control }: Problem, side: 1 | -1): number {
  let least = 1
  const look = (share: number, m: number): void => {
    const smoothed = ((side === 1 ? share : 1 - share) * m + 0.5) / (m + 1)
    least = Math.min(least, smoothed)
  }
  y.forEach((share, i) => {
    look(share, trials ? (trials[i] as number) : 1)
  })
  if (side === 1 && control) {
    for (let i = 0; i < control.y.length; i++) look(control.y[i] as number, control.trials ? (control.trials[i] as number) : 1)
  }
  return Math.min(0.3, least)
}

/** What the search came to; null where nothing could be fitted anywhere. */
export type Estimated = {
  readonly spot: Spot
  /** Steps of the search over the parameters. */
  readonly steps: number
  /** Which parameters ended at a bound: −1 the lower, 1 the upper, 0 inside. */
  readonly ends: readonly (-1 | 0 | 1)[]
  /** Objectives of other minima that other beginnings led to. */
  readonly others: readonly number[]
  readonly arrived: boolean
  /** Of a Tweedie power: one over the second slope of −ℓ along its profile. */
  readonly powerVariance: number | null
}

/** Minimises the objective over the parameters that are free; `held` are kept where they are. */
export async function bestParameters(surface: Surface, near: Spot | null = null): Promise<Estimated | null> {
  const { problem, parameters } = surface
  const q = parameters.length
  const free = parameters.map((_, j) => j)
  let starts: Spot[] = []
  if (near) starts = [near]
  else {
    // Each parameter by itself through its beginnings, the others at their first; then pairs of the best.
    const lists = parameters.map((parameter) => beginnings(problem, parameter))
    const base = lists.map((list) => list[0] as number)
    let last: Spot | null = null
    const tried: Spot[] = []
    for (let j = 0; j < q; j++) {
      for (const value of lists[j] as readonly number[]) {
        if (j > 0 && value === base[j]) continue
        const values = base.map((own, k) => (k === j ? value : own))
        const spot: Spot | null = await surface.at(values, last)
        if (!spot || !Number.isFinite(spot.objective)) continue
        tried.push(spot)
        last = spot
      }
    }
    // With many rows a second beginning costs more than what it might find.
    starts = tried.sort((a, b) => a.objective - b.objective).slice(0, problem.rows > manyRows ? 1 : 2)
  }
  let best: Spot | null = null
  let arrived = false
  let steps = 0
  const others: number[] = []
  for (const start of starts) {
    const found = await descended(surface, start, free)
    steps += found.steps
    const noticeable = 1e-7 * surface.unit(found.spot) + 1e-10 * Math.abs(found.spot.objective)
    if (best === null || found.spot.objective < best.objective - noticeable) {
      if (best !== null && arrived) others.push(best.objective)
      best = found.spot
      arrived = found.arrived
    } else if (found.arrived && found.spot.objective > best.objective + noticeable) others.push(found.spot.objective)
    else if (found.arrived && !arrived) {
      best = found.spot
      arrived = true
    }
  }
  if (best === null) return null
  const spot: Spot = best
  const ends = parameters.map((_, j) => {
    const [low, high] = surface.bounds[j] as readonly [number, number]
    return spot.values[j] === low ? -1 : spot.values[j] === high ? 1 : 0
  })
  return { spot, steps, ends, others, arrived, powerVariance: await powerVarianceAt(surface, spot) }
}

/** By the slopes a little to both sides, each of which is exact. */
async function powerVarianceAt(surface: Surface, spot: Spot): Promise<number | null> {
  const at = surface.parameters.findIndex(({ part }) => part === "family")
  if (at < 0 || surface.problem.family.name !== "tweedie") return null
  const p = spot.values[at] as number
  const h = 1e-3 * Math.min(p - 1, 2 - p)
  const slopes: number[] = []
  const few = surface.problem.rows > manyRows
  for (const by of few ? [-h, h] : [-2 * h, -h, h, 2 * h]) {
    const aside = await surface.at(
      spot.values.map((value, j) => (j === at ? value + by : value)),
      spot,
    )
    slopes.push(aside?.gradient[at] ?? Number.NaN)
  }
  const [a, b, c, d] = slopes as [number, number, number, number]
  const second = few ? (b - a) / (2 * h) : (a - 8 * b + 8 * c - d) / (12 * h)
  return second > 0 ? 2 / second : null
}

/** Beyond so many rows the search is begun once, and a power's error is had by two slopes in place of four. */
const manyRows = 5000
const mostSteps = 60
const mostHalvings = 30

/** Newton's method with step-halving and bounds, over the parameters named. */
export async function descended(
  surface: Surface,
  from: Spot,
  free: readonly number[],
): Promise<{ readonly spot: Spot; readonly arrived: boolean; readonly steps: number }> {
  let spot = from
  let before: Spot | null = null
  for (let steps = 0; steps < mostSteps; steps++) {
    const step = stepFrom(surface, spot, before, free)
    if (step === null) return { spot, arrived: spot.inside, steps }
    let decrement = 0
    for (let j = 0; j < step.length; j++) decrement -= 0.5 * (step[j] as number) * (spot.gradient[j] as number)
    const unit = surface.unit(spot)
    if (spot.inside && decrement <= 1e-24 * unit) return { spot, arrived: true, steps }
    const fine = spot.inside && decrement <= 1e-9 * unit
    let next: Spot | null = null
    let share = 1
    // At an edge of the means the slopes are not to be relied on, and little is spent on them.
    for (let halving = 0; halving < (spot.inside ? mostHalvings : 5); halving++, share /= 2) {
      const values = spot.values.map((value, j) =>
        clamped(value + share * (step[j] as number), surface.bounds[j] as readonly [number, number]),
      )
      if (!ordered(surface, values)) continue
      const trial = await surface.at(values, spot)
      if (!trial || !Number.isFinite(trial.objective)) continue
      // So near to the end the objective is level to its last digit, and the slopes alone say whether a step helps.
      if (fine ? sizeOf(trial, free) < sizeOf(spot, free) : trial.objective <= spot.objective + 1e-14 * Math.abs(spot.objective)) {
        next = trial
        break
      }
      if (fine) break
    }
    if (next === null) return { spot, arrived: spot.inside && decrement <= 1e-7 * unit, steps }
    const level = !next.inside && spot.objective - next.objective < 1e-4 * unit
    before = spot
    spot = next
    if (level) return { spot, arrived: false, steps }
  }
  return { spot, arrived: false, steps: mostSteps }
}

/** A lower limit below the upper one. */
const ordered = ({ parameters, problem }: Surface, values: Float64Array): boolean => {
  const low = parameters.findIndex(({ part }) => part === "low")
  const high = parameters.findIndex(({ part }) => part === "high")
  const { low: givenLow, high: givenHigh } = problem.link.limits ?? { low: 0, high: 1 }
  return (low < 0 ? givenLow : (values[low] as number)) < (high < 0 ? givenHigh : (values[high] as number))
}

const clamped = (value: number, [low, high]: readonly [number, number]): number => Math.max(low, Math.min(high, value))

const sizeOf = ({ gradient }: Spot, free: readonly number[]): number => free.reduce((sum, j) => sum + Math.abs(gradient[j] as number), 0)

/** The step to take: Newton's where the second slopes are positive definite, else down the slope. Null where every parameter is at a bound. */
function stepFrom(surface: Surface, spot: Spot, before: Spot | null, free: readonly number[]): Float64Array | null {
  const q = spot.values.length
  const open = free.filter((j) => {
    const [low, high] = surface.bounds[j] as readonly [number, number]
    const slope = spot.gradient[j] as number
    return !((spot.values[j] === low && slope >= 0) || (spot.values[j] === high && slope <= 0))
  })
  if (open.length === 0) return null
  const H = open.map((j) =>
    open.map((k) => {
      const at = j * q + k
      const value = spot.hessian[at] as number
      const bySecant = j === k && surface.parameters[j]?.part === "family" && surface.problem.family.name === "tweedie"
      if (!bySecant) return value
      const moved = before ? (spot.values[j] as number) - (before.values[j] as number) : 0
      const secant = before && moved !== 0 ? ((spot.gradient[j] as number) - (before.gradient[j] as number)) / moved : Number.NaN
      if (secant > 0) spot.hessian[at] = secant
      return secant > 0 ? secant : value > 0 ? value : Math.abs(spot.gradient[j] as number) / 0.05
    }),
  )
  const solved = solvedPositive(
    H,
    open.map((j) => -(spot.gradient[j] as number)),
  )
  const step = new Float64Array(q)
  open.forEach((j, k) => {
    const slope = spot.gradient[j] as number
    const own = solved?.[k] ?? -slope / (Math.abs(H[k]?.[k] as number) || 1)
    const most = longestStep(surface, spot, j)
    step[j] = Math.max(-most, Math.min(most, own))
  })
  return step
}

/** No step goes farther than a model of second order can be trusted. */
function longestStep({ parameters, problem }: Surface, spot: Spot, j: number): number {
  const value = Math.abs(spot.values[j] as number)
  const { part } = parameters[j] as EstimatedParameter
  if (part === "family") return problem.family.name === "tweedie" ? 0.2 : 0.1 + 2 * value
  if (part === "low" || part === "high") return 0.2
  return problem.link.name === "symmetric_power" ? 0.3 : 0.7 + 0.5 * value
}

/** Solves by Cholesky's factor; null where the matrix is not positive definite. */
function solvedPositive(H: readonly (readonly number[])[], b: readonly number[]): number[] | null {
  const n = b.length
  const L: number[][] = H.map((row) => [...row])
  const x = [...b]
  for (let i = 0; i < n; i++) {
    const row = L[i] as number[]
    for (let j = 0; j <= i; j++) {
      let sum = row[j] as number
      const other = L[j] as number[]
      for (let k = 0; k < j; k++) sum -= (row[k] as number) * (other[k] as number)
      if (i === j) {
        if (!(sum > 1e-14 * Math.abs(H[i]?.[i] as number))) return null
        row[i] = Math.sqrt(sum)
      } else row[j] = sum / (other[j] as number)
    }
  }
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < i; k++) x[i] = (x[i] as number) - (L[i]?.[k] as number) * (x[k] as number)
    x[i] = (x[i] as number) / (L[i]?.[i] as number)
  }
  for (let i = n - 1; i >= 0; i--) {
    for (let k = i + 1; k < n; k++) x[i] = (x[i] as number) - (L[k]?.[i] as number) * (x[k] as number)
    x[i] = (x[i] as number) / (L[i]?.[i] as number)
  }
  return x
}

function logLikelihood({ repeat, precision }: Problem, { family, y, a, rows }: Responses, { state: { mu } }: Point): number {
  let sum = 0
  for (let i = 0; i < rows; i++) {
    if ((a[i] as number) === 0) continue
    const times = (repeat ? (repeat[i] as number) : 1) * (precision ? (precision[i] as number) : 1)
    sum += times * family.logDensity(y[i] as number, mu[i] as number, 1 - (mu[i] as number), 1, 1)
  }
  return sum
}

/** The deviance of the rows of no dose at a lower limit. */
export function controlDeviance(control: NonNullable<Problem["control"]>, low: number): number {
  let sum = 0
  control.y.forEach((y, i) => {
    sum += 2 * controlWeight(control, i) * (devianceTerm(y, low) + devianceTerm(1 - y, 1 - low))
  })
  return sum
}

/** Pearson's X² of the same rows. */
export function controlPearson(control: NonNullable<Problem["control"]>, low: number): number {
  let sum = 0
  control.y.forEach((y, i) => {
    if (y !== low) sum += (controlWeight(control, i) * (y - low) * (y - low)) / (low * (1 - low))
  })
  return sum
}

/** Where the search starts in a problem whose parameters were estimated before. */
export const startingValues = (problem: Problem): Float64Array =>
  Float64Array.from(estimatedParameters(problem), (parameter) => searchedValue(problem, parameter))
