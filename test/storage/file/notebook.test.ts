// The notebook file: what is written reads back the same, the same notebook gives the same bytes, and whatever is wrong with a file is said
// with its line while all the rest is read.

import fc from "fast-check"
import { describe, expect, it } from "vitest"
import type { Enclosed } from "../../../runtime/document.ts"
import type { Json } from "../../../runtime/value.ts"
import { canonical } from "../../../storage/file/canonical.ts"
import {
  appended,
  digest,
  type Kept,
  newlyKept,
  notebookFile,
  type Opened,
  obstacles,
  readNotebook,
  trailHead,
  writeNotebook,
} from "../../../storage/file/index.ts"

const encoder = new TextEncoder()
const time = "2024-05-01T08:30:00Z"
const id = "3f2504e0-4f89-41d3-9a0c-0305e82c3301"

/** Bytes with the record that names them. */
function enclosed(name: string, bytes: Uint8Array<ArrayBuffer>): { file: Enclosed; blob: Blob } {
  return { file: { name, media: "text/csv", size: bytes.length, sha256: digest(bytes) }, blob: new Blob([bytes]) }
}

function book(texts: readonly string[], files: readonly { file: Enclosed; blob: Blob }[] = []): Kept {
  return newlyKept({
    id,
    title: "Frost",
    cells: texts.map((text, i) => ({ id: `c${i + 1}`, text })),
    enclosures: files.map(({ file }) => file),
    time,
    by: "A reader",
    writer: "etamu 0.1.0",
  })
}

const store =
  (files: readonly { file: Enclosed; blob: Blob }[] = []) =>
  async (sha256: string): Promise<Blob | null> =>
    files.find(({ file }) => file.sha256 === sha256)?.blob ?? null

const textOf = async (kept: Kept, files: readonly { file: Enclosed; blob: Blob }[] = []): Promise<string> =>
  (await notebookFile(kept, store(files))).text()

const readText = (text: string): Promise<Opened> => readNotebook(new Blob([text]))
const codes = (opened: Opened): string[] => opened.notices.map(({ code, line }) => `${code} ${line ?? "-"}`)

/** The lines of a file with one put in the place of another, and the seal as it was. */
const withLine = (text: string, line: number, change: (record: string) => string): string =>
  text
    .split("\n")
    .map((record, i) => (i === line - 1 ? change(record) : record))
    .join("\n")

const frost = enclosed("frost.csv", encoder.encode("night,killed\n-3,4\n-5,9\n"))
const notText = enclosed("frost.parquet", Uint8Array.of(0x50, 0x41, 0x52, 0x31, 0xff, 0, 0x80))

