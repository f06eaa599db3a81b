// The shelf over an IndexedDB and a lock manager in memory: saving writes what changed and nothing else, is read back, and is done whole or
// not at all; tabs take turns; bytes go when nothing reaches them; and whatever a browser refuses is said in a notice.

import "fake-indexeddb/auto"
import { IDBObjectStore } from "fake-indexeddb"
import { openDB } from "idb"
import { afterEach, describe, expect, it, vi } from "vitest"
import { appended, digest, type Kept, newlyKept } from "../../../storage/file/index.ts"
import { type Did, type LoanEvent, type Locks, openShelf, type Shelf } from "../../../storage/shelf/index.ts"
import { fakeLocks } from "./fake-locks.ts"

let shelves = 0
const opened: Shelf[] = []

/** Another tab on the same browser where `name` and `locks` are given, else a browser of its own. */
async function shelfOf(browser: { name: string; locks: Locks | null } = newBrowser()): Promise<Shelf> {
  let minutes = 0
  const now = (): string => `2024-05-01T08:${String(minutes++).padStart(2, "0")}:00Z`
  const shelf = value(await openShelf({ ...browser, now, storage: null }))
  opened.push(shelf)
  return shelf
}

const newBrowser = (): { name: string; locks: Locks } => {
  shelves += 1
  return { name: `shelf ${shelves}`, locks: fakeLocks() }
}

afterEach(async () => {
  vi.restoreAllMocks()
  vi.unstubAllGlobals()
  for (const shelf of opened.splice(0)) await shelf.close()
})

function value<Result>(did: Did<Result>): Result {
  if (!did.ok) throw new Error(did.notice.text)
  return did.value
}

const codeOf = (did: Did<unknown>): string | null => (did.ok ? null : did.notice.code)

const id = "3f2504e0-4f89-41d3-9a0c-0305e82c3301"
const table = "night,killed\n-3,4\n"
const sha256 = digest(table)
const bytes = new Map([[sha256, new Blob([table])]])

const book = (texts: readonly string[], over: Partial<Kept["notebook"]> = {}): Kept =>
  newlyKept({
    id,
    title: "Frost",
    cells: texts.map((text, i) => ({ id: `c${i + 1}`, text })),
    enclosures: [{ name: "frost.csv", media: "text/csv", size: table.length, sha256 }],
    time: "2024-05-01T08:00:00Z",
    by: "A reader",
    writer: "etamu 0.1.0",
    ...over,
  })

const edited = (kept: Kept, cell: string, text: string): Kept => ({
  ...kept,
  notebook: { ...kept.notebook, cells: kept.notebook.cells.map((old) => (old.id === cell ? { id: cell, text } : old)) },
})

const quiet = (): void => {}

/** The records that are put into stores while the work runs. */
async function putsOf(work: () => Promise<unknown>): Promise<string[]> {
  const seen: string[] = []
  const put = IDBObjectStore.prototype.put
  vi.spyOn(IDBObjectStore.prototype, "put").mockImplementation(function (this: IDBObjectStore, record: object) {
    const { id: of, cell, seq } = record as { id?: string; cell?: string; seq?: number }
    seen.push(this.name === "notebook" ? this.name : `${this.name} ${of ?? cell ?? seq}`)
    return put.call(this, record)
  } as never)
  await work()
  vi.restoreAllMocks()
  return seen
}

