// Where the two scales and the bridge stand, and what range each axis has. Both panels hold all data and curves inside the data; what is
// extrapolated may take room, but not so much that the data are pressed flat. On a wide page the bridge joins the panels edge to edge;
// on a narrow one the panels stand over each other and the bridge lies between them with two axes of its own.

import type { ScalesBlock, ScalesCandidate } from "../../../cells/block.ts"
import { footTicks, levelTicks, linearScale, roomFor, type Scale, sideTicks, type Tick } from "../axis.ts"
import { type Box, brokenIntoLines, textWidth } from "../scene.ts"

export interface PanelLayout {
  readonly frame: Box
  readonly x: Scale
  readonly y: Scale
  readonly xTicks: readonly Tick[]
  readonly yTicks: readonly Tick[]
  /** On which side the vertical axis is written. */
  readonly side: "left" | "right"
}

export interface ScalesLayout {
  readonly width: number
  readonly height: number
  readonly arrangement: "beside" | "stacked"
  /** The candidate that sets the axes: the chosen one, or the first that has a curve. */
  readonly subject: ScalesCandidate
  readonly mean: PanelLayout
  readonly predictor: PanelLayout
  /** `mu` and `eta` place values along the two edges: downwards where the panels stand beside each other, else from left to right. */
  readonly bridge: { readonly frame: Box; readonly mu: Scale; readonly eta: Scale }
  readonly held: readonly string[]
  readonly heldTop: number
}

/** Sizes of text, in pixels. */
export const TICK_SIZE = 11.5
export const LABEL_SIZE = 12
export const TITLE_SIZE = 14

/** What a point at the end of the range needs of its panel, in pixels. */
const POINT_ROOM = 9

/** Below this width the panels stand over each other. */
const STACKED_BELOW = 560
const HEAD_ROWS = 54
const KEY_ROW = 18
const ROW = 15

/** The candidate that sets the axes, or null where nothing has a curve. */
const subjectOf = (block: ScalesBlock): ScalesCandidate | null =>
  block.candidates.find((candidate) => candidate.chosen && candidate.curves.length > 0) ??
  block.candidates.find((candidate) => candidate.curves.length > 0) ??
  null

export function scalesLayout(block: ScalesBlock, width: number): ScalesLayout | null {
  const subject = subjectOf(block)
  if (subject === null) return null
  const stacked = width < STACKED_BELOW
  const head = HEAD_ROWS + (block.split === null ? 0 : KEY_ROW)
  const meanRange = meanRangeOf(block, subject)
  const etaRange = etaRangeOf(subject, block.aligned ? block.candidates : [subject], block.across.levels !== null)
  const held = block.held === null ? [] : brokenIntoLines(`Held: ${block.held}`, LABEL_SIZE, width - 8)

  const sideWidth = (range: readonly [number, number], height: number): number =>
    Math.ceil(Math.max(20, ...sideTicks(linearScale(range[0], range[1], height, 0)).map((tick) => textWidth(tick.text, TICK_SIZE)))) + 12

  const crowded = pointsAtEnds(block, subject)
  const panel = (frame: Box, range: readonly [number, number], side: "left" | "right"): PanelLayout => {
    const y = linearScale(range[0], range[1], frame.bottom, frame.top)
    const levels = block.across.levels
    const x = levels
      ? linearScale(-0.5, levels.length - 0.5, frame.left, frame.right)
      : linearScale(
          block.range[0],
          block.range[1],
          frame.left + (crowded.left ? POINT_ROOM : 0),
          frame.right - (crowded.right ? POINT_ROOM : 0),
        )
    return { frame, x, y, xTicks: levels ? levelTicks(x, levels, TICK_SIZE) : footTicks(x, TICK_SIZE), yTicks: sideTicks(y), side }
  }

  if (!stacked) {
    const bridgeWidth = width >= 820 ? 190 : width >= 680 ? 164 : 148
    const height = Math.round(Math.min(330, Math.max(220, width * 0.3)))
    const left = sideWidth(meanRange, height)
    const right = sideWidth(etaRange, height)
    const panelWidth = (width - left - right - bridgeWidth) / 2
    const top = head
    const bottom = head + height
    const mean = panel({ left, top, right: left + panelWidth, bottom }, meanRange, "left")
    const predictor = panel({ left: width - right - panelWidth, top, right: width - right, bottom }, etaRange, "right")
    const foot = bottom + footHeight(mean, predictor)
    return {
      width,
      height: foot + held.length * ROW + (held.length > 0 ? 4 : 0),
      arrangement: "beside",
      subject,
      mean,
      predictor,
      bridge: { frame: { left: mean.frame.right, top, right: predictor.frame.left, bottom }, mu: mean.y, eta: predictor.y },
      held,
      heldTop: foot + 4,
    }
  }

  const height = Math.round(Math.min(260, Math.max(180, width * 0.56)))
  const left = Math.max(sideWidth(meanRange, height), sideWidth(etaRange, height))
  const right = width - 6
  const mean = panel({ left, top: head, right, bottom: head + height }, meanRange, "left")
  const bridgeTop = mean.frame.bottom + footHeight(mean, mean) + 42
  const bridgeFrame = { left, top: bridgeTop, right, bottom: bridgeTop + 104 }
  const predictorTop = bridgeFrame.bottom + 22 + head
  const predictor = panel({ left, top: predictorTop, right, bottom: predictorTop + height }, etaRange, "left")
  const foot = predictor.frame.bottom + footHeight(predictor, predictor)
  return {
    width,
    height: foot + held.length * ROW + (held.length > 0 ? 4 : 0),
    arrangement: "stacked",
    subject,
    mean,
    predictor,
    bridge: {
      frame: bridgeFrame,
      mu: linearScale(meanRange[0], meanRange[1], left, right),
      eta: linearScale(etaRange[0], etaRange[1], left, right),
    },
    held,
    heldTop: foot + 4,
  }
}

