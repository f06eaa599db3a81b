// The still part of the two scales: both panels with all that stands in them, the bridge between, and the texts around. It depends on
// the block, the layout and which candidate is previewed; what follows the pointer is drawn over it by pointer.ts.

import type { ScalesBlock, ScalesCandidate, ScalesCurve, ScalesPoints } from "../../../cells/block.ts"
import { bandPath, linePath, type Point, type Shape, shapeOf, shapePath } from "../curve.ts"
import { linkRole } from "../link-ink.ts"
import { type Box, boxesMeet, brokenIntoLines, fitted, hatching, type Scene, type SceneMark, tenth, textWidth } from "../scene.ts"
import { bridgeHairs, etaAt, falls, joinArea, joinPath, labelledLines } from "./bridge.ts"
import { LABEL_SIZE, type PanelLayout, type ScalesLayout, TICK_SIZE, TITLE_SIZE } from "./layout.ts"
import { onSubjectScale } from "./preview.ts"

/** More points than this are drawn as a few paths, not one mark each. */
const MANY = 150
/** Room between a bridge edge and the bend of its lines: that of a label. */
export const STUB = 40
export const STUB_ACROSS = 20

type Which = "mean" | "predictor"

export function scalesScene(block: ScalesBlock, layout: ScalesLayout, preview: string | null): Scene {
  const ghost = preview === null ? null : (block.candidates.find((candidate) => candidate.link === preview) ?? null)
  const shown = ghost === layout.subject ? null : ghost
  return {
    width: layout.width,
    height: layout.height,
    marks: [
      ...bridgeMarks(block, layout, shown),
      ...panelMarks(block, layout, shown, "mean"),
      ...panelMarks(block, layout, shown, "predictor"),
      ...headMarks(block, layout),
      ...layout.held.map((line, i) => label(`held-${i}`, "held", 4, layout.heldTop + 12 + i * 15, LABEL_SIZE, "start", line)),
    ],
  }
}

const label = (
  key: string,
  role: string,
  x: number,
  y: number,
  size: number,
  anchor: "start" | "middle" | "end",
  text: string,
): Extract<SceneMark, { type: "text" }> => ({ type: "text", key, role, x: tenth(x), y: tenth(y), size, anchor, text })

const path = (key: string, role: string, d: string): readonly SceneMark[] => (d === "" ? [] : [{ type: "path", key, role, d }])

function rect(key: string, role: string, box: Box): SceneMark {
  return {
    type: "rect",
    key,
    role,
    x: tenth(box.left),
    y: tenth(box.top),
    width: tenth(Math.max(0, box.right - box.left)),
    height: tenth(Math.max(0, box.bottom - box.top)),
  }
}

/** The label of an axis, unit in brackets. */
const withUnit = (text: string, unit: string | null): string => (unit === null ? text : `${text} (${unit})`)

// ————— Titles —————

