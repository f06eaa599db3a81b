// Any figure as a scene: its panels side by side where there is room and under each other where there is not, each with axes, ticks and its
// marks. Series keep one colour and one shape throughout a figure and are named in a key where there is more than one.

import type { Axis, Figure, Mark, Panel } from "../../cells/figure/figure.ts"
import { footTicks, levelTicks, linearScale, type Scale, sideTicks, type Tick } from "./axis.ts"
import { bandPath, Dots, linePath, type Shape, shapeOf, shapePath } from "./curve.ts"
import { type Box, fitted, type Scene, type SceneMark, tenth, textWidth } from "./scene.ts"

const TICK_SIZE = 11.5
const LABEL_SIZE = 12
const LEAST_PANEL = 260
const GAP = 30
/** More points than this are drawn as a few paths. */
const MANY = 150

/** The scene of a figure at a width. */
export function figureScene(figure: Figure, width: number): Scene {
  const series = seriesOf(figure)
  const columns = Math.max(1, Math.min(figure.panels.length, Math.floor((width + GAP) / (LEAST_PANEL + GAP))))
  const panelWidth = Math.min(520, (width - GAP * (columns - 1)) / columns)
  const height = Math.round(Math.min(300, Math.max(180, panelWidth * 0.62)))
  const key = series.length > 1 ? keyMarks(series, width) : { marks: [], height: 0 }
  const rowHeight = height + 26 + 46
  const rows = Math.ceil(figure.panels.length / columns)
  return {
    width,
    height: key.height + rows * rowHeight + (rows - 1) * 10,
    marks: [
      ...key.marks,
      ...figure.panels.map((panel, i) => {
        const left = (i % columns) * (panelWidth + GAP)
        const top = key.height + Math.floor(i / columns) * (rowHeight + 10)
        return panelGroup(panel, `panel-${i}`, { left, top, right: left + panelWidth, bottom: top + rowHeight }, height, series)
      }),
    ],
  }
}

interface Series {
  readonly name: string
  /** The shape of its points; null where it has lines, bands or bars only. */
  readonly shape: Shape | null
}

/** All series in order of appearance; shapes are dealt out to those that have points. */
function seriesOf(figure: Figure): readonly Series[] {
  const marks = figure.panels.flatMap((panel) => panel.marks)
  const names = [...new Set(marks.map((mark) => mark.series))]
  let shapes = 0
  return names.map((name) => {
    const hasPoints = marks.some((mark) => mark.series === name && mark.type === "points")
    return { name, shape: hasPoints ? shapeOf(shapes++) : null }
  })
}

function keyMarks(series: readonly Series[], width: number): { readonly marks: readonly SceneMark[]; readonly height: number } {
  const marks: SceneMark[] = []
  let x = 6
  let y = 12
  for (const [i, one] of series.entries()) {
    const text = fitted(one.name, TICK_SIZE, width - 30)
    const needs = textWidth(text, TICK_SIZE) + 34
    if (x > 6 && x + needs > width) {
      x = 6
      y += 18
    }
    marks.push(
      one.shape === null
        ? { type: "path", key: `key-${i}`, role: `curve chosen series-${i % 6}`, d: `M${tenth(x - 5)} ${y - 4}h14` }
        : { type: "path", key: `key-${i}`, role: `point of-series series-${i % 6}`, d: shapePath(one.shape, x + 2, y - 4, 4) },
    )
    marks.push({ type: "text", key: `key-text-${i}`, role: "ink", x: tenth(x + 14), y, size: TICK_SIZE, anchor: "start", text })
    x += needs
  }
  return { marks, height: y + 10 }
}

const axisLabel = (axis: Axis): string => (axis.unit === null ? axis.label : `${axis.label} (${axis.unit})`)

function panelGroup(panel: Panel, key: string, box: Box, height: number, series: readonly Series[]): SceneMark {
  const top = box.top + 26
  const bottom = top + height
  const rough = ticksUp(panel.y, linearScale(...axisRange(panel.y), bottom, top))
  const left = box.left + Math.ceil(Math.max(18, ...rough.map((tick) => textWidth(tick.text, TICK_SIZE)))) + 12
  const frame = { left, top, right: box.right - 8, bottom }
  const x = linearScale(...axisRange(panel.x), frame.left, frame.right)
  const y = linearScale(...axisRange(panel.y), frame.bottom, frame.top)
  const head = panel.title === null ? axisLabel(panel.y) : `${panel.title}: ${axisLabel(panel.y)}`
  const xTicks = panel.x.levels === null ? footTicks(x, TICK_SIZE) : levelTicks(x, panel.x.levels, TICK_SIZE)
  const yTicks = ticksUp(panel.y, y)
  const marks: SceneMark[] = [
    {
      type: "text",
      key: "head",
      role: "ink",
      x: frame.left,
      y: box.top + 16,
      size: LABEL_SIZE,
      anchor: "start",
      text: fitted(head, LABEL_SIZE, frame.right - frame.left),
    },
  ]
  if (panel.y.from < 0 && panel.y.to > 0 && panel.y.levels === null) {
    marks.push({ type: "path", key: "zero", role: "guide", d: `M${tenth(frame.left)} ${tenth(y.place(0))}H${tenth(frame.right)}` })
  }
  panel.marks.forEach((mark, i) => {
    marks.push(
      ...markMarks(
        mark,
        `mark-${i}`,
        series.findIndex((one) => one.name === mark.series),
        series,
        x,
        y,
        frame,
      ),
    )
  })
  marks.push(
    {
      type: "rect",
      key: "frame",
      role: "frame",
      x: tenth(frame.left),
      y: tenth(frame.top),
      width: tenth(frame.right - frame.left),
      height: tenth(height),
    },
    ...tickMarks(xTicks, yTicks, frame),
    {
      type: "text",
      key: "x",
      role: "ink",
      x: tenth((frame.left + frame.right) / 2),
      y: frame.bottom + 36 + (xTicks.some((tick) => tick.row > 0) ? 10 : 0),
      size: LABEL_SIZE,
      anchor: "middle",
      text: fitted(axisLabel(panel.x), LABEL_SIZE, frame.right - frame.left),
    },
  )
  return { type: "group", key, role: "panel", marks }
}

