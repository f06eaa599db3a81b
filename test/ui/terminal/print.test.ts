// Findings as text: every block is printed, numbers stand on their points, and a notice says where to look.

import { describe, expect, it } from "vitest"
import type { Block } from "../../../cells/block.ts"
import type { State } from "../../../runtime/engine.ts"
import type { Hash, Key } from "../../../runtime/value.ts"
import type { Finding } from "../../../ui/terminal/findings.ts"
import { blockLines, printed, wrapped } from "../../../ui/terminal/print.ts"

const printing = { width: 80, lines: new Map<string, number>(), name: (id: string) => `cell ${id}` }

const ready = (blocks: readonly Block[]): State => ({
  status: "ready",
  shown: { blocks, notices: [], summary: null },
  key: "a".repeat(64) as Key,
  hash: "b".repeat(32) as Hash,
  late: false,
})

const finding = (over: Partial<Finding>): Finding => ({ cell: "c1", kind: "model", name: "m", state: ready([]), notices: [], ...over })

describe("blocks as text", () => {
  it("aligns the numbers of a table on their points, and says what is not available", () => {
    const block: Block = {
      type: "table",
      caption: "Coefficients",
      columns: [
        { head: "of", says: null, align: "text" },
        { head: "estimate", says: null, align: "number" },
        { head: "95% interval", says: null, align: "number" },
      ],
      rows: [
        ["intercept", { value: -60.717, digits: 5 }, { from: -70.9, to: -50.5, digits: 3 }],
        ["dose", { value: 34.27, digits: 4 }, null],
        ["a · b", { value: 0.001234, digits: 4 }, null],
      ],
      folded: false,
    }
    expect(blockLines(block, 80)).toEqual([
      "Coefficients",
      "of            estimate     95% interval",
      "intercept   −60.717      −70.9 to −50.5",
      "dose         34.27                    —",
      "a · b         0.001234                —",
    ])
  })

  it("shows no more rows of a table than a screen holds, and leaves out one that is folded", () => {
    const rows = Array.from({ length: 100 }, (_, i) => [`row ${i}`])
    const block: Block = { type: "table", caption: "Rows", columns: [{ head: "row", says: null, align: "text" }], rows, folded: false }
    const lines = blockLines(block, 80)
    expect(lines).toHaveLength(2 + 39 + 1)
    expect(lines.at(-1)).toBe("and 61 more rows")
    expect(blockLines({ ...block, folded: true }, 80)).toEqual([])
  })

  it("prints a column of data in words", () => {
    const tape = { name: "night", called: "night minimum", unit: "°C", columnType: "number", marks: null, bins: null } as const
    expect(
      blockLines(
        {
          type: "tapes",
          tapes: [
            { ...tape, ends: ["−8.5", "3"], levels: null, says: "2 missing" },
            {
              ...tape,
              name: "lot",
              called: null,
              unit: null,
              columnType: "category",
              ends: null,
              levels: [
                { level: "a", rows: 12 },
                { level: "b", rows: 10 },
              ],
              says: "",
            },
          ],
        },
        80,
      ),
    ).toEqual(["night (night minimum): number, −8.5 to 3 °C; 2 missing", "lot: category, a 12, b 10"])
  })

  it("prints a dial with its reach", () => {
    const range = { from: -1, to: 1, step: 0.1, steps: 20, digits: 1 }
    expect(blockLines({ type: "dial", name: "a", range, choices: null, value: 0.3, clause: "start" }, 80)).toEqual([
      "a = 0.3 (from −1.0 to 1.0 in steps of 0.1)",
    ])
    expect(blockLines({ type: "dial", name: "l", range: null, choices: ["logit", "probit"], value: "logit", clause: "start" }, 80)).toEqual(
      ["l = logit (of logit, probit)"],
    )
  })

  it("prints some points of a curve on both scales, marks what lies outside the data, and the strip", () => {
    const x = Float64Array.from({ length: 101 }, (_, i) => i / 10)
    const like = (f: (x: number) => number): Float64Array => x.map(f)
    const candidate = {
      link: "logit",
      formula: "ln(μ/(1 − μ))",
      chosen: true,
      deltaAic: 0,
      trouble: null,
      choose: { label: "logit", edits: [] },
      curves: [
        {
          level: null,
          x,
          eta: like((v) => v - 5),
          etaLow: like((v) => v - 6),
          etaHigh: like((v) => v - 4),
          mu: like((v) => v / 10),
          muLow: like((v) => v / 20),
          muHigh: like((v) => (v + 10) / 20),
          inside: Uint8Array.from(x, (v) => (v <= 5 ? 1 : 0)),
        },
      ],
      points: [],
      bridge: { mu: new Float64Array(), eta: new Float64Array() },
    }
    const block: Block = {
      type: "scales",
      across: { name: "dose", label: "dose", unit: "mg", levels: null },
      response: { label: "killed", unit: null },
      split: null,
      possible: [0, 1],
      range: [0, 10],
      data: [0, 5],
      held: "Held: night at 3.",
      aligned: false,
      complete: true,
      confidence: 0.95,
      candidates: [
        candidate,
        { ...candidate, link: "probit", chosen: false, deltaAic: 12.34, curves: [] },
        { ...candidate, link: "log", chosen: false, deltaAic: null, trouble: "no start was found", curves: [] },
      ],
      summary: "The mean of killed rises.",
    }
    const lines = blockLines(block, 80)
    expect(lines.slice(0, 6)).toEqual([
      "The mean of killed rises.",
      "Held: night at 3.",
      "",
      "killed under logit, η = ln(μ/(1 − μ))",
      "  dose        μ          95\u202f% of μ        η          95\u202f% of η",
      " 0       0        0.0000 to 0.5000   −5.000   −6.000 to −4.000",
    ])
    expect(lines[6]).toContain("1.300")
    expect(lines[6]).not.toContain("outside")
    expect(lines.filter((line) => line.endsWith("outside the data"))).toHaveLength(4)
    expect(lines.slice(-4)).toEqual([
      "link     ΔAIC",
      "logit     0     the model's own",
      "probit   12.3",
      "log         —   no start was found",
    ])
  })

  it("prints sentences, formulas, figures and notes as the texts they carry", () => {
    expect(blockLines({ type: "sentence", text: "One two three four.", tone: "lead" }, 10)).toEqual(["One two", "three", "four."])
    expect(blockLines({ type: "formula", formula: { type: "row", of: [] }, text: "ln μ = β₀" }, 80)).toEqual(["ln μ = β₀"])
    expect(blockLines({ type: "figure", figure: { panels: [] }, text: "It bends." }, 80)).toEqual(["It bends."])
    expect(blockLines({ type: "prose", markdown: "# A\n\n- b\n" }, 80)).toEqual(["# A", "", "- b"])
  })

  it("joins the lines of a paragraph, and leaves lists, titles and code as they are", () => {
    const markdown = "# A\n\nOne\ntwo.\n\n- b\n  more\n- c\n\n```\nx\ny\n```\nBroken  \nhere."
    expect(blockLines({ type: "prose", markdown }, 80)).toEqual([
      ...["# A", "", "One two.", "", "- b more", "- c", "", "```", "x", "y", "```", "Broken  ", "here."],
    ])
  })

  it("breaks lines between words and keeps the long ones", () => {
    expect(wrapped("aaa bbbbbbbbbbbb c", 6)).toEqual(["aaa", "bbbbbbbbbbbb", "c"])
  })
})

