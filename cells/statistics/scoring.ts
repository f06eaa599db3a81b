// The maximum of the likelihood on a given basis: scoring with step-halving, then Newton's method at the end. Each step is solved for the
// step itself, never for the coefficients, so that what is lost in solving is regained at the next step. What the numbers mean for a
// reader (errors, tests, certificates) is for others.

import type { Basis, Cells } from "./basis.ts"
import type { WrittenColumn } from "./design.ts"
import { productError, WideSum } from "./double-double.ts"
import { addBlock, blockRows, Factor, Gram, gramOf, type Layout, rangeSums, SumTree, scoreOf, scoreSums } from "./gram.ts"
import { fillRows, type Information, type Responses, type RowState, rowState } from "./rows.ts"

/** A point of the parameters with everything a pass over the rows gave. */
export type Point = {
  /** Coefficients in the basis, with what the last digit has lost. */
  readonly gamma: Float64Array
  readonly gammaLow: Float64Array
  readonly state: RowState
  deviance: number
  pearson: number
  score: Float64Array
  gram: Gram
}

export type Maximum = {
  readonly point: Point
  readonly iterations: number
  /**
   * `arrived`: the score vanishes as far as doubles go. `stuck`: no step keeps the means possible and lowers the deviance.
   * `singular`: the information is. `slow`: the limit of steps was reached.
   */
  readonly end: "arrived" | "stuck" | "singular" | "slow"
  /** u'J⁻¹u at the end. */
  readonly decrement: number
  /** The last whole step in the basis, for who asks where a fit that does not arrive was going. */
  readonly step: Float64Array
  /** Set where the point is filled with expected weights, so that nobody needs to fill it again for them. */
  readonly expected?: true
}

/** Scoring until (δ'Jδ)/φ is below this: the next steps are Newton's. */
const scoringEnds = 1e-10

/** Below this many φ the next steps of a link that is not canonical are Newton's: scoring would gain a fixed share a step. */
const closing = 1

/**
 * Below this many φ the observed information is known well enough: an error of 3e-7 standard errors changes it by as little, and each step by
 * it leaves that share of the error. The passes that are left are with the expected weights, which errors are made of.
 */
const lastSteps = 1e-13

/** A decrement of 1e-26·φ is an error of 1e-13 standard errors, which is rounding. */
const noMoreToGain = 1e-26

const mostSteps = 100
const mostHalvings = 40

/** Rows of work between two pauses, by a rough count of nanoseconds: about 15 ms. */
const workBetweenPauses = 15e6

/** Counts work and pauses in time; the clock is not known here. */
export class Pace {
  private done = 0
  private readonly pause: () => Promise<void>
  constructor(pause: () => Promise<void>) {
    this.pause = pause
  }
  /** Adds work in nanoseconds; true when a pause is due. */
  due(work: number): boolean {
    this.done += work
    return this.done > workBetweenPauses
  }
  async rest(): Promise<void> {
    this.done = 0
    await this.pause()
  }
}

/** The rows of a problem on a basis: what a pass needs, with its scratch space. */
export class Equations {
  readonly basis: Basis
  readonly responses: Responses
  readonly pace: Pace
  private readonly layout: Layout
  private readonly tree: SumTree
  private readonly scratch: Float64Array
  private readonly workOfRow: number

  constructor(basis: Basis, responses: Responses, pace: Pace) {
    this.basis = basis
    this.responses = responses
    this.pace = pace
    this.layout = basis.layout
    // Deviance and Pearson's X² go before the sums of the basis.
    this.tree = new SumTree(basis.layout.length + 2)
    this.scratch = new Float64Array(blockRows)
    const P = basis.plain.length
    const B = basis.blocks.length
    this.workOfRow = 120 + P * P + B * (6 + 3 * P + 3 * B)
  }

  point(): Point {
    const { rest, last } = this.layout
    const p = this.basis.size
    return {
      gamma: new Float64Array(p),
      gammaLow: new Float64Array(p),
      state: rowState(this.basis.rows, this.basis.change.type === "orthogonal"),
      deviance: Number.NaN,
      pearson: Number.NaN,
      score: new Float64Array(p),
      gram: new Gram(rest, last),
    }
  }