describe("the shelf", () => {
  it("gives a notebook back as it was put there, its bytes too", async () => {
    const shelf = await shelfOf()
    const kept: Kept = {
      ...book(["data d", "model m"]),
      findings: [{ cell: "c2", key: "a".repeat(64), summary: { n: 2 } }],
      seal: { sha256: "0".repeat(64), trailSize: 1, trailRoot: "0".repeat(64), signatures: [] },
    }
    const unknown: Kept = { ...kept, notebook: { ...kept.notebook, rest: { members: [], records: [["etamu", { "@record": "later" }]] } } }
    value(await shelf.add(unknown, bytes))
    expect(value(await shelf.take(id, quiet)).kept).toEqual(unknown)
    expect(await value(await shelf.bytes(sha256))?.text()).toBe(table)
    expect(value(await shelf.bytes("0".repeat(64)))).toBeNull()
  })

  it("lists what is on it, last changed first", async () => {
    const shelf = await shelfOf()
    expect(value(await shelf.list())).toEqual([])
    value(await shelf.add(book(["data d", "é"]), bytes))
    value(await shelf.add({ ...book([], { id: "other", title: "Later" }), changed: "2024-06-01T08:00:00Z" }))
    expect(value(await shelf.list()).map(({ title, cells, size }) => [title, cells, size])).toEqual([
      ["Later", 0, table.length],
      ["Frost", 2, table.length + 8],
    ])
  })

  it("keeps what stands against writing in a notebook until that is decided", async () => {
    const browser = newBrowser()
    const shelf = await shelfOf(browser)
    value(await shelf.add({ ...book(["data d"]), doubt: "It is not as it was sealed." }))
    const loan = value(await shelf.take(id, quiet))
    expect(loan.kept.doubt).toBe("It is not as it was sealed.")
    value(await loan.save({ ...loan.kept, doubt: null }))
    await shelf.close()
    expect(value(await (await shelfOf(browser)).take(id, quiet)).kept.doubt).toBeNull()
  })

  it("refuses a notebook that is there already", async () => {
    const shelf = await shelfOf()
    value(await shelf.add(book(["data d"])))
    expect(codeOf(await shelf.add(book(["other"])))).toBe("shelf/already-there")
    expect(value(await shelf.take(id, quiet)).kept.notebook.cells[0]?.text).toBe("data d")
  })

  it("puts a copy beside a notebook that shares its bytes", async () => {
    const shelf = await shelfOf()
    value(await shelf.add(book(["data d"]), bytes))
    value(await shelf.duplicate(id, { id: "copy", title: "Frost, again" }))
    value(await shelf.remove(id))
    expect(value(await shelf.sweep(new Set()))).toBe(0)
    const copy = value(await shelf.take("copy", quiet)).kept
    expect(copy.notebook).toMatchObject({ id: "copy", title: "Frost, again", cells: [{ id: "c1", text: "data d" }] })
    expect(copy.trail).toHaveLength(1)
    expect(value(await shelf.bytes(sha256))?.size).toBe(table.length)
  })

  it("forgets a notebook that is removed", async () => {
    const shelf = await shelfOf()
    value(await shelf.add(book(["data d"]), bytes))
    value(await shelf.remove(id))
    expect(value(await shelf.list())).toEqual([])
    expect(codeOf(await shelf.take(id, quiet))).toBe("shelf/gone")
    value(await shelf.add(book([])))
    expect(value(await shelf.take(id, quiet)).kept.notebook.cells).toEqual([])
  })
})

