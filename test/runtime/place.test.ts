import { describe, expect, it } from "vitest"
import { lineAndColumn, textRange } from "../../runtime/place.ts"
import { read } from "../../runtime/statement.ts"

const text = "off model m extra\n  link  log\n  predictor a\n    + b"

describe("a place", () => {
  it.each([
    [-1, 0, 0, ""],
    [-1, 1, 2, "model"],
    [-1, 2, 4, "m extra"],
    [0, 0, 1, "link"],
    [0, 1, 2, "log"],
    [0, 1, 1, ""],
    [0, 9, 9, ""],
    [1, 1, 4, "a\n    + b"],
    [1, 0, 99, "predictor a\n    + b"],
  ])("in clause %i from token %i to %i is %j", (clause, from, to, expected) => {
    const range = textRange(read(text), { clause, from, to })
    expect(text.slice(range.from, range.to)).toBe(expected)
  })

  it("before a token is empty and stands at its start, after the last one at its end", () => {
    expect(textRange(read(text), { clause: 0, from: 1, to: 1 }).from).toBe(text.indexOf("log"))
    expect(textRange(read(text), { clause: 0, from: 2, to: 2 }).from).toBe(text.indexOf("log") + 3)
  })

  it("survives spacing", () => {
    const spaced = "off model  m extra # so\n link\n  predictor  a + b"
    const range = textRange(read(spaced), { clause: 1, from: 3, to: 4 })
    expect(spaced.slice(range.from, range.to)).toBe("b")
  })

  it("in the body of a note counts from the start of the body", () => {
    const note = "note n\nsee {x}"
    const range = textRange(read(note), { clause: 0, from: 4, to: 7 })
    expect(note.slice(range.from, range.to)).toBe("{x}")
    expect(textRange(read(note), { clause: 0, from: 40, to: 70 })).toEqual({ from: note.length, to: note.length })
  })
})

describe("line and column", () => {
  it.each([
    ["abc", 0, 1, 1],
    ["abc", 3, 1, 4],
    ["a\nbc", 2, 2, 1],
    ["a\n\nbc", 4, 3, 2],
    ["😀b", 2, 1, 2],
  ])("of %j at %i are %i, %i", (given, at, line, column) => {
    expect(lineAndColumn(given, at)).toEqual({ line, column })
  })
})
