// Curves, bands and points over a numeric predictor, on either scale: the subject strong and with its band, other candidates thin, a ghost
// over them, and the points last.

import type { ScalesBlock, ScalesCandidate, ScalesCurve, ScalesPoints } from "../../../cells/block.ts"
import { bandPath, Dots, linePath, type Point, type Shape, shapeOf, shapePath } from "../curve.ts"
import { linkRole } from "../link-ink.ts"
import { type Box, boxesMeet, fitted, type SceneMark, tenth, textWidth } from "../scene.ts"
import { type PanelLayout, type ScalesLayout, TICK_SIZE } from "./layout.ts"
import { label, path } from "./pieces.ts"
import { onSubjectScale } from "./preview.ts"

/** More points than this are drawn as a few paths, not one mark each. */
const MANY = 150

export type Which = "mean" | "predictor"

/** One candidate's values on one scale; the ghost's η is moved to the subject's axis. */
export interface Values {
  readonly middle: Float64Array
  readonly low: Float64Array
  readonly high: Float64Array
}

export function valuesOf(curve: ScalesCurve, which: Which, moved: (eta: number) => number): Values {
  if (which === "mean") return { middle: curve.mu, low: curve.muLow, high: curve.muHigh }
  return { middle: curve.eta.map(moved), low: curve.etaLow.map(moved), high: curve.etaHigh.map(moved) }
}

export const stay = (eta: number): number => eta

export function curveMarks(block: ScalesBlock, layout: ScalesLayout, ghost: ScalesCandidate | null, which: Which): readonly SceneMark[] {
  const { subject } = layout
  const marks: SceneMark[] = []
  const panel = layout[which]
  const split = block.split === null ? "" : " of-split"
  // Other candidates' means can be compared on one axis, their η only where the block has aligned them. Split curves of every
  // candidate would be a thicket: there the others are seen when previewed.
  const others = which === "mean" || block.aligned ? (block.split === null ? block.candidates : []) : []
  for (const other of others) {
    // A fit in trouble is drawn when it is rested on; among the rest it would be taken for a candidate like them.
    if (other === subject || other === ghost || other.trouble !== null) continue
    const role = ghost === null ? linkRole(other.link) : `${linkRole(other.link)} held-back`
    for (const curve of other.curves) marks.push(...lineMarks(other.link, curve, valuesOf(curve, which, stay), panel, role, 0))
  }
  subject.curves.forEach((curve, i) => {
    marks.push(...bandMarks(subject.link, curve, valuesOf(curve, which, stay), panel, linkRole(subject.link) + split))
    const level = levelIndex(block, curve, i)
    marks.push(...lineMarks(subject.link, curve, valuesOf(curve, which, stay), panel, `${linkRole(subject.link)} chosen`, level))
    marks.push(...endMarks(subject.link, curve, valuesOf(curve, which, stay), panel, linkRole(subject.link)))
  })
  if (ghost !== null) {
    const moved = block.aligned ? stay : onSubjectScale(subject, ghost)
    ghost.curves.forEach((curve, i) => {
      const values = valuesOf(curve, which, moved)
      marks.push(...bandMarks(`ghost-${ghost.link}`, curve, ordered(values), panel, `${linkRole(ghost.link)} ghost${split}`))
      marks.push(...lineMarks(`ghost-${ghost.link}`, curve, values, panel, `${linkRole(ghost.link)} ghost`, levelIndex(block, curve, i)))
      marks.push(...endMarks(`ghost-${ghost.link}`, curve, values, panel, linkRole(ghost.link)))
    })
    if (which === "predictor") {
      ghost.points.forEach((points, i) => {
        const at = points.working.map(moved)
        marks.push(
          ...pointMarks(
            `ghost-points-${i}`,
            points,
            at,
            points.weight,
            panel,
            shapeOf(levelOf(block, points)),
            `ghost solid ${linkRole(ghost.link)}`,
            5,
          ),
        )
      })
    }
  }
  const points: SceneMark[] = []
  subject.points.forEach((group, i) => {
    const role = ghost !== null && which === "predictor" ? "held-back" : ""
    points.push(
      ...(which === "mean"
        ? pointMarks(`points-${i}`, group, group.mean, group.rows, panel, shapeOf(levelOf(block, group)), role, 5)
        : pointMarks(`points-${i}`, group, group.working, group.weight, panel, shapeOf(levelOf(block, group)), role, 6)),
    )
  })
  // Many points would bury the lines: there the lines come last.
  const many = subject.points.some((group) => group.x.length > MANY)
  if (many) marks.unshift(...points)
  else marks.push(...points)
  if (block.split !== null) marks.push(...lineLabels(subject, panel, which))
  return marks
}