describe("a notebook as text", () => {
  it("has the cells in order, and says of each what it waits for or why it shows nothing", () => {
    const text = printed(
      "Frost",
      [
        finding({ state: ready([{ type: "sentence", text: "It fits.", tone: "lead" }]) }),
        finding({ kind: "scales", name: null, state: { status: "waiting", for: "c1", last: null } }),
        finding({ kind: "value", name: "v", state: { status: "off" } }),
        finding({ kind: null, name: null, state: { status: "off" } }),
        finding({
          kind: "note",
          name: null,
          state: { status: "crash", text: "RangeError: no", stack: "RangeError: no\n  at f", last: null },
        }),
      ],
      printing,
    )
    expect(text).toBe(
      `Frost

model m
  It fits.

scales: waits for cell c1

value v: off

note: crash
  This is a mistake in Etamu, not in the cell: RangeError: no
    at f
`,
    )
  })

  it("says of a notice its level, cell, line and column, and the line of a file in the plain form", () => {
    const state: State = { status: "fault", notices: [], shown: null, last: null }
    const notice = {
      level: "fault",
      code: "model/x",
      clause: "link",
      text: "There is no link lgit.",
      hint: "Write logit.",
      line: 4,
      column: 8,
    } as const
    const text = printed("Frost", [finding({ state, notices: [notice] })], { ...printing, lines: new Map([["c1", 9]]) })
    expect(text).toBe(
      `Frost

model m: fault
  fault in model m, line 4, column 8 (line 12 of the file):
    There is no link lgit.
    Write logit.
`,
    )
  })
})
