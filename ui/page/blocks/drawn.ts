// A scene as lit templates: every mark an SVG element under its key, so that a redraw touches only what changed.

import { type nothing, svg, type TemplateResult } from "lit"
import { repeat } from "lit/directives/repeat.js"
import type { SceneMark } from "../../drawing/scene.ts"

/** Marks as the children of an `<svg>` or `<g>`. */
export const drawn = (marks: readonly SceneMark[]): unknown => repeat(marks, keyOf, oneMark)

const keyOf = (mark: SceneMark): string => `${mark.type} ${mark.key}`

function oneMark(mark: SceneMark): TemplateResult | typeof nothing {
  switch (mark.type) {
    case "path":
      return svg`<path class=${mark.role} d=${mark.d}></path>`
    case "circle":
      return svg`<circle class=${mark.role} cx=${mark.x} cy=${mark.y} r=${mark.r}></circle>`
    case "rect":
      return svg`<rect class=${mark.role} x=${mark.x} y=${mark.y} width=${mark.width} height=${mark.height}></rect>`
    case "text":
      return svg`<text class=${mark.role} x=${mark.x} y=${mark.y} font-size=${mark.size} text-anchor=${mark.anchor}>${mark.text}</text>`
    case "group":
      return svg`<g class=${mark.role}>${drawn(mark.marks)}</g>`
    default: {
      const never: never = mark
      return never
    }
  }
}