/** Whether points stand so near an end of the range that they would hang over the frame. */
function pointsAtEnds(block: ScalesBlock, subject: ScalesCandidate): { readonly left: boolean; readonly right: boolean } {
  const [from, to] = block.range
  const near = (to - from) * 0.02
  const at = (is: (x: number) => boolean): boolean => subject.points.some((points) => points.x.some(is))
  return { left: at((x) => x < from + near), right: at((x) => x > to - near) }
}

const footHeight = (a: PanelLayout, b: PanelLayout): number => ([...a.xTicks, ...b.xTicks].some((tick) => tick.row > 0) ? 57 : 43)

/** Lowest and highest of what is gathered, growing as it goes. */
class Span {
  low = Number.POSITIVE_INFINITY
  high = Number.NEGATIVE_INFINITY
  take(value: number | undefined): void {
    if (value === undefined || !Number.isFinite(value)) return
    if (value < this.low) this.low = value
    if (value > this.high) this.high = value
  }
  /** Takes a value in, but no farther out than a share of the extent beyond the ends that stand. */
  takeWithin(value: number | undefined, ends: Span, share: number): void {
    if (value === undefined || Number.isNaN(value)) return
    const extent = ends.high - ends.low || Math.abs(ends.high) || 1
    this.take(Math.min(ends.high + share * extent, Math.max(ends.low - share * extent, value)))
  }
  copy(): Span {
    const other = new Span()
    other.low = this.low
    other.high = this.high
    return other
  }
}

/** How many times the extent of the means an interval at a level may reach beyond them: there it is all that is drawn. */
const levelShare = 6

/**
 * The range of means: all points and the subject's curve and band inside the data, other candidates' curves there too, and of what is
 * extrapolated at most as much again. An end of the possible range that is near is taken in, with a strip beyond it to hatch.
 */
function meanRangeOf(block: ScalesBlock, subject: ScalesCandidate): readonly [number, number] {
  const core = new Span()
  for (const points of subject.points) for (const mean of points.mean) core.take(mean)
  for (const candidate of block.candidates) {
    for (const curve of candidate.curves) for (const [i, mu] of curve.mu.entries()) if (curve.inside[i] === 1) core.take(mu)
  }
  if (core.low > core.high) for (const curve of subject.curves) for (const mu of curve.mu) core.take(mu)
  if (core.low > core.high) return [0, 1]
  const all = core.copy()
  for (const curve of subject.curves) {
    curve.mu.forEach((mu, i) => {
      const inside = curve.inside[i] === 1
      all.takeWithin(mu, core, inside ? 1 : 0.9)
      const share = inside ? (block.across.levels === null ? 0.4 : levelShare) : 0.25
      all.takeWithin(curve.muLow[i], core, share)
      all.takeWithin(curve.muHigh[i], core, share)
    })
  }
  const [lowest, highest] = block.possible
  const low = Math.max(all.low, lowest)
  const high = Math.min(all.high, highest)
  const extent = high - low || Math.abs(high) || 1
  const nearLow = Number.isFinite(lowest) && low - lowest < 0.35 * extent
  const nearHigh = Number.isFinite(highest) && highest - high < 0.35 * extent
  const [roomLow, roomHigh] = roomFor(nearLow ? lowest : low, nearHigh ? highest : high)
  const strip = 0.045 * ((nearHigh ? highest : roomHigh) - (nearLow ? lowest : roomLow))
  return [nearLow ? lowest - strip : roomLow, nearHigh ? highest + strip : roomHigh]
}

/**
 * The range of η: the lines and bands inside the data and every working response of some weight; extrapolated lines, far bands and
 * working responses of next to no weight get a share of it and are cut beyond.
 */
function etaRangeOf(subject: ScalesCandidate, drawn: readonly ScalesCandidate[], atLevels: boolean): readonly [number, number] {
  const core = new Span()
  for (const curve of subject.curves) for (const [i, eta] of curve.eta.entries()) if (curve.inside[i] === 1) core.take(eta)
  if (core.low > core.high) for (const curve of subject.curves) for (const eta of curve.eta) core.take(eta)
  if (atLevels) {
    const middles = core.copy()
    for (const curve of subject.curves) {
      for (const end of [...curve.etaLow, ...curve.etaHigh]) core.takeWithin(end, middles, levelShare)
    }
  }
  const heaviest = Math.max(0, ...subject.points.map((points) => points.weight.reduce((most, weight) => Math.max(most, weight), 0)))
  const all = core.copy()
  for (const points of subject.points) {
    for (const [i, z] of points.working.entries()) {
      all.takeWithin(z, core, (points.weight[i] ?? 0) >= 0.02 * heaviest ? 1.5 : 0.35)
    }
  }
  const inner = all.copy()
  for (const candidate of drawn) {
    for (const curve of candidate.curves) {
      curve.eta.forEach((eta, i) => {
        const inside = curve.inside[i] === 1
        all.takeWithin(eta, inner, inside ? 0.5 : 0.6)
        all.takeWithin(curve.etaLow[i], inner, inside ? 0.5 : 0.2)
        all.takeWithin(curve.etaHigh[i], inner, inside ? 0.5 : 0.2)
      })
    }
  }
  return all.low > all.high ? [-1, 1] : roomFor(all.low, all.high)
}
