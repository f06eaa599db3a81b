// The command as a person runs it: built, started in a folder of its own, judged by what it prints, what it writes and how it ends.

import { spawnSync } from "node:child_process"
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs"
import { tmpdir } from "node:os"
import { join } from "node:path"
import { fileURLToPath } from "node:url"
import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest"
import type { Json } from "../../../runtime/value.ts"
import { digest, readNotebook } from "../../../storage/file/index.ts"

const program = fileURLToPath(new URL("../../../ui/build/etamu.mjs", import.meta.url))
const base = mkdtempSync(join(tmpdir(), "etamu-command-"))
let folder = ""
let folders = 0

interface Ended {
  readonly code: number | null
  readonly out: string
  readonly complaints: string
}

function etamu(...words: readonly string[]): Ended {
  const { status, stdout, stderr } = spawnSync(process.execPath, [program, ...words], { cwd: folder, encoding: "utf8" })
  return { code: status, out: stdout, complaints: stderr }
}

const put = (name: string, text: string): void => writeFileSync(join(folder, name), text)
const get = (name: string): string => readFileSync(join(folder, name), "utf8")

interface Output {
  readonly notebook: string | null
  readonly findings: readonly { readonly [member: string]: Json }[]
}

// Deaths of an invented beetle, twenty at each of six doses.
const table = "dose,killed,n\n1,2,20\n2,3,20\n3,8,20\n4,12,20\n5,17,20\n6,19,20\n"
const cells = `note
# Beetles
---
data beetles
  from "beetles.csv"
---
model kill
  data beetles
  response killed out of n
  family binomial
  link logit
  predictor dose
`

beforeAll(() => {
  // The first run builds.
  folder = base
  expect(etamu("help").code).toBe(0)
}, 120_000)

beforeEach(() => {
  folders += 1
  folder = join(base, String(folders))
  mkdirSync(folder)
  put("beetles.csv", table)
  put("beetles.cells", cells)
})

afterAll(() => rmSync(base, { recursive: true, force: true }))

