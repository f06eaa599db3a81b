import { describe, expect, it } from "vitest"
import { digits, expectPrinted } from "./printed.ts"

describe("printed figures", () => {
  it.each([
    [0.123449, "0.1234"],
    [-2.8753, "-2.875"],
    [4.299e-4, "0.4299E-03"],
  ])("%d is printed as %s", (value, printed) => {
    expectPrinted(value, printed)
  })

  it.each([
    [0.12346, "0.1234"],
    [-2.876, "-2.875"],
    [null, "1.0"],
  ])("%d is not printed as %s", (value, printed) => {
    expect(() => expectPrinted(value, printed)).toThrow()
  })

  it("counts digits against the exact value or the larger size", () => {
    expect(digits(1.0001, "1")).toBeCloseTo(4, 3)
    expect(digits(1e-9, "0", 1)).toBeCloseTo(9, 3)
    expect(digits(Number.NaN, "1")).toBe(0)
  })
})
