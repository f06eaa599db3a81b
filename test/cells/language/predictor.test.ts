import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { type Terms, termsFrom, variablesOf } from "../../../cells/language/predictor.ts"
import { read } from "../../../runtime/statement.ts"

const termsOf = (text: string): Terms => {
  const { terms, slips } = termsFrom(read(`model m\n  predictor ${text}`).clauses[0]?.tokens ?? [], 0, 1)
  if (terms === null) throw new Error(slips.map((slip) => slip.text).join(" "))
  return terms
}

const written = (text: string): string => {
  const { intercept, terms } = termsOf(text)
  return `${intercept ? "1" : "0"} ${terms.map((term) => term.says).join(" ")}`.trim()
}

// The expansions follow Wilkinson & Rogers (1973), Applied Statistics 22:392–399, with "." binding tightest, then "/", "*", "+" and "-".
describe("a predictor", () => {
  it.each([
    ["a", "1 a"],
    ["intercept", "1"],
    ["a + b", "1 a b"],
    ["a.b", "1 a.b"],
    ["a*b", "1 a b a.b"],
    ["a*b*c", "1 a b c a.b a.c b.c a.b.c"],
    ["a/b", "1 a a.b"],
    ["a/b/c", "1 a a.b a.b.c"],
    ["a*b/c", "1 a b b.c a.b a.b.c"],
    ["(a + b)/c", "1 a b a.b.c"],
    ["a/(b + c)", "1 a a.b a.c"],
    ["(a + b).c", "1 a.c b.c"],
    ["(a + b)*c", "1 a b c a.c b.c"],
    ["a.b*c", "1 c a.b a.b.c"],
    ["a.a", "1 a"],
    ["a.b + b.a", "1 a.b"],
    ["a + a", "1 a"],
    ["a*b - a", "1 b a.b"],
    ["a*b*c - a.b.c", "1 a b c a.b a.c b.c"],
    ["a*b - (a + b)", "1 a.b"],
    ["a - intercept", "0 a"],
    ["a - intercept + intercept", "1 a"],
    ["a - (intercept + b) + b", "0 a b"],
    ["log(a) + power(b, 2)", "1 log(a) power(b, 2)"],
    ["power(b, -0.5)", "1 power(b, -0.5)"],
    ["polynomial(night, degree 2).lot", "1 polynomial(night, degree 2).lot"],
    [
      "natural_spline(x, knots 3) + periodic(day, period 365.25) + category(n) + square_root(x)",
      "1 natural_spline(x, knots 3) periodic(day, period 365.25) category(n) square_root(x)",
    ],
    ["log.log(log)", "1 log.log(log)"],
    ["a.b + c", "1 c a.b"],
    ["e\u0301", "1 é"],
  ])("%s stands for %s", (text, expected) => {
    expect(written(text)).toBe(expected)
  })

  it("may be a sum of thousands, and a chain of nests", () => {
    const names = Array.from({ length: 5_000 }, (_, k) => `column_${k}`)
    expect(termsOf(names.join(" + ")).terms.length).toBe(5_000)
    expect(termsOf(names.slice(0, 150).join("/")).terms.map(({ pieces }) => pieces.length)).toEqual(
      names.slice(0, 150).map((_, k) => k + 1),
    )
  })

  it("gives each variable once, where it stands first", () => {
    expect(variablesOf(termsOf("a*log(b) + b"))).toEqual([
      { name: "a", at: { clause: 0, from: 1, to: 2 } },
      { name: "b", at: { clause: 0, from: 3, to: 7 } },
    ])
  })

  it("stands for the same terms when every product is written out", () => {
    const name = fc.constantFrom("a", "b", "c")
    const predictor: fc.Arbitrary<string> = fc.letrec<{ whole: string }>((tie) => ({
      whole: fc.oneof(
        { maxDepth: 4 },
        name,
        fc.tuple(tie("whole"), fc.constantFrom("+", "*", ".", "/"), tie("whole")).map(([l, sign, r]) => `(${l}) ${sign} (${r})`),
      ),
    })).whole
    fc.assert(
      fc.property(predictor, (text) => {
        const terms = termsOf(text)
        expect(written(terms.terms.map((term) => term.says).join(" + "))).toBe(written(text))
      }),
    )
  })
})
