import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { Dictionary } from "../../../cells/table/dictionary.ts"

describe("a dictionary of texts by their bytes", () => {
  it("gives each text one code, in order of meeting, and gives the texts back", () => {
    fc.assert(
      fc.property(fc.array(fc.string({ unit: "grapheme", maxLength: 4 }), { maxLength: 400 }), (texts) => {
        const dictionary = new Dictionary()
        const order: string[] = []
        for (const text of texts) {
          const bytes = new TextEncoder().encode(`-${text}-`)
          if (!order.includes(text)) order.push(text)
          expect(dictionary.code(bytes, 1, bytes.length - 1)).toBe(order.indexOf(text))
        }
        expect(dictionary.texts()).toEqual(order)
        expect(dictionary.size).toBe(order.length)
      }),
    )
  })

  it("keeps a hundred thousand texts apart", () => {
    const dictionary = new Dictionary()
    for (const round of [0, 1]) {
      for (let i = 0; i < 100_000; i++) {
        const bytes = new TextEncoder().encode(`plot ${i * 7919}`)
        if (dictionary.code(bytes, 0, bytes.length) !== i) expect([round, i]).toEqual([])
      }
    }
    expect(dictionary.texts()[99_999]).toBe(`plot ${99_999 * 7919}`)
  })
})
