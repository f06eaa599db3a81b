// Comparing with printed figures and with long decimals. A printed figure allows half a unit of its last digit: the tolerance is the
// author's, not ours.

import { expect } from "vitest"

/** Expects each value to round to the figure as printed, give or take half a unit of its last digit (or `units` of them). */
export function expectPrinted(values: number | null | readonly (number | null)[], printed: string | readonly string[], units = 0.5): void {
  const found = Array.isArray(values) ? (values as readonly (number | null)[]) : [values as number | null]
  const figures = typeof printed === "string" ? [printed] : printed
  expect(found.length).toBe(figures.length)
  figures.forEach((figure, k) => {
    const value = found[k] ?? Number.NaN
    const error = Math.abs(value - Number(figure)) / lastPlace(figure)
    expect(error, `${value} where ${figure} is printed`).toBeLessThanOrEqual(units * 1.000001)
  })
}

/**
 * How many digits of an exact decimal a value has: −log₁₀ of its error as a share of the exact value, or of `size` where that is larger. 16
 * is full agreement.
 */
export function digits(value: number | null | undefined, exact: string, size = 0): number {
  if (value === null || value === undefined || Number.isNaN(value)) return 0
  const error = Math.abs(value - Number(exact)) / Math.max(Math.abs(Number(exact)), size)
  return error < 1e-16 || (value === 0 && Number(exact) === 0) ? 16 : -Math.log10(error)
}

/** One unit of the last digit of a decimal text. */
function lastPlace(figure: string): number {
  const [, fraction = "", power = "0"] = /^-?\d+(?:\.(\d*))?(?:[eE]([+-]?\d+))?$/.exec(figure) ?? []
  return 10 ** (Number(power) - fraction.length)
}