function headMarks(block: ScalesBlock, layout: ScalesLayout): readonly SceneMark[] {
  const { mean, predictor, bridge, subject } = layout
  const beside = layout.arrangement === "beside"
  const head = (panel: PanelLayout): number => panel.frame.top - (block.split === null ? 32 : 50)
  const room = (panel: PanelLayout): number => panel.frame.right - panel.frame.left + (beside ? 30 : 0)
  const anchor = beside ? ("end" as const) : ("start" as const)
  const edge = beside ? predictor.frame.right : predictor.frame.left
  const marks: SceneMark[] = [
    label("title-mean", "title", mean.frame.left, head(mean), TITLE_SIZE, "start", "Mean scale, μ"),
    label(
      "sub-mean",
      "sub",
      mean.frame.left,
      head(mean) + 16,
      LABEL_SIZE,
      "start",
      fitted(withUnit(block.response.label, block.response.unit), LABEL_SIZE, room(mean)),
    ),
    label("title-predictor", "title", edge, head(predictor), TITLE_SIZE, anchor, "Linear-predictor scale, η"),
    label(
      "sub-predictor",
      "sub",
      edge,
      head(predictor) + 16,
      LABEL_SIZE,
      anchor,
      fitted(`η = ${subject.formula}`, LABEL_SIZE, room(predictor)),
    ),
  ]
  const falling = falls(subject.bridge)
  if (beside) {
    const middle = (bridge.frame.left + bridge.frame.right) / 2
    const width = bridge.frame.right - bridge.frame.left
    marks.push(
      label("bridge-name", "ink", middle, bridge.frame.top - 8, LABEL_SIZE, "middle", fitted(subject.link, LABEL_SIZE, width - 50)),
      label("bridge-mu", "symbol ink", bridge.frame.left, bridge.frame.top - 8, TITLE_SIZE, "middle", "μ"),
      label("bridge-eta", "symbol ink", bridge.frame.right, bridge.frame.top - 8, TITLE_SIZE, "middle", "η"),
    )
    const foot = falling ? "larger μ meet smaller η" : "each μ meets its η"
    brokenIntoLines(foot, TICK_SIZE, width - 28).forEach((line, i) => {
      marks.push(label(`bridge-foot-${i}`, "sub", middle, bridge.frame.bottom + 18 + i * 14, TICK_SIZE, "middle", line))
    })
  } else {
    marks.push(
      label("bridge-mu", "symbol ink", bridge.frame.left - 12, bridge.frame.top + 4, TITLE_SIZE, "end", "μ"),
      label("bridge-eta", "symbol ink", bridge.frame.left - 12, bridge.frame.bottom + 4, TITLE_SIZE, "end", "η"),
      label("bridge-name", "title", bridge.frame.left, bridge.frame.top - 12, TITLE_SIZE, "start", `Bridge, ${subject.link}`),
      label(
        "bridge-foot-0",
        "sub",
        bridge.frame.right,
        bridge.frame.top - 12,
        TICK_SIZE,
        "end",
        falling ? "larger μ meet smaller η" : "each μ meets its η",
      ),
    )
  }
  if (block.split !== null) marks.push(...splitKey(block.split, layout))
  return marks
}

/** Which shape stands for which level, in a row over the mean panel. */
function splitKey(split: NonNullable<ScalesBlock["split"]>, layout: ScalesLayout): readonly SceneMark[] {
  const { frame } = layout.mean
  const y = frame.top - 17
  const marks: SceneMark[] = [label("key-name", "sub", frame.left, y, TICK_SIZE, "start", `${split.name}:`)]
  let x = frame.left + textWidth(`${split.name}:`, TICK_SIZE) + 12
  const end = layout.arrangement === "beside" ? layout.predictor.frame.right : frame.right
  split.levels.forEach((level, i) => {
    const text = fitted(level, TICK_SIZE, 160)
    const width = textWidth(text, TICK_SIZE) + 26
    if (x + width > end) return
    marks.push(...path(`key-shape-${i}`, "point", shapePath(shapeOf(i), x, y - 4, 4.2)))
    marks.push(label(`key-${i}`, "ink", x + 9, y, TICK_SIZE, "start", text))
    x += width
  })
  return marks
}

// ————— Panels —————

function panelMarks(block: ScalesBlock, layout: ScalesLayout, ghost: ScalesCandidate | null, which: Which): readonly SceneMark[] {
  const panel = layout[which]
  const { frame } = panel
  const marks: SceneMark[] = [...beyondData(block, panel, which)]
  if (which === "mean") marks.push(...impossible(block, panel))
  else if (panel.y.from < 0 && panel.y.to > 0) {
    marks.push(...path("zero", "guide", `M${tenth(frame.left)} ${tenth(panel.y.place(0))}H${tenth(frame.right)}`))
  }
  const content = block.across.levels === null ? curveMarks(block, layout, ghost, which) : levelMarks(block, layout, ghost, which)
  marks.push(...content, rect(`${which}-frame`, "frame", frame), ...axisMarks(block, panel, which))
  return [{ type: "group", key: which, role: `panel ${which}`, marks }]
}

