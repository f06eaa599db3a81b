// Special functions against tables at 20 digits, tails included, and against values printed in a handbook.

import { describe, expect, it } from "vitest"
import * as special from "../../../cells/statistics/special.ts"
import densities from "../../reference/densities.json" with { type: "json" }
import { relativeError } from "../../reference/exact.ts"
import handbook from "../../reference/handbook-tables.json" with { type: "json" }
import reference from "../../reference/special-functions.json" with { type: "json" }

const { normal, normal_quantile, gamma_family, chi_square, f, student_t } = reference.tables

/** Rows whose value is farther from the exact one than allowed: empty when all is well. */
const tooFar = (rows: readonly (readonly string[])[], column: number, value: (row: readonly number[]) => number, allowed: number) =>
  rows
    .map((row) => ({ row, error: relativeError(value(row.map(Number)), row[column] as string) }))
    .filter(({ error }) => !(error < allowed))

describe("the normal law", () => {
  it.each([
    ["density", 1, special.normalDensity],
    ["lower tail", 2, special.normalCdf],
    ["upper tail", 3, special.normalUpperTail],
    ["log of the lower tail", 4, special.normalLogCdf],
  ] as const)("has its %s to 14 digits from −40 to 40", (_, column, value) => {
    expect(tooFar(normal.rows, column, ([x]) => value(x as number), 1e-14)).toEqual([])
  })

  it("has its log upper tail by the lower of −x", () => {
    expect(tooFar(normal.rows, 5, ([x]) => special.normalLogCdf(-(x as number)), 1e-14)).toEqual([])
  })

  it("has its quantiles to 14 digits from 1e-300 to the middle", () => {
    const lower = normal_quantile.rows.filter(([p]) => Number(p) <= 0.5)
    expect(lower.length).toBeGreaterThan(30)
    expect(tooFar(lower, 1, ([p]) => special.normalQuantile(p as number), 1e-14)).toEqual([])
  })

  it("has its quantiles above the middle as well as a share near 1 can say them", () => {
    // A share p is known to half a unit of 1 only, which moves its quantile by that over the density.
    const upper = normal_quantile.rows.filter(([p]) => Number(p) > 0.5)
    for (const [p, exact] of upper) {
      const moved = 1.2e-16 / special.normalDensity(Number(exact)) + 1e-15 * Math.abs(Number(exact))
      expect(Math.abs(special.normalQuantile(Number(p)) - Number(exact))).toBeLessThan(moved)
    }
  })

  it("has no quantile outside 0 to 1, and infinite ones at the ends", () => {
    expect([0, 1, -0.1, 1.1, Number.NaN].map(special.normalQuantile)).toEqual([-Infinity, Infinity, Number.NaN, Number.NaN, Number.NaN])
  })
})

describe("the gamma family", () => {
  it.each([
    ["log-gamma", 1, special.logGamma],
    ["digamma", 2, special.digamma],
    ["trigamma", 3, special.trigamma],
  ] as const)("has %s to 15 digits", (_, column, value) => {
    expect(tooFar(gamma_family.rows, column, ([x]) => value(x as number), 1e-15)).toEqual([])
  })

  it("has the error of Stirling's formula to 14 digits or 2e-15", () => {
    const far = densities.rows.stirlingError.filter(([x, exact]) => {
      const value = special.stirlingError(Number(x))
      return relativeError(value, exact as string) > 1e-14 && Math.abs(value - Number(exact)) > 2e-15
    })
    expect(far).toEqual([])
  })

  it("has the deviance term to 14 digits, near y = μ too", () => {
    expect(tooFar(densities.rows.devianceTerm, 2, ([x, m]) => special.devianceTerm(x as number, m as number), 1e-14)).toEqual([])
  })

  it.each([
    // n, k, log of the binomial coefficient, which is a whole number: C(52, 5), C(50, 25), C(1000, 1)
    [52, 5, Math.log(2598960)],
    [50, 25, Math.log(126410606437752)],
    [1000, 1, Math.log(1000)],
    [7, 0, 0],
  ])("has the log of %s over %s", (n, k, value) => {
    expect(special.logBinomialCoefficient(n, k)).toBeCloseTo(value, 12)
  })

  it("has the log of 20! = 2432902008176640000", () => {
    expect(special.logFactorial(20)).toBeCloseTo(Math.log(2432902008176640000), 12)
  })
})