describe("a written notebook", () => {
  it("is one canonical record a line, in the order of the format, sealed", async () => {
    const kept = { ...book(["data d"], [frost]), findings: [{ cell: "c1", key: "0".repeat(64), summary: { rows_read: 2 } }] }
    const text = await textOf(kept, [frost])
    const lines = text.split("\n")
    expect(lines.pop()).toBe("")
    const records = lines.map((line) => JSON.parse(line) as { [member: string]: Json })
    expect(records.map((record) => record["@record"])).toEqual(["etamu", "cell", "enclosure", "bytes", "finding", "trail", "seal"])
    expect(lines.map((line) => canonical(JSON.parse(line) as Json))).toEqual(lines)
    expect(lines.every((line) => line.startsWith('{"@record":'))).toBe(true)
    expect(records[0]).toEqual({ "@record": "etamu", version: 1, id, title: "Frost", made: time, changed: time, writer: "etamu 0.1.0" })
    expect(records[3]).toEqual({ "@record": "bytes", sha256: frost.file.sha256, at: 0, as: "text", data: "night,killed\n-3,4\n-5,9\n" })
    const start = records[5] as { [member: string]: Json }
    expect(start).toMatchObject({ seq: 1, kind: "start", previous: "0".repeat(64), body: { id, title: "Frost", writer: "etamu 0.1.0" } })
    const { hash, ...open } = start
    expect(hash).toBe(digest(canonical(open)))
    expect(records[6]).toEqual({
      "@record": "seal",
      sha256: digest(text.slice(0, text.lastIndexOf('{"@record":"seal"'))),
      trail_size: 1,
      // A leaf is hashed with a 0 before it.
      trail_root: digest(`\0${lines[5]}`),
      signatures: [],
    })
  })

  it("reads back as it was, sealed and with no notice", async () => {
    const kept = book(["data d", "note\nÄ 😀 \u0000"], [frost, notText])
    const opened = await readNotebook(await notebookFile(kept, store([frost, notText])))
    expect(opened.notices).toEqual([])
    expect(opened.standing).toEqual({ status: "sealed" })
    expect({ ...opened.kept, seal: null }).toEqual(kept)
    expect(await opened.bytes.get(frost.file.sha256)?.text()).toBe("night,killed\n-3,4\n-5,9\n")
    expect(new Uint8Array((await opened.bytes.get(notText.file.sha256)?.arrayBuffer()) ?? new ArrayBuffer())).toEqual(
      new Uint8Array(await notText.blob.arrayBuffer()),
    )
  })

  it("keeps a byte-order mark, and carries in base64 what is not text", async () => {
    const marked = enclosed("marked.csv", encoder.encode("\uFEFFa\n1\n"))
    const text = await textOf(book([], [marked, notText]), [marked, notText])
    expect(text).toContain('"as":"text","at":0,"data":"\uFEFFa\\n1\\n"')
    expect(text).toContain('"as":"base64","at":0,"data":"UEFSMf8AgA=="')
    const opened = await readText(text)
    expect(opened.bytes.get(marked.file.sha256)?.size).toBe(7)
    expect(opened.standing.status).toBe("sealed")
  })

  it("cuts the bytes of an enclosure at 1 MiB, and text between characters", async () => {
    // Each character takes three bytes, and 1 MiB is no multiple of three.
    const long = enclosed("long.txt", encoder.encode("€".repeat(800_000)))
    const binary = enclosed("long.bin", new Uint8Array(1024 * 1024 + 5).fill(0xff))
    const text = await textOf(book([], [long, binary]), [long, binary])
    const records = text.split("\n").flatMap((line) => (line.startsWith('{"@record":"bytes"') ? [JSON.parse(line)] : []))
    expect(records.map(({ at, as }) => [as, at])).toEqual([
      ["text", 0],
      ["text", 1_048_575],
      ["text", 2_097_150],
      ["base64", 0],
      ["base64", 1_048_576],
    ])
    const opened = await readText(text)
    expect(opened.notices).toEqual([])
    expect(await opened.bytes.get(long.file.sha256)?.text()).toBe("€".repeat(800_000))
    expect(opened.bytes.get(binary.file.sha256)?.size).toBe(1024 * 1024 + 5)
  })

  it("holds the bytes that two enclosures share once", async () => {
    const again = { file: { ...frost.file, name: "again.csv" }, blob: frost.blob }
    const text = await textOf(book([], [frost, again]), [frost, again])
    expect(text.match(/"@record":"bytes"/g)).toHaveLength(1)
    const opened = await readText(text)
    expect(opened.notices).toEqual([])
    expect(opened.kept?.notebook.enclosures.map(({ name }) => name)).toEqual(["frost.csv", "again.csv"])
  })

  it("is written although the bytes of an enclosure are not at hand, and asks for them when read", async () => {
    const opened = await readText(await textOf(book([], [frost])))
    expect(codes(opened)).toEqual(["file/missing-bytes 2"])
    expect(opened.standing.status).toBe("sealed")
    expect(opened.kept?.notebook.enclosures).toEqual([frost.file])
  })

  it("holds an empty enclosure", async () => {
    const empty = enclosed("empty.csv", new Uint8Array())
    const opened = await readText(await textOf(book([], [empty]), [empty]))
    expect(opened.notices).toEqual([])
    expect(opened.bytes.get(empty.file.sha256)?.size).toBe(0)
  })

  it("never goes out in chunks larger than a line may be", async () => {
    const long = enclosed("long.txt", encoder.encode("\u0001".repeat(1024 * 1024)))
    let most = 0
    for await (const chunk of writeNotebook(book([], [long]), store([long]))) most = Math.max(most, chunk.length)
    expect(most).toBeGreaterThan(6 * 1024 * 1024)
    expect(most).toBeLessThan(8 * 1024 * 1024)
  })
})