const axisRange = (axis: Axis): readonly [number, number] =>
  axis.levels === null ? [axis.from, axis.to] : [-0.5, axis.levels.length - 0.5]

const ticksUp = (axis: Axis, scale: Scale): readonly Tick[] =>
  axis.levels === null
    ? sideTicks(scale)
    : axis.levels.map((level, i) => ({ value: i, place: scale.place(i), text: fitted(level, TICK_SIZE, 110), row: 0 }))

function tickMarks(xTicks: readonly Tick[], yTicks: readonly Tick[], frame: Box): readonly SceneMark[] {
  let d = ""
  const marks: SceneMark[] = []
  for (const tick of yTicks) {
    d += `M${tenth(frame.left)} ${tenth(tick.place)}h-4`
    marks.push({
      type: "text",
      key: `y-${tick.value}`,
      role: "tick-text",
      x: tenth(frame.left - 8),
      y: tenth(tick.place + TICK_SIZE * 0.36),
      size: TICK_SIZE,
      anchor: "end",
      text: tick.text,
    })
  }
  for (const tick of xTicks) {
    d += `M${tenth(tick.place)} ${tenth(frame.bottom)}v4`
    marks.push({
      type: "text",
      key: `x-${tick.value}`,
      role: "tick-text",
      x: tenth(tick.place),
      y: tenth(frame.bottom + 17 + tick.row * 13),
      size: TICK_SIZE,
      anchor: "middle",
      text: tick.text,
    })
  }
  return [{ type: "path", key: "ticks", role: "tick", d }, ...marks]
}

function markMarks(mark: Mark, key: string, series: number, all: readonly Series[], x: Scale, y: Scale, frame: Box): readonly SceneMark[] {
  const role = `series-${series % 6}`
  switch (mark.type) {
    case "points":
      return pointsOf(mark, key, all[series]?.shape ?? "circle", all.length === 1 ? "" : ` of-series ${role}`, x, y, frame)
    case "line": {
      const points = Array.from(mark.x, (at, i) => ({ x: x.place(at), y: y.place(mark.y[i] as number) }))
      return [{ type: "path", key, role: `curve chosen ${role}`, d: linePath(points, frame.top, frame.bottom) }]
    }
    case "band": {
      const at = Array.from(mark.x, (value) => x.place(value))
      const low = Array.from(mark.low, (value) => edgeOr(y, value, frame))
      const high = Array.from(mark.high, (value) => edgeOr(y, value, frame))
      return [{ type: "path", key, role: `band ${role}`, d: bandPath(at, low, high, frame.top, frame.bottom) }]
    }
    case "bars": {
      const foot = y.place(Math.max(0, y.from))
      let d = ""
      mark.counts.forEach((count, i) => {
        const [from, to] = [x.place(mark.edges[i] as number), x.place(mark.edges[i + 1] as number)]
        if (count > 0) d += `M${tenth(from)} ${tenth(foot)}V${tenth(y.place(count))}H${tenth(to)}V${tenth(foot)}Z`
      })
      return [{ type: "path", key, role: `bars ${role}`, d }]
    }
    default: {
      const never: never = mark
      return never
    }
  }
}

const edgeOr = (y: Scale, value: number, frame: Box): number => {
  if (value === Number.POSITIVE_INFINITY) return frame.top
  return value === Number.NEGATIVE_INFINITY ? frame.bottom : y.place(value)
}

function pointsOf(
  mark: Extract<Mark, { type: "points" }>,
  key: string,
  shape: Shape,
  role: string,
  x: Scale,
  y: Scale,
  frame: Box,
): readonly SceneMark[] {
  const n = mark.x.length
  const greatest = mark.size === null ? 1 : mark.size.reduce((most, size) => Math.max(most, size), 0)
  const scale = n > 2000 ? 0.4 : n > 400 ? 0.5 : n > 60 ? 0.7 : 1
  const marks: SceneMark[] = []
  const dots = new Dots()
  for (let i = 0; i < n; i += 1) {
    const [atX, atY] = [x.place(mark.x[i] as number), y.place(mark.y[i] as number)]
    if (!Number.isFinite(atX) || !Number.isFinite(atY) || atY < frame.top - 1 || atY > frame.bottom + 1) continue
    const share = mark.size === null || greatest === 0 ? 0.8 : Math.sqrt((mark.size[i] as number) / greatest)
    const r = Math.max(1.3, 5 * share * scale)
    // A cloud of many points tells its series by colour alone; the key and the text say which is which.
    if (n > MANY) dots.add(atX, atY, r)
    else marks.push({ type: "path", key: `${key}-${i}`, role: `point${role}`, d: shapePath(shape, atX, atY, r) })
  }
  for (const one of dots.paths()) marks.push({ type: "path", key: `${key}-many-${one.key}`, role: `${one.role}${role}`, d: one.d })
  return marks
}
