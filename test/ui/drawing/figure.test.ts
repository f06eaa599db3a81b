// Any figure as a scene: panels side by side or over each other, marks inside their frames, a key where there are several series.

import { describe, expect, it } from "vitest"
import { figureScene } from "../../../ui/drawing/figure.ts"
import { boxesMeet, textBox, textsOf } from "../../../ui/drawing/scene.ts"
import { figureSample } from "../../browser/gallery/samples.ts"

describe("a figure", () => {
  it.each([340, 500, 700, 940])("has no text on another and none past its edge, at a width of %i", (width) => {
    const scene = figureScene(figureSample.figure, width)
    const texts = textsOf(scene.marks)
    texts.forEach((text, i) => {
      expect(textBox(text).right).toBeLessThanOrEqual(width + 6)
      for (const other of texts.slice(i + 1))
        expect(boxesMeet(textBox(text), textBox(other)), `“${text.text}” on “${other.text}”`).toBe(false)
    })
  })

  it("puts panels under each other where two have no room", () => {
    expect(figureScene(figureSample.figure, 400).height).toBeGreaterThan(1.6 * figureScene(figureSample.figure, 900).height)
  })

  it("names its series in a key, and needs none for a single one", () => {
    const named = textsOf(figureScene(figureSample.figure, 900).marks).map((mark) => mark.text)
    expect(named).toContain("smooth")
    const [, second] = figureSample.figure.panels
    if (second === undefined) throw new Error("The sample has two panels.")
    expect(textsOf(figureScene({ panels: [second] }, 900).marks).filter((mark) => mark.text === "rows")).toHaveLength(1)
  })

  it("draws ten thousand points as a few paths", () => {
    const n = 10_000
    const marks = figureScene(
      {
        panels: [
          {
            title: null,
            x: { label: "x", unit: null, from: 0, to: 1, levels: null },
            y: { label: "y", unit: null, from: 0, to: 1, levels: null },
            marks: [
              {
                type: "points",
                series: "rows",
                x: Float64Array.from({ length: n }, (_, i) => i / n),
                y: new Float64Array(n).fill(0.5),
                size: null,
                rows: null,
              },
            ],
          },
        ],
      },
      600,
    ).marks
    const [panel] = marks
    expect(panel?.type === "group" ? panel.marks.length : 0).toBeLessThan(40)
  })
})