describe("the law of the file", () => {
  const member = fc.oneof(fc.constantFrom("later", "__proto__", "1", "é"), fc.string({ unit: "binary" }))
  const json = fc.jsonValue({ maxDepth: 4 }) as fc.Arbitrary<Json>
  const record = fc
    .dictionary(member, json, { maxKeys: 3 })
    .map((members) => ({ ...members, "@record": "later" }) as { [name: string]: Json })
  const text = fc.string({ unit: "binary", maxLength: 40 })
  const bytes = fc.oneof(
    fc.uint8Array({ maxLength: 60 }),
    fc.string({ unit: "binary" }).map((s) => encoder.encode(s)),
  ) as fc.Arbitrary<Uint8Array<ArrayBuffer>>

  it("is that reading and writing give the same bytes, unknown records and members in place", async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.array(text, { maxLength: 4 }),
        fc.array(bytes, { maxLength: 3 }),
        fc.array(fc.tuple(fc.nat(40), record), { maxLength: 5 }),
        fc.array(
          fc.tuple(
            fc.nat(40),
            member.filter((name) => !name.startsWith("@")),
            json,
          ),
          { maxLength: 5 },
        ),
        fc.array(json, { maxLength: 3 }),
        async (texts, contents, records, members, bodies) => {
          const files = contents.map((content, i) => enclosed(`file ${i}.csv`, content))
          let kept = book(texts, files)
          for (const body of bodies) kept = { ...kept, trail: appended(kept.trail, { time, by: "A reader", kind: "remark", body }) }
          kept = { ...kept, findings: texts.map((_, i) => ({ cell: `c${i + 1}`, key: "a".repeat(64), summary: bodies[i] ?? null })) }
          // A newer program's file: unknown members and records anywhere before the seal, which is then made for them.
          const lines = (await textOf(kept, files)).split("\n").slice(0, -2)
          for (const [at, name, value] of members) {
            const line = at % lines.length
            const old = JSON.parse(lines[line] ?? "") as { [name: string]: Json }
            if (old["@record"] !== "trail" && !Object.hasOwn(old, name))
              lines[line] = canonical({ ...old, ...Object.fromEntries([[name, value]]) })
          }
          for (const [at, unknown] of records) lines.splice(1 + (at % lines.length), 0, canonical(unknown))
          const body = lines.map((line) => `${line}\n`).join("")
          const head = trailHead(kept.trail)
          const seal = {
            "@record": "seal",
            sha256: digest(body),
            trail_size: head.size,
            trail_root: head.root,
            signatures: [{ name: "N" }],
          }
          const file = `${body}${canonical(seal)}\n`

          const opened = await readText(file)
          expect(opened.notices).toEqual([])
          expect(opened.standing).toEqual({ status: "sealed" })
          if (opened.kept === null) throw new Error("nothing was read")
          const again = await notebookFile(opened.kept, async (sha256) => opened.bytes.get(sha256) ?? null)
          expect(await again.text()).toBe(file)
        },
      ),
      { numRuns: 150 },
    )
  })

  it("is that reading survives any bytes, and any edit of a file, without an exception", async () => {
    const file = new Uint8Array(await (await notebookFile(book(["data d", "model m"], [frost]), store([frost]))).arrayBuffer())
    await fc.assert(
      fc.asyncProperty(fc.uint8Array({ maxLength: 200 }), fc.nat(file.length), fc.nat(200), async (noise, at, cut) => {
        expect((await readNotebook(new Blob([noise as Uint8Array<ArrayBuffer>]))).notices.length).toBeGreaterThan(0)
        const edited = new Blob([file.subarray(0, at), noise as Uint8Array<ArrayBuffer>, file.subarray(at + cut)])
        const opened = await readNotebook(edited)
        if (noise.length > 0 || at + cut < file.length) return
        // A cut alone: every whole cell before it is there.
        const whole = new TextDecoder().decode(file.subarray(0, at)).split("\n").slice(0, -1)
        expect(opened.kept?.notebook.cells.length ?? 0).toBeGreaterThanOrEqual(
          whole.filter((line) => line.includes('"@record":"cell"')).length,
        )
      }),
      { numRuns: 300 },
    )
  })

  it("is that the pieces a file comes in change nothing", async () => {
    const kept = book(["data d", "note é"], [frost])
    const file = new Uint8Array(await (await notebookFile(kept, store([frost]))).arrayBuffer())
    const whole = await readNotebook(new Blob([file]))
    for (const size of [1, 7, 100]) {
      // The same buffer for every piece, as a reader of files may do.
      const buffer = new Uint8Array(size)
      const source = (async function* () {
        for (let at = 0; at < file.length; at += size) {
          const piece = file.subarray(at, at + size)
          buffer.set(piece)
          yield buffer.subarray(0, piece.length)
        }
      })()
      const opened = await readNotebook(source)
      expect(opened.notices).toEqual([])
      expect(opened.kept).toEqual(whole.kept)
    }
  })
})