describe("saving", () => {
  it("says the time at which it was read back", async () => {
    const shelf = await shelfOf()
    const kept = book(["data d"])
    expect(value(await shelf.add(kept, bytes))).toBe("2024-05-01T08:00:00Z")
    const loan = value(await shelf.take(id, quiet))
    expect(value(await loan.save(edited(kept, "c1", "data e")))).toBe("2024-05-01T08:01:00Z")
    expect(loan.kept.notebook.cells[0]?.text).toBe("data e")
  })

  it("writes the cells that changed, the entries that are new, and nothing else", async () => {
    const shelf = await shelfOf()
    value(await shelf.add(book(["data d", "model m", "note"]), bytes))
    const loan = value(await shelf.take(id, quiet))
    const { kept } = loan
    const next: Kept = {
      ...edited(kept, "c2", "model m\n  link logit"),
      findings: [{ cell: "c1", key: "b".repeat(64), summary: { rows_read: 1 } }],
      trail: appended(kept.trail, { time: kept.made, by: "A reader", kind: "edit", body: null }),
    }
    expect(await putsOf(() => loan.save(next, bytes))).toEqual(["notebook", "cell c2", "finding c1", "trail 2"])
    expect(await putsOf(() => loan.save({ ...next, changed: "2024-05-02T08:00:00Z" }, bytes))).toEqual(["notebook"])
    expect(value(await shelf.take(id, quiet)).kept).toEqual({ ...next, changed: "2024-05-02T08:00:00Z" })
  })

  it("follows insertions, removals and moves", async () => {
    const shelf = await shelfOf()
    value(await shelf.add(book(["a", "b", "c"])))
    const loan = value(await shelf.take(id, quiet))
    const { kept } = loan
    const [a, , c] = kept.notebook.cells
    if (a === undefined || c === undefined) throw new Error("no cells")
    const next: Kept = { ...kept, notebook: { ...kept.notebook, cells: [c, { id: "new", text: "d" }, a], enclosures: [] } }
    value(await loan.save(next))
    await loan.giveBack()
    expect(value(await shelf.take(id, quiet)).kept).toEqual(next)
  })

  it("does its saves one after the other", async () => {
    const shelf = await shelfOf()
    const kept = book(["0"])
    value(await shelf.add(kept))
    const loan = value(await shelf.take(id, quiet))
    const saves = Array.from({ length: 20 }, (_, i) => loan.save(edited(kept, "c1", String(i + 1))))
    expect((await Promise.all(saves)).map(codeOf)).toEqual(saves.map(() => null))
    await loan.giveBack()
    expect(value(await shelf.take(id, quiet)).kept.notebook.cells[0]?.text).toBe("20")
  })

  it("is done whole or not at all, and says when there is no room", async () => {
    const shelf = await shelfOf()
    const kept = book(["a", "b"])
    value(await shelf.add(kept))
    const loan = value(await shelf.take(id, quiet))
    const put = IDBObjectStore.prototype.put
    vi.spyOn(IDBObjectStore.prototype, "put").mockImplementation(function (this: IDBObjectStore, ...record: [unknown]) {
      if (this.name === "cell" && (record[0] as { id: string }).id === "c2") throw new DOMException("Full.", "QuotaExceededError")
      return put.apply(this, record)
    } as never)
    expect(codeOf(await loan.save(edited(edited(kept, "c1", "A"), "c2", "B")))).toBe("shelf/full")
    vi.restoreAllMocks()
    expect(value(await shelf.take(id, quiet)).kept.notebook).toEqual(kept.notebook)
    value(await loan.save(edited(kept, "c1", "A")))
    expect(value(await shelf.take(id, quiet)).kept.notebook.cells.map(({ text }) => text)).toEqual(["A", "b"])
  })

  it("is not called saved where the stores give back something else", async () => {
    const shelf = await shelfOf()
    const kept = book(["a"])
    value(await shelf.add(kept))
    const loan = value(await shelf.take(id, quiet))
    const put = IDBObjectStore.prototype.put
    vi.spyOn(IDBObjectStore.prototype, "put").mockImplementation(function (this: IDBObjectStore, record: object) {
      return put.call(this, this.name === "cell" ? { ...record, text: "spoilt" } : record)
    } as never)
    expect(codeOf(await loan.save(edited(kept, "c1", "b")))).toBe("shelf/differs")
  })

  it("does not write over what another tab saved, where the browser has no locks", async () => {
    const browser = { name: newBrowser().name, locks: null }
    const [one, two] = [await shelfOf(browser), await shelfOf(browser)]
    const kept = book(["a"])
    value(await one.add(kept))
    const first = value(await one.take(id, quiet))
    const second = value(await two.take(id, quiet))
    value(await first.save(edited(kept, "c1", "first")))
    expect(codeOf(await second.save(edited(kept, "c1", "second")))).toBe("shelf/overtaken")
    expect(value(await two.take(id, quiet)).kept.notebook.cells[0]?.text).toBe("first")
  })
})

describe("two tabs", () => {
  it("take turns: the first writes, the second reads and takes over from what was saved last", async () => {
    const browser = newBrowser()
    const [one, two] = [await shelfOf(browser), await shelfOf(browser)]
    const kept = book(["a"])
    value(await one.add(kept))
    const first = value(await one.take(id, quiet))
    const told: LoanEvent[] = []
    const second = value(await two.take(id, (event) => told.push(event)))
    expect([first.role, second.role]).toEqual(["writing", "reading"])
    expect(codeOf(await second.save(edited(kept, "c1", "b")))).toBe("shelf/only-reading")
    const last = edited(kept, "c1", "c")
    value(await first.save(last))
    expect(told).toEqual([])
    await first.giveBack()
    await vi.waitFor(() => expect(told).toEqual([{ type: "writing", kept: last }]))
    expect(second.role).toBe("writing")
    value(await second.save(edited(last, "c1", "d")))
    expect(codeOf(await first.save(kept))).toBe("shelf/gone")
  })

  it("do not take over what was given back while waiting", async () => {
    const browser = newBrowser()
    const [one, two] = [await shelfOf(browser), await shelfOf(browser)]
    value(await one.add(book(["a"])))
    const first = value(await one.take(id, quiet))
    const told: LoanEvent[] = []
    const second = value(await two.take(id, (event) => told.push(event)))
    await second.giveBack()
    await first.giveBack()
    expect(value(await one.take(id, quiet)).role).toBe("writing")
    expect(told).toEqual([])
  })

  it("cannot remove what the other has open, and learn of what it removed", async () => {
    const browser = newBrowser()
    const [one, two] = [await shelfOf(browser), await shelfOf(browser)]
    value(await one.add(book(["a"])))
    const first = value(await one.take(id, quiet))
    const told: LoanEvent[] = []
    value(await two.take(id, (event) => told.push(event)))
    const refused = await two.remove(id)
    expect(codeOf(refused)).toBe("shelf/open-elsewhere")
    expect(value(await two.list())).toHaveLength(1)
    value(await one.remove(id))
    await vi.waitFor(() => expect(told).toEqual([{ type: "gone" }]))
    expect(codeOf(await first.save(book(["b"])))).toBe("shelf/gone")
  })
})

