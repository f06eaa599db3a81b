// What follows the pointer over the two scales: the place along x on both panels, the mean and the linear predictor there with their
// intervals, and the one line of the bridge that ties them, so that a band on one scale is seen to become a band on the other.

import type { ScalesBlock, ScalesCandidate, ScalesCurve } from "../../../cells/block.ts"
import { type Box, type SceneMark, tenth } from "../scene.ts"
import { joinArea, joinPath } from "./bridge.ts"
import type { PanelLayout, ScalesLayout } from "./layout.ts"
import { STUB, STUB_ACROSS } from "./panels.ts"
import { onSubjectScale } from "./preview.ts"
import type { Pointing } from "./reading.ts"

export function pointerMarks(
  block: ScalesBlock,
  layout: ScalesLayout,
  of: ScalesCandidate,
  pointing: Pointing | null,
): readonly SceneMark[] {
  if (pointing === null) return []
  const moved = block.aligned || of === layout.subject ? (eta: number): number => eta : onSubjectScale(layout.subject, of)
  if (pointing.type === "bridge") {
    const mu = of.bridge.mu[pointing.at]
    const eta = of.bridge.eta[pointing.at]
    return mu === undefined || eta === undefined ? [] : litJoin(layout, mu, moved(eta))
  }
  const curve = of.curves[pointing.curve]
  return curve === undefined ? [] : curvePointer(layout, curve, pointing.at, moved)
}

function curvePointer(layout: ScalesLayout, curve: ScalesCurve, i: number, moved: (eta: number) => number): readonly SceneMark[] {
  const { mean, predictor } = layout
  const x = curve.x[i] as number
  const mu = curve.mu[i] as number
  const eta = moved(curve.eta[i] as number)
  const muEnds = [curve.muLow[i] as number, curve.muHigh[i] as number] as const
  const etaEnds = [moved(curve.etaLow[i] as number), moved(curve.etaHigh[i] as number)] as const
  const beside = layout.arrangement === "beside"
  const marks: SceneMark[] = []
  for (const [key, panel] of [["mean", mean] as const, ["predictor", predictor] as const]) {
    const at = tenth(panel.x.place(x))
    marks.push({ type: "path", key: `pointer-${key}`, role: "pointer", d: `M${at} ${tenth(panel.frame.top)}V${tenth(panel.frame.bottom)}` })
  }
  marks.push(...intervalMark("mean", mean, x, muEnds), ...intervalMark("predictor", predictor, x, etaEnds))
  const meanY = mean.y.place(mu)
  const etaY = predictor.y.place(eta)
  const muShown = inside(mean.frame, meanY)
  const etaShown = inside(predictor.frame, etaY)
  marks.push(...litArea(layout, muEnds, etaEnds))
  if (muShown && etaShown) marks.push(...litJoin(layout, mu, eta))
  if (muShown) {
    const from = tenth(mean.x.place(x))
    const to = tenth(beside ? mean.frame.right : mean.frame.left)
    marks.push({ type: "path", key: "lit-mean", role: "lit", d: `M${from} ${tenth(meanY)}H${to}` })
    marks.push({ type: "circle", key: "lit-mean-point", role: "lit-point", x: from, y: tenth(meanY), r: 4.5 })
  }
  if (etaShown) {
    const from = tenth(predictor.frame.left)
    const to = tenth(predictor.x.place(x))
    marks.push({ type: "path", key: "lit-predictor", role: "lit", d: `M${from} ${tenth(etaY)}H${to}` })
    marks.push({ type: "circle", key: "lit-predictor-point", role: "lit-point", x: to, y: tenth(etaY), r: 4.5 })
  }
  return marks
}

const inside = (frame: Box, y: number): boolean => Number.isFinite(y) && y >= frame.top - 0.5 && y <= frame.bottom + 0.5

function intervalMark(key: string, panel: PanelLayout, x: number, ends: readonly [number, number]): readonly SceneMark[] {
  if (Number.isNaN(ends[0]) || Number.isNaN(ends[1])) return []
  const places = ends.map((end) =>
    clamped(panel.y.place(end), panel.frame.top, panel.frame.bottom, end > 0 === panel.y.end < panel.y.start),
  )
  const at = tenth(panel.x.place(x))
  return [
    {
      type: "path",
      key: `lit-interval-${key}`,
      role: "lit-interval",
      d: `M${at} ${tenth(places[0] as number)}V${tenth(places[1] as number)}`,
    },
  ]
}

/** Within two edges; an infinite value lies at the edge it goes to. */
function clamped(place: number, low: number, high: number, infinityIsLow: boolean): number {
  if (Number.isFinite(place)) return Math.min(high, Math.max(low, place))
  return infinityIsLow ? low : high
}

const ways = (layout: ScalesLayout) => {
  const beside = layout.arrangement === "beside"
  const { frame } = layout.bridge
  return {
    runs: beside ? ("down" as const) : ("across" as const),
    near: beside ? frame.left : frame.top,
    far: beside ? frame.right : frame.bottom,
    stub: beside ? STUB : STUB_ACROSS,
    low: beside ? frame.top : frame.left,
    high: beside ? frame.bottom : frame.right,
  }
}

function litJoin(layout: ScalesLayout, mu: number, eta: number): readonly SceneMark[] {
  const { runs, near, far, stub, low, high } = ways(layout)
  const from = layout.bridge.mu.place(mu)
  const to = layout.bridge.eta.place(eta)
  if (!(from >= low - 0.5 && from <= high + 0.5 && to >= low - 0.5 && to <= high + 0.5)) return []
  return [{ type: "path", key: "lit-join", role: "lit", d: joinPath(runs, near, far, from, to, stub) }]
}

/** The interval of the mean becoming the interval of the linear predictor. */
function litArea(layout: ScalesLayout, muEnds: readonly [number, number], etaEnds: readonly [number, number]): readonly SceneMark[] {
  if ([...muEnds, ...etaEnds].some(Number.isNaN)) return []
  const { runs, near, far, stub, low, high } = ways(layout)
  const within = (place: number, infinityIsLow: boolean): number => clamped(place, low, high, infinityIsLow)
  const beside = runs === "down"
  const from = muEnds.map((mu) => within(layout.bridge.mu.place(mu), mu > 0 === beside)) as [number, number]
  // The band of μ is in order of μ; where the link falls its ends meet those of η the other way round.
  const rises = (layout.subject.bridge.eta.at(-1) ?? 0) >= (layout.subject.bridge.eta[0] ?? 0)
  const pair = rises ? [Math.min(...etaEnds), Math.max(...etaEnds)] : [Math.max(...etaEnds), Math.min(...etaEnds)]
  const to = pair.map((eta) => within(layout.bridge.eta.place(eta), eta > 0 === beside)) as [number, number]
  return [{ type: "path", key: "lit-area", role: "lit-band", d: joinArea(runs, near, far, from, to, stub) }]
}
