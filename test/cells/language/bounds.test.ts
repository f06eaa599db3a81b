// Bounds hold what they bound: values of a formula, and its difference quotients, at points within a stretch.

import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { Bounding, type End } from "../../../cells/language/bounds.ts"
import { derivative } from "../../../cells/language/derivative.ts"
import { evaluated } from "../../../cells/language/evaluate.ts"
import * as exact from "../../../cells/language/exact.ts"
import type { Expression } from "../../../cells/language/expression.ts"
import { Formula } from "../../../cells/language/formula.ts"
import { endOf } from "./claim.ts"
import { expressionOf } from "./sample.ts"

const at = (expression: Expression, x: number): number => {
  const found = evaluated(expression, 1, (name) => (name === "mu" ? { type: "number", value: x } : null))
  return found.ok && "value" in found.vector ? found.vector.value : Number.NaN
}

const formulas = [
  "mu^3 - 2*mu + 1",
  "mu/(1 + mu^2)",
  "exp(-mu^2)*mu",
  "log(1 + mu^2)",
  "tan(pi*(mu - 1/2))",
  "sin(3*mu)*cos(mu)",
  "normal_quantile(0.1 + 0.8*mu)",
  "normal_cdf(4*mu - 2)",
  "(1 + mu)^mu",
  "(1 + mu)^-1.5",
  "square_root(mu*(1 - mu))",
  "asin(mu)*atan(5*mu)",
  "tanh(mu - 0.5) + log10(1 + mu)",
  "inverse_logit(10*mu - 5)",
  "logit(0.05 + 0.9*mu)",
  "expm1(mu)*log1p(mu)",
  "1/(mu - 2)",
]

describe("the bounds of a formula over a stretch", () => {
  it.each(formulas)("hold its values and its slopes: %s", (text) => {
    const expression = expressionOf(text)
    const slope = derivative(expression, "mu") as Expression
    const formula = new Formula("mu", new Map())
    const steps = [formula.add(expression), formula.add(slope)]
    const bounding = new Bounding(formula, new Map())
    const share = fc.double({ min: 0.001, max: 0.999, noNaN: true })
    fc.assert(
      fc.property(share, share, share, (a, b, t) => {
        const [low, high] = [Math.min(a, b), Math.max(a, b)]
        const x = low + t * (high - low)
        const [eta, rate] = bounding.over({ type: "inside", at: low }, { type: "inside", at: high }, steps)
        if (eta?.defined !== 2 || rate?.defined !== 2) return
        const value = at(expression, x)
        const off = 1e-11 * Math.max(1, Math.abs(value))
        expect(value).toBeGreaterThanOrEqual(eta.values.lo - off)
        expect(value).toBeLessThanOrEqual(eta.values.hi + off)
        const steep = at(slope, x)
        const steepOff = 1e-10 * Math.max(1, Math.abs(steep))
        for (const bounds of [eta.slope, rate.values]) {
          if (bounds === null) continue
          expect(steep).toBeGreaterThanOrEqual(bounds.lo - steepOff)
          expect(steep).toBeLessThanOrEqual(bounds.hi + steepOff)
        }
      }),
      { numRuns: 300 },
    )
  })

  it.each([
    ["log(mu)", "0", "infinity", -Infinity, Infinity],
    ["1/mu", "0", "1", Infinity, 1],
    ["(1 - mu)/(1 - mu^2)", "0", "1", 1, 0.5],
    ["mu^2/(1 + mu)^2", "0", "infinity", 0, 1],
    ["(2*mu^3 + 1)/(mu - mu^3)", "1", "infinity", -Infinity, -2],
    ["log(mu) - log(1 + mu)", "0", "infinity", -Infinity, 0],
    ["mu + sin(mu)", "0", "infinity", 0, Infinity],
    ["tan(pi*mu)", "-0.5", "0.5", -Infinity, Infinity],
    ["exp(-1/mu)", "0", "infinity", 0, 1],
    ["log(mu)^-1", "0", "1", 0, -Infinity],
    ["log(mu)^-2", "0", "1", 0, Infinity],
    ["normal_quantile(mu)^2", "0", "0.5", Infinity, 0],
  ])("have the limits of %s at %s and %s", (text, from, to, low, high) => {
    const formula = new Formula("mu", new Map())
    const step = formula.add(expressionOf(text))
    const middle: End = { type: "inside", at: to === "infinity" ? 2 : 0.25 }
    const bounding = new Bounding(formula, new Map())
    const [left, right] = [bounding.over(endOf(from), middle, [step])[0], bounding.over(middle, endOf(to), [step])[0]]
    expect([left?.low?.lo, left?.low?.hi]).toEqual([low, low])
    expect([right?.high?.lo, right?.high?.hi]).toEqual([high, high])
  })

  it("leave open what depends on how fast two parts go", () => {
    const formula = new Formula("mu", new Map())
    const step = formula.add(expressionOf("mu - exp(mu)"))
    const [bounds] = new Bounding(formula, new Map()).over({ type: "inside", at: 1 }, endOf("infinity"), [step])
    expect(bounds?.high).toBeNull()
  })

  it("know a divisor that changes its sign to be 0 in between", () => {
    const formula = new Formula("mu", new Map())
    const step = formula.add(expressionOf("1/(mu - 1/3)"))
    const over = (low: number, high: number) =>
      new Bounding(formula, new Map()).over({ type: "inside", at: low }, { type: "inside", at: high }, [step])[0]?.defined
    expect([over(0.3, 0.4), over(0.4, 0.5)]).toEqual([0, 2])
  })
})

describe("exact numbers", () => {
  const number = (text: string): exact.Fraction => exact.decimal(text) as exact.Fraction

  it("read decimals and percentages as they are written", () => {
    expect(exact.numberOf(number("0.1"))).toEqual([1n, 10n])
    expect(exact.numberOf(number("2.5%"))).toEqual([1n, 40n])
    expect(exact.numberOf(number("-1.5e2"))).toEqual([-150n, 1n])
    expect(exact.decimal("x")).toBeNull()
  })

  it("find that two ways of writing a function are one", () => {
    const mu = exact.symbol("mu")
    const rest = exact.less(exact.one, mu) as exact.Fraction
    const odds = exact.over(mu, rest) as exact.Fraction
    // μ/(1 − μ) + 1 is 1/(1 − μ).
    expect(exact.areEqual(exact.plus(odds, exact.one) as exact.Fraction, exact.over(exact.one, rest) as exact.Fraction)).toBe(true)
    expect(exact.areEqual(odds, exact.over(exact.one, rest) as exact.Fraction)).toBe(false)
  })

  it("take the derivative of a quotient", () => {
    const mu = exact.symbol("mu")
    const found = exact.slope(exact.over(exact.one, mu) as exact.Fraction, "mu") as exact.Fraction
    expect(exact.areEqual(found, exact.minus(exact.power(mu, -2) as exact.Fraction))).toBe(true)
  })
})
