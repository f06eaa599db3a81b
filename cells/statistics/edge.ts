// Maxima on the edge of the possible means: some rows have a mean at the end of its range, which only a row that agrees with that end can have, and the
// likelihood would still rise beyond. Found by Newton's method with those rows held at the edge, verified by the multipliers of the rows
// (Karush-Kuhn-Tucker); what is not verified is not called a maximum.

import { alongBarrier, type BarrierEnd } from "./barrier.ts"
import { definiteSolver } from "./definite.ts"
import { Factor, type Gram, gramOf, rangeSums, scoreSums } from "./gram.ts"
import { nonnegativeCombination } from "./nonnegative.ts"
import { directionOf } from "./recession.ts"
import type { Responses } from "./rows.ts"
import { dot, Equations, type Point } from "./scoring.ts"

export type Edge = {
  readonly point: Point
  /** Rows at the edge and their multipliers: ∇ℓ = Σ λ·n, n = ±x pointing out of the range. */
  readonly active: readonly { readonly row: number; readonly multiplier: number }[]
  readonly iterations: number
}

/** Most columns for which the edge is searched: it takes a dense system of them. */
const mostColumns = 400

/** How much of the expected weights is added to observed ones that are not positive definite. */
const flatness = 1e-4

/** A row this near to the edge, as a share of the spread of η, is tried at the edge. */
const nearEdge = 1e-3

/**
 * The maximum with some rows at the edge, from where an ordinary search got stuck; null where none is verified.
 * @param stuck  the last point inside
 */
export async function edgeMaximum(equations: Equations, stuck: Point): Promise<Edge | null> {
  const { responses } = equations
  const { low, high, rows, a } = responses
  if (!mayHaveEdge(equations)) return null
  // Shares have a scale of their own, so that all of them may be at the edge.
  const spread = Math.max(spreadOf(stuck.state.eta), responses.family.name === "binomial" ? 1e-3 : 0)
  const active = new Map<number, number>()
  for (let i = 0; i < rows; i++) {
    if ((a[i] as number) === 0) continue
    const eta = stuck.state.eta[i] as number
    const end = eta - low < high - eta ? low : high
    if (Math.abs(eta - end) <= nearEdge * spread && agrees(responses, i, end)) active.set(i, end)
  }
  return maximumFrom(equations, stuck.gamma, active)
}

/** Where the way to the edge leads when every row that may be there is kept off it at first; null where there is no edge. */
export async function edgeAlongBarrier(equations: Equations, inside: Point): Promise<BarrierEnd | null> {
  return mayHaveEdge(equations) ? alongBarrier(equations, inside, (row, end) => agrees(equations.responses, row, end)) : null
}

/** The same maximum, with the rows that lean on the edge known. */
export const leaningMaximum = (equations: Equations, { gamma, leaning }: BarrierEnd): Promise<Edge | null> =>
  maximumFrom(equations, gamma, new Map(leaning))

const mayHaveEdge = ({ basis, responses: { low, high } }: Equations): boolean =>
  basis.size <= mostColumns && (Number.isFinite(low) || Number.isFinite(high))

/** From some rows held, letting go and taking up others until the multipliers agree. */
async function maximumFrom(equations: Equations, from: Float64Array, active: Map<number, number>): Promise<Edge | null> {
  const { responses } = equations
  let gamma = from.slice()
  for (let round = 0; round < 60; round++) {
    const found = await heldMaximum(equations, gamma, active)
    if (!found) return null
    const { point, iterations, blocked } = found
    gamma = point.gamma.slice()
    if (blocked !== null) {
      if (!agrees(responses, blocked.row, blocked.end)) return null
      active.set(blocked.row, blocked.end)
      continue
    }
    if (active.size === 0) return null
    const pull = multipliersAt(equations, point, active)
    if (pull.inside.length === 0) {
      const rows = [...pull.multipliers].map(([row, multiplier]) => ({ row, multiplier }))
      return { point, active: rows, iterations }
    }
    for (const row of pull.inside) active.delete(row)
    if (active.size === 0) return null
  }
  return null
}

