// Curves cut to a frame.

import { describe, expect, it } from "vitest"
import { bandPath, linePath, shapeOf, shapePath } from "../../../ui/drawing/curve.ts"
import { hatching } from "../../../ui/drawing/scene.ts"

/** Every second number of a path of straight pieces is a height. */
const heights = (d: string): readonly number[] => (d.match(/-?[\d.]+ -?[\d.]+/g) ?? []).map((pair) => Number(pair.split(" ")[1]))

describe("a line", () => {
  it("is cut where it crosses the frame", () => {
    expect(
      linePath(
        [
          { x: 0, y: -10 },
          { x: 10, y: 10 },
          { x: 20, y: 30 },
        ],
        0,
        20,
      ),
    ).toBe("M5 0L10 10L15 20")
  })

  it("comes back where it crosses again", () => {
    expect(
      linePath(
        [
          { x: 0, y: 10 },
          { x: 10, y: 30 },
          { x: 20, y: 10 },
        ],
        0,
        20,
      ),
    ).toBe("M0 10L5 20M15 20L20 10")
  })

  it("passes through from outside to outside", () => {
    expect(
      linePath(
        [
          { x: 0, y: -10 },
          { x: 10, y: 30 },
        ],
        0,
        20,
      ),
    ).toBe("M2.5 0L7.5 20")
  })

  it("stops at a gap", () => {
    expect(
      linePath(
        [
          { x: 0, y: 1 },
          { x: 1, y: 2 },
          { x: 2, y: Number.NaN },
          { x: 3, y: 4 },
          { x: 4, y: 5 },
        ],
        0,
        20,
      ),
    ).toBe("M0 1L1 2M3 4L4 5")
  })

  it("is empty outside the frame", () => {
    expect(
      linePath(
        [
          { x: 0, y: 30 },
          { x: 10, y: 40 },
        ],
        0,
        20,
      ),
    ).toBe("")
  })
})

describe("a band", () => {
  it("reaches the edge where an end is infinite, and no farther", () => {
    const d = bandPath([0, 1, 2], [5, Number.POSITIVE_INFINITY, 5], [1, Number.NEGATIVE_INFINITY, 1], 0, 20)
    expect(Math.min(...heights(d))).toBe(0)
    expect(Math.max(...heights(d))).toBe(20)
  })

  it("is left out where it is not known", () => {
    expect(bandPath([0, 1, 2, 3], [5, 5, Number.NaN, 5], [1, 1, 1, 1], 0, 20)).toBe("M0 1L1 1L1 5L0 5Z")
  })
})

it("hatching stays inside its box", () => {
  const box = { left: 10, top: 20, right: 60, bottom: 31 }
  const numbers = (hatching(box, 6).match(/[\d.]+ [\d.]+/g) ?? []).map((pair) => pair.split(" ").map(Number) as [number, number])
  expect(numbers.length).toBeGreaterThan(10)
  for (const [x, y] of numbers) {
    expect(x).toBeGreaterThanOrEqual(10)
    expect(x).toBeLessThanOrEqual(60)
    expect(y).toBeGreaterThanOrEqual(20)
    expect(y).toBeLessThanOrEqual(31)
  }
})

it("six series have six shapes", () => {
  expect(new Set([0, 1, 2, 3, 4, 5].map((i) => shapePath(shapeOf(i), 0, 0, 4))).size).toBe(6)
})