const levelOf = (block: ScalesBlock, points: ScalesPoints): number =>
  block.split === null ? 0 : Math.max(0, block.split.levels.indexOf(points.level ?? ""))

export const levelIndex = (block: ScalesBlock, curve: ScalesCurve, i: number): number =>
  block.split === null ? 0 : Math.max(0, curve.level === null ? i : block.split.levels.indexOf(curve.level))

/** A moved band may have come out upside down. */
export const ordered = (values: Values): Values => ({
  middle: values.middle,
  low: values.low.map((low, i) => Math.min(low, values.high[i] ?? low)),
  high: values.high.map((high, i) => Math.max(high, values.low[i] ?? high)),
})

/** A line in two strengths: inside the data, and beyond. The pieces share the point where they meet. */
function lineMarks(key: string, curve: ScalesCurve, values: Values, panel: PanelLayout, role: string, level: number): readonly SceneMark[] {
  const inside: Point[] = []
  const beyond: Point[] = []
  const gap = { x: Number.NaN, y: Number.NaN }
  const n = curve.x.length
  for (let i = 0; i < n; i += 1) {
    const point = { x: panel.x.place(curve.x[i] as number), y: panel.y.place(values.middle[i] as number) }
    const here = curve.inside[i] === 1
    const meets = here && ((i > 0 && curve.inside[i - 1] !== 1) || (i < n - 1 && curve.inside[i + 1] !== 1))
    inside.push(here ? point : gap)
    beyond.push(!here || meets ? point : gap)
    if (meets && i < n - 1 && curve.inside[i + 1] === 1) beyond.push(gap)
  }
  const { top, bottom } = panel.frame
  const id = `${key}-${curve.level ?? ""}`
  return [
    ...path(`beyond-${id}`, `curve beyond level-${level} ${role}`, linePath(beyond, top, bottom)),
    ...path(`curve-${id}`, `curve level-${level} ${role}`, linePath(inside, top, bottom)),
  ]
}

function bandMarks(key: string, curve: ScalesCurve, values: Values, panel: PanelLayout, role: string): readonly SceneMark[] {
  const x = Array.from(curve.x, (at) => panel.x.place(at))
  const low = Array.from(values.low, (at) => placeOrEdge(panel, at))
  const high = Array.from(values.high, (at) => placeOrEdge(panel, at))
  return path(`band-${key}-${curve.level ?? ""}`, `band ${role}`, bandPath(x, low, high, panel.frame.top, panel.frame.bottom))
}

/** Infinity has no place by arithmetic: it lies past the edge. */
export function placeOrEdge(panel: PanelLayout, value: number): number {
  if (value === Number.POSITIVE_INFINITY) return panel.frame.top
  if (value === Number.NEGATIVE_INFINITY) return panel.frame.bottom
  return panel.y.place(value)
}

/** A bar where a curve ends because no mean is possible beyond. */
function endMarks(key: string, curve: ScalesCurve, values: Values, panel: PanelLayout, role: string): readonly SceneMark[] {
  let d = ""
  const n = curve.x.length
  for (let i = 0; i < n; i += 1) {
    if (!Number.isFinite(curve.mu[i] as number)) continue
    const endsHere = (i > 0 && !Number.isFinite(curve.mu[i - 1] as number)) || (i < n - 1 && !Number.isFinite(curve.mu[i + 1] as number))
    const y = panel.y.place(values.middle[i] as number)
    if (endsHere && y >= panel.frame.top && y <= panel.frame.bottom)
      d += `M${tenth(panel.x.place(curve.x[i] as number))} ${tenth(y - 7)}v14`
  }
  return path(`end-${key}-${curve.level ?? ""}`, `curve-end solid ${role}`, d)
}