/** A score of this share of its parts, and of what is its standard deviation, is rounding. */
const noPull = 1e-8

/**
 * Multipliers λ ≥ 0 of the rows held, with ∇ℓ = Σ λ·n; where there are none, the rows that what is left of ∇ℓ leads inside. Rows whose likelihood
 * falls without bound at the edge are held whatever the others do.
 */
function multipliersAt(
  equations: Equations,
  { score, gram }: Point,
  active: ReadonlyMap<number, number>,
): { readonly multipliers: ReadonlyMap<number, number>; readonly inside: readonly number[] } {
  const { responses } = equations
  const p = score.length
  // Rows that are the same in the basis have one normal, and share its multiplier by what they weigh.
  const normals = new Map<
    string,
    { readonly unit: Float64Array; readonly length: number; readonly rows: number[]; weight: number; steep: boolean }
  >()
  const total = score.slice()
  const full = gram.full()
  const size = score.map((u, j) => Math.abs(u) + Math.sqrt(full[j * p + j] as number))
  for (const [row, end] of active) {
    const out = end === responses.high ? 1 : -1
    const x = rowOf(equations, row)
    const own = out * ownSlope(responses, row, end)
    const length = Math.sqrt(dot(x, x))
    if (!(length > 0)) continue
    for (let j = 0; j < p && Number.isFinite(own); j++) {
      const part = own * out * (x[j] as number)
      total[j] = (total[j] as number) + part
      size[j] = (size[j] as number) + Math.abs(part)
    }
    const key = `${out} ${x.join(" ")}`
    const known = normals.get(key)
    const weight = responses.a[row] as number
    if (known) {
      known.rows.push(row)
      known.weight += weight
    } else
      normals.set(key, { unit: x.map((v) => (out * v) / length), length, rows: [row], weight, steep: own === Number.POSITIVE_INFINITY })
  }
  const all = [...normals.values()]
  const { lambda, left } = nonnegativeCombination(
    all.map(({ unit }) => unit),
    total,
  )
  const most = Math.sqrt(dot(size, size))
  const far = Math.sqrt(dot(left, left))
  const multipliers = new Map<number, number>()
  all.forEach(({ rows, length, weight, steep }, k) => {
    for (const row of rows) {
      const share = ((lambda[k] as number) / length) * ((responses.a[row] as number) / weight)
      multipliers.set(row, steep ? Number.POSITIVE_INFINITY : share < 1e-12 * (responses.a[row] as number) ? 0 : share)
    }
  })
  if (!(far > noPull * most)) return { multipliers, inside: [] }
  const inside = all.flatMap(({ unit, rows, steep }) => (!steep && dot(unit, left) < -1e-6 * far ? rows : []))
  return { multipliers, inside }
}

/**
 * The maximum where every response is at the same end of what is possible, and so is every mean: all counts 0 under the identity. Null unless
 * all responses are and the columns can bring all means there.
 */
export async function wholeEdge(equations: Equations): Promise<Edge | null> {
  const { responses, basis, pace } = equations
  const { low, high, rows, a, offset } = responses
  const end = [low, high].find((each) => Number.isFinite(each) && a.every((own, i) => own === 0 || isAt(responses, i, each)))
  if (end === undefined) return null
  const factor = Factor.of(gramOf(basis.layout, rangeSums(basis.layout, new Float64Array(rows).fill(1), new Float64Array(rows))))
  if (!factor) return null
  const masked = new Equations(basis, { ...responses, a: new Float64Array(rows) }, pace)
  const point = masked.point()
  // Least squares, and once more on what it left.
  let left = Float64Array.from({ length: rows }, (_, i) => end - (offset ? (offset[i] as number) : 0))
  const size = left.reduce((most, value) => Math.max(most, Math.abs(value)), Number.MIN_VALUE)
  for (let round = 0; round < 2; round++) {
    const step = factor.solve(scoreSums(basis.layout, left))
    for (let j = 0; j < step.length; j++) point.gamma[j] = (point.gamma[j] as number) + (step[j] as number)
    const off = directionOf(equations, step)
    left = left.map((value, i) => value - (off[i] as number))
  }
  if (left.some((value, i) => (a[i] as number) > 0 && Math.abs(value) > 1e-12 * size)) return null
  if (!(await masked.fill(point, "observed"))) return null
  const out = end === high ? 1 : -1
  const active: { row: number; multiplier: number }[] = []
  for (let row = 0; row < rows; row++) {
    point.state.eta[row] = end
    point.state.mu[row] = (responses.scale ? (responses.scale[row] as number) : 1) * responses.link.mean(end)
    if ((a[row] as number) > 0) active.push({ row, multiplier: out * ownSlope(responses, row, end) || 0 })
  }
  return { point, active, iterations: 0 }
}

