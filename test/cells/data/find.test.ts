import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { columnSays, quoted } from "../../../cells/data/clauses.ts"
import { data } from "../../../cells/data/index.ts"
import { dataWords } from "../../../cells/data/words.ts"
import { rowsPart } from "../../../cells/table/column.ts"
import { read } from "../../../runtime/statement.ts"
import { codes, column, entries, finding, workWith } from "./laboratory.ts"

const beds = { "beds.csv": "bed,sown,buds\na,10,4\na,10,0\nb,20,5\nb,,7\n" }
const cell = (...clauses: readonly string[]): string =>
  ["data beds", '  from "beds.csv"', ...clauses.map((clause) => `  ${clause}`)].join("\n")

describe("what a data cell finds", () => {
  it("keeps which record of the file each row is, through where and total", async () => {
    const records = (found: Awaited<ReturnType<typeof finding>>): unknown => found.found?.parts[rowsPart]
    expect(records(await finding(cell("where buds > 0"), beds))).toEqual({
      file: "beds.csv",
      sha256: "0".repeat(64),
      records: Uint32Array.of(0, 2, 3),
    })
    expect(records(await finding(cell("where buds > 0", "total buds by bed"), beds))).toMatchObject({ records: Uint32Array.of(0, 2) })
  })

  it("lets a row through only where the condition is true, and counts what cannot be said", async () => {
    const { found } = await finding(cell("where sown > 10"), beds)
    expect(found?.dropped).toEqual([{ by: "where sown > 10", rows: 3, unknown: 1 }])
    expect([found?.read, found?.kept, found?.rows]).toEqual([4, 1, 1])
  })

  it("does make and where in the order written", async () => {
    const before = await finding(cell("make middle = mean(buds)", "where buds > 0"), beds)
    const after = await finding(cell("where buds > 0", "make middle = mean(buds)"), beds)
    expect(entries(before, "middle")[0]).toBe(4)
    expect(entries(after, "middle")[0]).toBeCloseTo(16 / 3, 14)
  })

  it("reads dials and values by their name, as numbers, texts and truths", async () => {
    const outcome = await finding(cell("where buds > least", "make lot = which", "make on = yes_no"), beds, {
      least: 4,
      which: "x",
      yes_no: { value: true },
    })
    expect(outcome.ok).toBe(true)
    expect(entries(outcome, "buds")).toEqual([5, 7])
    expect(entries(outcome, "lot")).toEqual(["x", "x"])
    expect(entries(outcome, "on")).toEqual([1, 1])
  })

  it("uses every bare name of its expressions once, but not its own", () => {
    const { said } = dataWords.parse(read('data bed\n  from "beds.csv"\n  where bed = "a" and buds > k\n  make y = buds * k'))
    expect(dataWords.names(said)).toMatchObject({ defines: "bed", files: ["beds.csv"] })
    expect(dataWords.names(said).uses.map(({ name, either, parts }) => [name, either, parts])).toEqual([
      ["buds", true, "all"],
      ["k", true, "all"],
    ])
  })

  it("totals by patterns in order of first appearance, missing values being a pattern", async () => {
    const outcome = await finding(cell("total buds by sown, bed"), beds)
    expect([entries(outcome, "sown"), entries(outcome, "bed"), entries(outcome, "buds"), entries(outcome, "rows")]).toEqual([
      [10, 20, null],
      ["a", "b", "b"],
      [4, 5, 7],
      [2, 1, 1],
    ])
  })

  it("keeps the rest of the table when one column is at fault", async () => {
    const outcome = await finding(cell("column bed number", "make y = buds + 1"), beds)
    expect([outcome.ok, outcome.found?.columns]).toEqual([false, ["sown", "buds", "y"]])
  })

  it("hands out columns that own their memory, so that one can be sent without the others", async () => {
    const { found } = await finding(cell("where buds > 0"), beds)
    for (const part of Object.values(found?.parts ?? {})) {
      for (const array of Object.values(part)) if (ArrayBuffer.isView(array)) expect(array.byteLength).toBe(array.buffer.byteLength)
    }
  })

  it("finds the same columns whatever is made beside them", async () => {
    const [one, two] = [await finding(cell(), beds), await finding(cell("make y = buds * 2"), beds)]
    for (const name of ["bed", "sown", "buds"]) expect(column(two, name)).toEqual(column(one, name))
  })

  it("orders levels that are whole numbers by value, else by UTF-16 code units", async () => {
    const levels = async (text: string): Promise<unknown> => {
      const of = column(await finding(cell("column x category"), { "beds.csv": `x\n${text.replaceAll(" ", "\n")}\n` }), "x")
      return "levels" in of ? of.levels : null
    }
    expect(await levels("10 9 -1 007")).toEqual(["-1", "007", "9", "10"])
    expect(await levels("b a B é z 10")).toEqual(["10", "B", "a", "b", "z", "é"])
  })

  it("takes names that hold whole numbers of any length apart", async () => {
    const text = "x\n9007199254740993\n9007199254740992\n9007199254740993\n"
    expect(entries(await finding(cell("column x category"), { "beds.csv": text }), "x")).toEqual([
      "9007199254740993",
      "9007199254740992",
      "9007199254740993",
    ])
  })

  it("takes a wrong type of file for a crash of nobody's: anything thrown but a missing file goes on", async () => {
    const { said } = dataWords.parse(read(cell()))
    const work = workWith(beds)
    const broken = {
      ...work,
      file: () => {
        throw new RangeError("disk")
      },
    }
    await expect(data.evaluate(said, new Map(), broken)).rejects.toThrow(RangeError)
    const gone = {
      ...work,
      file: () => {
        throw Object.assign(new Error("gone"), { name: "NoFile" })
      },
    }
    expect(codes((await data.evaluate(said, new Map(), gone)).notices)).toEqual(["data/file-not-here"])
  })

  it("stops when the work is no longer wanted", async () => {
    const { said } = dataWords.parse(read(cell()))
    const work = {
      ...workWith(beds),
      checkpoint: () => Promise.reject(Object.assign(new Error("no longer wanted"), { name: "Cancelled" })),
    }
    await expect(data.evaluate(said, new Map(), work)).rejects.toThrow("no longer wanted")
  })
})

