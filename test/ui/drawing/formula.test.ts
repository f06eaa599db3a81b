// Formulas in one line and as MathML elements.

import { describe, expect, it } from "vitest"
import type { Formula } from "../../../cells/figure/formula.ts"
import { formulaText, mathOf } from "../../../ui/drawing/formula.ts"

const name = (text: string): Formula => ({ type: "name", text })
const word = (text: string): Formula => ({ type: "word", text })
const number = (text: string): Formula => ({ type: "number", text })
const sign = (text: string): Formula => ({ type: "sign", text })
const row = (...of: Formula[]): Formula => ({ type: "row", of })
const bracket = (...of: Formula[]): Formula => ({ type: "bracket", of: row(...of) })
const beta = (j: string): Formula => ({ type: "sub", base: name("β"), with: number(j) })

const cloglog = row(
  row(word("ln"), bracket(sign("−"), word("ln"), bracket(number("1"), sign("−"), name("μ")))),
  sign("="),
  beta("0"),
  sign("+"),
  beta("1"),
  word("night"),
)

describe("a formula", () => {
  it.each([
    [cloglog, "ln(−ln(1 − μ)) = β₀ + β₁ night"],
    [{ type: "fraction", above: number("1"), below: name("μ") } as Formula, "1/μ"],
    [{ type: "fraction", above: row(number("1"), sign("+"), name("μ")), below: number("2") } as Formula, "(1 + μ)/2"],
    [{ type: "power", base: name("μ"), with: number("−2") } as Formula, "μ⁻²"],
    [{ type: "power", base: name("μ"), with: name("a") } as Formula, "μ^a"],
    [{ type: "root", of: name("μ") } as Formula, "√(μ)"],
  ])("reads in one line as it would be said (%#)", (formula, text) => {
    expect(formulaText(formula)).toBe(text)
  })

  it("is MathML with words upright and symbols leaning", () => {
    expect(mathOf(row(word("ln"), name("μ")))).toEqual({
      tag: "mrow",
      of: [
        { tag: "mi", text: "ln", upright: true },
        { tag: "mi", text: "μ", upright: false },
      ],
    })
    expect(mathOf(beta("1"))).toEqual({
      tag: "msub",
      of: [
        { tag: "mi", text: "β", upright: false },
        { tag: "mn", text: "1" },
      ],
    })
  })
})
