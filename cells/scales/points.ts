// Points on both scales: on the left what was observed, on the right the working response moved to what is held. Single trials, or more
// than a thousand rows, are gathered into at most twenty groups of equal working weight along x; rows with the same x stay together.

import type { ScalesPoints } from "../block.ts"
import type { ModelFinding } from "../model-finding.ts"
import type { Fit } from "../statistics/fit.ts"
import { exp, log1p, workingRows } from "../statistics/index.ts"
import type { Problem } from "../statistics/problem.ts"

/** More rows than this are shown in groups: a page draws about a thousand circles within a frame. */
export const mostPoints = 1_000
export const mostGroups = 20

/** The response as it is drawn on the mean scale: per unit of exposure. */
export function observedMean(problem: Problem, row: number): number {
  const y = problem.y[row] as number
  const exposure = problem.exposure?.[row]
  if (exposure === undefined) return y
  return problem.family.name === "binomial" ? 1 - exp(log1p(-y) / exposure) : y / exposure
}

/**
 * The points of one curve.
 * @param rows    which rows of the problem (those of one level of the split, or all)
 * @param x       x of each row of the problem
 * @param etaAt   η of the curve at an x
 * @param levels  true where x is a place of a level: then groups are levels
 */
export function pointsOf(
  model: ModelFinding,
  fit: Fit,
  link: Problem["link"],
  rows: Uint32Array,
  x: Float64Array,
  etaAt: (x: Float64Array) => Float64Array,
  level: string | null,
  levels: boolean,
): ScalesPoints {
  const problem: Problem = { ...model.problem, link }
  const { residual, weight } = workingRows(problem, fit)
  const order = rows.slice().sort((a, b) => (x[a] as number) - (x[b] as number) || a - b)
  const places = Float64Array.from(order, (row) => x[row] as number)
  const line = etaAt(places)
  const single = problem.family.name === "binomial" && (problem.trials === null || problem.trials.every((m) => m === 1))
  const grouped = single || rows.length > mostPoints
  const starts = grouped ? (levels ? tieStarts(places) : groupStarts(order, places, weight)) : Uint32Array.from(order, (_, i) => i)
  const count = starts.length
  const made = {
    level,
    x: new Float64Array(count),
    mean: new Float64Array(count),
    working: new Float64Array(count),
    weight: new Float64Array(count),
    rows: new Uint32Array(count),
  }
  for (let g = 0; g < count; g++) {
    const [from, to] = [starts[g] as number, starts[g + 1] ?? order.length]
    let [sw, swx, swz, sa, say] = [0, 0, 0, 0, 0]
    for (let k = from; k < to; k++) {
      const row = order[k] as number
      const w = weight[row] as number
      const a = (problem.repeat?.[row] ?? 1) * (problem.precision?.[row] ?? 1) * (problem.trials?.[row] ?? 1)
      sw += w
      swx += w * (places[k] as number)
      swz += w * ((line[k] as number) + (residual[row] as number))
      sa += a
      say += a * observedMean(problem, row)
    }
    // A group without working weight (means at an end of their range) stands at its plain middle and has no working response.
    const one = to - from === 1
    made.x[g] = one || sw === 0 ? (places[from] as number) : swx / sw
    made.mean[g] = one ? observedMean(problem, order[from] as number) : say / sa
    made.working[g] = one ? (line[from] as number) + (residual[order[from] as number] as number) : sw === 0 ? Number.NaN : swz / sw
    made.weight[g] = sw
    made.rows[g] = to - from
  }
  return made
}

/** Where each run of equal x begins. */
function tieStarts(places: Float64Array): Uint32Array {
  const starts: number[] = []
  for (let i = 0; i < places.length; i++) if (i === 0 || places[i] !== places[i - 1]) starts.push(i)
  return Uint32Array.from(starts)
}

/** Groups of about equal ΣW: a run of equal x goes to the group in which the middle of its weight falls. */
function groupStarts(order: Uint32Array, places: Float64Array, weight: Float64Array): Uint32Array {
  const runs = tieStarts(places)
  if (runs.length <= mostGroups) return runs
  let total = 0
  for (const row of order) total += weight[row] as number
  const starts: number[] = []
  let [before, last] = [0, -1]
  for (let r = 0; r < runs.length; r++) {
    const [from, to] = [runs[r] as number, runs[r + 1] ?? order.length]
    let own = 0
    for (let k = from; k < to; k++) own += weight[order[k] as number] as number
    const group = Math.min(mostGroups - 1, Math.floor((mostGroups * (before + own / 2)) / total))
    if (group !== last) starts.push(from)
    last = group
    before += own
  }
  return Uint32Array.from(starts)
}