/** Points with an area that goes with `size`; those past the frame become a small arrow at its edge. */
export function pointMarks(
  key: string,
  points: ScalesPoints,
  values: Float64Array,
  size: Float64Array | Uint32Array,
  panel: PanelLayout,
  shape: Shape,
  role: string,
  largest: number,
  shift = 0,
): readonly SceneMark[] {
  const n = points.x.length
  let greatest = 0
  for (const value of size) greatest = Math.max(greatest, value)
  const scale = n > 400 ? 0.36 : n > 60 ? 0.6 : 1
  const marks: SceneMark[] = []
  const dots = new Dots()
  const outlines = ["", "", "", ""]
  let off = ""
  const many = n > MANY
  for (let i = 0; i < n; i += 1) {
    const x = panel.x.place(points.x[i] as number) + shift
    const y = placeOrEdge(panel, values[i] as number)
    if (Number.isNaN(y) || x < panel.frame.left - 1 || x > panel.frame.right + 1) continue
    if (y < panel.frame.top - 1 || y > panel.frame.bottom + 1) {
      const up = y < panel.frame.top
      off += shapePath(up ? "triangle" : "dart", x, up ? panel.frame.top + 5 : panel.frame.bottom - 5, 3)
      continue
    }
    const share = greatest > 0 ? Math.sqrt((size[i] as number) / greatest) : 1
    const r = Math.max(n > 60 ? 1.3 : 2.1, largest * share * scale)
    if (many && shape === "circle") dots.add(x, y, r)
    else if (many) outlines[i % outlines.length] += shapePath(shape, x, y, r)
    else if (shape === "circle")
      marks.push({ type: "circle", key: `${key}-${i}`, role: `point ${role}`, x: tenth(x), y: tenth(y), r: tenth(r) })
    else marks.push(...path(`${key}-${i}`, `point ${role}`, shapePath(shape, x, y, r)))
  }
  const gathered = [
    ...dots.paths().flatMap((one) => path(`${key}-many-${one.key}`, `${one.role} ${role}`, one.d)),
    ...outlines.flatMap((d, i) => path(`${key}-many-${i}`, `point many ${role}`, d)),
  ]
  return [...marks, ...gathered, ...path(`${key}-off`, `point off ${role}`.trim(), off)]
}

/** Where a line's name may stand by a point of the line: sideways in widths of the name, and down in pixels. */
const LABEL_SPOTS = [
  [0, -8],
  [0, 17],
  [-1, -5],
  [1, -5],
  [-1, 13],
  [1, 13],
] as const

/** Names of split levels on their lines, where there is a place clear of points, lines and one another; none where there is not. */
function lineLabels(subject: ScalesCandidate, panel: PanelLayout, which: Which): readonly SceneMark[] {
  const { frame } = panel
  // The ground line and what is hatched under it are not for names either.
  const taken: Box[] = [{ left: frame.left, right: frame.right, top: panel.y.place(0) - 3, bottom: panel.y.place(0) + 3 }]
  for (const points of subject.points) {
    const values = which === "mean" ? points.mean : points.working
    points.x.forEach((x, i) => {
      const at = { x: panel.x.place(x), y: panel.y.place(values[i] as number) }
      taken.push({ left: at.x - 6, right: at.x + 6, top: at.y - 6, bottom: at.y + 6 })
    })
  }
  for (const curve of subject.curves) {
    const values = which === "mean" ? curve.mu : curve.eta
    curve.x.forEach((x, i) => {
      const at = { x: panel.x.place(x), y: panel.y.place(values[i] as number) }
      if (Number.isFinite(at.y)) taken.push({ left: at.x - 2, right: at.x + 2, top: at.y - 2, bottom: at.y + 2 })
    })
  }
  const marks: SceneMark[] = []
  for (const curve of subject.curves) {
    if (curve.level === null) continue
    const text = fitted(curve.level, TICK_SIZE, 110)
    const width = textWidth(text, TICK_SIZE)
    const values = which === "mean" ? curve.mu : curve.eta
    const n = curve.x.length
    search: for (let k = 0; k < n; k += Math.max(1, Math.floor(n / 40))) {
      // From the right end inwards: that is where lines are farthest apart.
      const i = n - 1 - k
      const x = panel.x.place(curve.x[i] as number)
      const y = panel.y.place(values[i] as number)
      // Beside a slope there is room to one side; over a flat stretch, above or below.
      for (const [dx, dy] of LABEL_SPOTS) {
        const middle = x + (dx * (width + 12)) / 2
        const box = { left: middle - width / 2 - 2, right: middle + width / 2 + 2, top: y + dy - 10, bottom: y + dy + 4 }
        const insideFrame =
          box.left > frame.left + 3 && box.right < frame.right - 3 && box.top > frame.top + 3 && box.bottom < frame.bottom - 3
        if (!insideFrame || taken.some((other) => boxesMeet(box, other))) continue
        taken.push(box)
        marks.push(label(`line-label-${curve.level}`, "ink", middle, y + dy, TICK_SIZE, "middle", text))
        break search
      }
    }
  }
  return marks
}
