// One notebook in the stores of the shelf: read whole in one transaction, and saved in one transaction that writes only what is not as it
// was. Nothing here knows of tabs or clocks.

import type { IDBPDatabase, IDBPTransaction } from "idb"

import type { Cell, Notebook } from "../../runtime/document.ts"
import { blobDigest, type Kept, type KeptFinding } from "../file/index.ts"
import { allStores, type HeadRecord, notebookStores, ofNotebook, type ShelfSchema } from "./schema.ts"

export type Database = IDBPDatabase<ShelfSchema>

/** A notebook as it lies in the stores. */
export interface Stored {
  readonly kept: Kept
  readonly revision: number
}

/** The notebook with this id; null where there is none. */
export async function stored(database: Database, id: string): Promise<Stored | null> {
  const transaction = database.transaction(notebookStores)
  const [head, cells, findings, trail, unknown] = await Promise.all([
    transaction.objectStore("notebook").get(id),
    transaction.objectStore("cell").getAll(ofNotebook(id)),
    transaction.objectStore("finding").getAll(ofNotebook(id)),
    transaction.objectStore("trail").getAll(ofNotebook(id)),
    transaction.objectStore("unknown").get(id),
  ])
  await transaction.done
  if (head === undefined) return null
  const texts = new Map(cells.map((cell) => [cell.id, cell.text]))
  const found = new Map(findings.map(({ notebook: _, ...finding }) => [finding.cell, finding]))
  return {
    kept: {
      notebook: {
        id: head.id,
        title: head.title,
        cells: head.order.map((cell): Cell => ({ id: cell, text: texts.get(cell) ?? "" })),
        enclosures: head.enclosures,
        rest: unknown?.rest ?? null,
      },
      made: head.made,
      changed: head.changed,
      writer: head.writer,
      // In reading order, as a file has them; those of cells that are gone come last.
      findings: [...head.order.flatMap((cell) => found.get(cell) ?? []), ...[...found.values()].filter(({ cell }) => !texts.has(cell))],
      trail: trail.map(({ entry }) => entry),
      seal: head.seal,
      doubt: head.doubt ?? null,
    },
    revision: head.revision,
  }
}

/** What a save did: enough to read back afterwards just what was written. */
export interface Written {
  readonly head: HeadRecord
  readonly cells: readonly Cell[]
  readonly findings: readonly KeptFinding[]
  readonly trailSize: number
  readonly bytes: readonly string[]
}

/**
 * Writes what differs between two states of a notebook, in one transaction.
 * @param was     as it lies in the stores; null for one that is not there yet
 * @param bytes   those at hand by their SHA-256: only those that the shelf lacks are written
 * @returns       null where the notebook in the stores is no longer as it was: then nothing is written
 */
export async function save(database: Database, was: Stored | null, kept: Kept, bytes: ReadonlyMap<string, Blob>): Promise<Written | null> {
  const { notebook } = kept
  const { id } = notebook
  const transaction = database.transaction(allStores, "readwrite")
  const writes: Promise<unknown>[] = []
  try {
    const head = await transaction.objectStore("notebook").get(id)
    if (head?.revision !== was?.revision) {
      await transaction.done
      return null
    }
    const next = headOf(kept, (was?.revision ?? 0) + 1)
    const cells = changedCells(was?.kept.notebook ?? null, notebook)
    const findings = changedFindings(was?.kept.findings ?? [], kept.findings)
    const missing = await missingBytes(transaction, notebook, bytes)
    writes.push(transaction.objectStore("notebook").put(next))
    for (const cell of cells) writes.push(transaction.objectStore("cell").put({ notebook: id, ...cell }))
    for (const finding of findings) writes.push(transaction.objectStore("finding").put({ notebook: id, ...finding }))
    const ids = new Set(next.order)
    for (const cell of was?.kept.notebook.cells ?? [])
      if (!ids.has(cell.id)) writes.push(transaction.objectStore("cell").delete([id, cell.id]))
    const found = new Set(kept.findings.map(({ cell }) => cell))
    for (const { cell } of was?.kept.findings ?? [])
      if (!found.has(cell)) writes.push(transaction.objectStore("finding").delete([id, cell]))
    writes.push(...writeTrail(transaction, was?.kept ?? null, kept))
    if (was === null || was.kept.notebook.rest !== notebook.rest) {
      const unknown = transaction.objectStore("unknown")
      writes.push(notebook.rest === null ? unknown.delete(id) : unknown.put({ notebook: id, rest: notebook.rest }))
    }
    for (const [sha256, blob] of missing) writes.push(transaction.objectStore("bytes").put({ sha256, blob }))
    await Promise.all([...writes, transaction.done])
    return { head: next, cells, findings, trailSize: kept.trail.length, bytes: missing.map(([sha256]) => sha256) }
  } catch (error) {
    // What was asked for already is taken back: a save is done whole or not at all.
    try {
      transaction.abort()
    } catch {
      // It had ended by itself.
    }
    const [ended] = await Promise.allSettled([transaction.done, ...writes])
    // When a transaction is ended from outside, only its own end says why.
    const because = error instanceof DOMException && error.name === "AbortError" && ended.status === "rejected" ? ended.reason : error
    throw because ?? error
  }
}

