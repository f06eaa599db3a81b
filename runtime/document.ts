// The notebook as an immutable value, and the transactions that make the next one. A cell that was not written to stays the same
// object (===), so whoever remembers something by the cell knows whether it still holds. Nothing here reads a statement.

import type { Notice } from "./notice.ts"
import type { Json } from "./value.ts"

/** Short, unique in the notebook, never reused; made by ui. */
export type CellId = string

export interface Cell {
  readonly id: CellId
  readonly text: string
}

/** A file that travels with the notebook. Its bytes live in a store by their SHA-256. */
export interface Enclosed {
  readonly name: string
  readonly media: string
  /** In bytes. */
  readonly size: number
  /** Lower-case hex. */
  readonly sha256: string
}

export interface Notebook {
  readonly id: string
  readonly title: string
  /** In reading order, which never decides a result. */
  readonly cells: readonly Cell[]
  readonly enclosures: readonly Enclosed[]
  /** Unknown records and members of the file, opaque here. */
  readonly rest: Json
}

export type Change =
  | { readonly type: "insert"; readonly at: number; readonly cell: Cell }
  | { readonly type: "remove"; readonly id: CellId }
  | { readonly type: "write"; readonly id: CellId; readonly text: string }
  | { readonly type: "move"; readonly id: CellId; readonly to: number }
  | { readonly type: "title"; readonly title: string }
  | { readonly type: "enclose"; readonly file: Enclosed }
  | { readonly type: "release"; readonly name: string }

export interface Transaction {
  readonly changes: readonly Change[]
  readonly because?: string
}

export type Applied =
  | { readonly ok: true; readonly notebook: Notebook; readonly inverse: Transaction }
  | { readonly ok: false; readonly notice: Notice }

/** The next notebook and the way back; or, for a change that does not fit, why not, and nothing has changed. */
export declare function apply(notebook: Notebook, transaction: Transaction): Applied