function axisMarks(block: ScalesBlock, panel: PanelLayout, which: Which): readonly SceneMark[] {
  const { frame } = panel
  const marks: SceneMark[] = []
  const out = panel.side === "left" ? -1 : 1
  const edge = panel.side === "left" ? frame.left : frame.right
  let d = ""
  for (const tick of panel.yTicks) {
    d += `M${tenth(edge)} ${tenth(tick.place)}h${out * 4}`
    marks.push(
      label(`y-${tick.value}`, "tick-text", edge + out * 8, tick.place + TICK_SIZE * 0.36, TICK_SIZE, out < 0 ? "end" : "start", tick.text),
    )
  }
  for (const tick of panel.xTicks) {
    d += `M${tenth(tick.place)} ${tenth(frame.bottom)}v4`
    marks.push(label(`x-${tick.value}`, "tick-text", tick.place, frame.bottom + 17 + tick.row * 14, TICK_SIZE, "middle", tick.text))
  }
  const rows = panel.xTicks.some((tick) => tick.row > 0) ? 14 : 0
  const name = fitted(withUnit(block.across.label, block.across.unit), LABEL_SIZE, frame.right - frame.left)
  return [
    ...path(`${which}-ticks`, "tick", d),
    ...marks,
    label(`${which}-x`, "ink", (frame.left + frame.right) / 2, frame.bottom + 36 + rows, LABEL_SIZE, "middle", name),
  ]
}

/** Shade over what lies outside the data, said in words over the frame where there is room. */
function beyondData(block: ScalesBlock, panel: PanelLayout, which: Which): readonly SceneMark[] {
  if (block.across.levels !== null) return []
  const { frame, x } = panel
  const marks: SceneMark[] = []
  const words = "outside the data"
  const width = textWidth(words, 10.5)
  const low = Math.min(frame.right, x.place(block.data[0]))
  const high = Math.max(frame.left, x.place(block.data[1]))
  if (low > frame.left + 0.5) marks.push(rect("beyond-low", "beyond-data", { ...frame, right: low }))
  if (high < frame.right - 0.5) marks.push(rect("beyond-high", "beyond-data", { ...frame, left: high }))
  const free = frame.right - frame.left > 2 * width + 20
  if (free && which === "predictor" && low - frame.left > 36)
    marks.push(label("beyond-low-text", "sub", frame.left, frame.top - 4, 10.5, "start", words))
  else if (free && which === "mean" && frame.right - high > 36) {
    marks.push(label("beyond-high-text", "sub", frame.right - 14, frame.top - 4, 10.5, "end", words))
  }
  return marks
}

/** Means that cannot be: hatched, with a line at the last possible one. */
function impossible(block: ScalesBlock, panel: PanelLayout): readonly SceneMark[] {
  const { frame, y } = panel
  const [lowest, highest] = block.possible
  const marks: SceneMark[] = []
  if (highest < y.to) {
    const edge = y.place(highest)
    marks.push(...path("hatch-high", "hatch", hatching({ ...frame, bottom: edge }, 6)))
    marks.push(...path("end-high", "end-of-range", `M${tenth(frame.left)} ${tenth(edge)}H${tenth(frame.right)}`))
  }
  if (lowest > y.from) {
    const edge = y.place(lowest)
    marks.push(...path("hatch-low", "hatch", hatching({ ...frame, top: edge }, 6)))
    marks.push(...path("end-low", "end-of-range", `M${tenth(frame.left)} ${tenth(edge)}H${tenth(frame.right)}`))
  }
  return marks
}

/** One candidate's values on one scale; the ghost's η is moved to the subject's axis. */
interface Values {
  readonly middle: Float64Array
  readonly low: Float64Array
  readonly high: Float64Array
}

function valuesOf(curve: ScalesCurve, which: Which, moved: (eta: number) => number): Values {
  if (which === "mean") return { middle: curve.mu, low: curve.muLow, high: curve.muHigh }
  return { middle: curve.eta.map(moved), low: curve.etaLow.map(moved), high: curve.etaHigh.map(moved) }
}

const stay = (eta: number): number => eta

