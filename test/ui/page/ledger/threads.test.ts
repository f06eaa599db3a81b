// Threads: who makes a name and who uses it, in lanes that do not run over each other. The cells here are data and scales.

import { describe, expect, it } from "vitest"
import type { Notebook } from "../../../../runtime/document.ts"
import { lanes, strands, threads } from "../../../../ui/page/ledger/threads.ts"

const notebook = (...texts: string[]): Notebook => ({
  id: "n",
  title: "",
  cells: texts.map((text, i) => ({ id: `c${i}`, text })),
  enclosures: [],
  rest: null,
})

const scales = (model: string): string => `scales\n  across x\n  model ${model}`

describe("threads", () => {
  it("join the cell that makes a name to those that use it, at the line of the use", () => {
    const [thread] = threads(notebook('data a\n  from "a.csv"', "# nothing", scales("a")))
    expect(thread).toMatchObject({ name: "a", maker: "c0", from: 0, to: 2, users: [{ cell: "c2", row: 2, line: 2 }] })
  })

  it("are not drawn for a name that nobody uses or nobody makes", () => {
    expect(threads(notebook('data a\n  from "a.csv"', scales("b")))).toEqual([])
  })

  it("run upwards too, since reading order decides nothing", () => {
    const [thread] = threads(notebook(scales("a"), 'data a\n  from "a.csv"'))
    expect(thread).toMatchObject({ maker: "c1", from: 0, to: 1 })
  })

  it("never share a lane in a row", () => {
    const book = notebook("data a", "data b", scales("a"), scales("b"), "data c", scales("c"))
    const all = threads(book).filter(({ hidden }) => !hidden)
    for (const one of all) {
      for (const other of all) {
        if (one === other || one.lane !== other.lane) continue
        expect(one.to < other.from || other.to < one.from).toBe(true)
      }
    }
    expect(all).toHaveLength(3)
  })

  it("beyond the last lane show only while one of their cells is in focus", () => {
    const names = Array.from({ length: lanes + 1 }, (_, i) => `d${i}`)
    const book = notebook(...names.map((name) => `data ${name}`), ...names.map(scales))
    const all = threads(book)
    const hidden = all.find((thread) => thread.hidden)
    expect(all.filter((thread) => thread.hidden)).toHaveLength(1)
    const maker = hidden?.maker ?? ""
    const row = book.cells.findIndex(({ id }) => id === maker)
    expect(strands(all, row, maker, null).some(({ knot }) => knot?.type === "ring")).toBe(false)
    expect(strands(all, row, maker, maker).some(({ knot, lit }) => knot?.type === "ring" && lit)).toBe(true)
  })

  it("end at the rows they join: nothing above the first and nothing below the last", () => {
    const book = notebook("data a", "# between", scales("a"))
    const at = (row: number) => strands(threads(book), row, `c${row}`, null)[0]
    expect(at(0)).toMatchObject({ above: false, below: true, knot: { type: "ring" } })
    expect(at(1)).toMatchObject({ above: true, below: true, knot: null })
    expect(at(2)).toMatchObject({ above: true, below: false, knot: { type: "dot" } })
  })
})