/** Whether the stores give back what a save wrote. */
export async function readsBack(database: Database, written: Written, kept: Kept): Promise<boolean> {
  const { id } = kept.notebook
  const transaction = database.transaction(allStores)
  const [head, cells, findings, trail, last, blobs] = await Promise.all([
    transaction.objectStore("notebook").get(id),
    Promise.all(written.cells.map((cell) => transaction.objectStore("cell").get([id, cell.id]))),
    Promise.all(written.findings.map((finding) => transaction.objectStore("finding").get([id, finding.cell]))),
    transaction.objectStore("trail").count(ofNotebook(id)),
    transaction.objectStore("trail").get([id, kept.trail.at(-1)?.seq ?? 0]),
    Promise.all(written.bytes.map((sha256) => transaction.objectStore("bytes").get(sha256))),
  ])
  await transaction.done
  const same =
    head !== undefined &&
    JSON.stringify(head) === JSON.stringify(written.head) &&
    written.cells.every((cell, i) => cells[i]?.text === cell.text) &&
    written.findings.every((finding, i) => findings[i]?.key === finding.key) &&
    trail === written.trailSize &&
    last?.entry.hash === kept.trail.at(-1)?.hash
  if (!same) return false
  for (const [i, sha256] of written.bytes.entries()) {
    const blob = blobs[i]?.blob
    if (blob === undefined || (await blobDigest(blob)) !== sha256) return false
  }
  return true
}

/** Takes every record of a notebook away; its bytes stay until they are swept. */
export async function erase(database: Database, id: string): Promise<void> {
  const transaction = database.transaction(notebookStores, "readwrite")
  await Promise.all([
    transaction.objectStore("notebook").delete(id),
    transaction.objectStore("cell").delete(ofNotebook(id)),
    transaction.objectStore("finding").delete(ofNotebook(id)),
    transaction.objectStore("trail").delete(ofNotebook(id)),
    transaction.objectStore("unknown").delete(id),
    transaction.done,
  ])
}

/** Takes away all bytes that no notebook encloses and nobody has pinned, and says how many blobs went. */
export async function sweep(database: Database, pinned: ReadonlySet<string>): Promise<number> {
  const transaction = database.transaction(["notebook", "bytes"], "readwrite")
  const [heads, all] = await Promise.all([transaction.objectStore("notebook").getAll(), transaction.objectStore("bytes").getAllKeys()])
  const reached = new Set(heads.flatMap((head) => head.enclosures.map(({ sha256 }) => sha256)))
  const loose = all.filter((sha256) => !reached.has(sha256) && !pinned.has(sha256))
  await Promise.all([...loose.map((sha256) => transaction.objectStore("bytes").delete(sha256)), transaction.done])
  return loose.length
}

type Saving = IDBPTransaction<ShelfSchema, typeof allStores, "readwrite">

const encoder = new TextEncoder()

function headOf(kept: Kept, revision: number): HeadRecord {
  const { id, title, cells, enclosures } = kept.notebook
  const { made, changed, writer, seal, doubt } = kept
  const texts = cells.reduce((sum, cell) => sum + encoder.encode(cell.text).length, 0)
  const size = enclosures.reduce((sum, file) => sum + file.size, texts)
  return { id, title, made, changed, writer, order: cells.map((cell) => cell.id), enclosures, seal, doubt, revision, size }
}

/** A cell that was not written to is the same object, so most are passed over without looking at their text. */
function changedCells(was: Notebook | null, is: Notebook): readonly Cell[] {
  const before = new Map((was?.cells ?? []).map((cell) => [cell.id, cell]))
  return is.cells.filter((cell) => {
    const old = before.get(cell.id)
    return old !== cell && old?.text !== cell.text
  })
}

function changedFindings(was: readonly KeptFinding[], is: readonly KeptFinding[]): readonly KeptFinding[] {
  const before = new Map(was.map((finding) => [finding.cell, finding]))
  return is.filter((finding) => {
    const old = before.get(finding.cell)
    return (
      old === undefined ||
      old.key !== finding.key ||
      (old.summary !== finding.summary && JSON.stringify(old.summary) !== JSON.stringify(finding.summary))
    )
  })
}

/** The trail only ever grows, so what is there already stays; another trail altogether takes the place of the old. */
function writeTrail(transaction: Saving, was: Kept | null, is: Kept): Promise<unknown>[] {
  const store = transaction.objectStore("trail")
  const { id } = is.notebook
  const before = was?.trail ?? []
  const grew = before.length <= is.trail.length && before.at(-1)?.hash === is.trail[before.length - 1]?.hash
  const writes: Promise<unknown>[] = grew ? [] : [store.delete(ofNotebook(id))]
  for (const entry of grew ? is.trail.slice(before.length) : is.trail) writes.push(store.put({ notebook: id, seq: entry.seq, entry }))
  return writes
}

async function missingBytes(transaction: Saving, notebook: Notebook, bytes: ReadonlyMap<string, Blob>): Promise<[string, Blob][]> {
  const store = transaction.objectStore("bytes")
  const enclosed = new Set(notebook.enclosures.map(({ sha256 }) => sha256))
  const missing: [string, Blob][] = []
  for (const sha256 of enclosed) {
    const blob = bytes.get(sha256)
    if (blob !== undefined && (await store.getKey(sha256)) === undefined) missing.push([sha256, blob])
  }
  return missing
}