describe("parsing a data cell", () => {
  it("survives any text", () => {
    const line = fc.oneof(
      fc.string(),
      fc.constantFrom(
        "column",
        "column x",
        "column x headed number",
        "total",
        "total a by",
        "from",
        "make = 1",
        "where",
        "missing",
        "separator",
        "decimal 3",
        "header maybe",
        'column x category levels "a",',
      ),
    )
    fc.assert(
      fc.property(fc.array(line, { maxLength: 6 }), (lines) => {
        const { said, notices } = dataWords.parse(read(`data d\n${lines.join("\n")}`))
        dataWords.names(said)
        for (const { text, at } of notices) expect([text.length > 0, at.from <= at.to]).toEqual([true, true])
      }),
      { numRuns: 500 },
    )
  })
})

describe("writing a table and reading it back", () => {
  type Written = {
    readonly type: "number" | "count" | "category" | "truth" | "date" | "text"
    readonly cells: readonly (string | null)[]
    readonly values: readonly (number | string | null)[]
  }
  const gap = <T>(arbitrary: fc.Arbitrary<T>): fc.Arbitrary<T | null> => fc.option(arbitrary, { freq: 5 })
  const words = fc
    .string({ unit: "grapheme", minLength: 1, maxLength: 8 })
    .map((text) => text.replaceAll("\0", "·"))
    .filter((text) => text.trim() !== "" && !/^[ \t]*$/.test(text))
  const columnOf = (rows: number): fc.Arbitrary<Written> => {
    const sized = <T>(arbitrary: fc.Arbitrary<T>): fc.Arbitrary<(T | null)[]> =>
      fc.array(gap(arbitrary), { minLength: rows, maxLength: rows })
    const numbers = sized(fc.double({ noNaN: true, noDefaultInfinity: true }))
    return fc.oneof(
      numbers.map(
        (values): Written => ({
          type: "number",
          cells: values.map((x) => (x === null ? null : String(x))),
          values: values.map((x) => (x === 0 ? 0 : x)),
        }),
      ),
      sized(fc.nat()).map((values): Written => ({ type: "count", cells: values.map((x) => (x === null ? null : String(x))), values })),
      sized(fc.boolean()).map(
        (values): Written => ({
          type: "truth",
          cells: values.map((x) => (x === null ? null : String(x))),
          values: values.map((x) => (x === null ? null : Number(x))),
        }),
      ),
      sized(fc.integer({ min: -100_000, max: 100_000 })).map(
        (values): Written => ({
          type: "date",
          cells: values.map((day) => (day === null ? null : new Date(day * 86_400_000).toISOString().slice(0, 10))),
          values,
        }),
      ),
      sized(words).map((values): Written => ({ type: "category", cells: values, values })),
      sized(words).map((values): Written => ({ type: "text", cells: values, values })),
    )
  }
  const tables = fc.integer({ min: 1, max: 12 }).chain((rows) => fc.array(columnOf(rows), { minLength: 1, maxLength: 5 }))

  it("gives the same table for any table, separator, decimal sign and line end", async () => {
    await fc.assert(
      fc.asyncProperty(
        tables,
        fc.constantFrom(",", ";", "\t", "|"),
        fc.constantFrom(".", ","),
        fc.constantFrom("\n", "\r\n", "\r"),
        async (table, separator, decimal, end) => {
          const field = (text: string | null, type: string): string => {
            const said = text === null ? "" : type === "number" && decimal === "," ? text.replace(".", ",") : text
            return /[",;\t|\r\n]/.test(said) || text === null ? `"${said.replaceAll('"', '""')}"` : said
          }
          const heads = table.map((_, i) => `head ${i}`)
          const rows = table[0]?.cells.map((_, row) => table.map((of) => field(of.cells[row] ?? null, of.type)).join(separator)) ?? []
          const text = [heads.join(separator), ...rows].join(end)
          const clauses = table.map(({ type }, i) => `column c${i} headed ${quoted(`head ${i}`)} ${type}`)
          const sign = separator === "\t" ? "separator tab" : `separator ${quoted(separator)}`
          const outcome = await finding(cell(sign, `decimal ${quoted(decimal)}`, ...clauses), { "beds.csv": text })
          expect(outcome.ok).toBe(true)
          for (const [i, { values }] of table.entries()) expect(entries(outcome, `c${i}`)).toEqual(values)
        },
      ),
      { numRuns: 300 },
    )
  })

  it("gives the same numbers and texts when the types are proposed", async () => {
    await fc.assert(
      fc.asyncProperty(tables, async (table) => {
        const field = (text: string | null): string => `"${(text ?? "").replaceAll('"', '""')}"`
        const rows = table[0]?.cells.map((_, row) => table.map((of) => field(of.cells[row] ?? null)).join(",")) ?? []
        const outcome = await finding(cell('decimal "."'), { "beds.csv": [table.map((_, i) => `c${i}`).join(","), ...rows].join("\n") })
        table.forEach(({ cells, values, type }, i) => {
          const found = column(outcome, `c${i}`)
          // A number column of whole numbers is a count, and beyond 2^53 it is text; texts that are numbers are numbers: but nothing is lost.
          const expected = "codes" in found ? cells : type === "category" || type === "text" ? null : values
          if (expected !== null && !codes(outcome.notices).includes("data/missing-proposed"))
            expect(entries(outcome, `c${i}`)).toEqual(expected)
        })
      }),
      { numRuns: 200 },
    )
  })

  it("writes column clauses that read back as they were", () => {
    const texts = fc
      .string({ unit: "grapheme", minLength: 1, maxLength: 10 })
      .map((text) => text.replace(/[\p{C}\p{Z}]/gu, " "))
      .filter((text) => text.trim() !== "")
    const option = fc.option(texts, { nil: null })
    fc.assert(
      fc.property(option, option, option, fc.constantFrom("number" as const, "count" as const), (headed, unit, called, type) => {
        const says = columnSays({ name: "x", headed, type, unit, called })
        const { said, notices } = dataWords.parse(read(cell(`column ${says}`)))
        expect(notices).toEqual([])
        expect(said.columns[0]).toMatchObject({ name: "x", headed, type, unit, called })
      }),
    )
    fc.assert(
      fc.property(
        option,
        fc.uniqueArray(texts, { minLength: 1, maxLength: 4 }),
        fc.constantFrom("corner" as const, "sum_to_zero" as const),
        (called, levels, coding) => {
          const says = columnSays({ name: "x", headed: null, type: "category", unit: null, called, levels, coding })
          expect(dataWords.parse(read(cell(`column ${says}`))).said.columns[0]).toMatchObject({ called, levels, coding })
        },
      ),
    )
  })
})
