// One test for each notice of the kind: its code and its place, and what its mend would write.

import { describe, expect, it } from "vitest"
import { codes, type Files, finding, mended, noticeOf } from "./laboratory.ts"

/** The token texts a place covers say more than numbers: clause −1 is the heading. */
type At = readonly [clause: number, from: number, to: number]

type Case = {
  readonly code: string
  readonly cell: string
  readonly files?: Files
  readonly cells?: Readonly<Record<string, number | string | Record<string, number>>>
  readonly at: At
  readonly text: RegExp
  readonly level?: "fault" | "warning" | "remark"
  readonly written?: string | null
}

const beds = { "beds.csv": "bed,sown,buds\na,10,4\na,10,0\nb,20,5\n" }
const cell = (...clauses: readonly string[]): string =>
  ["data beds", '  from "beds.csv"', ...clauses.map((clause) => `  ${clause}`)].join("\n")
const csv = (text: string | Uint8Array): Files => ({ "beds.csv": text })
const bytes = (...parts: readonly (string | number)[]): Uint8Array =>
  Uint8Array.from(parts.flatMap((part) => (typeof part === "number" ? [part] : [...new TextEncoder().encode(part)])))
const said = ["column bed category", "column sown count", "column buds count"]

const cases: readonly Case[] = [
  { code: "no-from", cell: "data beds", at: [-1, 0, 0], text: /does not say which file/ },
  { code: "not-available-yet", cell: 'data beds\n  from "beds.parquet"', at: [0, 1, 2], text: /parquet is not available yet/ },
  { code: "not-available-yet", cell: 'data beds\n  from "beds.csv" as json', at: [0, 1, 2], text: /json is not available yet/ },
  { code: "separator-sign", cell: cell('separator ";;"'), at: [1, 1, 2], text: /one sign, and ";;" is not/ },
  { code: "decimal-sign", cell: cell('decimal ";"'), at: [1, 1, 2], text: /a point or a comma, not ";"/ },
  {
    code: "column-twice",
    cell: cell("column bed category", "column bed text"),
    at: [2, 1, 2],
    text: /column bed stands here a second time/,
  },
  { code: "column-twice", cell: cell("make a = 1", "make a = 2"), at: [2, 1, 2], text: /column a stands here a second time/ },
  { code: "column-twice", cell: cell("total buds by buds"), at: [1, 3, 4], text: /column buds stands here a second time/ },
  { code: "level-twice", cell: cell('column bed category levels "a", "a"'), at: [1, 1, 2], text: /level "a" of bed stands here twice/ },
  { code: "file-not-here", cell: 'data beds\n  from "gone.csv"', at: [0, 1, 2], text: /There is no file called gone.csv/ },
  {
    code: "not-utf-8",
    cell: cell(),
    files: csv(bytes("bed,sown\nCaf", 0xe9, ",1\n")),
    at: [0, 1, 2],
    text: /byte 13, in row 1 \(bed\), is E9, which many older files use for é/,
  },
  { code: "not-text", cell: cell(), files: csv(bytes("PK", 3, 4, 0)), at: [0, 1, 2], text: /is a zip archive/ },
  { code: "not-text", cell: cell(), files: csv(bytes(0xff, 0xfe, "a", 0)), at: [0, 1, 2], text: /is UTF-16 text/ },
  {
    code: "open-quote",
    cell: cell(),
    files: csv('bed,sown\na,"1\nb,2\n'),
    at: [0, 1, 2],
    text: /opened in row 1 of beds.csv \(sown\) is never closed/,
  },
  { code: "empty-file", cell: cell(), files: csv("\n\n"), at: [0, 1, 2], text: /beds.csv holds nothing/ },
  { code: "no-rows", cell: cell(), files: csv("bed,sown\n"), at: [0, 1, 2], text: /a header and no rows/, level: "warning" },
  {
    code: "long-rows",
    cell: cell(),
    files: csv("bed,sown\na,1\nb,2,5\n"),
    at: [0, 1, 2],
    text: /Row 2 of beds.csv has 3 fields where the first line has 2/,
  },
  {
    code: "short-rows",
    cell: cell(),
    files: csv("bed,sown\na\nb,2\nc\nd\ne\n"),
    at: [0, 1, 2],
    text: /4 rows \(first: 1, 3 and 4\) of beds.csv/,
    level: "warning",
  },
  {
    code: "trailing-fields",
    cell: cell(),
    files: csv("bed,sown\na,1,\nb,2\n"),
    at: [0, 1, 2],
    text: /Row 1 of beds.csv ends with empty fields/,
    level: "remark",
  },
  {
    code: "empty-lines",
    cell: cell(),
    files: csv("bed,sown\na,1\n\n\nb,2\n"),
    at: [0, 1, 2],
    text: /2 lines of beds.csv with nothing on them/,
    level: "remark",
  },
  {
    code: "stray-quotes",
    cell: cell(),
    files: csv('bed,sown\na"x,1\n'),
    at: [0, 1, 2],
    text: /1 field of beds.csv has a quote out of place \(first: row 1\)/,
    level: "warning",
  },
  {
    code: "header-like-data",
    cell: cell(),
    files: csv("1,2\n3,4\n"),
    at: [0, 1, 2],
    text: /numbers only/,
    level: "warning",
    written: cell("header no"),
  },
  {
    code: "separator-proposed",
    cell: cell(),
    files: csv("bed;sown\na;1\n"),
    at: [0, 1, 2],
    text: /has no comma, so it was read with a semicolon/,
    level: "warning",
    written: cell('separator ";"'),
  },
  {
    code: "separator-proposed",
    cell: cell(),
    files: csv("bed\tsown\na\t1\n"),
    at: [0, 1, 2],
    text: /with a tab/,
    level: "warning",
    written: 'data beds\n  from "beds.csv" as tsv',
  },
  {
    code: "decimal-proposed",
    cell: cell('separator ";"'),
    files: csv("bed;mass\na;1,5\n"),
    at: [0, 1, 2],
    text: /mass are written with a decimal comma/,
    level: "warning",
    written: cell('separator ";"', 'decimal ","'),
  },
  {
    code: "missing-proposed",
    cell: cell('missing "x"'),
    files: csv("bed,sown\na,1\nb,NA\nc,x\n"),
    at: [0, 1, 2],
    text: /"NA" in sown \(1 row, first: row 2\)/,
    level: "warning",
    written: cell('missing "x", "NA"'),
  },
  {
    code: "types-proposed",
    cell: cell(),
    at: [0, 1, 2],
    text: /bed category, sown count and buds count/,
    level: "remark",
    written: cell(...said),
  },
  {
    code: "names-made",
    cell: cell(),
    files: csv("body mass (kg),,mu\n1,2,3\n"),
    at: [0, 1, 2],
    text: /"body mass \(kg\)" is called body_mass here, Column 2 has no head and is called column_2 here and "mu" is called _mu here/,
    level: "remark",
  },
  {
    code: "head-twice",
    cell: cell(),
    files: csv("x,x\n1,2\n"),
    at: [0, 1, 2],
    text: /2 columns of the file are headed "x"; here they are x and x_2/,
    level: "warning",
  },
  {
    code: "leading-zeros",
    cell: cell(),
    files: csv("plot,y\n12,1\n007,2\n"),
    at: [0, 1, 2],
    text: /"007" \(row 2\) would lose its zeros/,
    level: "remark",
  },
  {
    code: "long-identifier",
    cell: cell(),
    files: csv("tag,y\n90071992547409931,1\n"),
    at: [0, 1, 2],
    text: /"90071992547409931" \(row 1\) has more digits/,
    level: "remark",
  },
  {
    code: "mixed",
    cell: cell(),
    files: csv("x,y\n1,1\n2,2\nlow,3\n3,4\n"),
    at: [0, 1, 2],
    text: /3 of its 4 entries are numbers, but not "low" \(row 3\)/,
    level: "warning",
  },
  {
    code: "comma-doubt",
    cell: cell('separator ";"'),
    files: csv("x;y\n1,234;1\n"),
    at: [0, 1, 2],
    text: /in "1,234" \(row 1\) the comma may be/,
    level: "warning",
    written: cell('separator ";"', 'decimal ","'),
  },
  {
    code: "maybe-missing",
    cell: cell("column bed category"),
    files: csv("bed,y\na,1\n-,2\n"),
    at: [1, 1, 2],
    text: /bed has the level "-" in 1 row \(first: row 2\)/,
    level: "remark",
    written: cell("column bed category", 'missing "-"'),
  },
  { code: "blank-levels", cell: cell(), files: csv("bed,y\na,1\na ,2\n"), at: [0, 1, 2], text: /"a" and "a "/, level: "warning" },
  {
    code: "no-such-column",
    cell: cell("column bedd category"),
    at: [1, 1, 2],
    text: /beds.csv has no column headed bedd/,
    written: cell("column bed category"),
  },
  {
    code: "no-such-column",
    cell: cell('column lot headed "Bed" category'),
    at: [1, 1, 2],
    text: /no column headed "Bed" for lot/,
    written: cell('column lot headed "bed" category'),
  },
  {
    code: "no-such-column",
    cell: cell("column bed category", "column sown count", "column buds count", "column w count"),
    at: [4, 1, 2],
    text: /no column headed w/,
  },
  {
    code: "column-claimed",
    cell: cell("column bed category", 'column lot headed "bed" category'),
    at: [2, 1, 2],
    text: /The column headed "bed" is called bed already, so it cannot be lot too\./,
  },
  {
    code: "misfit",
    cell: cell("column sown count"),
    files: csv("bed,sown\na,1\nb,abc\nc,2\nd,x\n"),
    at: [1, 1, 2],
    text: /^Row 2 of beds.csv says "abc" in sown, which is not a number; so do 1 more \("x" in row 4\)\.$/,
    written: null,
  },
  {
    code: "misfit",
    cell: cell("column sown count"),
    files: csv("bed,sown\na,1\nb,n/a\n"),
    at: [1, 1, 2],
    text: /says "n\/a" in sown/,
    written: cell("column sown count", 'missing "n/a"'),
  },
  {
    code: "misfit",
    cell: cell('column sown count unit "g"'),
    files: csv("bed,sown\na,-1\nb,1.5\n"),
    at: [1, 1, 2],
    text: /says "-1" in sown, which is below 0/,
    written: cell('column sown number unit "g"'),
  },
  {
    code: "misfit",
    cell: cell("column tag number"),
    files: csv("tag\n9007199254740993\n"),
    at: [1, 1, 2],
    text: /more digits than a number can keep apart/,
    written: cell("column tag text"),
  },
  {
    code: "misfit",
    cell: cell("column x number"),
    files: csv("x\n1e999\n"),
    at: [1, 1, 2],
    text: /beyond the largest number/,
    written: null,
  },
  { code: "misfit", cell: cell("column x truth"), files: csv("x\nmaybe\n"), at: [1, 1, 2], text: /neither true nor false/, written: null },
  { code: "misfit", cell: cell("column x date"), files: csv("x\n2024-02-30\n"), at: [1, 1, 2], text: /not a date/, written: null },
  {
    code: "misfit",
    cell: cell('column bed category levels "a", "c"'),
    at: [1, 1, 2],
    text: /Row 3 of beds.csv says "b" in bed, which is not among its levels/,
    written: null,
  },
  {
    code: "lost-zeros",
    cell: cell("column plot number"),
    files: csv("plot\n7\n007\n"),
    at: [1, 1, 2],
    text: /loses the zeros in front of 1 entry \(first: row 2\)/,
    level: "warning",
    written: cell("column plot category"),
  },
  {
    code: "nothing-present",
    cell: cell("column x number"),
    files: csv("x,y\n,1\n,2\n"),
    at: [1, 1, 2],
    text: /Every entry of x is missing/,
    level: "warning",
  },
  {
    code: "column-and-cell",
    cell: cell("make y = sown + 1"),
    cells: { sown: 3 },
    at: [1, 3, 4],
    text: /sown is a column of beds and a cell as well/,
  },
  {
    code: "unknown-name",
    cell: cell("where bud > 0"),
    at: [1, 1, 2],
    text: /no column and no cell called bud/,
    written: cell("where buds > 0"),
  },
  { code: "not-a-value", cell: cell("make y = m + 1"), cells: { m: { fit: 1 } }, at: [1, 3, 4], text: /The cell m is not a single value/ },
  { code: "column-exists", cell: cell("make sown = 1"), at: [1, 1, 2], text: /There is a column sown already/ },
  { code: "not-a-truth", cell: cell("where sown"), at: [1, 0, 1], text: /needs something true or false, and this is a number/ },
  { code: "lost-values", cell: cell("make y = 1 / buds"), at: [1, 1, 2], text: /y has no value in 1 row/, level: "warning" },
  {
    code: "lost-values",
    cell: cell("where 1 / buds > 0"),
    at: [1, 0, 1],
    text: /In 1 row a part of this is no finite number/,
    level: "warning",
  },
  { code: "waits-for-column", cell: cell("column sown truth", "where sown"), at: [2, 1, 2], text: /waits for the column sown/ },
  {
    code: "nothing-kept",
    cell: cell("where buds > 99"),
    at: [1, 0, 1],
    text: /No row is left: buds > 99 is true in none/,
    level: "warning",
  },
  { code: "no-such-column", cell: cell("total budz by bed"), at: [1, 1, 2], text: /There is no column called budz/ },
  { code: "not-summable", cell: cell("total bed by sown"), at: [1, 1, 2], text: /bed is a category, and only numbers/ },
  { code: "rows-taken", cell: cell("total rows by bed"), files: csv("bed,rows\na,1\n"), at: [1, 0, 4], text: /there is one already/ },
  {
    code: "total-missing",
    cell: cell("total sown by bed"),
    files: csv("bed,sown\na,1\na,\nb,2\n"),
    at: [1, 1, 2],
    text: /1 total of sown is missing, because sown is missing in 1 row/,
    level: "warning",
    written: cell("total sown by bed", "where known(sown)"),
  },
]

