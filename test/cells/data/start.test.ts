import { describe, expect, it } from "vitest"
import { startBytes, startFor } from "../../../cells/data/start.ts"
import { dataWords } from "../../../cells/data/words.ts"
import { read } from "../../../runtime/statement.ts"
import { codes, finding } from "./laboratory.ts"

const bytes = (text: string): Uint8Array => new TextEncoder().encode(text)

describe("the statement a dropped file starts with", () => {
  it.each<[string, string, readonly string[]]>([
    ["beds.csv", "bed,buds\na,1\nb,2\n", ["data beds", '  from "beds.csv"', "  column bed category", "  column buds count"]],
    [
      "bud counts 2024.csv",
      "body mass (kg);lot\n1,5;007\n0,5;n/a\nNA;010\n",
      [
        "data bud_counts_2024",
        '  from "bud counts 2024.csv"',
        '  separator ";"',
        '  decimal ","',
        '  missing "NA"',
        '  column body_mass headed "body mass (kg)" number unit "kg"',
        "  column lot category",
      ],
    ],
    ["trays.tsv", "a\tb\n1\t2\n", ["data trays", '  from "trays.tsv"', "  column a count", "  column b count"]],
    ["trays.txt", "a\tb\n1\t2\n", ["data trays", '  from "trays.txt" as tsv', "  column a count", "  column b count"]],
    ['odd "name".csv', "a\n1\n", ["data odd_name", '  from "odd \\"name\\".csv"', "  column a count"]],
    ["123.csv", "a\n1\n", ["data _123", '  from "123.csv"', "  column a count"]],
    ["empty.csv", "", ["data empty", '  from "empty.csv"']],
  ])("of %s proposes what the file speaks for", async (name, text, lines) => {
    const statement = startFor(name, bytes(text))
    expect(statement).toBe(lines.join("\n"))
    expect(dataWords.parse(read(statement)).notices).toEqual([])
    if (text === "") return
    const outcome = await finding(statement, { [name]: text })
    expect([outcome.ok, codes(outcome.notices).filter((code) => code.includes("proposed"))]).toEqual([true, []])
  })

  it("leaves what it cannot read to the cell, which says what is wrong", async () => {
    const latin = Uint8Array.of(...bytes("bed,buds\nCaf"), 0xe9, ...bytes(",1\n"))
    expect(startFor("beds.csv", latin)).toBe('data beds\n  from "beds.csv"')
    expect(codes((await finding(startFor("beds.csv", latin), { "beds.csv": latin })).notices)).toEqual(["data/not-utf-8"])
  })

  it("goes by the rows that are whole when the file goes on beyond its beginning", () => {
    const row = "a,1.25\n"
    const text = `bed,mass\n${row.repeat(Math.ceil(startBytes / row.length) + 10)}`
    for (let cut = 0; cut < row.length; cut++) {
      const head = bytes(text.slice(0, startBytes + cut))
      expect(startFor("beds.csv", head)).toBe('data beds\n  from "beds.csv"\n  column bed category\n  column mass number')
    }
  })

  it("goes by the rows before a quoted field that the beginning cuts in two", () => {
    const head = bytes(`bed,remark\n${'a,"one\nline"\n'.repeat(30_000)}`).subarray(0, startBytes)
    expect(startFor("beds.csv", head)).toBe('data beds\n  from "beds.csv"\n  column bed category\n  column remark category')
  })
})
