// A way to the edge of the possible means that no row can block: the rows that may be at the edge are kept off it by a logarithmic barrier,
// which is lowered step by step. Where it ends says which rows belong to the edge, and how it drifts on whether coefficients run to infinity
// besides; what it finds is for others to verify. Fiacco & McCormick 1968, Nonlinear Programming.

import { definiteSolver } from "./definite.ts"
import { log } from "./elementary.ts"
import { directionOf } from "./recession.ts"
import type { Responses } from "./rows.ts"
import { dot, type Equations, type Point } from "./scoring.ts"

export type BarrierEnd = {
  readonly gamma: Float64Array
  /** Rows that lean on the edge, each with its end. */
  readonly leaning: ReadonlyMap<number, number>
  /** How the coefficients moved each time the barrier was lowered, the last first. */
  readonly drifts: readonly Float64Array[]
}

/** The barrier is lowered to this share of the deviance by a tenth each time. */
const lowest = 1e-12
const mostSteps = 40
const mostHalvings = 40

/**
 * @param start    a point with all means possible
 * @param agrees   whether a row may be at an end: its likelihood is finite there
 */
export async function alongBarrier(
  equations: Equations,
  start: Point,
  agrees: (row: number, end: number) => boolean,
): Promise<BarrierEnd | null> {
  const { responses, basis } = equations
  const rows = barrierRows(responses, agrees)
  if (rows.length === 0) return null
  let current = equations.point()
  let other = equations.point()
  current.gamma.set(start.gamma)
  if (!(await equations.fill(current, "observed"))) return null
  // Shares and counts of nothing have a deviance of rounding; a row's weight is then what likelihoods are measured by.
  const size = Math.max(current.deviance, 1e-3)
  let before = current.gamma.slice()
  const drifts: Float64Array[] = []
  for (let height = 0.1 * size; height >= lowest * size; height /= 10) {
    for (let step = 0; step < mostSteps; step++) {
      const delta = await stepAt(equations, current, rows, height)
      if (delta === null) return null
      const gain = dot(delta.step, delta.score)
      if (!(gain > 1e-8 * height)) break
      const merit = meritOf(current, rows, height)
      let share = Math.min(1, 0.99 * roomOn(equations, current, delta.step, rows))
      let taken = false
      for (let halving = 0; halving < mostHalvings && !taken; halving++) {
        for (let j = 0; j < basis.size; j++) other.gamma[j] = (current.gamma[j] as number) + share * (delta.step[j] as number)
        taken = (await equations.fill(other, "observed")) && meritOf(other, rows, height) <= merit + 1e-14 * Math.abs(merit)
        if (!taken) share /= 2
      }
      if (!taken) break
      ;[current, other] = [other, current]
    }
    const last = before
    drifts.unshift(current.gamma.map((g, j) => g - (last[j] as number)))
    before = current.gamma.slice()
  }
  return { gamma: current.gamma.slice(), leaning: leaningRows(current, rows, lowest * size), drifts }
}

type BarrierRow = { readonly row: number; readonly end: number; readonly inwards: 1 | -1 }

function barrierRows({ rows, low, high, a }: Responses, agrees: (row: number, end: number) => boolean): readonly BarrierRow[] {
  const found: BarrierRow[] = []
  for (let row = 0; row < rows; row++) {
    if ((a[row] as number) === 0) continue
    if (Number.isFinite(low) && agrees(row, low)) found.push({ row, end: low, inwards: 1 })
    if (Number.isFinite(high) && agrees(row, high)) found.push({ row, end: high, inwards: -1 })
  }
  return found
}

const slackOf = ({ state }: Point, { row, end, inwards }: BarrierRow): number => inwards * ((state.eta[row] as number) - end)

/** −ℓ and the barrier; Infinity where a row stands on it. */
function meritOf(point: Point, rows: readonly BarrierRow[], height: number): number {
  let barrier = 0
  for (const row of rows) {
    const slack = slackOf(point, row)
    if (!(slack > 0)) return Number.POSITIVE_INFINITY
    barrier += log(slack)
  }
  return point.deviance / 2 - height * barrier
}

/** Newton's step of ℓ with its barrier; with expected weights where the observed ones are not definite. */
async function stepAt(
  equations: Equations,
  point: Point,
  rows: readonly BarrierRow[],
  height: number,
): Promise<{ readonly step: Float64Array; readonly score: Float64Array } | null> {
  const n = equations.basis.rows
  const weight = new Float64Array(n)
  const pull = new Float64Array(n)
  for (const each of rows) {
    const force = height / slackOf(point, each)
    pull[each.row] = (pull[each.row] as number) + each.inwards * force
    weight[each.row] = (weight[each.row] as number) + (force * force) / height
  }
  const own = equations.scored(pull)
  const score = point.score.map((u, j) => u + (own[j] as number))
  const barrier = equations.weighted(weight).full()
  const p = equations.basis.size
  for (const information of ["observed", "expected"] as const) {
    let gram = point.gram
    if (information === "expected") {
      const filled = equations.point()
      filled.gamma.set(point.gamma)
      if (!(await equations.fill(filled, "expected"))) return null
      gram = filled.gram
    }
    const step = definiteSolver(
      gram.full().map((h, at) => h + (barrier[at] as number)),
      p,
    )?.(score)
    if (step && dot(step, score) > 0 && step.every(Number.isFinite)) return { step, score }
  }
  return { step: new Float64Array(p), score }
}

/** How far a step may go before the first of the rows is at its end. */
function roomOn(equations: Equations, point: Point, step: Float64Array, rows: readonly BarrierRow[]): number {
  const along = directionOf(equations, step)
  let room = Number.POSITIVE_INFINITY
  for (const each of rows) {
    const towards = -each.inwards * (along[each.row] as number)
    if (towards > 0) room = Math.min(room, slackOf(point, each) / towards)
  }
  return room
}

/** Rows whose pull λ = height/slack outweighs their distance, both as shares of the scales of η and of ℓ. */
function leaningRows(point: Point, rows: readonly BarrierRow[], height: number): ReadonlyMap<number, number> {
  let most = 0
  for (const e of point.state.eta) most = Math.max(most, Math.abs(e))
  const scale = Math.max(most, Number.MIN_VALUE)
  const leaning = new Map<number, number>()
  for (const each of rows)
    if (slackOf(point, each) < Math.sqrt(height / Math.max(point.deviance, 1e-3)) * scale) leaning.set(each.row, each.end)
  return leaning
}
