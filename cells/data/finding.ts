// What a data cell finds: a table, the account of every row that is not in it, and for each column what there is to show of it.

import type { Name } from "../../runtime/value.ts"
import type { ColumnType, Table } from "../table/column.ts"

/** Rows that a `where` let go; `unknown` of them because it could not be said whether it is true. */
export type Dropped = { readonly by: string; readonly rows: number; readonly unknown: number }

/** What there is to say of a column in a line. Numbers that are not available are NaN. */
export type Profile = {
  readonly name: Name
  readonly type: ColumnType
  readonly missing: number
  readonly least: number
  readonly greatest: number
  readonly mean: number
  /** With n − 1 (conventions, §13). */
  readonly sd: number
  /** Different values and how many rows have each, where there are few; else null. */
  readonly marks: { readonly values: Float64Array; readonly rows: Float64Array } | null
  /** Rows in bins of equal width from least to greatest, where there are many values; else null. */
  readonly bins: Float64Array | null
  /** Different texts of a category or a text; null for the rest. */
  readonly different: number | null
  /** Rows in each level of a category, a text or a truth, in the order of the levels; null for the rest, and where there are very many. */
  readonly levels: { readonly names: readonly string[]; readonly rows: Float64Array } | null
}

export type DataFinding = Table & {
  readonly file: string
  readonly read: number
  /** After every `where`, before a total. */
  readonly kept: number
  readonly dropped: readonly Dropped[]
  /** How the rows kept were made into fewer, in the words of the clause. */
  readonly total: string | null
  readonly profiles: readonly Profile[]
}