  /**
   * One pass: fills a point from its coefficients. False as soon as a row has no possible mean; the point is then of no use.
   * @param exact  η summed with 32 digits from the design's own columns, where the basis is orthogonal
   */
  async fill(point: Point, information: Information, exact = false): Promise<boolean> {
    const { layout, tree, basis } = this
    const { chunks } = layout
    const cellValues = basis.blocks.map((block) => cellTerms(block, point.gamma))
    const sharp = exact && basis.change.type === "orthogonal" ? exactCoefficients(basis, point) : null
    for (let chunk = 0; chunk < chunks; chunk++) {
      const from = layout.chunkStart(chunk)
      const to = layout.chunkStart(chunk + 1)
      const sums = tree.next()
      if (!this.fillChunk(point, information, from, to, cellValues, sharp, sums)) {
        tree.push()
        tree.total()
        return false
      }
      tree.push()
      if (this.pace.due((to - from) * this.workOfRow)) await this.pace.rest()
    }
    const total = tree.total()
    point.deviance = total[0] as number
    point.pearson = total[1] as number
    const sums = total.subarray(2)
    point.score = scoreOf(layout, sums)
    point.gram = gramOf(layout, sums)
    const p = basis.size
    if (this.pace.due(p * p * (p / 3 + 10))) await this.pace.rest()
    return Number.isFinite(point.deviance)
  }

  /** The rows of a chunk, block by block: what a block needs stays in the nearest cache from η to the sums. */
  private fillChunk(
    point: Point,
    information: Information,
    from: number,
    to: number,
    cellValues: readonly Float64Array[],
    sharp: Float64Array | null,
    sums: Float64Array,
  ): boolean {
    const { basis, layout, responses, scratch } = this
    const { state, gamma } = point
    const own = sums.subarray(2)
    for (let low = from; low < to; low += blockRows) {
      const high = Math.min(to, low + blockRows)
      if (sharp) exactEta(basis, sharp, responses.offset, low, high, state)
      else {
        linearPredictor(basis, gamma, cellValues, responses.offset, low, high, state.eta)
        state.etaLow?.fill(0, low, high)
      }
      if (!fillRows(responses, information, low, high, state, sums)) return false
      addBlock(layout, low, high, state.weight, state.score, own, scratch)
    }
    return true
  }

  /** Σ w·xx' for other weights, such as those of a sandwich. */
  weighted(weight: Float64Array): Gram {
    return gramOf(this.layout, rangeSums(this.layout, weight, new Float64Array(this.basis.rows)))
  }

  /** Σ s·x for other scores. */
  scored(score: Float64Array): Float64Array {
    return scoreSums(this.layout, score)
  }
}

/**
 * Climbs from a point that is filled with expected weights.
 * @param phi    dispersion at a point: a number, or made from Pearson's X² and D as the problem says
 * @param known  coefficients of a maximum that is known: a search that is all but there ends as `slow`
 */
export async function maximum(
  equations: Equations,
  start: Point,
  phi: (point: Point) => number,
  known: Float64Array | null = null,
): Promise<Maximum> {
  const { canonical } = equations.responses
  let current = start
  let other = equations.point()
  let step: Float64Array = new Float64Array(equations.basis.size)
  let information: Information = "expected"
  let before = Number.POSITIVE_INFINITY
  let iterations = 0
  for (; iterations < mostSteps; iterations++) {
    let factor = Factor.of(current.gram)
    if (factor === null && information === "observed") {
      // Away from the maximum the observed weights need not be a covariance; the expected ones are.
      information = "expected"
      await equations.fill(current, information)
      factor = Factor.of(current.gram)
    }
    if (factor === null) return { point: current, iterations, end: "singular", decrement: Number.NaN, step }
    step = factor.solve(current.score)
    const decrement = dot(step, current.score)
    if (known && isNear(current, step, known, phi(current))) return { point: current, iterations, end: "slow", decrement, step }
    if (decrement <= scoringEnds * phi(current) || decrement <= equations.responses.rounding) break
    // Scoring gains a fixed share a step off the canonical link; where that share is small, Newton's steps are taken early.
    const slow = decrement > 0.02 * before
    before = decrement
    const near = decrement < closing * phi(current)
    const next: Information = !canonical && (near || (iterations >= 2 && slow)) ? "observed" : information
    let share = 1
    let taken = false
    for (let halving = 0; halving < mostHalvings; halving++) {
      for (let j = 0; j < step.length; j++) other.gamma[j] = (current.gamma[j] as number) + share * (step[j] as number)
      const possible = await equations.fill(other, next)
      if (possible && other.deviance <= current.deviance + 1e-14 * Math.abs(current.deviance)) {
        taken = true
        break
      }
      share /= 2
    }
    if (!taken) return { point: current, iterations, end: "stuck", decrement, step }
    information = next
    ;[current, other] = [other, current]
  }
  if (iterations === mostSteps) return { point: current, iterations, end: "slow", decrement: before, step }
  return polished(equations, current, other, phi, iterations, information)
}

