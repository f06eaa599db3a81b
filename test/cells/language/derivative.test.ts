import { describe, expect, it } from "vitest"
import { derivative } from "../../../cells/language/derivative.ts"
import { evaluated } from "../../../cells/language/evaluate.ts"
import { type Expression, printed } from "../../../cells/language/expression.ts"
import { expressionOf, shape } from "./sample.ts"

const at = (expression: Expression, x: number): number => {
  const found = evaluated(expression, 1, (name) =>
    name === "x" ? { type: "number", value: x } : name === "k" ? { type: "number", value: 1.7 } : null,
  )
  return found.ok && "value" in found.vector ? found.vector.value : Number.NaN
}

describe("a derivative", () => {
  it.each([
    ["x^2 + 3*x - 4", "2*x + 3"],
    ["k*x", "k"],
    ["1/x", "-(1/x^2)"],
    ["log(x)", "1/x"],
    ["exp(-x)", "-exp(-x)"],
    ["round(k)", "0"],
    ["if(x > 1, x, 2*x)", "if(x > 1, 1, 2)"],
    ["if(x > 1, x, x)", "1"],
    ["x - x", "0"],
    ["log(x/(1 - x))", null],
  ])("of %s is %s", (text, expected) => {
    const found = derivative(expressionOf(text), "x")
    expect(found).not.toBeNull()
    if (expected !== null && found !== null) expect(printed(found)).toBe(expected)
  })

  it.each(["abs(x)", "round(x)", "floor(x)", "ceil(x)", "sign(x)", "min(x, 1)", "mod(x, 2)", "x > 1", "band(x, 1)", "mean(x)"])(
    "of %s is not there",
    (text) => {
      expect(derivative(expressionOf(text), "x")).toBeNull()
    },
  )

  it.each([
    "x^3",
    "x^k",
    "k^x",
    "x^x",
    "2^-x",
    "1/(1 + x)",
    "x/(k + x^2)",
    "exp(x^2)",
    "expm1(-x)",
    "log(1 + x^2)",
    "log10(x)",
    "log1p(x*k)",
    "sin(2*x)",
    "cos(x)/x",
    "tan(x)",
    "asin(x/2)",
    "atan(k*x)",
    "tanh(x)",
    "square_root(x + k)",
    "normal_cdf(x - 1)",
    "normal_quantile(x/2)",
    "logit(x/2)",
    "inverse_logit(k*x)",
    "log(-log(1 - x/2))",
    "if(x > 0.5, x^2, x^3)",
    "-(x - 1)^2*(x - -2)",
  ])("of %s is the limit of its difference quotients", (text) => {
    const expression = expressionOf(text)
    const slope = derivative(expression, "x")
    expect(slope).not.toBeNull()
    if (slope === null) return
    for (const x of [0.2, 0.7, 0.9, 1.3]) {
      // Central differences, and one step of Richardson's extrapolation: an error of about h^4.
      const quotient = (h: number): number => (at(expression, x + h) - at(expression, x - h)) / (2 * h)
      const limit = (4 * quotient(1e-3) - quotient(2e-3)) / 3
      expect(Math.abs(at(slope, x) - limit)).toBeLessThan(1e-8 * Math.max(1, Math.abs(limit)))
    }
    expect(shape(expressionOf(printed(slope)))).toEqual(shape(slope))
  })
})
