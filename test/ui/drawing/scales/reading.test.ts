// Reading off both scales: by place and by key, snapped to the grid, with the numbers the finding brought.

import { describe, expect, it } from "vitest"
import type { ScalesBlock, ScalesCurve } from "../../../../cells/block.ts"
import {
  pointed,
  pointerMarks,
  readingOf,
  readingSentence,
  type ScalesLayout,
  scalesLayout,
  steppedReading,
} from "../../../../ui/drawing/scales/index.ts"
import { beetleScales, clottingScales, levelScales } from "../../../browser/gallery/samples.ts"

const laid = (block: ScalesBlock, width: number): ScalesLayout => {
  const layout = scalesLayout(block, width)
  if (layout === null) throw new Error("The sample has curves.")
  return layout
}

describe("pointing", () => {
  it.each([390, 860])("at either panel reads the nearest grid point of the curve, at a width of %i", (width) => {
    const block = beetleScales()
    const layout = laid(block, width)
    for (const which of ["mean", "predictor"] as const) {
      const panel = layout[which]
      const at = pointed(block, layout, layout.subject, panel.x.place(1.8084), (panel.frame.top + panel.frame.bottom) / 2)
      expect(at).toEqual({ type: "curve", curve: 0, at: Math.round(((1.8084 - 1.65) / 0.29) * 200) })
    }
  })

  it("at the bridge reads the curve that passes, by the nearer edge", () => {
    const block = beetleScales()
    const layout = laid(block, 860)
    const curve = layout.subject.curves[0] as ScalesCurve
    const { frame } = layout.bridge
    const byMu = pointed(block, layout, layout.subject, frame.left + 20, layout.mean.y.place(curve.mu[100] as number))
    const byEta = pointed(block, layout, layout.subject, frame.right - 20, layout.predictor.y.place(curve.eta[100] as number))
    expect(byMu).toEqual({ type: "curve", curve: 0, at: 100 })
    expect(byEta).toEqual({ type: "curve", curve: 0, at: 100 })
  })

  it("at the bridge where no curve passes reads a pair of the link alone", () => {
    const block = beetleScales("logit", [1.75, 1.8])
    const layout = laid(block, 860)
    const at = pointed(block, layout, layout.subject, layout.bridge.frame.left + 20, layout.mean.y.place(0.97))
    expect(at?.type).toBe("bridge")
    const reading = at === null ? null : readingOf(block, layout, layout.subject, at)
    expect(reading?.x).toBeNull()
    expect(Math.abs(Number(reading?.mu) - 0.97)).toBeLessThan(0.02)
  })

  it("at a split reads the curve that is nearer", () => {
    const block = clottingScales()
    const layout = laid(block, 860)
    const [one, two] = layout.subject.curves as [ScalesCurve, ScalesCurve]
    const x = layout.predictor.x.place(4)
    const i = Math.round(((4 - 1.2) / 3.8) * 200)
    for (const [c, curve] of [one, two].entries()) {
      expect(pointed(block, layout, layout.subject, x, layout.predictor.y.place(curve.eta[i] as number))).toMatchObject({ curve: c })
    }
  })

  it("outside everything reads nothing", () => {
    const block = beetleScales()
    expect(pointed(block, laid(block, 860), laid(block, 860).subject, 5, 2)).toBeNull()
  })
})

describe("a reading", () => {
  it("gives the block's own numbers with their intervals", () => {
    const block = beetleScales()
    const layout = laid(block, 860)
    const curve = layout.subject.curves[0] as ScalesCurve
    const reading = readingOf(block, layout, layout.subject, { type: "curve", curve: 0, at: 100 })
    expect(reading?.x).toBe("1.795 log10 mg/l")
    expect(Number(reading?.mu)).toBeCloseTo(curve.mu[100] as number, 3)
    expect(reading?.muInterval).toBe(`${(curve.muLow[100] as number).toFixed(3)} to ${(curve.muHigh[100] as number).toFixed(3)}`)
    expect(Number(reading?.eta.replace("−", "-"))).toBeCloseTo(curve.eta[100] as number, 2)
    expect(reading?.caution).toBeNull()
  })

  it("says where it lies outside the data", () => {
    const block = beetleScales()
    const layout = laid(block, 860)
    const reading = readingOf(block, layout, layout.subject, { type: "curve", curve: 0, at: 200 })
    expect(reading?.caution).toBe("outside the data")
    expect(reading && readingSentence(block, layout.subject, reading)).toMatch(
      /^dose 1\.940 log10 mg\/l: under cloglog, mean .*95 %.*, outside the data\.$/,
    )
  })

  it("names a level where a category runs across", () => {
    const block = levelScales()
    const layout = laid(block, 860)
    expect(readingOf(block, layout, layout.subject, { type: "curve", curve: 0, at: 3 })?.x).toBe("upper meadow")
  })

  it("walks along the curve, stops at its ends, and goes round the curves of a split", () => {
    const { candidates } = clottingScales()
    const subject = candidates[0]
    if (subject === undefined) throw new Error("The sample has candidates.")
    const first = steppedReading(subject, null, { along: 1, curves: 0 })
    expect(first).toEqual({ type: "curve", curve: 0, at: 100 })
    expect(steppedReading(subject, first, { along: 1, curves: 0 })).toEqual({ type: "curve", curve: 0, at: 101 })
    expect(steppedReading(subject, first, { along: 1e9, curves: 0 })).toEqual({ type: "curve", curve: 0, at: 200 })
    expect(steppedReading(subject, first, { along: 0, curves: -1 })).toEqual({ type: "curve", curve: 1, at: 100 })
  })
})

describe("what follows the pointer", () => {
  it("lights both points and the line of the bridge between them, with their numbers", () => {
    const block = beetleScales()
    const layout = laid(block, 860)
    const marks = pointerMarks(block, layout, layout.subject, { type: "curve", curve: 0, at: 100 })
    const keys = marks.map((mark) => mark.key)
    for (const key of [
      "pointer-mean",
      "pointer-predictor",
      "lit-mean-point",
      "lit-predictor-point",
      "lit-join",
      "lit-area",
      "lit-interval-mean",
    ]) {
      expect(keys).toContain(key)
    }
    const texts = marks.flatMap((mark) => (mark.type === "text" ? [mark.text] : []))
    const reading = readingOf(block, layout, layout.subject, { type: "curve", curve: 0, at: 100 })
    expect(texts).toEqual([reading?.mu, reading?.eta])
  })

  it("has nothing to show where no mean is possible but the place along x", () => {
    const block = clottingScales("reciprocal", false)
    const layout = laid(block, 860)
    const curve = layout.subject.curves[0] as ScalesCurve
    const broken = {
      ...layout.subject,
      curves: [
        { ...curve, mu: curve.mu.map(() => Number.NaN), muLow: curve.mu.map(() => Number.NaN), muHigh: curve.mu.map(() => Number.NaN) },
      ],
    }
    const keys = pointerMarks(block, layout, broken, { type: "curve", curve: 0, at: 20 }).map((mark) => mark.key)
    expect(keys).toContain("pointer-mean")
    expect(keys).not.toContain("lit-mean-point")
    expect(keys).not.toContain("lit-join")
  })
})
