import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { namesIn, printed } from "../../../cells/language/expression.ts"
import { anyExpression, expressionOf, shape } from "./sample.ts"

/** A text with every bracket the tree has. */
const bracketed = (text: string): string => {
  const write = (part: ReturnType<typeof expressionOf>): string => {
    switch (part.type) {
      case "pair":
        return `(${write(part.left)} ${part.sign} ${write(part.right)})`
      case "minus":
        return `(-${write(part.of)})`
      case "not":
        return `(not ${write(part.of)})`
      case "in":
        return `(${write(part.of)} in ${part.list.map(write).join(" ")})`
      case "call":
        return `${part.name}[${part.of.map(write).join(" ")}]`
      default:
        return printed(part)
    }
  }
  return write(expressionOf(text))
}

describe("an expression", () => {
  it.each([
    ["-x^2", "(-(x ^ 2))"],
    ["2^-1*3", "((2 ^ (-1)) * 3)"],
    ["a^b^c", "(a ^ (b ^ c))"],
    ["2^-x^2", "(2 ^ (-(x ^ 2)))"],
    ["a - b - c", "((a - b) - c)"],
    ["a/b*c", "((a / b) * c)"],
    ["a + b*c", "(a + (b * c))"],
    ["-a*b", "((-a) * b)"],
    ["not a = b", "(not (a = b))"],
    ["not a and b", "((not a) and b)"],
    ["a or b and c", "(a or (b and c))"],
    ["a < 1 + 2", "(a < (1 + 2))"],
    ['x in ("a", "b") and y', '((x in "a" "b") and y)'],
    ["if(a > 1, log(b), -c)", "if[(a > 1) log[b] (-c)]"],
    ["(a + b)*c", "((a + b) * c)"],
    ["2*pi", "(2 * pi)"],
    ["x = missing or true", null],
    ["a\n  + b # c", "(a + b)"],
  ])("%s reads as %s", (text, expected) => {
    if (expected === null) expect(() => expressionOf(text)).toThrow("missing")
    else expect(bracketed(text)).toBe(expected)
  })

  it("takes a percentage for the decimal with the point moved", () => {
    expect(expressionOf("99.9%")).toMatchObject({ type: "number", value: 0.999, text: "99.9%" })
  })

  it("reads back as the same tree once it is printed", () => {
    fc.assert(
      fc.property(anyExpression, (expression) => {
        expect(shape(expressionOf(printed(expression)))).toEqual(shape(expression))
      }),
      { numRuns: 3_000 },
    )
  })

  it.each(["a + b*c - -d", "-(a + b)^2", "(a or b) and not (c or d)", "(a^b)^-c", "a - (b - c)", 'x in ("a", "b")', "(a < b) = c"])(
    "%s is printed with no bracket more than it needs",
    (text) => {
      expect(printed(expressionOf(text))).toBe(text)
    },
  )

  it("gives each name once, and no column of mean_at", () => {
    expect(namesIn(expressionOf("a + log(b) + a")).map(({ name }) => name)).toEqual(["a", "b"])
    expect(namesIn(expressionOf('mean_at(m, dose = d, lot = "b")')).map(({ name }) => name)).toEqual(["m", "d"])
  })

  it("gives each part its place among the tokens", () => {
    const sum = expressionOf("a + log(b)")
    expect(sum.at).toEqual({ clause: -1, from: 4, to: 10 })
    expect(sum.type === "pair" ? sum.right.at : null).toEqual({ clause: -1, from: 6, to: 10 })
  })
})
