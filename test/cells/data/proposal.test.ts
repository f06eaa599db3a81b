// What a data cell proposes is what it read: over every case of the kind and every example of its README, the clauses that a click writes
// out find the same table, and nothing is left to propose.

import { readdirSync, readFileSync } from "node:fs"
import { fileURLToPath } from "node:url"
import { describe, expect, it } from "vitest"
import { data } from "../../../cells/data/index.ts"
import { read } from "../../../runtime/statement.ts"
import { caseFrom, examplesIn, filesIn } from "../case.ts"
import { codes, type Files, finding, mended, noticeOf } from "./laboratory.ts"

const folder = fileURLToPath(new URL("../../../cells/data/", import.meta.url))
const beside = filesIn(`${folder}cases`)
const caseNamed = (name: string): ReturnType<typeof caseFrom> => caseFrom(readFileSync(`${folder}cases/${name}.txt`, "utf8"))
const all: readonly { says: string; cell: string; files: Files }[] = [
  ...readdirSync(`${folder}cases`)
    .filter((name) => name.endsWith(".txt"))
    .map((name) => caseNamed(name.slice(0, -4))),
  ...examplesIn(readFileSync(`${folder}README.md`, "utf8")),
].map(({ says, cells, files }) => ({ says, cell: cells[0] ?? "", files: { ...beside, ...files } }))
const undeclared = all.filter(({ cell }) => !/^\s*column /m.test(cell))

describe("what a data cell proposes", () => {
  it.each(undeclared)("is what it read: $says", async ({ cell, files }) => {
    const outcome = await finding(cell, files)
    const again = await finding(mended(cell, noticeOf(outcome, "data/types-proposed").mend), files)
    expect(again.found?.parts).toEqual(outcome.found?.parts)
    expect(codes(again.notices).filter((code) => /proposed|names-made/.test(code))).toEqual([])
  })

  it.each<[string, readonly string[]]>([
    ["decimal-comma", ['  separator ";"', '  decimal ","', "  column bed category", "  column mass number", "  column buds count"]],
    ["doubled-header", ["  where x < x_2", "  column x count", '  column x_2 headed "x" count', "  column y count"]],
    ["missing-texts", ['  missing "n/a", "-"', "  column flow number", "  column grade category"]],
  ])("is written out as clauses by one click: %s", async (name, clauses) => {
    const cell = caseNamed(name).cells[0] ?? ""
    const written = mended(cell, noticeOf(await finding(cell, beside), "data/types-proposed").mend)
    expect(written.split("\n").slice(2)).toEqual(clauses)
  })

  it("is shown with a sentence, the columns as ruled lines and the first rows, and showing changes nothing", async () => {
    const cell = caseNamed("accounts").cells[0] ?? ""
    const { found } = await finding(cell, beside)
    if (found === null) throw new Error("no finding")
    const before = structuredClone(found)
    const [sentence, tapes, rows] = data.show(found, data.words.parse(read(cell)).said)
    expect(found).toEqual(before)
    expect(sentence).toEqual({
      type: "sentence",
      tone: "lead",
      text: "6 rows read, 4 kept; where buds > 0 dropped 1; where share < 0.5 dropped 1, where it cannot be said; total sown, buds by bed made 3 rows of them.",
    })
    expect(tapes).toMatchObject({
      type: "tapes",
      tapes: [
        {
          name: "bed",
          ends: null,
          levels: [
            { level: "a", rows: 1 },
            { level: "b", rows: 1 },
            { level: "c", rows: 1 },
          ],
        },
        {
          name: "sown",
          ends: ["5", "40"],
          marks: [
            { at: 0, rows: 1 },
            { at: 1 / 7, rows: 1 },
            { at: 1, rows: 1 },
          ],
          bins: null,
        },
        { name: "buds" },
        { name: "rows" },
      ],
    })
    expect(rows).toMatchObject({ type: "table", folded: true, caption: "All rows" })
  })

  it("shows many values in bins that hold every row once", async () => {
    const text = `x\n${Array.from({ length: 500 }, (_, i) => (i * 37) % 101).join("\n")}\n`
    const { found } = await finding('data d\n  from "x.csv"', { "x.csv": text })
    const bins = found?.profiles[0]?.bins ?? new Float64Array()
    expect([bins.length, bins.reduce((sum, rows) => sum + rows, 0)]).toEqual([48, 500])
  })
})
