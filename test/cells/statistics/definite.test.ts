import { describe, expect, it } from "vitest"
import { definiteSolver } from "../../../cells/statistics/definite.ts"
import { singularValues } from "../../../cells/statistics/singular-values.ts"

/** The matrix of Hilbert, 1/(i + j + 1): its inverse has whole numbers, and its condition grows fast. */
const hilbert = (n: number): Float64Array => Float64Array.from({ length: n * n }, (_, at) => 1 / (Math.floor(at / n) + (at % n) + 1))

describe("small dense algebra", () => {
  it("solves a system whose answer is known in whole numbers", () => {
    const solve = definiteSolver(hilbert(4), 4)
    // The first column of the inverse, known since Hilbert: 16, −120, 240, −140.
    expect([...(solve?.(Float64Array.of(1, 0, 0, 0)) ?? [])].map((x) => Math.round(x * 1e6) / 1e6)).toEqual([16, -120, 240, -140])
  })

  it("asks only for the lower triangle", () => {
    const solve = definiteSolver(Float64Array.of(4, Number.NaN, 2, 3), 2)
    expect([...(solve?.(Float64Array.of(8, 7)) ?? [])].map((x) => Math.round(x * 1e12) / 1e12)).toEqual([1.25, 1.5])
  })

  it("says of a matrix that is singular or not definite that it has no answer", () => {
    expect(definiteSolver(Float64Array.of(1, 1, 1, 1), 2)).toBeNull()
    expect(definiteSolver(Float64Array.of(1, 2, 2, 1), 2)).toBeNull()
    expect(definiteSolver(Float64Array.of(-1), 1)).toBeNull()
    expect(definiteSolver(Float64Array.of(0), 1)).toBeNull()
  })

  it("solves a system without unknowns", () => {
    expect(definiteSolver(new Float64Array(0), 0)?.(new Float64Array(0))).toEqual(new Float64Array(0))
  })

  it("gives the singular values of Hilbert's matrix, largest first", () => {
    // 5 by 5, computed with mpmath at 40 digits.
    const known = [1.567050691098231, 0.208534218611013, 0.0114074916234198, 3.05898040151192e-4, 3.28792877217186e-6]
    singularValues(hilbert(5), 5).forEach((value, j) => {
      expect(Math.abs(value - (known[j] as number))).toBeLessThan(5e-15)
    })
  })
})
