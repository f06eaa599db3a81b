// Colours of a statement: every mark lies in the text, in order, and says what the grammar says.

import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { marks } from "../../../../ui/page/statement/marks.ts"
import { readingOf } from "../../../../ui/page/statement/reading.ts"

/** The stretches of a text with their kinds, such as `kind data`. */
const marked = (text: string): string[] => marks(readingOf(text)).map(({ from, to, kind }) => `${kind} ${text.slice(from, to)}`)

describe("the marks of a statement", () => {
  it("tell kind, name, keyword, text and number apart", () => {
    expect(marked('data frost\n  from "terrace.csv"\n  make warm = night + 2.5 # degrees')).toEqual([
      "kind data",
      "name frost",
      "keyword from",
      'text "terrace.csv"',
      "keyword make",
      "name warm",
      "sign =",
      "name night",
      "sign +",
      "number 2.5",
      "comment # degrees",
    ])
  })

  it("tell words of a form from names that look like them", () => {
    expect(marked("data d\n  column number number")).toEqual(["kind data", "name d", "keyword column", "name number", "word number"])
  })

  it("see calls, and that a cell is off", () => {
    expect(marked("off data d\n  make x = log10(y)")).toEqual([
      "off off",
      "kind data",
      "name d",
      "keyword make",
      "name x",
      "sign =",
      "call log10",
      "sign (",
      "name y",
      "sign )",
    ])
  })

  it("in a note are its titles and its live values", () => {
    expect(marked('note\n# Why\nThe slope is {coefficient(kill, "night"); 3}, \\{not this}')).toEqual([
      "kind note",
      "title # Why",
      'live {coefficient(kill, "night"); 3}',
    ])
  })

  it("lie in the text, in order and apart, whatever the text", () => {
    fc.assert(
      fc.property(fc.string({ unit: "grapheme", maxLength: 80 }), (text) => {
        let at = 0
        for (const { from, to } of marks(readingOf(text))) {
          expect(from).toBeGreaterThanOrEqual(at)
          expect(to).toBeGreaterThanOrEqual(from)
          at = to
        }
        expect(at).toBeLessThanOrEqual(text.length)
      }),
    )
  })
})
