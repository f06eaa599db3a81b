// What follows the pointer over the two scales: the place along x on both panels, the mean and the linear predictor there with their
// intervals, and the one line of the bridge that ties them, so that a band on one scale is seen to become a band on the other.

import type { ScalesBlock, ScalesCandidate, ScalesCurve } from "../../../cells/block.ts"
import { type Box, type SceneMark, tenth, textWidth } from "../scene.ts"
import { falls, joinArea, joinPath } from "./bridge.ts"
import { labelled, waysOf } from "./bridge-marks.ts"
import { type PanelLayout, type ScalesLayout, TICK_SIZE } from "./layout.ts"
import { fittedShift } from "./levels.ts"
import { label, rect } from "./pieces.ts"
import { onSubjectScale } from "./preview.ts"
import { type Pointing, readingOf } from "./reading.ts"

export function pointerMarks(
  block: ScalesBlock,
  layout: ScalesLayout,
  of: ScalesCandidate,
  pointing: Pointing | null,
): readonly SceneMark[] {
  if (pointing === null) return []
  const moved = block.aligned || of === layout.subject ? (eta: number): number => eta : onSubjectScale(layout.subject, of)
  const reading = readingOf(block, layout, of, pointing)
  const texts = reading === null ? null : ([reading.mu, reading.eta] as const)
  if (pointing.type === "bridge") {
    const mu = of.bridge.mu[pointing.at]
    const eta = of.bridge.eta[pointing.at]
    return mu === undefined || eta === undefined || texts === null ? [] : litJoin(layout, mu, moved(eta), texts)
  }
  const curve = of.curves[pointing.curve]
  return curve === undefined || texts === null ? [] : curvePointer(block, layout, pointing, curve, moved, texts)
}

function curvePointer(
  block: ScalesBlock,
  layout: ScalesLayout,
  pointing: Extract<Pointing, { type: "curve" }>,
  curve: ScalesCurve,
  moved: (eta: number) => number,
  texts: readonly [string, string],
): readonly SceneMark[] {
  const { mean, predictor } = layout
  const i = pointing.at
  const x = curve.x[i] as number
  const mu = curve.mu[i] as number
  const eta = moved(curve.eta[i] as number)
  const muEnds = [curve.muLow[i] as number, curve.muHigh[i] as number] as const
  const etaEnds = [moved(curve.etaLow[i] as number), moved(curve.etaHigh[i] as number)] as const
  const beside = layout.arrangement === "beside"
  const marks: SceneMark[] = []
  const at = (which: "mean" | "predictor"): number => tenth(layout[which].x.place(x) + fittedShift(block, layout, which, pointing.curve))
  for (const key of ["mean", "predictor"] as const) {
    const panel = layout[key]
    marks.push({
      type: "path",
      key: `pointer-${key}`,
      role: "pointer",
      d: `M${at(key)} ${tenth(panel.frame.top)}V${tenth(panel.frame.bottom)}`,
    })
  }
  marks.push(...intervalMark("mean", mean, at("mean"), muEnds), ...intervalMark("predictor", predictor, at("predictor"), etaEnds))
  const meanY = mean.y.place(mu)
  const etaY = predictor.y.place(eta)
  const muShown = inside(mean.frame, meanY)
  const etaShown = inside(predictor.frame, etaY)
  marks.push(...litArea(layout, muEnds, etaEnds))
  if (muShown && etaShown) marks.push(...litJoin(layout, mu, eta, texts))
  if (muShown) {
    const from = at("mean")
    const to = tenth(beside ? mean.frame.right : mean.frame.left)
    marks.push({ type: "path", key: "lit-mean", role: "lit", d: `M${from} ${tenth(meanY)}H${to}` })
    marks.push({ type: "circle", key: "lit-mean-point", role: "lit-point", x: from, y: tenth(meanY), r: 4.5 })
  }
  if (etaShown) {
    const from = tenth(predictor.frame.left)
    const to = at("predictor")
    marks.push({ type: "path", key: "lit-predictor", role: "lit", d: `M${from} ${tenth(etaY)}H${to}` })
    marks.push({ type: "circle", key: "lit-predictor-point", role: "lit-point", x: to, y: tenth(etaY), r: 4.5 })
  }
  return marks
}