describe("etamu run", () => {
  it("prints one object with the members of the format, and ends with 0 where nothing is wrong", () => {
    const { code, out, complaints } = etamu("run", "beetles.cells", "--json")
    expect(complaints).toBe("")
    const output = JSON.parse(out) as Output
    expect(Object.keys(output).toSorted()).toEqual(["findings", "notebook"])
    expect(output.notebook).toBeNull()
    expect(output.findings.map(({ kind, name, status }) => [kind, name, status])).toEqual([
      ["note", null, "ready"],
      ["data", "beetles", "ready"],
      ["model", "kill", "ready"],
    ])
    for (const finding of output.findings) {
      expect(Object.keys(finding).toSorted()).toEqual(["cell", "key", "kind", "name", "notices", "status", "summary"])
      expect(finding["key"]).toMatch(/^[0-9a-f]{64}$/)
    }
    expect(output.findings[2]?.["summary"]).toMatchObject({ n: 6, rank: 2, family: "binomial", link: "logit" })
    expect(code).toBe(0)
  })

  it("gives the same object again, byte for byte", () => {
    expect(etamu("run", "beetles.cells", "--json").out).toBe(etamu("run", "beetles.cells", "--json").out)
  })

  it("prints for people what the blocks say, no statement and no stars", () => {
    const { code, out } = etamu("run", "beetles.cells")
    expect(out).toMatch(/^beetles\n\nnote\n {2}# Beetles\n\ndata beetles\n/)
    expect(out).toMatch(/intercept +−?\d/)
    expect(out).not.toContain("response killed out of n")
    expect(out).not.toMatch(/\d\s*\*/)
    expect(code).toBe(0)
  })

  it("names the clause a notice stands in, and none at the heading", () => {
    put("beetles.cells", cells.replace("  link logit\n", ""))
    const { findings } = JSON.parse(etamu("run", "beetles.cells", "--json").out) as Output
    const noticeOf = (name: string): unknown => ((findings.find((finding) => finding["name"] === name)?.["notices"] ?? []) as Json[])[0]
    expect(noticeOf("beetles")).toMatchObject({ code: "data/types-proposed", clause: "from", line: 2, column: 8 })
    expect(noticeOf("kill")).toMatchObject({ code: "model/link-not-chosen", clause: null, line: 1, column: 1 })
  })

  it("says line and column of a fault, who waits for it, and ends with 1", () => {
    put("beetles.cells", cells.replace("link logit", "link lgit").concat("---\nscales\n  model kill\n  across dose\n"))
    const { code, out } = etamu("run", "beetles.cells", "--json")
    const { findings } = JSON.parse(out) as Output
    expect(findings.map(({ status }) => status)).toEqual(["ready", "ready", "fault", "waiting"])
    const [notice] = (findings[2]?.["notices"] ?? []) as readonly { readonly [member: string]: Json }[]
    expect(Object.keys(notice ?? {}).toSorted()).toEqual(["clause", "code", "column", "hint", "level", "line", "text"])
    expect(notice).toMatchObject({ level: "fault", clause: "link", line: 5, column: 8 })
    expect(code).toBe(1)
    const text = etamu("run", "beetles.cells").out
    expect(text).toContain("fault in model kill, line 5, column 8 (line 11 of the file):")
    expect(text).toContain("scales: waits for kill")
  })

  it("says which file is not beside the cells", () => {
    put("beetles.cells", cells.replace("beetles.csv", "beetle.csv"))
    const { code, out } = etamu("run", "beetles.cells")
    expect(out).toContain("beetle.csv")
    expect(code).toBe(1)
  })

  it("does not read what does not lie with the cells", () => {
    writeFileSync(join(base, "elsewhere.csv"), table)
    put("beetles.cells", cells.replace("beetles.csv", "../elsewhere.csv"))
    const { code, complaints } = etamu("run", "beetles.cells")
    expect(complaints).toContain("../elsewhere.csv does not lie with the notebook")
    expect(code).toBe(1)
  })

  it("ends with 2 for misuse, with the usage beside it and nothing printed", () => {
    for (const words of [[], ["fit"], ["run"], ["run", "beetles.cells", "--stars"], ["run", "nothing.cells"], ["pack", "beetles.cells"]]) {
      const { code, out, complaints } = etamu(...words)
      expect([words, code, out]).toEqual([words, 2, ""])
      expect(complaints).not.toBe("")
    }
  })

  it("ends with 1 for a notebook that was cut short, and goes on with what is there", () => {
    etamu("pack", "beetles.cells", "-o", "beetles.etamu")
    const file = get("beetles.etamu")
    put("beetles.etamu", file.slice(0, file.indexOf("response")))
    const { code, out, complaints } = etamu("run", "beetles.etamu", "--json")
    expect((JSON.parse(out) as Output).findings).toHaveLength(2)
    expect(complaints).toContain("The file was cut short in line 4.")
    expect(code).toBe(1)
  })

  it("ends with 1 for cells that are not UTF-8, in one sentence", () => {
    writeFileSync(join(folder, "latin.cells"), Buffer.from("note\ncaf\xe9\n", "latin1"))
    const { code, out, complaints } = etamu("run", "latin.cells")
    expect([code, out]).toEqual([1, ""])
    expect(complaints).toBe("latin.cells: The file is not valid UTF-8, so it is not read. Save it as UTF-8 text.\n")
  })

  it("ends with 1 for a file that is no notebook, in one sentence", () => {
    put("other.etamu", "a,b\n1,2\n")
    const { code, out, complaints } = etamu("run", "other.etamu", "--json")
    expect([code, out]).toEqual([1, ""])
    expect(complaints).toBe("other.etamu: This file is not a notebook of Etamu. A notebook file begins with a record of the type etamu.\n")
  })
})

describe("etamu pack and unpack", () => {
  it("make a sealed notebook with its enclosures inside, and the same files again", async () => {
    expect(etamu("pack", "beetles.cells", "-o", "beetles.etamu")).toEqual({ code: 0, out: "", complaints: "" })
    const opened = await readNotebook(new Blob([get("beetles.etamu")]))
    expect(opened.notices).toEqual([])
    expect(opened.standing).toEqual({ status: "sealed" })
    expect(opened.kept?.notebook).toMatchObject({
      title: "beetles",
      enclosures: [{ name: "beetles.csv", media: "text/csv", size: table.length, sha256: digest(table) }],
    })
    expect(opened.kept?.trail.map(({ kind }) => kind)).toEqual(["start"])

    expect(etamu("unpack", "beetles.etamu", "-o", "there")).toEqual({ code: 0, out: "", complaints: "" })
    expect(get("there/beetles.cells")).toBe(cells)
    expect(get("there/beetles.csv")).toBe(table)
  })

  it("give a notebook that finds the same without the file beside it", () => {
    etamu("pack", "beetles.cells", "-o", "beetles.etamu")
    rmSync(join(folder, "beetles.csv"))
    const packed = JSON.parse(etamu("run", "beetles.etamu", "--json").out) as Output
    expect(packed.notebook).toMatch(/^[0-9a-f-]{36}$/)
    put("beetles.csv", table)
    const plain = JSON.parse(etamu("run", "beetles.cells", "--json").out) as Output
    expect(packed.findings).toEqual(plain.findings)
  })

  it("say what is not beside the cells, and write the notebook without it", () => {
    rmSync(join(folder, "beetles.csv"))
    const { code, complaints } = etamu("pack", "beetles.cells", "-o", "beetles.etamu")
    expect(complaints).toBe("The file beetles.csv is not beside beetles.cells, so it is not enclosed.\n")
    expect(code).toBe(1)
    // It is looked for beside the notebook then.
    put("beetles.csv", table)
    expect(etamu("run", "beetles.etamu").code).toBe(0)
  })

  it("write over nothing that holds something else", () => {
    etamu("pack", "beetles.cells", "-o", "beetles.etamu")
    expect(etamu("unpack", "beetles.etamu").code).toBe(0)
    put("beetles.csv", "mine")
    const { code, complaints } = etamu("unpack", "beetles.etamu")
    expect(code).toBe(1)
    expect(complaints).toContain("beetles.csv is there already and holds something else.")
    expect(get("beetles.csv")).toBe("mine")
  })

  it("do not use an enclosure that was altered, and name it", () => {
    etamu("pack", "beetles.cells", "-o", "beetles.etamu")
    put("beetles.etamu", get("beetles.etamu").replace("1,2,20", "1,3,20"))
    rmSync(join(folder, "beetles.csv"))
    const { code, complaints } = etamu("run", "beetles.etamu")
    expect(complaints).toContain("The bytes of the enclosure beetles.csv are not those it was sealed with")
    expect(code).toBe(1)
    // The file it came from still has the SHA-256 that the notebook states; another has not.
    put("beetles.csv", table)
    expect(etamu("run", "beetles.etamu").code).toBe(0)
    put("beetles.csv", table.replace("1,2,20", "1,3,20"))
    expect(etamu("run", "beetles.etamu").complaints).toContain("its SHA-256 differs, so it is not used")
  })

  it("write no enclosure outside the folder", async () => {
    etamu("pack", "beetles.cells", "-o", "beetles.etamu")
    put("evil.etamu", get("beetles.etamu").replace('"name":"beetles.csv"', '"name":"../beetles.csv"'))
    const { code, complaints } = etamu("unpack", "evil.etamu", "-o", "there")
    expect(code).toBe(1)
    expect(complaints).toContain('The enclosure "../beetles.csv" has no name a file could have here')
    expect(get("beetles.csv")).toBe(table)
  })
})