function curveMarks(block: ScalesBlock, layout: ScalesLayout, ghost: ScalesCandidate | null, which: Which): readonly SceneMark[] {
  const { subject } = layout
  const marks: SceneMark[] = []
  const panel = layout[which]
  // Other candidates' means can be compared on one axis, their η only where the block has aligned them. Split curves of every
  // candidate would be a thicket: there the others are seen when previewed.
  const others = which === "mean" || block.aligned ? (block.split === null ? block.candidates : []) : []
  for (const other of others) {
    if (other === subject || other === ghost) continue
    for (const curve of other.curves)
      marks.push(...lineMarks(other.link, curve, valuesOf(curve, which, stay), panel, linkRole(other.link), 0))
  }
  subject.curves.forEach((curve, i) => {
    marks.push(...bandMarks(subject.link, curve, valuesOf(curve, which, stay), panel, linkRole(subject.link)))
    const level = levelIndex(block, curve, i)
    marks.push(...lineMarks(subject.link, curve, valuesOf(curve, which, stay), panel, `${linkRole(subject.link)} chosen`, level))
    marks.push(...endMarks(subject.link, curve, valuesOf(curve, which, stay), panel, linkRole(subject.link)))
  })
  if (ghost !== null) {
    const moved = block.aligned ? stay : onSubjectScale(subject, ghost)
    ghost.curves.forEach((curve, i) => {
      const values = valuesOf(curve, which, moved)
      marks.push(...bandMarks(`ghost-${ghost.link}`, curve, ordered(values), panel, `${linkRole(ghost.link)} ghost`))
      marks.push(...lineMarks(`ghost-${ghost.link}`, curve, values, panel, `${linkRole(ghost.link)} ghost`, levelIndex(block, curve, i)))
      marks.push(...endMarks(`ghost-${ghost.link}`, curve, values, panel, linkRole(ghost.link)))
    })
    if (which === "predictor") {
      ghost.points.forEach((points, i) => {
        const at = points.working.map(moved)
        marks.push(...pointMarks(`ghost-points-${i}`, points, at, points.weight, panel, "circle", `ghost ${linkRole(ghost.link)}`, 5))
      })
    }
  }
  const points: SceneMark[] = []
  subject.points.forEach((group, i) => {
    const series = block.split === null ? 0 : Math.max(0, block.split.levels.indexOf(group.level ?? ""))
    const role = ghost !== null && which === "predictor" ? "held-back" : ""
    points.push(
      ...(which === "mean"
        ? pointMarks(`points-${i}`, group, group.mean, group.rows, panel, shapeOf(series), role, 5)
        : pointMarks(`points-${i}`, group, group.working, group.weight, panel, shapeOf(series), role, 6)),
    )
  })
  marks.push(...points)
  if (block.split !== null) marks.push(...lineLabels(subject, panel, which))
  return marks
}

const levelIndex = (block: ScalesBlock, curve: ScalesCurve, i: number): number =>
  block.split === null ? 0 : Math.max(0, curve.level === null ? i : block.split.levels.indexOf(curve.level))

/** A moved band may have come out upside down. */
const ordered = (values: Values): Values => ({
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
function placeOrEdge(panel: PanelLayout, value: number): number {
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
function pointMarks(
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
  const scale = n > 400 ? 0.45 : n > 60 ? 0.65 : 1
  const marks: SceneMark[] = []
  const dense = ["", "", "", ""]
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
    const r = Math.max(1.5, largest * share * scale)
    if (many) dense[i % dense.length] += shapePath(shape, x, y, r)
    else if (shape === "circle")
      marks.push({ type: "circle", key: `${key}-${i}`, role: `point ${role}`, x: tenth(x), y: tenth(y), r: tenth(r) })
    else marks.push(...path(`${key}-${i}`, `point ${role}`, shapePath(shape, x, y, r)))
  }
  const gathered = many ? dense.flatMap((d, i) => path(`${key}-many-${i}`, `point many ${role}`, d)) : []
  return [...marks, ...gathered, ...path(`${key}-off`, "point off", off)]
}

/** Names of split levels on their lines, where there is a place clear of points, lines and one another; none where there is not. */
function lineLabels(subject: ScalesCandidate, panel: PanelLayout, which: Which): readonly SceneMark[] {
  const { frame } = panel
  const taken: Box[] = []
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
      for (const dy of [-8, 17, -18, 27]) {
        const box = { left: x - width / 2 - 2, right: x + width / 2 + 2, top: y + dy - 10, bottom: y + dy + 4 }
        const insideFrame =
          box.left > frame.left + 3 && box.right < frame.right - 3 && box.top > frame.top + 3 && box.bottom < frame.bottom - 3
        if (!insideFrame || taken.some((other) => boxesMeet(box, other))) continue
        taken.push(box)
        marks.push(label(`line-label-${curve.level}`, "ink", x, y + dy, TICK_SIZE, "middle", text))
        break search
      }
    }
  }
  return marks
}

