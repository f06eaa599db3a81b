// The null model: the constant alone, offset and exposure kept. It measures the deviance from which predictors start, and it is where the
// fitting of most models starts.

import type { Basis, Shape } from "./basis.ts"
import { blockRows, Layout } from "./gram.ts"
import { devianceAtOneMean, type Responses } from "./rows.ts"
import { Equations, maximum, type Pace, type Point } from "./scoring.ts"

export type NullModel = {
  /** The constant on the scale of η; infinite where the deviance is a limit. */
  readonly eta: number
  readonly deviance: number
}

/** Null where no constant keeps every mean possible, or the search did not arrive. */
export async function nullModel(responses: Responses, pace: Pace, phi: (point: Point) => number): Promise<NullModel | null> {
  const { family, link, y, a, offset, scale, rows } = responses
  let [sum, total] = [0, 0]
  for (let from = 0; from < rows; from += blockRows) {
    let [part, size] = [0, 0]
    for (let i = from; i < Math.min(rows, from + blockRows); i++) {
      part += (a[i] as number) * (y[i] as number)
      size += (a[i] as number) * (scale ? (scale[i] as number) : 1)
    }
    sum += part
    total += size
  }
  const mean = sum / total
  // Counts that are all nought, or shares that are all at one end.
  if (family.discrete && mean === 0 && reaches(responses, 0)) return atEnd(responses, 0)
  if (family.name === "binomial" && mean === 1 && reaches(responses, 1)) return atEnd(responses, 1)
  let eta = link.eta(mean)
  const plain = offset === null && scale === null
  if (plain && eta > responses.low && eta < responses.high) {
    // Where all rows share one mean, the score is 0 at their own mean, whatever family and link are.
    if (pace.due(30 * rows)) await pace.rest()
    const deviance = devianceAtOneMean(responses, mean, eta)
    return Number.isFinite(deviance) ? { eta, deviance } : null
  }
  if (!plain || !(eta > responses.low && eta < responses.high)) {
    let [lowest, highest] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]
    let middle = 0
    for (let i = 0; i < rows; i++) {
      const o = offset ? (offset[i] as number) : 0
      lowest = Math.min(lowest, o)
      highest = Math.max(highest, o)
      middle += (o - middle) / (i + 1)
    }
    const low = responses.low - lowest
    const high = responses.high - highest
    if (!(low < high)) return null
    eta -= middle
    if (!(eta > low && eta < high)) {
      // The nearest comfortable place inside.
      const width = Math.min(high - low, 1 + Math.abs(low > Number.NEGATIVE_INFINITY ? low : high))
      eta = low > Number.NEGATIVE_INFINITY ? low + width / 2 : high < Number.POSITIVE_INFINITY ? high - width / 2 : 0
    }
  }
  const shape: Shape = { rows, plain: [null], blocks: [], eliminated: -1, size: 1 }
  const basis: Basis = {
    ...shape,
    layout: new Layout(shape),
    change: { type: "scaled", column: Int32Array.of(0), centre: Float64Array.of(0), scale: Float64Array.of(1), carrier: Int32Array.of(-1) },
    written: null,
  }
  const equations = new Equations(basis, responses, pace)
  const point = equations.point()
  point.gamma[0] = eta
  if (!(await equations.fill(point, "expected"))) return null
  const found = await maximum(equations, point, phi)
  return found.end === "arrived" ? { eta: found.point.gamma[0] as number, deviance: found.point.deviance } : null
}

/**
 * The best constant where all responses are at one end of the means. An end at an infinite η is tended to whatever the offsets are; one at a
 * finite η is reached by the row with the outermost offset, and the others stay off it.
 */
function atEnd({ family, link, y, a, offset, scale, rows, low, high }: Responses, end: number): NullModel | null {
  const eta = link.eta(end)
  if (offset === null || !Number.isFinite(eta)) return { eta, deviance: 0 }
  let outermost = eta === high ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY
  for (const o of offset) outermost = eta === high ? Math.max(outermost, o) : Math.min(outermost, o)
  const constant = eta - outermost
  let deviance = 0
  for (let i = 0; i < rows; i++) {
    const own = (offset[i] as number) - outermost
    if (own === 0) continue
    const at = eta + own
    if (!(at > low && at < high)) return null
    const mean = link.mean(at) * (scale ? (scale[i] as number) : 1)
    deviance += (a[i] as number) * family.unitDeviance(y[i] as number, mean, link.complement === null ? 1 - mean : link.complement(at))
  }
  return { eta: constant, deviance }
}

/** Whether this end of the means is among those the link can tend to. */
const reaches = ({ link }: Responses, end: number): boolean =>
  (end === 0 ? link.range.low <= 0 : link.range.high >= 1) && !Number.isNaN(link.eta(end))