/** Whether the next step ends within a tenth of a standard error of these coefficients. */
function isNear({ gamma, gram }: Point, step: Float64Array, known: Float64Array, phi: number): boolean {
  const off = step.map((s, j) => (gamma[j] as number) + s - (known[j] as number))
  return dot(off, gram.times(off)) < 0.01 * phi
}

/**
 * Newton's steps with observed weights until the score falls no more, η to full precision.
 * @param filled  weights that the start is filled with
 */
export async function polished(
  equations: Equations,
  start: Point,
  spare: Point,
  phi: (point: Point) => number,
  steps: number,
  filled: Information = "expected",
): Promise<Maximum> {
  let current = start
  let other = spare
  let information: Information = "observed"
  let iterations = steps
  // Under the canonical link the weights at hand are the observed ones already.
  const asObserved = filled === "observed" && equations.basis.change.type === "scaled"
  if (!sameWeights(equations) && !asObserved) await equations.fill(current, information, true)
  let factor = Factor.of(current.gram)
  if (factor === null) {
    information = "expected"
    await equations.fill(current, information, true)
    factor = Factor.of(current.gram)
  }
  if (factor === null)
    return { point: current, iterations, end: "singular", decrement: Number.NaN, step: new Float64Array(current.gamma.length) }
  let step = factor.solve(current.score)
  let decrement = dot(step, current.score)
  let left = false
  let expected = information === "expected"
  // A perfect fit has no dispersion to measure by: its steps end where rounding does.
  for (let k = 0; k < 30 && decrement > noMoreToGain * phi(current); k++) {
    const { gamma, gammaLow } = current
    for (let j = 0; j < step.length; j++) {
      const [high, low] = wideAdd(gamma[j] as number, gammaLow[j] as number, step[j] as number)
      other.gamma[j] = high
      other.gammaLow[j] = low
    }
    const last = decrement <= lastSteps * phi(current)
    if (!(await equations.fill(other, last ? "expected" : information, true))) {
      left = true
      break
    }
    const nextFactor: Factor | null = last ? factor : Factor.of(other.gram)
    if (nextFactor === null) break
    const nextStep = nextFactor.solve(other.score)
    const next = dot(nextStep, other.score)
    if (!(next < decrement)) break
    const gain = next / decrement
    ;[current, other] = [other, current]
    factor = nextFactor
    step = nextStep
    decrement = next
    expected = last || information === "expected"
    iterations++
    if (gain > 0.25) break
  }
  // Where the next step would leave the possible means and the score has not vanished, the maximum is not inside.
  const tolerance = left ? 1e-12 : 1e-9
  const arrived = decrement <= tolerance * phi(current) || decrement <= 1e4 * equations.responses.rounding
  const found = {
    point: current,
    iterations,
    end: arrived ? ("arrived" as const) : left ? ("stuck" as const) : ("slow" as const),
    decrement,
    step,
  }
  return expected ? { ...found, expected } : found
}

/** Whether a pass with expected weights is also one with observed weights and η to full precision. */
export const sameWeights = ({ responses, basis }: Equations): boolean => responses.canonical && basis.change.type === "scaled"

/** η of the rows from … to: offset, columns, cells. */
export function linearPredictor(
  basis: Basis,
  gamma: Float64Array,
  cellValues: readonly Float64Array[],
  offset: Float64Array | null,
  from: number,
  to: number,
  eta: Float64Array,
): void {
  const { plain } = basis
  const first = plain[0] === null ? 1 : 0
  const constant = first === 1 ? (gamma[0] as number) : 0
  if (offset) for (let i = from; i < to; i++) eta[i] = (offset[i] as number) + constant
  else eta.fill(constant, from, to)
  let j = first
  for (; j + 3 < plain.length; j += 4) addColumns4(plain, gamma, j, from, to, eta)
  for (; j < plain.length; j++) {
    const x = plain[j] as Float64Array
    const b = gamma[j] as number
    if (b !== 0) for (let i = from; i < to; i++) eta[i] = (eta[i] as number) + b * (x[i] as number)
  }
  basis.blocks.forEach((block, b) => {
    const values = cellValues[b] as Float64Array
    const { cells, multiplier } = block
    if (multiplier === null) for (let i = from; i < to; i++) eta[i] = (eta[i] as number) + (values[cells[i] as number] as number)
    else for (let i = from; i < to; i++) eta[i] = (eta[i] as number) + (values[cells[i] as number] as number) * (multiplier[i] as number)
  })
}