describe("notices of data", () => {
  it.each(cases)("data/$code: $text", async ({ code, cell: statement, files, cells, at, text, level, written }) => {
    const outcome = await finding(statement, files ?? beds, cells)
    const notice = noticeOf(outcome, `data/${code}`)
    expect([notice.at.clause, notice.at.from, notice.at.to]).toEqual(at)
    expect(notice.text).toMatch(text)
    expect(notice.level).toBe(level ?? "fault")
    expect(outcome.ok).toBe(!outcome.notices.some((one) => one.level === "fault"))
    if (written === undefined) return
    if (written === null) expect(notice.mend).toBeNull()
    else expect(mended(statement, notice.mend)).toBe(written)
    // A mend does away with what it mends.
    if (written !== null && code !== "total-missing") {
      const again = await finding(written, files ?? beds, cells)
      expect(codes(again.notices)).not.toContain(`data/${code}`)
    }
  })

  it("are full sentences, without blame", async () => {
    for (const { cell: statement, files, cells } of cases) {
      for (const { text, hint } of (await finding(statement, files ?? beds, cells)).notices) {
        expect(text).toMatch(/^[\p{Lu}\p{Ll}_"\d−].*\.$/su)
        if (hint !== null) expect(hint).toMatch(/\.$/)
        expect(`${text} ${hint}`).not.toMatch(/!|please|invalid|sorry/i)
      }
    }
  })

  it("suggest a nearest level", async () => {
    const { hint } = noticeOf(await finding(cell('column bed category levels "alder", "birch"'), csv("bed\nalder\nbrich\n")), "data/misfit")
    expect(hint).toBe('The nearest level is "birch".')
  })

  it("name the nearest column of a total", async () => {
    expect(noticeOf(await finding(cell("total budz by bed"), beds), "data/no-such-column").hint).toBe("The nearest is buds.")
  })
})
