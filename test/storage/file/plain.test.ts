// The plain form: what parts cells and what does not, and the law that the texts come back as they were.

import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { plainCells, plainForm, readPlain } from "../../../storage/file/plain.ts"

const cellTexts = (file: string): string[] => plainCells(file).map(({ text }) => text)

describe("the plain form", () => {
  it.each([
    ["one cell", "note\n  hello\n", ["note\n  hello"]],
    ["two cells", "data d\n---\nmodel m\n", ["data d", "model m"]],
    ["a last line without line feed", "data d\n---\nmodel m", ["data d", "model m"]],
    ["nothing", "", []],
    ["blank lines belong to the cell", "a b\n\n---\n\nc d\n", ["a b\n", "\nc d"]],
    ["a parting line at either end makes no cell", "---\na b\n---\n", ["a b"]],
    ["two parting lines in a row make no cell between them", "a b\n---\n---\nc d\n", ["a b", "c d"]],
    ["an empty line between parting lines is an empty cell", "a b\n---\n\n---\nc d\n", ["a b", "", "c d"]],
    ["a backslash before three hyphens goes", "note\nabove\n\\---\nbelow\n", ["note\nabove\n---\nbelow"]],
    ["one of two backslashes goes", "note\n\\\\---\n", ["note\n\\---"]],
    ["four hyphens, a space or an indent part nothing", "note\n----\n--- \n ---\n", ["note\n----\n--- \n ---"]],
    ["line ends of other systems", "\uFEFFa b\r\n---\r\nc d\r\n", ["a b", "c d"]],
  ])("reads %s", (_, file, texts) => {
    expect(cellTexts(file)).toEqual(texts)
  })

  it("says on which line of the file each cell begins", () => {
    expect(plainCells("a b\nmore\n---\n\nc d\n---\ne f\n").map(({ line }) => line)).toEqual([1, 4, 7])
  })

  const line = fc.oneof(
    fc.constantFrom("---", "\\---", "\\\\---", "----", "", " ---", "model m"),
    fc.string().map((s) => s.replace(/[\r\n]/g, "")),
  )
  const text = fc.array(line, { minLength: 1, maxLength: 6 }).map((lines) => lines.join("\n"))

  it("gives any texts back", () => {
    fc.assert(
      fc.property(fc.array(text, { maxLength: 5 }), (texts) => {
        fc.pre(!texts[0]?.startsWith("\uFEFF"))
        expect(cellTexts(plainForm(texts))).toEqual(texts)
      }),
    )
  })

  it("is the same file again where no cell is left empty", () => {
    const file = 'data d\n  from "d.csv"\n\n---\n\nnote\n# Heading\n\\---\n---\nmodel m\n'
    expect(plainForm(cellTexts(file))).toBe(file)
  })

  it("is read from bytes within the bounds of the format, and says with its line what exceeds them", () => {
    const read = (text: string): ReturnType<typeof readPlain> => readPlain(new TextEncoder().encode(text))
    expect(read("\uFEFFa b\n---\nc d\n")).toEqual({
      cells: [
        { text: "a b", line: 1 },
        { text: "c d", line: 3 },
      ],
      notices: [],
    })
    const long = read(`a b\n---\n${"x".repeat(1024 * 1024 + 1)}\n---\nc d\n`)
    expect(long.cells.map(({ text }) => text)).toEqual(["a b", "c d"])
    expect(long.notices.map(({ code, line }) => [code, line])).toEqual([["file/cell-too-long", 3]])
    const many = read("a b\n---\n".repeat(10_003))
    expect(many.cells).toHaveLength(10_000)
    expect(many.notices.map(({ code, line }) => [code, line])).toEqual([["file/too-many-cells", 20_001]])
  })

  it("is refused in one sentence where it is not UTF-8", () => {
    const { cells, notices } = readPlain(Uint8Array.of(0x6e, 0xe9, 0x0a))
    expect(cells).toEqual([])
    expect(notices.map(({ code }) => code)).toEqual(["file/not-utf-8"])
  })
})