describe("a file that is not whole", () => {
  it("yields every whole record before a cut, and says so", async () => {
    const text = await textOf(book(["data d", "model m"]))
    const opened = await readText(text.slice(0, text.indexOf("model m")))
    expect(opened.kept?.notebook.cells.map((cell) => cell.text)).toEqual(["data d"])
    expect(codes(opened)).toEqual(["file/cut-short 3"])
    expect(opened.standing).toMatchObject({ status: "broken", first: { code: "file/cut-short", line: 3 } })
  })

  it("names the enclosure whose bytes a cut takes away", async () => {
    const text = await textOf(book(["data d"], [notText]), [notText])
    const opened = await readText(text.slice(0, text.indexOf("UEFS") + 2))
    expect(codes(opened)).toEqual(["file/missing-bytes 3", "file/cut-short 4"])
  })

  it("opens unsealed where trail and seal are missing", async () => {
    const lines = (await textOf(book(["data d"]))).split("\n")
    const opened = await readText(`${lines.slice(0, 2).join("\n")}\n`)
    expect(opened.standing).toEqual({ status: "unsealed" })
    expect(codes(opened)).toEqual(["file/unsealed -"])
    expect(opened.kept?.notebook.cells).toHaveLength(1)
  })

  it("opens read-only where a cell was changed after the seal", async () => {
    const text = (await textOf(book(["data d"]))).replace("data d", "data e")
    const opened = await readText(text)
    expect(opened.standing).toMatchObject({ status: "broken", first: { code: "file/broken-seal", line: 4 } })
    expect(opened.kept?.notebook.cells[0]?.text).toBe("data e")
    expect(opened.kept?.doubt).toContain("not as it was sealed")
  })

  it.each([
    ["changed", (line: string) => line.replace("A reader", "B reader"), "file/broken-chain 3"],
    ["out of order", (line: string) => line.replace('"seq":1', '"seq":2'), "file/broken-chain 3"],
    ["put in the place of another", (line: string) => line.replace(/"previous":"0/, '"previous":"1'), "file/broken-chain 3"],
    ["no longer an entry", (line: string) => line.replace('"seq":1', '"seq":-1'), "file/broken-chain 3"],
  ])("names the first entry of the trail that was %s", async (_, change, expected) => {
    const opened = await readText(withLine(await textOf(book(["data d"])), 3, change))
    expect(codes(opened)).toContain(expected)
    expect(opened.standing).toMatchObject({ status: "broken", first: { line: 3 } })
  })

  it("notices a trail that was made anew with its seal's sum mended", async () => {
    const kept = book(["data d"])
    const text = await textOf(kept)
    const other = await textOf({ ...kept, trail: appended([], { time, by: "B reader", kind: "start", body: {} }) })
    const lines = [...text.split("\n").slice(0, 2), other.split("\n")[2] ?? ""]
    const body = lines.map((line) => `${line}\n`).join("")
    const seal = (text.split("\n")[3] ?? "").replace(/"sha256":"[0-9a-f]+"/, `"sha256":"${digest(body)}"`)
    expect(codes(await readText(`${body}${seal}\n`))).toEqual(["file/other-trail 4"])
  })

  it("names what was added after the seal", async () => {
    const opened = await readText(`${await textOf(book(["data d"]))}{"@record":"cell","id":"x","text":"model m"}\n`)
    expect(codes(opened)).toEqual(["file/after-seal 5"])
  })

  it("does not use an enclosure whose bytes differ, and names it", async () => {
    const text = (await textOf(book([], [frost]), [frost])).replace("-3,4", "-3,5")
    const opened = await readText(text)
    expect(opened.bytes.size).toBe(0)
    expect(codes(opened)).toContain("file/altered-enclosure 2")
    expect(opened.notices[0]?.text).toContain("frost.csv")
  })

  it("does not use an enclosure with bytes missing, moved or not base64", async () => {
    const text = await textOf(book([], [notText]), [notText])
    expect(codes(await readText(text.replace('"at":0', '"at":1')))).toContain("file/misplaced-bytes 3")
    expect(codes(await readText(text.replace("UEFSMf8AgA==", "UEFSMf8AgB==")))).toContain("file/not-base64 3")
    expect(codes(await readText(text.replace("UEFSMf8AgA==", "UEFS")))).toContain("file/altered-enclosure 2")
    expect((await readText(text.replace("UEFSMf8AgA==", "UEFS"))).bytes.size).toBe(0)
  })

  it("refuses a newer version in one clear sentence", async () => {
    const opened = await readText((await textOf(book(["data d"]))).replace('"version":1', '"version":2'))
    expect(opened.kept).toBeNull()
    expect(codes(opened)).toEqual(["file/newer-version 1"])
    expect(opened.notices[0]?.text).toContain("version 2")
  })

  it.each([
    ["nothing", "", "file/empty -"],
    ["a table", "a,b\n1,2\n", "file/not-a-notebook 1"],
    ["numbers that are JSON", "1\n2\n", "file/not-a-notebook 1"],
    ["records of another program", '{"@record":"page"}\n{"type":"x"}\n', "file/not-a-notebook 1"],
  ])("gives one notice for %s", async (_, text, expected) => {
    const opened = await readText(text)
    expect(opened.kept).toBeNull()
    expect(codes(opened)).toEqual([expected])
  })

  it("tells some other large file early", async () => {
    let taken = 0
    const source = (async function* () {
      for (; taken < 1_000_000; taken += 1) yield encoder.encode(`${taken},x\n`)
    })()
    expect(codes(await readNotebook(source))).toEqual(["file/not-a-notebook 1"])
    expect(taken).toBeLessThan(200)
  })

  it("says that its source gave out, and keeps what came before", async () => {
    const text = await textOf(book(["data d", "model m"]))
    const source = (async function* () {
      yield encoder.encode(text.slice(0, text.indexOf("model m")))
      throw new Error("The disk was taken away.")
    })()
    const opened = await readNotebook(source)
    expect(codes(opened)).toEqual(["file/unreadable 2"])
    expect(opened.notices[0]?.text).toContain("The disk was taken away")
    expect(opened.kept?.notebook.cells).toHaveLength(1)
  })

  it("lists no more notices than anyone would read", async () => {
    const text = await textOf(book(["data d"]))
    const opened = await readText(text + "{}\n".repeat(100_000))
    expect(opened.notices.length).toBeLessThan(300)
    expect(opened.notices.at(-1)?.code).toBe("file/more")
  })

  it("reads the cells below a missing or damaged head", async () => {
    const text = await textOf(book(["data d"]))
    const without = await readText(text.slice(text.indexOf("\n") + 1))
    expect(codes(without)).toContain("file/no-head 1")
    expect(without.kept?.notebook.cells).toHaveLength(1)
    const damaged = await readText(text.replace(`"made":"${time}"`, '"made":"yesterday"'))
    expect(damaged.notices[0]).toMatchObject({ code: "file/wrong-member", line: 1 })
    expect(damaged.notices[0]?.text).toContain('"made" should be a time in UTC as in RFC 3339')
    expect(damaged.kept?.notebook).toMatchObject({ id, title: "Frost" })
  })
})

describe("the bounds of reading", () => {
  const headLine = async (): Promise<string> => (await textOf(book([]))).split("\n")[0] ?? ""
  const cellLine = (cell: string, text: string): string => canonical({ "@record": "cell", id: cell, text })

  it("let 10,000 cells in and no more", async () => {
    const lines = [await headLine(), ...Array.from({ length: 10_002 }, (_, i) => cellLine(`c${i}`, ""))]
    const opened = await readText(`${lines.join("\n")}\n`)
    expect(opened.kept?.notebook.cells).toHaveLength(10_000)
    expect(codes(opened)).toEqual(["file/too-many-cells 10002"])
    expect(opened.notices[0]?.text).toContain("10,000")
    expect((await readText(`${lines.slice(0, 10_001).join("\n")}\n`)).standing.status).toBe("unsealed")
  })

  it("let 1 MiB of text into a cell and no more, counted in bytes", async () => {
    const mebibyte = 1024 * 1024
    const lines = [await headLine(), cellLine("a", "x".repeat(mebibyte)), cellLine("b", `${"é".repeat(mebibyte / 2)}x`)]
    const opened = await readText(`${lines.join("\n")}\n`)
    expect(opened.kept?.notebook.cells.map((cell) => cell.id)).toEqual(["a"])
    expect(codes(opened)).toEqual(["file/cell-too-long 3"])
    expect(opened.notices[0]?.text).toContain("1 MiB")
  })

  it("let a line of 8 MiB in and no more, and read on below it", async () => {
    const eight = 8 * 1024 * 1024
    const longest = `{"@record":"later","x":"${"x".repeat(eight - 26)}"}`
    expect(longest.length).toBe(eight)
    const lines = [await headLine(), longest, longest.replace("xx", "xxx"), cellLine("a", "model m")]
    const opened = await readText(`${lines.join("\n")}\n`)
    expect(codes(opened)).toEqual(["file/line-too-long 3"])
    expect(opened.notices[0]?.text).toContain("8 MiB")
    expect(opened.kept?.notebook.cells).toEqual([{ id: "a", text: "model m" }])
  })

  it("let 32 levels in and no more, brackets in texts left out of the count", async () => {
    const nested = (depth: number): string => `{"@record":"later","x":${"[".repeat(depth - 1)}"\\"[[[{{{\\\\"${"]".repeat(depth - 1)}}`
    const lines = [await headLine(), nested(32), nested(33), nested(1_000_000)]
    const opened = await readText(`${lines.join("\n")}\n`)
    expect(codes(opened)).toEqual(["file/nested-too-deep 3", "file/nested-too-deep 4"])
    expect(opened.notices[0]?.text).toContain("32")
  })

  it("let an enclosure of 512 MiB in and no more, by what it says and by what comes", async () => {
    const record = (size: number): string =>
      canonical({ "@record": "enclosure", name: `f${size}`, media: "text/csv", size, sha256: "0".repeat(64) })
    const most = 512 * 1024 * 1024
    const opened = await readText(`${[await headLine(), record(most), record(most + 1)].join("\n")}\n`)
    expect(codes(opened)).toEqual(["file/missing-bytes 2", "file/enclosure-too-large 3"])
    expect(opened.notices[1]?.text).toContain("512 MiB")
    const small = canonical({ "@record": "enclosure", name: "small", media: "text/csv", size: 1, sha256: "0".repeat(64) })
    const bytes = canonical({ "@record": "bytes", sha256: "0".repeat(64), at: 0, data: "xx", as: "text" })
    expect(codes(await readText(`${[await headLine(), small, bytes].join("\n")}\n`))).toEqual(["file/altered-enclosure 3"])
  })

  it("are kept by writing too", async () => {
    const kept = book(["x".repeat(1024 * 1024 + 1)])
    expect(obstacles(kept).map(({ code }) => code)).toEqual(["file/cell-too-long"])
    await expect(notebookFile(kept, store())).rejects.toThrow(RangeError)
  })
})

describe("records that do not fit", () => {
  it.each([
    ["text that is not UTF-8", Uint8Array.of(0xff), "file/not-utf-8 3"],
    ["a list", encoder.encode("[1]"), "file/not-a-record 3"],
    ["an object without a type", encoder.encode('{"id":"x"}'), "file/not-a-record 3"],
    ["no JSON", encoder.encode("cell x"), "file/not-a-record 3"],
    ["a cell without text", encoder.encode('{"@record":"cell","id":"x"}'), "file/wrong-member 3"],
    ["a second head", encoder.encode(canonical({ "@record": "etamu", version: 1 })), "file/second-head 3"],
    [
      "bytes of no enclosure",
      encoder.encode(canonical({ "@record": "bytes", sha256: "0".repeat(64), at: 0, data: "", as: "text" })),
      "file/stray-bytes 3",
    ],
  ])("are named with their line: %s", async (_, line, expected) => {
    const [head = "", cell = ""] = (await textOf(book(["data d"]))).split("\n")
    const opened = await readNotebook(new Blob([`${head}\n${cell}\n`, line, `\n${cell.replace("c1", "c2")}\n`]))
    expect(codes(opened)).toEqual([expected])
    expect(opened.kept?.notebook.cells.map(({ id: cellId }) => cellId)).toEqual(["c1", "c2"])
    expect(opened.standing.status).toBe("broken")
  })

  it("keep the text of a second cell with the same id, under another", async () => {
    const [head = "", cell = ""] = (await textOf(book(["data d"]))).split("\n")
    const opened = await readText(`${head}\n${cell}\n${cell}\n`)
    expect(codes(opened)).toEqual(["file/same-cell-id 3"])
    expect(opened.kept?.notebook.cells.map(({ id: cellId }) => cellId)).toEqual(["c1", "c1-2"])
  })
})

describe("signatures of a file", () => {
  it("are dropped as soon as what they were over has changed", async () => {
    const text = await textOf(book(["data d"]))
    const signed = text.replace('"signatures":[]', '"signatures":[{"name":"N"}]')
    const opened = await readText(signed)
    if (opened.kept === null) throw new Error("nothing was read")
    expect(await textOf(opened.kept)).toBe(signed)
    expect(await textOf({ ...opened.kept, changed: "2024-05-02T08:30:00Z" })).toContain('"signatures":[]')
  })
})
