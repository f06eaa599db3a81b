// Reading the two scales: from a place on the drawing, or from a step by key, to one grid point of one curve, and what stands there on
// both scales. Readings snap to the grid the finding brought, so that no number is made here.

import type { ScalesBlock, ScalesCandidate, ScalesCurve } from "../../../cells/block.ts"
import { decimalsForExtent, writtenFixed, writtenRange } from "../number.ts"
import type { PanelLayout, ScalesLayout } from "./layout.ts"
import { onSubjectScale } from "./preview.ts"

/** What is pointed at: a grid point of a curve, or a pair of the bridge that no curve reaches. */
export type Pointing =
  | { readonly type: "curve"; readonly curve: number; readonly at: number }
  | { readonly type: "bridge"; readonly at: number }

export interface Reading {
  /** What x is, in words with its unit; null on the bridge alone. */
  readonly x: string | null
  readonly level: string | null
  readonly mu: string
  readonly muInterval: string | null
  readonly eta: string
  readonly etaInterval: string | null
  /** What has to be said with it: outside the data, no mean possible. */
  readonly caution: string | null
}

/** What stands at a place in pixels, or null where there is nothing to read. */
export function pointed(block: ScalesBlock, layout: ScalesLayout, of: ScalesCandidate, x: number, y: number): Pointing | null {
  for (const which of ["mean", "predictor"] as const) {
    const panel = layout[which]
    if (within(panel.frame, x, y, 6)) return onPanel(block, layout, of, panel, which, x, y)
  }
  return within(layout.bridge.frame, x, y, 0) ? onBridge(block, layout, of, x, y) : null
}

/** The next place along x, or the same place on the next curve. Starts in the middle. */
export function steppedReading(
  of: ScalesCandidate,
  from: Pointing | null,
  step: { readonly along: number; readonly curves: number },
): Pointing | null {
  const curves = of.curves.length
  if (curves === 0) return null
  if (from === null || from.type === "bridge") {
    const middle = Math.floor(((of.curves[0] as ScalesCurve).x.length - 1) / 2)
    return { type: "curve", curve: 0, at: middle }
  }
  const curve = (from.curve + step.curves + curves) % curves
  const length = (of.curves[curve] as ScalesCurve).x.length
  return { type: "curve", curve, at: Math.min(length - 1, Math.max(0, from.at + step.along)) }
}

/** The numbers at a pointing, written out. */
export function readingOf(block: ScalesBlock, layout: ScalesLayout, of: ScalesCandidate, pointing: Pointing): Reading | null {
  const etaDecimals = Math.max(2, decimalsForExtent(layout.predictor.y.to - layout.predictor.y.from))
  const muDecimals = Math.max(1, decimalsForExtent((layout.mean.y.to - layout.mean.y.from) / 4))
  const interval = (low: number, high: number, decimals: number): string | null =>
    Number.isNaN(low) || Number.isNaN(high) ? null : fixedRange(low, high, decimals)
  if (pointing.type === "bridge") {
    const mu = of.bridge.mu[pointing.at]
    const eta = of.bridge.eta[pointing.at]
    if (mu === undefined || eta === undefined) return null
    return {
      x: null,
      level: null,
      mu: writtenFixed(mu, muDecimals),
      muInterval: null,
      eta: writtenFixed(eta, etaDecimals),
      etaInterval: null,
      caution: null,
    }
  }
  const curve = of.curves[pointing.curve]
  const x = curve?.x[pointing.at]
  if (curve === undefined || x === undefined) return null
  const i = pointing.at
  const mu = curve.mu[i] as number
  const outside = curve.inside[i] === 1 ? null : "outside the data"
  return {
    x: xText(block, x),
    level: curve.level,
    mu: writtenFixed(mu, muDecimals),
    muInterval: interval(curve.muLow[i] as number, curve.muHigh[i] as number, muDecimals),
    eta: writtenFixed(curve.eta[i] as number, etaDecimals),
    etaInterval: interval(curve.etaLow[i] as number, curve.etaHigh[i] as number, etaDecimals),
    caution: Number.isNaN(mu) ? "no mean is possible here" : outside,
  }
}