// ————— A category across: points with intervals —————

function levelMarks(block: ScalesBlock, layout: ScalesLayout, ghost: ScalesCandidate | null, which: Which): readonly SceneMark[] {
  const { subject } = layout
  const panel = layout[which]
  const band = panel.x.place(1) - panel.x.place(0)
  const groups = Math.max(1, subject.curves.length)
  const room = (band * 0.86) / groups
  const others =
    (which === "mean" || block.aligned) && block.split === null
      ? block.candidates.filter((other) => other !== subject && other !== ghost)
      : []
  const step = Math.min(13, room / (3 + others.length))
  const marks: SceneMark[] = []
  subject.curves.forEach((curve, g) => {
    const centre = (g - (groups - 1) / 2) * room
    const level = levelIndex(block, curve, g)
    marks.push(
      ...intervalMarks(
        subject.link,
        curve,
        valuesOf(curve, which, stay),
        panel,
        `${linkRole(subject.link)} solid level-${level}`,
        centre + step / 2,
        true,
      ),
    )
    others.forEach((other, k) => {
      const same = other.curves[g]
      if (same !== undefined) {
        marks.push(
          ...intervalMarks(
            other.link,
            same,
            valuesOf(same, which, stay),
            panel,
            `${linkRole(other.link)} solid others`,
            centre + step * (1.4 + k),
            false,
          ),
        )
      }
    })
    if (ghost !== null) {
      const same = ghost.curves[g]
      const moved = block.aligned ? stay : onSubjectScale(subject, ghost)
      if (same !== undefined) {
        marks.push(
          ...intervalMarks(
            `ghost-${ghost.link}`,
            same,
            ordered(valuesOf(same, which, moved)),
            panel,
            `${linkRole(ghost.link)} ghost`,
            centre + step * (1.4 + others.length),
            true,
          ),
        )
      }
    }
    const points = subject.points[g]
    if (points === undefined) return
    const [values, size, largest] =
      which === "mean" ? ([points.mean, points.rows, 5] as const) : ([points.working, points.weight, 6] as const)
    marks.push(
      ...pointMarks(
        `points-${g}`,
        points,
        values,
        size,
        panel,
        shapeOf(block.split === null ? 0 : level),
        "",
        largest,
        centre - step * 0.75,
      ),
    )
  })
  return marks
}

function intervalMarks(
  key: string,
  curve: ScalesCurve,
  values: Values,
  panel: PanelLayout,
  role: string,
  shift: number,
  interval: boolean,
): readonly SceneMark[] {
  const marks: SceneMark[] = []
  const { top, bottom } = panel.frame
  const within = (y: number): number => Math.min(bottom, Math.max(top, y))
  for (let i = 0; i < curve.x.length; i += 1) {
    const y = panel.y.place(values.middle[i] as number)
    if (!Number.isFinite(y) || y < top || y > bottom) continue
    const x = panel.x.place(curve.x[i] as number) + shift
    const id = `${key}-${curve.level ?? ""}-${i}`
    if (interval) {
      const low = within(placeOrEdge(panel, values.low[i] as number))
      const high = within(placeOrEdge(panel, values.high[i] as number))
      if (Number.isFinite(low) && Number.isFinite(high)) {
        marks.push(
          ...path(
            `bar-${id}`,
            `bar ${role}`,
            `M${tenth(x)} ${tenth(low)}V${tenth(high)}M${tenth(x - 3)} ${tenth(low)}h6M${tenth(x - 3)} ${tenth(high)}h6`,
          ),
        )
      }
      marks.push(...path(`fitted-${id}`, `fitted solid ${role}`, shapePath("diamond", x, y, 3.6)))
    } else marks.push(...path(`fitted-${id}`, `bar ${role}`, `M${tenth(x - 4)} ${tenth(y)}h8`))
  }
  return marks
}

// ————— The bridge —————