describe("sweeping", () => {
  it("takes the bytes that no notebook encloses and no undo reaches", async () => {
    const shelf = await shelfOf()
    const kept = book(["data d"])
    value(await shelf.add(kept, bytes))
    expect(value(await shelf.sweep(new Set()))).toBe(0)
    const loan = value(await shelf.take(id, quiet))
    value(await loan.save({ ...kept, notebook: { ...kept.notebook, enclosures: [] } }))
    expect(value(await shelf.sweep(new Set([sha256])))).toBe(0)
    expect(value(await shelf.bytes(sha256))?.size).toBe(table.length)
    expect(value(await shelf.sweep(new Set()))).toBe(1)
    expect(value(await shelf.bytes(sha256))).toBeNull()
  })

  it("waits until no other tab is there, whose undo it cannot know", async () => {
    const browser = newBrowser()
    const [one, two] = [await shelfOf(browser), await shelfOf(browser)]
    value(await one.add(book([]), bytes))
    value(await one.remove(id))
    expect(value(await one.sweep(new Set()))).toBe(0)
    await two.close()
    expect(value(await one.sweep(new Set()))).toBe(1)
  })

  it("is left alone where nobody knows who else is there", async () => {
    const shelf = await shelfOf({ name: newBrowser().name, locks: null })
    value(await shelf.add(book([]), bytes))
    value(await shelf.remove(id))
    expect(value(await shelf.sweep(new Set()))).toBe(0)
  })
})

describe("what a browser may refuse", () => {
  const options = { now: () => "2024-05-01T08:00:00Z", locks: null, storage: null }

  it("is said where it has no storage at all", async () => {
    vi.stubGlobal("indexedDB", undefined)
    const did = await openShelf(options)
    expect(codeOf(did)).toBe("shelf/absent")
  })

  it("is said where it refuses to open it, as in a private window", async () => {
    vi.spyOn(indexedDB, "open").mockImplementation(() => {
      throw new DOMException("Not here.", "SecurityError")
    })
    expect(codeOf(await openShelf(options))).toBe("shelf/absent")
  })

  it("is said where a newer program made the shelf", async () => {
    const { name } = newBrowser()
    const newer = await openDB(name, 99)
    newer.close()
    expect(codeOf(await openShelf({ ...options, name }))).toBe("shelf/newer")
  })

  it("makes way for a newer program in another tab, and says so", async () => {
    const browser = newBrowser()
    const shelf = await shelfOf(browser)
    value(await shelf.add(book(["a"])))
    const newer = await openDB(browser.name, 2)
    expect(codeOf(await shelf.list())).toBe("shelf/closed")
    newer.close()
  })

  it("is said where another tab holds an older form open", async () => {
    const { name } = newBrowser()
    const older = await openDB(name, 1, { upgrade() {} })
    vi.spyOn(indexedDB, "open").mockImplementationOnce((asked) => {
      vi.restoreAllMocks()
      return indexedDB.open(asked, 2)
    })
    expect(codeOf(await openShelf({ ...options, name }))).toBe("shelf/blocked")
    older.close()
  })

  it("is told of room as far as it says", async () => {
    const { name } = newBrowser()
    const storage = { persisted: async () => false, persist: async () => true, estimate: async () => ({ usage: 5, quota: 100 }) }
    const shelf = value(await openShelf({ ...options, name, storage }))
    opened.push(shelf)
    expect(await shelf.room()).toEqual({ persistent: false, used: 5, allowed: 100 })
    expect(await shelf.askToPersist()).toBe(true)
    expect(await (await shelfOf()).room()).toEqual({ persistent: null, used: null, allowed: null })
  })
})