/** Whether a row has a finite likelihood with its mean at this end: its response is there too, or is an inverse Gaussian one, under any mean. */
const agrees = (responses: Responses, row: number, end: number): boolean =>
  isAt(responses, row, end) || (responses.family.name === "inverse_gaussian" && responses.link.mean(end) === Number.POSITIVE_INFINITY)

/** Whether the response of a row is at this end itself. */
const isAt = ({ family, link, y, scale }: Responses, row: number, end: number): boolean => {
  const mu = (scale ? (scale[row] as number) : 1) * link.mean(end)
  const response = y[row] as number
  return (
    Number.isFinite(family.unitDeviance(response, mu, 1 - mu)) &&
    Math.abs(response - mu) < 1e-12 &&
    family.name !== "gamma" &&
    family.name !== "normal"
  )
}

type Held = {
  readonly point: Point
  readonly iterations: number
  /** A row that came to the edge on the way. */
  readonly blocked: { readonly row: number; readonly end: number } | null
}

async function heldMaximum(equations: Equations, from: Float64Array, active: ReadonlyMap<number, number>): Promise<Held | null> {
  const { basis, responses, pace } = equations
  const p = basis.size
  const held = [...active.keys()]
  // Rows held add a constant to ℓ, so they take no part in the climbing.
  const masked: Responses = { ...responses, a: responses.a.map((own, i) => (active.has(i) ? 0 : own)) }
  const inner = new Equations(basis, masked, pace)
  const x = held.map((row) => rowOf(equations, row))
  const target = held.map((row) => (active.get(row) as number) - (responses.offset ? (responses.offset[row] as number) : 0))
  const point = inner.point()
  point.gamma.set(from)
  const trial = inner.point()
  // Onto the edge, and from then on along it.
  for (let round = 0; round < 3; round++) {
    const off = x.map((row, k) => (target[k] as number) - dot(row, point.gamma))
    const step = constrainedStep(identityOf(p), new Float64Array(p), x, off)
    if (!step) return null
    for (let j = 0; j < p; j++) point.gamma[j] = (point.gamma[j] as number) + (step.delta[j] as number)
  }
  const blockedAtStart = await firstOutside(inner, from, point.gamma)
  if (blockedAtStart) return { point, iterations: 0, blocked: blockedAtStart }
  if (!(await inner.fill(point, "observed"))) return null
  let information: "observed" | "expected" = "observed"
  let last = false
  for (let iterations = 1; iterations <= 80; iterations++) {
    const none = new Array<number>(x.length).fill(0)
    let step = constrainedStep(fullOf(point.gram, x), point.score, x, none)
    if (!step && information === "observed") {
      // Where ℓ is flat in some direction, a little of the expected weights makes the step long, and it ends at the edge.
      const observed = fullOf(point.gram, x)
      information = "expected"
      if (!(await inner.fill(point, "expected"))) return null
      const expected = fullOf(point.gram, x)
      const mixed = observed.map((j, at) => j + flatness * (expected[at] as number))
      step = constrainedStep(mixed, point.score, x, none) ?? constrainedStep(expected, point.score, x, none)
    }
    if (!step) return null
    const gain = dot(step.delta, point.score)
    const arrived = gain < 1e-16 * (1 + Math.abs(point.deviance))
    if (arrived && !last) {
      // One step more, whole: Newton's error is then its square.
      for (let j = 0; j < p; j++) trial.gamma[j] = (point.gamma[j] as number) + (step.delta[j] as number)
      if (await inner.fill(trial, information)) {
        point.gamma.set(trial.gamma)
        await inner.fill(point, information)
        last = true
        continue
      }
    }
    if (arrived || last) {
      for (const [row, end] of active) {
        point.state.eta[row] = end
        const mu = (responses.scale ? (responses.scale[row] as number) : 1) * responses.link.mean(end)
        point.state.mu[row] = mu
        // Nothing where the response is at that end; at a mean without bound an inverse Gaussian one is not.
        point.deviance += (responses.a[row] as number) * responses.family.unitDeviance(responses.y[row] as number, mu, 1 - mu)
      }
      return { point, iterations, blocked: null }
    }
    let share = 1
    let blocked: { row: number; end: number } | null = null
    let taken = false
    for (let halving = 0; halving < 50; halving++) {
      for (let j = 0; j < p; j++) trial.gamma[j] = (point.gamma[j] as number) + share * (step.delta[j] as number)
      const outside = await firstOutside(inner, point.gamma, trial.gamma)
      if (outside && !agrees(responses, outside.row, outside.end)) {
        // A row that cannot be at the edge repels: its deviance has no limit there.
        share *= Math.min(0.5, 0.9 * outside.share)
        if (share < 1e-12) break
        continue
      }
      if (outside) {
        blocked = outside
        share *= outside.share * 0.999999
        if (share < 1e-8) break
        for (let j = 0; j < p; j++) trial.gamma[j] = (point.gamma[j] as number) + share * (step.delta[j] as number)
      }
      if ((await inner.fill(trial, "observed")) && trial.deviance <= point.deviance + 1e-13 * Math.abs(point.deviance)) {
        taken = true
        break
      }
      share /= 2
      blocked = null
    }
    if (blocked) return { point: taken ? trial : point, iterations, blocked }
    if (!taken) return null
    point.gamma.set(trial.gamma)
    if (!(await inner.fill(point, "observed"))) return null
    information = "observed"
  }
  return null
}