function bridgeMarks(block: ScalesBlock, layout: ScalesLayout, ghost: ScalesCandidate | null): readonly SceneMark[] {
  const { bridge, subject } = layout
  const beside = layout.arrangement === "beside"
  const runs = beside ? ("down" as const) : ("across" as const)
  const [near, far] = beside ? [bridge.frame.left, bridge.frame.right] : [bridge.frame.top, bridge.frame.bottom]
  const stub = beside ? STUB : STUB_ACROSS
  const edges = { mu: bridge.mu, eta: bridge.eta, runs }
  const role = linkRole(subject.link)
  const falling = falls(subject.bridge)
  const most = beside ? (falling ? 6 : Math.max(5, Math.floor((bridge.frame.bottom - bridge.frame.top) / 26))) : falling ? 5 : 8
  const marks: SceneMark[] = []

  const used = usedMeans(subject)
  if (used !== null) {
    const etas = used.map((mu) => etaAt(subject.bridge, mu))
    const ends = etas.map((eta) => bridge.eta.place(eta))
    const [from, to] = ends as [number, number]
    if (Number.isFinite(from) && Number.isFinite(to)) {
      const low = Math.min(bridge.eta.start, bridge.eta.end)
      const high = Math.max(bridge.eta.start, bridge.eta.end)
      const within = (place: number): number => Math.min(high, Math.max(low, place))
      const means = used.map((mu) => bridge.mu.place(mu)) as [number, number]
      marks.push(...path("used", `used ${role}`, joinArea(runs, near, far, means, [within(from), within(to)], stub)))
    }
  }

  const faded = ghost === null ? "" : " held-back"
  const hairs = bridgeHairs(subject.bridge, edges, falling ? 13 : 7)
  marks.push(
    ...path("hairs", `hair solid ${role}${faded}`, hairs.map((line) => joinPath(runs, near, far, line.from, line.to, stub)).join("")),
  )
  const labelled = labelledLines(subject.bridge, edges, most)
  for (const line of labelled) {
    marks.push(...path(`join-${line.muText}`, `join solid ${role}${faded}`, joinPath(runs, near, far, line.from, line.to, stub)))
  }
  if (ghost !== null) {
    const moved = block.aligned ? stay : onSubjectScale(subject, ghost)
    const joins = labelled.flatMap((line) => {
      const to = bridge.eta.place(moved(etaAt(ghost.bridge, line.mu)))
      const inside = Number.isFinite(to) && (to - bridge.eta.start) * (to - bridge.eta.end) <= 0
      return inside ? [joinPath(runs, near, far, line.from, to, stub)] : []
    })
    marks.push(...path("ghost-joins", `join ghost ${linkRole(ghost.link)}`, joins.join("")))
  }
  // Ends last, so that no line runs through a number.
  for (const line of labelled) {
    if (beside) {
      marks.push(label(`mu-${line.muText}`, "halo ink", near + 5, line.from + TICK_SIZE * 0.36, TICK_SIZE, "start", line.muText))
      marks.push(label(`eta-${line.muText}`, "halo ink", far - 5, line.to + TICK_SIZE * 0.36, TICK_SIZE, "end", line.etaText))
    } else {
      marks.push(label(`mu-${line.muText}`, "halo ink", line.from, near + 14, TICK_SIZE, "middle", line.muText))
      marks.push(label(`eta-${line.muText}`, "halo ink", line.to, far - 6, TICK_SIZE, "middle", line.etaText))
    }
  }
  if (!beside) {
    const { left, right, top, bottom } = bridge.frame
    marks.push(
      ...path("bridge-edges", "frame", `M${tenth(left)} ${tenth(top)}H${tenth(right)}M${tenth(left)} ${tenth(bottom)}H${tenth(right)}`),
    )
  }
  return [{ type: "group", key: "bridge", role: "bridge", marks }]
}

/** The span of fitted means inside the data: the part of the link that these data use. */
function usedMeans(subject: ScalesCandidate): readonly [number, number] | null {
  let low = Number.POSITIVE_INFINITY
  let high = Number.NEGATIVE_INFINITY
  for (const curve of subject.curves) {
    curve.mu.forEach((mu, i) => {
      if (curve.inside[i] !== 1 || !Number.isFinite(mu)) return
      low = Math.min(low, mu)
      high = Math.max(high, mu)
    })
  }
  const first = subject.bridge.mu[0]
  const last = subject.bridge.mu.at(-1)
  if (low > high || first === undefined || last === undefined) return null
  return [Math.max(low, first), Math.min(high, last)]
}
