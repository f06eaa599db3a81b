// Axes: round ticks inside the range, texts that stand clear of each other.

import { describe, expect, it } from "vitest"
import { footTicks, levelTicks, linearScale, roomFor, sideTicks } from "../../../ui/drawing/axis.ts"
import { textWidth } from "../../../ui/drawing/scene.ts"

const ranges: readonly (readonly [number, number])[] = [
  [0, 1],
  [-0.045, 1.045],
  [1.65, 1.94],
  [-9.5, 0.5],
  [0, 1e6],
  [2.5e7, 3.1e7],
  [1e-6, 4e-6],
  [-123456, 98765],
  [3, 3],
]

describe("an axis", () => {
  it.each(ranges)("from %d to %d has ticks inside its ends, at least two of them up the side", (from, to) => {
    const scale = linearScale(from, to, 300, 0)
    const found = sideTicks(scale)
    expect(found.length).toBeGreaterThanOrEqual(2)
    for (const tick of found) {
      expect(tick.place).toBeGreaterThanOrEqual(-1e-9)
      expect(tick.place).toBeLessThanOrEqual(300 + 1e-9)
      expect(tick.text).not.toMatch(/e|NaN|-/)
    }
    expect(new Set(found.map((tick) => tick.text)).size).toBe(found.length)
  })

  it.each(ranges)("from %d to %d keeps the texts along its foot apart at any width", (from, to) => {
    for (const width of [60, 90, 140, 250, 400, 900]) {
      const found = footTicks(linearScale(from, to, 0, width), 11.5)
      found.forEach((tick, i) => {
        const next = found[i + 1]
        if (next === undefined) return
        expect(next.place - tick.place).toBeGreaterThan((textWidth(tick.text, 11.5) + textWidth(next.text, 11.5)) / 2 + 4)
      })
    }
  })

  it("takes values to places and back", () => {
    const scale = linearScale(-3, 7, 300, 20)
    for (const value of [-3, 0, 1.25, 7]) expect(scale.value(scale.place(value))).toBeCloseTo(value, 12)
  })

  it("has the ends of its range on fifths of a step, around what it holds", () => {
    const [from, to] = roomFor(0.1017, 0.98)
    expect(from).toBeLessThan(0.1017)
    expect(to).toBeGreaterThan(0.98)
    expect((from * 25) % 1).toBeCloseTo(0, 9)
    // A change that is not seen moves nothing.
    expect(roomFor(0.1018, 0.9801)).toEqual([from, to])
  })

  it("gives levels a second row where one is too tight", () => {
    const levels = ["harbour", "north quay", "old town", "upper meadow", "mill"]
    expect(levelTicks(linearScale(-0.5, 4.5, 0, 900), levels, 11.5).every((tick) => tick.row === 0)).toBe(true)
    expect(levelTicks(linearScale(-0.5, 4.5, 0, 300), levels, 11.5).map((tick) => tick.row)).toEqual([0, 1, 0, 1, 0])
  })
})
