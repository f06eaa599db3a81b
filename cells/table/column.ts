// Columns and tables as values: what a data cell finds and other kinds read. A row is known by its file and its record number there, kept
// through every drop, so that a fault can name it. Nothing here reads text.

import type { Name } from "../../runtime/value.ts"

export type ColumnType = "number" | "count" | "category" | "truth" | "date" | "text"

/** Numbers; NaN is a missing value. Truths are 0 and 1, dates whole days since 1970-01-01. */
export type NumberColumn = {
  readonly type: "number" | "count" | "truth" | "date"
  readonly values: Float64Array
  readonly unit: string | null
  readonly called: string | null
}

/** Codes into `levels`, −1 for a missing value. */
export type CodedColumn = {
  readonly type: "category" | "text"
  readonly codes: Int32Array
  /** The first is the reference. */
  readonly levels: readonly string[]
  readonly coding: "corner" | "sum_to_zero"
  readonly unit: null
  readonly called: string | null
}

export type Column = NumberColumn | CodedColumn

/** The part of a table that says which record of the file each row is. Never a column's name, since names hold no `#`. */
export const rowsPart = "#"

/** The file and record numbers from 0 (the row after the header is 0); of the first record where `total` made one row of several. */
export type RowIdentity = { readonly file: string; readonly sha256: string; readonly records: Uint32Array }

export type TableParts = { readonly [part: string]: Column | RowIdentity }

/** What every kind may rely on in a table; a data cell's finding has more beside. */
export type Table = {
  readonly columns: readonly Name[]
  readonly rows: number
  readonly parts: TableParts
}