const inside = (frame: Box, y: number): boolean => Number.isFinite(y) && y >= frame.top - 0.5 && y <= frame.bottom + 0.5

function intervalMark(key: string, panel: PanelLayout, at: number, ends: readonly [number, number]): readonly SceneMark[] {
  if (Number.isNaN(ends[0]) || Number.isNaN(ends[1])) return []
  const places = ends.map((end) =>
    clamped(panel.y.place(end), panel.frame.top, panel.frame.bottom, end > 0 === panel.y.end < panel.y.start),
  )
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

/** The line of the bridge that is lit, from edge to edge, with its two numbers over a clear ground. */
function litJoin(layout: ScalesLayout, mu: number, eta: number, texts: readonly [string, string]): readonly SceneMark[] {
  const { runs, near, far, start, end, low, high } = waysOf(layout)
  const from = layout.bridge.mu.place(mu)
  const to = layout.bridge.eta.place(eta)
  if (!(from >= low - 0.5 && from <= high + 0.5 && to >= low - 0.5 && to <= high + 0.5)) return []
  const marks: SceneMark[] = [{ type: "path", key: "lit-join", role: "lit", d: joinPath(runs, start, end, from, to) }]
  // Numbers that the lit ones would touch make way, each as a whole.
  const others = labelled(layout)
  const places = [
    [near, start, from, texts[0], "start"],
    [far, end, to, texts[1], "end"],
  ] as const
  for (const [edge, inner, along, text, side] of places) {
    const key = `lit-${side}`
    const half = runs === "down" ? 8 : textWidth(text, TICK_SIZE) / 2 + 4
    const [a, b] = [Math.min(edge, inner) + (side === "start" ? 1 : 3), Math.max(edge, inner) - (side === "start" ? 3 : 1)]
    const box =
      runs === "down"
        ? { left: a, right: b, top: along - half, bottom: along + half }
        : { left: along - half, right: along + half, top: a, bottom: b }
    marks.push(rect(`${key}-plate`, "plate", box))
    for (const line of others) {
      const [there, its] = side === "start" ? [line.from, line.muText] : [line.to, line.etaText]
      const reach = runs === "down" ? 7 : textWidth(its, TICK_SIZE) / 2 + 1
      if (Math.abs(there - along) > half + reach) continue
      const cover =
        runs === "down" ? { ...box, top: there - reach, bottom: there + reach } : { ...box, left: there - reach, right: there + reach }
      marks.push(rect(`${key}-plate-${its}`, "plate", cover))
    }
    marks.push({
      type: "circle",
      key: `${key}-knot`,
      role: "lit-knot",
      x: tenth(runs === "down" ? inner : along),
      y: tenth(runs === "down" ? along : inner),
      r: 2.5,
    })
    const lower = TICK_SIZE * 0.36
    marks.push(
      runs === "down"
        ? label(key, "lit-text", edge + (side === "start" ? 7 : -7), along + lower, TICK_SIZE, side, text)
        : label(key, "lit-text", along, side === "start" ? edge + 16 : edge - 8, TICK_SIZE, "middle", text),
    )
  }
  return marks
}

/** The interval of the mean becoming the interval of the linear predictor. */
function litArea(layout: ScalesLayout, muEnds: readonly [number, number], etaEnds: readonly [number, number]): readonly SceneMark[] {
  if ([...muEnds, ...etaEnds].some(Number.isNaN)) return []
  const ways = waysOf(layout)
  const beside = ways.runs === "down"
  const within = (place: number, infinityIsLow: boolean): number => clamped(place, ways.low, ways.high, infinityIsLow)
  const from = muEnds.map((mu) => within(layout.bridge.mu.place(mu), mu > 0 === beside)) as [number, number]
  // The band of μ is in order of μ; where the link falls its ends meet those of η the other way round.
  const pair = falls(layout.subject.bridge) ? [Math.max(...etaEnds), Math.min(...etaEnds)] : [Math.min(...etaEnds), Math.max(...etaEnds)]
  const to = pair.map((eta) => within(layout.bridge.eta.place(eta), eta > 0 === beside)) as [number, number]
  return [{ type: "path", key: "lit-area", role: "lit-band", d: joinArea(ways, from, to) }]
}
