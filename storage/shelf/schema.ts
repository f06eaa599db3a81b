// The stores of the shelf: the records of the file format, each kind in a store of its own, so that saving writes only what changed. Bytes
// lie by their SHA-256, once, however many notebooks enclose them.

import type { DBSchema } from "idb"

import type { CellId, Enclosed } from "../../runtime/document.ts"
import type { Json } from "../../runtime/value.ts"
import type { Entry, KeptFinding, Seal } from "../file/index.ts"

/** The head of a notebook: everything of it that is small and changes as one. */
export interface HeadRecord {
  readonly id: string
  readonly title: string
  readonly made: string
  readonly changed: string
  readonly writer: string
  /** The cells in reading order. */
  readonly order: readonly CellId[]
  readonly enclosures: readonly Enclosed[]
  readonly seal: Seal | null
  /** Left out by notebooks kept before there was one. */
  readonly doubt?: string | null
  /** One more with each save, so that a save over somebody else's is noticed. */
  readonly revision: number
  /** Bytes of its texts and enclosures. */
  readonly size: number
}

export interface BytesRecord {
  readonly sha256: string
  readonly blob: Blob
}

export interface ShelfSchema extends DBSchema {
  notebook: { key: string; value: HeadRecord }
  cell: { key: [string, CellId]; value: { readonly notebook: string; readonly id: CellId; readonly text: string } }
  finding: { key: [string, CellId]; value: KeptFinding & { readonly notebook: string } }
  trail: { key: [string, number]; value: { readonly notebook: string; readonly seq: number; readonly entry: Entry } }
  unknown: { key: string; value: { readonly notebook: string; readonly rest: Json } }
  bytes: { key: string; value: BytesRecord }
}

/** Raised when a store is added or a record takes another shape. */
export const shelfVersion = 1

export const storeKeys = {
  notebook: "id",
  cell: ["notebook", "id"],
  finding: ["notebook", "cell"],
  trail: ["notebook", "seq"],
  unknown: "notebook",
  bytes: "sha256",
} as const satisfies Record<string, string | readonly string[]>

/** The stores that hold one notebook's records, apart from the bytes they share. */
export const notebookStores = ["notebook", "cell", "finding", "trail", "unknown"] as const

/** Everything a save may touch, in one transaction. */
export const allStores = ["notebook", "cell", "finding", "trail", "unknown", "bytes"] as const

/** All keys of one notebook in a store keyed by notebook and something more: an array sorts after every text and number. */
export const ofNotebook = (id: string): IDBKeyRange => IDBKeyRange.bound([id], [id, []])
