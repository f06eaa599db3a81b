import { describe, expect, it } from "vitest"

import type { Change, Enclosed, Notebook } from "../../runtime/document.ts"
import { apply, bounds } from "../../runtime/document.ts"

const file = (name: string, digit = "a"): Enclosed => ({ name, media: "text/csv", size: 3, sha256: digit.repeat(64) })

const book: Notebook = {
  id: "book",
  title: "Plots",
  cells: [
    { id: "p", text: "number a" },
    { id: "q", text: "number b" },
    { id: "r", text: "sum s" },
  ],
  enclosures: [file("one"), file("two"), file("three")],
  rest: { keep: ["me"] },
}

const changed = (...changes: Change[]): Notebook => {
  const applied = apply(book, { changes })
  if (!applied.ok) throw new Error(applied.notice.text)
  return applied.notebook
}

const fits: readonly (readonly [string, readonly Change[]])[] = [
  ["an insertion at the start", [{ type: "insert", at: 0, cell: { id: "n", text: "" } }]],
  ["an insertion at the end", [{ type: "insert", at: 3, cell: { id: "n", text: "" } }]],
  ["a removal", [{ type: "remove", id: "q" }]],
  ["a write", [{ type: "write", id: "q", text: "number c" }]],
  ["a move down", [{ type: "move", id: "p", to: 2 }]],
  ["a move up", [{ type: "move", id: "r", to: 0 }]],
  ["a title", [{ type: "title", title: "Lots" }]],
  ["a new file", [{ type: "enclose", file: file("four") }]],
  ["another file of the same name", [{ type: "enclose", file: file("two", "b") }]],
  ["letting go of the first file", [{ type: "release", name: "one" }]],
  ["letting go of the last file", [{ type: "release", name: "three" }]],
  [
    "all at once",
    [
      { type: "remove", id: "p" },
      { type: "insert", at: 2, cell: { id: "p", text: "again" } },
      { type: "write", id: "p", text: "and again" },
      { type: "move", id: "p", to: 0 },
      { type: "release", name: "one" },
      { type: "enclose", file: file("two", "c") },
      { type: "enclose", file: file("one", "d") },
      { type: "title", title: "" },
    ],
  ],
]

describe("a transaction", () => {
  it.each(fits)("and its inverse give back the same notebook: %s", (_, changes) => {
    const applied = apply(book, { changes })
    if (!applied.ok) throw new Error(applied.notice.text)
    const back = apply(applied.notebook, applied.inverse)
    expect(back.ok && back.notebook).toEqual(book)
    const again = back.ok && apply(back.notebook, back.inverse)
    expect(again && (again.ok ? again.notebook : again.notice)).toEqual(applied.notebook)
  })

  it("leaves every cell that it does not write to the same object", () => {
    const next = changed({ type: "write", id: "q", text: "number c" }, { type: "move", id: "r", to: 0 })
    expect(next.cells.map(({ id }) => id)).toEqual(["r", "p", "q"])
    expect(next.cells[0]).toBe(book.cells[2])
    expect(next.cells[1]).toBe(book.cells[0])
    expect(next.cells[2]).not.toBe(book.cells[1])
  })

  it("that says what is there already leaves the notebook the same object", () => {
    expect(
      changed(
        { type: "write", id: "q", text: "number b" },
        { type: "move", id: "q", to: 1 },
        { type: "title", title: "Plots" },
        { type: "enclose", file: file("two") },
      ),
    ).toBe(book)
  })

  it("puts a file of the same name where the former one stood", () => {
    expect(changed({ type: "enclose", file: file("two", "b") }).enclosures.map(({ name, sha256 }) => name + sha256[0])).toEqual([
      "onea",
      "twob",
      "threea",
    ])
  })

  it.each<readonly [string, Change]>([
    ["document/unknown-cell", { type: "write", id: "x", text: "" }],
    ["document/unknown-cell", { type: "remove", id: "x" }],
    ["document/unknown-cell", { type: "move", id: "x", to: 0 }],
    ["document/known-cell", { type: "insert", at: 0, cell: { id: "p", text: "" } }],
    ["document/out-of-place", { type: "insert", at: 4, cell: { id: "n", text: "" } }],
    ["document/out-of-place", { type: "insert", at: 0.5, cell: { id: "n", text: "" } }],
    ["document/out-of-place", { type: "move", id: "p", to: 3 }],
    ["document/out-of-place", { type: "move", id: "p", to: -1 }],
    ["document/too-long-text", { type: "write", id: "p", text: "a".repeat(bounds.textBytes + 1) }],
    ["document/too-long-text", { type: "write", id: "p", text: "η".repeat(bounds.textBytes / 2 + 1) }],
    ["document/unknown-file", { type: "release", name: "four" }],
    ["document/too-large-file", { type: "enclose", file: { ...file("four"), size: bounds.enclosureBytes + 1 } }],
    ["document/bad-file", { type: "enclose", file: file("") }],
    ["document/bad-file", { type: "enclose", file: { ...file("four"), sha256: "A".repeat(64) } }],
    ["document/bad-file", { type: "enclose", file: { ...file("four"), size: 1.5 } }],
  ])("that does not fit is refused with the notice %s, and nothing has changed", (code, change) => {
    const before = structuredClone(book)
    const applied = apply(book, { changes: [{ type: "title", title: "Lots" }, change] })
    expect(applied.ok ? null : applied.notice.code).toBe(code)
    expect(book).toEqual(before)
  })

  it("may fill a text up to its bound in UTF-8", () => {
    expect(apply(book, { changes: [{ type: "write", id: "p", text: "η".repeat(bounds.textBytes / 2) }] }).ok).toBe(true)
  })

  it("cannot add a cell to a full notebook", () => {
    const full = { ...book, cells: Array.from({ length: bounds.cells }, (_, i) => ({ id: String(i), text: "" })) }
    const applied = apply(full, { changes: [{ type: "insert", at: 0, cell: { id: "n", text: "" } }] })
    expect(applied.ok ? null : applied.notice.code).toBe("document/too-many-cells")
  })
})
