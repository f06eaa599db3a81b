// The shelf in a real browser: its own IndexedDB keeps a Blob, its own lock manager makes the second tab wait, and a file written here is
// read back whole.

import { deleteDB } from "idb"
import { afterEach, describe, expect, it, vi } from "vitest"
import { blobDigest, digest, type Kept, newlyKept, notebookFile, readNotebook } from "../../storage/file/index.ts"
import { type Did, type LoanEvent, openShelf, type Shelf } from "../../storage/shelf/index.ts"

const name = "shelf test"
const shelves: Shelf[] = []

async function shelf(): Promise<Shelf> {
  const opened = value(await openShelf({ name, now: () => new Date().toISOString(), locks: navigator.locks, storage: navigator.storage }))
  shelves.push(opened)
  return opened
}

function value<Result>(did: Did<Result>): Result {
  if (!did.ok) throw new Error(did.notice.text)
  return did.value
}

afterEach(async () => {
  for (const opened of shelves.splice(0)) await opened.close()
  await deleteDB(name)
})

const id = "3f2504e0-4f89-41d3-9a0c-0305e82c3301"
const table = new Blob([`${"night,killed\n-3,4\n".repeat(100_000)}\uFEFFé`])

async function book(): Promise<Kept> {
  return newlyKept({
    id,
    title: "Frost",
    cells: [{ id: "c1", text: "data d" }],
    enclosures: [{ name: "frost.csv", media: "text/csv", size: table.size, sha256: await blobDigest(table) }],
    time: "2024-05-01T08:00:00Z",
    by: "A reader",
    writer: "etamu 0.1.0",
  })
}

const sha256Of = (kept: Kept): string => kept.notebook.enclosures[0]?.sha256 ?? ""

describe("in a browser", () => {
  it("the shelf gives a notebook and its bytes back after it was closed", async () => {
    const kept = await book()
    const first = await shelf()
    value(await first.add(kept, new Map([[sha256Of(kept), table]])))
    await first.close()
    const second = await shelf()
    expect(value(await second.list()).map(({ title }) => title)).toEqual(["Frost"])
    expect(value(await second.take(id, () => {})).kept).toEqual(kept)
    const bytes = value(await second.bytes(sha256Of(kept)))
    expect(bytes === null ? null : await blobDigest(bytes)).toBe(sha256Of(kept))
    expect((await second.room()).allowed).toBeGreaterThan(0)
  })

  it("a second tab reads, and takes over when the first gives back", async () => {
    const kept = await book()
    const [one, two] = [await shelf(), await shelf()]
    value(await one.add(kept))
    const first = value(await one.take(id, () => {}))
    const told: LoanEvent[] = []
    const second = value(await two.take(id, (event) => told.push(event)))
    expect([first.role, second.role]).toEqual(["writing", "reading"])
    expect(value(await one.sweep(new Set()))).toBe(0)
    const next = { ...kept, notebook: { ...kept.notebook, cells: [{ id: "c1", text: "data e" }] } }
    value(await first.save(next))
    await first.giveBack()
    await vi.waitFor(() => expect(told).toEqual([{ type: "writing", kept: next }]))
    expect(second.role).toBe("writing")
  })

  it("the digest by the platform is the one in plain code", async () => {
    expect(await blobDigest(table)).toBe(digest(new Uint8Array(await table.arrayBuffer())))
  })

  it("a file is the same bytes again after it was read", async () => {
    const file = await notebookFile(await book(), async () => table)
    const opened = await readNotebook(file)
    expect(opened.notices).toEqual([])
    if (opened.kept === null) throw new Error("nothing was read")
    const again = await notebookFile(opened.kept, async (sha256) => opened.bytes.get(sha256) ?? null)
    expect(await blobDigest(again)).toBe(await blobDigest(file))
  })
})