/** The row that first leaves the possible η on the way from one point to the other. */
async function firstOutside(
  equations: Equations,
  from: Float64Array,
  to: Float64Array,
): Promise<{ readonly row: number; readonly end: number; readonly share: number } | null> {
  const { responses } = equations
  const { low, high, a, offset, rows } = responses
  const before = directionOf(equations, from)
  const after = directionOf(equations, to)
  let first: { row: number; end: number; share: number } | null = null
  for (let i = 0; i < rows; i++) {
    if ((a[i] as number) === 0) continue
    const o = offset ? (offset[i] as number) : 0
    const start = (before[i] as number) + o
    const goal = (after[i] as number) + o
    if (goal > low && goal < high) continue
    const end = goal <= low ? low : high
    const share = Math.max(0, Math.min(1, (end - start) / (goal - start)))
    if (first === null || share < first.share) first = { row: i, end, share }
  }
  return first
}

/** dℓ/dη of one row at an end of its range, where V is 0 and (y − μ)/V tends to −1/V'; elsewhere by its limit, from just inside. */
function ownSlope(responses: Responses, row: number, end: number): number {
  const { family, link, a, scale } = responses
  const times = scale ? (scale[row] as number) : 1
  const at = times * link.mean(end)
  if (family.variance(at, 1 - at) === 0) {
    const own = (-1 / family.varianceSlope(at, 1 - at)) * times * link.slope(end)
    if (!Number.isNaN(own)) return (a[row] as number) * own
  }
  const near = slopeInside(responses, row, end, 1e-9)
  const far = slopeInside(responses, row, end, 2e-9)
  // A power of the distance runs to infinity or to 0; of what has a limit the part that is linear in the distance is taken away.
  if (Math.abs(near) > 1.1 * Math.abs(far)) return near > 0 ? Number.POSITIVE_INFINITY : Number.NEGATIVE_INFINITY
  return Math.abs(near) < 0.9 * Math.abs(far) ? 0 : 2 * near - far
}

