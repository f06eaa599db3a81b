import { describe, expect, it } from "vitest"
import { relativeError, unitsInLastPlace } from "./exact.ts"

describe("comparing with exact decimals", () => {
  it.each([
    [1, "1", 0],
    [1, "1.00000000000000011102230246251565", 0.5],
    [1 + 2 ** -52, "1", 1],
    [5e-324, "4.940656458412465441765687928682213723651e-324", 0],
    [0, "5e-324", 1.012011],
    [1.7976931348623157e308, "179769313486231570814527423731704356798070e267", 0],
    [-0.1, "-0.1", 0.4],
    [Number.NaN, "1", Infinity],
  ])("%s is away from %s by %s units in the last place", (value, exact, units) => {
    expect(unitsInLastPlace(value, exact)).toBeCloseTo(units, 5)
  })

  it("measures errors far below the precision of a double", () => {
    expect(relativeError(0.1, "0.1")).toBeCloseTo(5.55e-17, 19)
    expect(relativeError(0.1, "0.2")).toBeCloseTo(0.5, 12)
  })
})
