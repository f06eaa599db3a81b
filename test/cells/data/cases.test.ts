// Reads every case of the kind: files, a cell, and what the cell finds, with a first line that says what it shows. What a mend writes out
// is also evaluated: it has to find the same and have nothing more to propose.

import { readdirSync, readFileSync } from "node:fs"
import { fileURLToPath } from "node:url"
import { describe, expect, it } from "vitest"
import { data } from "../../../cells/data/index.ts"
import { account } from "../../../cells/data/show.ts"
import { read } from "../../../runtime/statement.ts"
import { codes, finding, mended, noticeOf } from "./laboratory.ts"

type Expected = { summary: unknown; notices: string[]; sentence?: string; written?: string }

const folder = fileURLToPath(new URL("../../../cells/data/cases/", import.meta.url))

const caseOf = (text: string): { says: string; files: Record<string, string>; cell: string; expected: Expected } => {
  const [says = "", ...sections] = text.split(/^--- /m)
  const files: Record<string, string> = {}
  let cell = ""
  let expected: Expected | null = null
  for (const section of sections) {
    const end = section.indexOf("\n")
    const head = section.slice(0, end)
    const body = section.slice(end + 1)
    const [, escaped, name] = /^(escaped )?file (.*)$/.exec(head) ?? []
    if (name !== undefined) files[name] = escaped === undefined ? body : JSON.parse(`"${body.trimEnd()}"`)
    else if (head === "cell") cell = body.trimEnd()
    else if (head === "finds") expected = JSON.parse(body) as Expected
    else throw new Error(`a section called ${head}`)
  }
  if (expected === null || cell === "") throw new Error("a case without cell or finding")
  return { says: says.replace(/^#\s*/, "").trim(), files, cell, expected }
}

// The expected numbers were computed elsewhere, by sums in another order: the last two of 16 digits may differ.
const toDigits = (value: unknown): unknown =>
  JSON.parse(JSON.stringify(value), (_, part: unknown) => (typeof part === "number" ? Number(part.toPrecision(14)) : part))

describe("cases of data", () => {
  const names = readdirSync(folder).filter((name) => name.endsWith(".case"))
  it.each(names.map((name) => ({ name, ...caseOf(readFileSync(folder + name, "utf8")) })))(
    "$name: $says",
    async ({ files, cell, expected }) => {
      const outcome = await finding(cell, files)
      if (outcome.found === null) throw new Error(codes(outcome.notices).join(", "))
      expect(toDigits(data.summary(outcome.found))).toEqual(toDigits(expected.summary))
      expect(codes(outcome.notices)).toEqual(expected.notices)
      expect(outcome.ok).toBe(!outcome.notices.some(({ level }) => level === "fault"))
      if (expected.sentence !== undefined) expect(account(outcome.found)).toBe(expected.sentence)
      if (!expected.notices.includes("data/types-proposed")) return
      const written = mended(cell, noticeOf(outcome, "data/types-proposed").mend)
      if (expected.written !== undefined) expect(written).toBe(expected.written)
      const again = await finding(written, files)
      expect(again.found?.parts).toEqual(outcome.found.parts)
      expect(codes(again.notices).filter((code) => /proposed|names-made/.test(code))).toEqual([])
    },
  )

  it("shows a finding without changing it", async () => {
    const { files, cell } = caseOf(readFileSync(`${folder}accounts.case`, "utf8"))
    const { found } = await finding(cell, files)
    if (found === null) throw new Error("no finding")
    const before = structuredClone(found)
    const { said } = data.words.parse(read(cell))
    const [sentence, tapes, rows] = data.show(found, said)
    expect(found).toEqual(before)
    expect([sentence?.type, tapes?.type, rows?.type]).toEqual(["sentence", "tapes", "table"])
  })
})
