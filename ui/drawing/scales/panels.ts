// One panel with all that stands in it: shade outside the data, hatching over means that cannot be, what is drawn, the frame and its axes.

import type { ScalesBlock, ScalesCandidate } from "../../../cells/block.ts"
import { fitted, hatching, type SceneMark, tenth, textWidth } from "../scene.ts"
import { curveMarks, type Which } from "./curves.ts"
import { LABEL_SIZE, type PanelLayout, type ScalesLayout, TICK_SIZE } from "./layout.ts"
import { levelMarks } from "./levels.ts"
import { label, path, rect, withUnit } from "./pieces.ts"

export function panelMarks(block: ScalesBlock, layout: ScalesLayout, ghost: ScalesCandidate | null, which: Which): readonly SceneMark[] {
  const panel = layout[which]
  const { frame } = panel
  const marks: SceneMark[] = [...beyondData(block, panel)]
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
function beyondData(block: ScalesBlock, panel: PanelLayout): readonly SceneMark[] {
  if (block.across.levels !== null) return []
  const { frame, x } = panel
  const marks: SceneMark[] = []
  const words = "outside the data"
  const width = textWidth(words, 10.5)
  const low = Math.min(frame.right, x.place(block.data[0]))
  const high = Math.max(frame.left, x.place(block.data[1]))
  // The room for points at the ends is no range of its own: it is shaded only where the range goes on beyond the data.
  const beyond = { low: block.range[0] < block.data[0], high: block.range[1] > block.data[1] }
  if (beyond.low && low > frame.left + 0.5) marks.push(rect("beyond-low", "beyond-data", { ...frame, right: low }))
  if (beyond.high && high < frame.right - 0.5) marks.push(rect("beyond-high", "beyond-data", { ...frame, left: high }))
  const free = frame.right - frame.left > 2 * width + 20
  // Said on the outer side of each panel where it can be: the inner corners belong to the signs of the bridge.
  const wide = { low: beyond.low && low - frame.left > 36, high: beyond.high && frame.right - high > 36 }
  const outer = panel.side === "left" ? ("low" as const) : ("high" as const)
  const at = wide[outer] ? outer : outer === "low" ? ("high" as const) : ("low" as const)
  if (free && wide[at]) {
    const inset = at === outer ? 0 : 14
    marks.push(
      at === "low"
        ? label("beyond-text", "sub", frame.left + inset, frame.top - 4, 10.5, "start", words)
        : label("beyond-text", "sub", frame.right - inset, frame.top - 4, 10.5, "end", words),
    )
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