/** The reading as one sentence, for a voice. */
export function readingSentence(block: ScalesBlock, of: ScalesCandidate, reading: Reading): string {
  const percent = `${Math.round(block.confidence * 1000) / 10} %`
  const where = reading.x === null ? "" : `${block.across.label} ${reading.x}${reading.level === null ? "" : `, ${reading.level}`}: `
  const band = (text: string | null): string => (text === null ? "" : ` (${percent}: ${text})`)
  const caution = reading.caution === null ? "" : `, ${reading.caution}`
  return `${where}under ${of.link}, mean ${reading.mu}${band(reading.muInterval)}, linear predictor ${reading.eta}${band(reading.etaInterval)}${caution}.`
}

function xText(block: ScalesBlock, x: number): string {
  const { levels, unit } = block.across
  if (levels !== null) return levels[Math.round(x)] ?? ""
  const text = writtenFixed(x, decimalsForExtent(block.range[1] - block.range[0]))
  return unit === null ? text : `${text} ${unit}`
}

function fixedRange(low: number, high: number, decimals: number): string {
  if (!Number.isFinite(low) || !Number.isFinite(high)) return writtenRange(low, high, decimals + 1)
  return `${writtenFixed(low, decimals)} to ${writtenFixed(high, decimals)}`
}

const within = (box: { left: number; right: number; top: number; bottom: number }, x: number, y: number, slack: number): boolean =>
  x >= box.left - slack && x <= box.right + slack && y >= box.top - slack && y <= box.bottom + slack

function onPanel(
  block: ScalesBlock,
  layout: ScalesLayout,
  of: ScalesCandidate,
  panel: PanelLayout,
  which: "mean" | "predictor",
  x: number,
  y: number,
): Pointing | null {
  const moved = which === "predictor" && !block.aligned && of !== layout.subject ? onSubjectScale(layout.subject, of) : (eta: number) => eta
  const value = panel.x.value(x)
  let best: Pointing | null = null
  let bestDistance = Number.POSITIVE_INFINITY
  of.curves.forEach((curve, c) => {
    const at = nearest(curve.x, value)
    if (at < 0) return
    const there = which === "mean" ? (curve.mu[at] as number) : moved(curve.eta[at] as number)
    const distance = Number.isNaN(there) ? 1e6 : Math.abs(panel.y.place(there) - y)
    if (distance < bestDistance) {
      bestDistance = distance
      best = { type: "curve", curve: c, at }
    }
  })
  return best
}

/** On the bridge the nearer edge is read; where a curve comes by, its grid point is read with it. */
function onBridge(block: ScalesBlock, layout: ScalesLayout, of: ScalesCandidate, x: number, y: number): Pointing | null {
  const { frame, mu, eta } = layout.bridge
  const beside = layout.arrangement === "beside"
  const along = beside ? y : x
  const share = beside ? (x - frame.left) / (frame.right - frame.left) : (y - frame.top) / (frame.bottom - frame.top)
  const moved = !block.aligned && of !== layout.subject ? onSubjectScale(layout.subject, of) : (value: number) => value
  const byMu = share < 0.5
  const place = (m: number, e: number): number => (byMu ? mu.place(m) : eta.place(moved(e)))
  let best: Pointing | null = null
  let bestDistance = 5
  of.curves.forEach((curve, c) => {
    for (let i = 0; i < curve.x.length; i += 1) {
      const distance = Math.abs(place(curve.mu[i] as number, curve.eta[i] as number) - along)
      if (distance < bestDistance) {
        bestDistance = distance
        best = { type: "curve", curve: c, at: i }
      }
    }
  })
  if (best !== null) return best
  let nearestPair = Number.POSITIVE_INFINITY
  for (let i = 0; i < of.bridge.mu.length; i += 1) {
    const distance = Math.abs(place(of.bridge.mu[i] as number, of.bridge.eta[i] as number) - along)
    if (distance < nearestPair) {
      nearestPair = distance
      best = { type: "bridge", at: i }
    }
  }
  return best
}

/** The index of the nearest value of a rising grid. */
function nearest(grid: Float64Array, value: number): number {
  let best = -1
  let distance = Number.POSITIVE_INFINITY
  for (let i = 0; i < grid.length; i += 1) {
    const there = Math.abs((grid[i] as number) - value)
    if (there < distance) {
      distance = there
      best = i
    }
  }
  return best
}