function slopeInside({ family, link, y, a, scale, high }: Responses, row: number, end: number, distance: number): number {
  const times = scale ? (scale[row] as number) : 1
  const far = distance * Math.max(1, Math.abs(end))
  const inside = end === high ? end - far : end + far
  const mu = times * link.mean(inside)
  const rest = 1 - mu
  return ((a[row] as number) * ((y[row] as number) - mu) * times * link.slope(inside)) / family.variance(mu, rest)
}

/**
 * The step δ that maximises u'δ − δ'Hδ/2 with Aδ = off, and the multipliers: u − Hδ = A'λ. Rows of A that depend on earlier ones are left out with
 * multiplier 0.
 */
function constrainedStep(
  H: Float64Array,
  u: Float64Array,
  A: readonly Float64Array[],
  off: readonly number[],
): { readonly delta: Float64Array; readonly lambda: Float64Array } | null {
  const p = u.length
  const solve = definiteSolver(H, p)
  if (!solve) return null
  const free = solve(u)
  // Gram-Schmidt over the constraints in the metric of H⁻¹, so that repeated rows do no harm.
  const kept: { readonly at: number; readonly v: Float64Array; readonly row: Float64Array }[] = []
  A.forEach((row, at) => {
    const v = solve(row)
    const own = dot(row, v)
    const inner = Float64Array.from(kept, (other) => dot(other.row, v))
    const m = kept.length
    const S = new Float64Array(m * m)
    kept.forEach((a, i) => {
      kept.forEach((b, j) => {
        S[i * m + j] = dot(a.row, b.v)
      })
    })
    const c = definiteSolver(S, m)?.(inner)
    const left = own - inner.reduce((sum, x, i) => sum + x * (c ? (c[i] as number) : 0), 0)
    if (c && left > 1e-10 * own) kept.push({ at, v, row })
  })
  const m = kept.length
  const S = new Float64Array(m * m)
  kept.forEach((a, i) => {
    kept.forEach((b, j) => {
      S[i * m + j] = dot(a.row, b.v)
    })
  })
  const right = Float64Array.from(kept, ({ row, at }) => dot(row, free) - (off[at] as number))
  const multipliers = definiteSolver(S, m)?.(right)
  if (!multipliers) return null
  const delta = free.slice()
  const lambda = new Float64Array(A.length)
  kept.forEach(({ v, at }, i) => {
    const l = multipliers[i] as number
    lambda[at] = l
    for (let j = 0; j < p; j++) delta[j] = (delta[j] as number) - l * (v[j] as number)
  })
  return { delta, lambda }
}

/** The weights' matrix with the held rows added: on the edge they change nothing, and with them it is positive definite. */
function fullOf(gram: Gram, x: readonly Float64Array[]): Float64Array {
  const full = gram.full()
  const p = gram.rest + gram.last
  let trace = 0
  for (let j = 0; j < p; j++) trace += full[j * p + j] as number
  for (const row of x) {
    const size = dot(row, row)
    for (let i = 0; i < p; i++)
      for (let j = 0; j < p; j++)
        full[i * p + j] = (full[i * p + j] as number) + ((trace / p || 1) * (row[i] as number) * (row[j] as number)) / (size || 1)
  }
  return full
}

const identityOf = (p: number): Float64Array => {
  const out = new Float64Array(p * p)
  for (let j = 0; j < p; j++) out[j * p + j] = 1
  return out
}

/** One row of the basis. */
export function rowOf({ basis }: Equations, row: number): Float64Array {
  const out = new Float64Array(basis.size)
  for (let j = 0; j < basis.plain.length; j++) {
    const x = basis.plain[j] as Float64Array | null
    out[j] = x === null ? 1 : (x[row] as number)
  }
  for (const block of basis.blocks) {
    const cell = block.cells[row] as number
    const times = block.multiplier === null ? 1 : (block.multiplier[row] as number)
    for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++)
      out[block.column[e] as number] = times * (block.value[e] as number)
  }
  return out
}

const spreadOf = (eta: Float64Array): number => {
  let [low, high] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]
  for (const e of eta) {
    if (e < low) low = e
    if (e > high) high = e
  }
  return Math.max(high - low, 1e-3 * Math.max(Math.abs(low), Math.abs(high)))
}