/** Four columns from j on, times their coefficients, added to η. */
function addColumns4(plain: Basis["plain"], gamma: Float64Array, j: number, from: number, to: number, eta: Float64Array): void {
  const [a, b, c, d] = [plain[j], plain[j + 1], plain[j + 2], plain[j + 3]] as [Float64Array, Float64Array, Float64Array, Float64Array]
  const ga = gamma[j] as number
  const gb = gamma[j + 1] as number
  const gc = gamma[j + 2] as number
  const gd = gamma[j + 3] as number
  for (let i = from; i < to; i++)
    eta[i] = (eta[i] as number) + (ga * (a[i] as number) + gb * (b[i] as number) + (gc * (c[i] as number) + gd * (d[i] as number)))
}

/** What each cell of a block adds to η. */
export function cellTerms(block: Cells, gamma: Float64Array): Float64Array {
  const values = new Float64Array(block.count)
  for (let cell = 0; cell < block.count; cell++) {
    let sum = 0
    for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++)
      sum += (gamma[block.column[e] as number] as number) * (block.value[e] as number)
    values[cell] = sum
  }
  return values
}

/** Coefficients of the design's columns, to 32 digits: R·β = γ from the last row up. Pairs (high, low). */
export function exactCoefficients(basis: Basis, point: { readonly gamma: Float64Array; readonly gammaLow: Float64Array }): Float64Array {
  if (basis.change.type !== "orthogonal") throw new RangeError("only an orthogonal basis has exact coefficients")
  const { high, low } = basis.change
  const p = basis.size
  const beta = new Float64Array(2 * p)
  const sum = new WideSum()
  for (let i = p - 1; i >= 0; i--) {
    sum.clear()
    sum.add(point.gamma[i] as number)
    sum.add(point.gammaLow[i] as number)
    for (let j = i + 1; j < p; j++) {
      const r = high[i * p + j] as number
      const b = beta[2 * j] as number
      sum.addProduct(-r, b)
      sum.add(-(r * (beta[2 * j + 1] as number) + (low[i * p + j] as number) * b))
    }
    const r = high[i * p + i] as number
    const q = sum.high / r
    const product = q * r
    const left = sum.high - product - productError(q, r, product) + sum.low - q * (low[i * p + i] as number)
    const [h, l] = wideAdd(q, 0, left / r)
    beta[2 * i] = h
    beta[2 * i + 1] = l
  }
  return beta
}

function exactEta(
  basis: Basis,
  beta: Float64Array,
  offset: Float64Array | null,
  from: number,
  to: number,
  { eta, etaLow }: RowState,
): void {
  const written = basis.written as readonly WrittenColumn[]
  const { column } = basis.change
  const sum = new WideSum()
  for (let i = from; i < to; i++) {
    sum.clear()
    if (offset) sum.add(offset[i] as number)
    for (let j = 0; j < column.length; j++) {
      const { high, low } = written[column[j] as number] as WrittenColumn
      const x = high[i] as number
      sum.addProduct(x, beta[2 * j] as number)
      sum.add(x * (beta[2 * j + 1] as number) + (low ? (low[i] as number) * (beta[2 * j] as number) : 0))
    }
    eta[i] = sum.high
    if (etaLow) etaLow[i] = sum.low
  }
}

const wideAdd = (high: number, low: number, x: number): readonly [number, number] => {
  const s = high + x
  const t = s - high
  const tail = low + (high - (s - t) + (x - t))
  const sum = s + tail
  return [sum, tail - (sum - s)]
}

export const dot = (a: Float64Array, b: Float64Array): number => {
  let sum = 0
  for (let j = 0; j < a.length; j++) sum += (a[j] as number) * (b[j] as number)
  return sum
}
