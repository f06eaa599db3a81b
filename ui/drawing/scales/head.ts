// What is written over the panels and the bridge: which scale is which, what the response is, how the link goes, and which shape stands for
// which level.

import type { ScalesBlock } from "../../../cells/block.ts"
import { shapeOf, shapePath } from "../curve.ts"
import { fitted, type SceneMark, textWidth } from "../scene.ts"
import { falls } from "./bridge.ts"
import { LABEL_SIZE, type PanelLayout, type ScalesLayout, TICK_SIZE, TITLE_SIZE } from "./layout.ts"
import { label, path, withUnit } from "./pieces.ts"

export function headMarks(block: ScalesBlock, layout: ScalesLayout): readonly SceneMark[] {
  const { mean, predictor, bridge, subject } = layout
  const beside = layout.arrangement === "beside"
  const head = (panel: PanelLayout): number => panel.frame.top - (block.split === null ? 40 : 58)
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
    const foot = falling ? "larger μ, smaller η" : "each μ meets its η"
    // It stands in a line with the numbers of both panels, which may reach under the bridge; where it is too tight it goes without saying.
    const reach = (panel: PanelLayout): number =>
      Math.max(0, ...panel.xTicks.map(({ place, text }) => Math.abs(place - middle) * -1 + textWidth(text, TICK_SIZE) / 2 + width / 2))
    const free = width - 2 * Math.max(12, reach(mean) + 6, reach(predictor) + 6)
    if (textWidth(foot, TICK_SIZE) <= free) {
      marks.push(label("bridge-foot", "sub", middle, bridge.frame.bottom + 18, TICK_SIZE, "middle", foot))
    }
  } else {
    marks.push(
      label("bridge-mu", "symbol ink", bridge.frame.left - 12, bridge.frame.top + 4, TITLE_SIZE, "end", "μ"),
      label("bridge-eta", "symbol ink", bridge.frame.left - 12, bridge.frame.bottom + 4, TITLE_SIZE, "end", "η"),
      label("bridge-name", "title", bridge.frame.left, bridge.frame.top - 12, TITLE_SIZE, "start", `Bridge, ${subject.link}`),
      label(
        "bridge-foot",
        "sub",
        bridge.frame.right,
        bridge.frame.top - 12,
        TICK_SIZE,
        "end",
        falling ? "larger μ, smaller η" : "each μ meets its η",
      ),
    )
  }
  if (block.split !== null) marks.push(...splitKey(block.split, layout))
  return marks
}

/** Which shape stands for which level, in a row over the mean panel. */
function splitKey(split: NonNullable<ScalesBlock["split"]>, layout: ScalesLayout): readonly SceneMark[] {
  const { frame } = layout.mean
  const y = frame.top - 22
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