describe("upper tails", () => {
  // Where the tail is e^−t, its 13 digits need t to 13 places: beyond t = 500 or so a double has 12.
  it("of chi-square have 12 digits, and 13 above 1e-200", () => {
    const near = chi_square.rows.filter((row) => Number(row[2]) > 1e-200)
    expect(tooFar(chi_square.rows, 2, ([df, x]) => special.chiSquareUpperTail(x as number, df as number), 2e-13)).toEqual([])
    expect(tooFar(near, 2, ([df, x]) => special.chiSquareUpperTail(x as number, df as number), 1e-13)).toEqual([])
  })

  it("of F have 13 digits", () => {
    expect(tooFar(f.rows, 3, ([a, b, x]) => special.fUpperTail(x as number, a as number, b as number), 5e-14)).toEqual([])
  })

  it("of t have 13 digits", () => {
    expect(tooFar(student_t.rows, 2, ([df, x]) => special.tUpperTail(x as number, df as number), 5e-14)).toEqual([])
  })

  // Computed with mpmath by integrating the density at 50 digits: near the mean of a law with many degrees of freedom.
  it.each([
    [100000.32590240687, 100000, "0.49911456770741532078"],
    [100737.14219909793, 100000, "0.049906890292266604358"],
    [1002000, 1000000, "0.078718661386129633386"],
    [2100, 2000, "0.058671111377318077"],
  ])("of chi-square at %s on %s degrees of freedom keep their digits", (x, df, exact) => {
    expect(relativeError(special.chiSquareUpperTail(x, df), exact)).toBeLessThan(1e-13)
  })

  it("are one at and below nothing, and nothing at infinity", () => {
    expect([special.chiSquareUpperTail(0, 3), special.fUpperTail(-1, 2, 3), special.tUpperTail(0, 4)]).toEqual([1, 1, 0.5])
    expect([special.chiSquareUpperTail(Infinity, 3), special.fUpperTail(Infinity, 2, 3), special.tUpperTail(Infinity, 4)]).toEqual([
      0, 0, 0,
    ])
    expect(special.tUpperTail(-Infinity, 4)).toBe(1)
  })
})

describe("quantiles", () => {
  const shares = [0.9, 0.5, 0.1, 0.05, 0.025, 0.001, 1e-10, 1e-50]
  it.each([1, 2, 3, 7.5, 30, 1000, 100000])("give their tail back on %s degrees of freedom", (df) => {
    for (const p of shares) {
      expect(special.chiSquareUpperTail(special.chiSquareUpperQuantile(p, df), df) / p).toBeCloseTo(1, 11)
      expect(special.tUpperTail(special.tUpperQuantile(p, df), df) / p).toBeCloseTo(1, 11)
      for (const df1 of [1, 2, 9]) expect(special.fUpperTail(special.fUpperQuantile(p, df1, df), df1, df) / p).toBeCloseTo(1, 11)
    }
  })

  it("of chi-square on one degree is the square of the normal's", () => {
    expect(relativeError(special.chiSquareUpperQuantile(0.05, 1), "3.841458820694124")).toBeLessThan(1e-14)
  })

  it("of t are symmetric", () => {
    expect(special.tUpperQuantile(0.975, 5)).toBeCloseTo(-special.tUpperQuantile(0.025, 5), 12)
    expect(special.tUpperQuantile(0.5, 5)).toBe(0)
  })
})

// Abramowitz, M. and Stegun, I. A. (1964). Handbook of Mathematical Functions.
describe("values printed in the handbook", () => {
  const value: Readonly<Record<string, (a: readonly number[]) => number>> = {
    "normal cdf": ([x]) => special.normalCdf(x as number),
    "normal upper quantile": ([p]) => -special.normalQuantile(p as number),
    "chi-square upper quantile": ([df, p]) => special.chiSquareUpperQuantile(p as number, df as number),
    "F upper quantile": ([p, a, b]) => special.fUpperQuantile(p as number, a as number, b as number),
    "Student t, central probability": ([p, df]) => special.tUpperQuantile((1 - (p as number)) / 2, df as number),
    "log gamma": ([x]) => special.logGamma(x as number),
    digamma: ([x]) => special.digamma(x as number),
    trigamma: ([x]) => special.trigamma(x as number),
  }
  it.each(handbook.rows)("$table: $function of $arguments is $printed", ({ function: name, arguments: given, printed }) => {
    const half = 0.5 * Number(`1e-${(printed.split(".")[1] ?? "").length}`)
    const found = value[name]?.(given.map(Number)) ?? Number.NaN
    expect(Math.abs(found - Number(printed))).toBeLessThanOrEqual(half * 1.000001)
  })
})
