// Intervals hold every result: each operation on points inside its operands, checked with exact fractions where there are such.

import fc from "fast-check"
import { describe, expect, it } from "vitest"
import * as exact from "../../../cells/language/exact.ts"
import * as of from "../../../cells/language/interval.ts"
import { cosineOfTurns, sineOfTurns, tangentOfTurns } from "../../../cells/language/turns.ts"

const finite = fc.double({ noNaN: true, noDefaultInfinity: true, min: -1e6, max: 1e6 })
const fraction = (x: number): exact.Fraction => exact.double(x) as exact.Fraction

/** Whether an exact number lies within an interval. */
const holds = ({ lo, hi }: of.Interval, value: exact.Fraction): boolean => {
  const isAtMost = (a: exact.Fraction, b: exact.Fraction): boolean => {
    const [n] = exact.numberOf(exact.less(b, a) as exact.Fraction) as readonly [bigint, bigint]
    return n >= 0n
  }
  return (lo === -Infinity || isAtMost(fraction(lo), value)) && (hi === Infinity || isAtMost(value, fraction(hi)))
}

describe("an operation on intervals", () => {
  it.each([
    ["plus", of.plus, exact.plus],
    ["less", of.less, exact.less],
    ["times", of.times, exact.times],
  ] as const)("holds the exact result: %s", (_, operation, exactly) => {
    fc.assert(
      fc.property(finite, finite, (a, b) => {
        const found = operation(of.point(a), of.point(b))
        expect(holds(found, exactly(fraction(a), fraction(b)) as exact.Fraction)).toBe(true)
        expect(found.hi - found.lo).toBeLessThanOrEqual(4.5e-16 * Math.max(Math.abs(found.lo), Math.abs(found.hi)) + 1e-320)
      }),
      { numRuns: 2000 },
    )
  })

  it("holds the exact quotient", () => {
    fc.assert(
      fc.property(finite, finite, (a, b) => {
        fc.pre(b !== 0 && Math.abs(a / b) < Infinity)
        expect(holds(of.over(of.point(a), of.point(b)), exact.over(fraction(a), fraction(b)) as exact.Fraction)).toBe(true)
      }),
      { numRuns: 2000 },
    )
  })

  it("does not widen what was not rounded", () => {
    expect(of.plus(of.point(0.5), of.point(0.25))).toEqual(of.point(0.75))
    expect(of.times(of.point(3), of.point(0.5))).toEqual(of.point(1.5))
    expect(of.over(of.point(3), of.point(4))).toEqual(of.point(0.75))
    expect(of.squareRoot(of.point(2.25))).toEqual(of.point(1.5))
    expect(of.plus(of.point(0.1), of.point(0.2)).lo).toBeLessThan(of.plus(of.point(0.1), of.point(0.2)).hi)
  })

  it("knows an end that is only approached", () => {
    const unit = of.interval(0, 1, true, true)
    expect(of.isPositive(of.over(unit, of.less(of.point(1), unit)))).toBe(true)
    expect(of.isNegative(of.logarithm(unit))).toBe(true)
    expect(of.isPositive(of.exponential(of.everything))).toBe(true)
    expect(of.isPositive(of.interval(0, 1))).toBe(false)
    expect(of.square(of.interval(-1, 2))).toEqual(of.interval(0, 4))
    expect(of.isPositive(of.less(of.point(1), of.square(of.hyperbolicTangent(of.everything))))).toBe(true)
  })

  it("holds powers between the corners", () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.01, max: 50, noNaN: true }),
        fc.double({ min: 0.01, max: 50, noNaN: true }),
        fc.double({ min: -3, max: 3, noNaN: true }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (a, b, n, t) => {
          const [low, high] = [Math.min(a, b), Math.max(a, b)]
          const x = low + t * (high - low)
          const found = of.positivePower(of.interval(low, high), of.point(n))
          const value = x ** n
          expect(value).toBeGreaterThanOrEqual(found.lo * (1 - 1e-14))
          expect(value).toBeLessThanOrEqual(found.hi * (1 + 1e-14))
        },
      ),
      { numRuns: 1000 },
    )
  })
})

describe("angles in half turns", () => {
  it("have their zeros and poles where they are", () => {
    expect([sineOfTurns(0), Math.abs(sineOfTurns(1)), sineOfTurns(0.5), sineOfTurns(-0.5), sineOfTurns(1.5)]).toEqual([0, 0, 1, -1, -1])
    expect([cosineOfTurns(0), Math.abs(cosineOfTurns(0.5)), cosineOfTurns(1), cosineOfTurns(-2)]).toEqual([1, 0, -1, 1])
    expect([tangentOfTurns(0), tangentOfTurns(0.25), tangentOfTurns(-0.25)]).toEqual([0, 1, -1].map((x) => expect.closeTo(x, 15)))
    expect(of.tangent(of.interval(-0.5, 0.5, true, true))).toEqual(of.everything)
    expect(of.tangent(of.interval(0.4, 0.6))).toBeNull()
    expect(of.sine(of.interval(0, 1))).toEqual(of.interval(0, 1))
  })

  it("agree with the usual functions", () => {
    fc.assert(
      fc.property(fc.double({ min: -20, max: 20, noNaN: true }), (t) => {
        expect(sineOfTurns(t)).toBeCloseTo(Math.sin(Math.PI * t), 12)
        expect(cosineOfTurns(t)).toBeCloseTo(Math.cos(Math.PI * t), 12)
        for (const [found, value] of [
          [of.sine(of.point(t)), sineOfTurns(t)],
          [of.cosine(of.point(t)), cosineOfTurns(t)],
        ] as const) {
          expect(value).toBeGreaterThanOrEqual(found.lo)
          expect(value).toBeLessThanOrEqual(found.hi)
        }
      }),
      { numRuns: 500 },
    )
  })
})
