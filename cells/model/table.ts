// The table a model reads, as far as its columns were asked for: columns by name, and what a row is called to a person.

import type { Input } from "../../runtime/kind.ts"
import type { Name, Value } from "../../runtime/value.ts"
import { writtenCount } from "../figure/number.ts"
import type { Scalar, Vector } from "../language/expression.ts"
import { type Column, type RowIdentity, rowsPart } from "../table/column.ts"
import type { RowName } from "./notices.ts"

export type TableHere = {
  readonly name: Name
  readonly rows: number
  readonly records: Uint32Array
  /** The columns that were asked for and are there. */
  readonly columns: ReadonlyMap<Name, Column>
  /** Names of all columns, as far as known, for the nearest. */
  readonly offered: readonly Name[]
  /** `row 17 of terrace.csv`. */
  readonly rowName: RowName
}

/** The table under this name among the inputs; null where the cell is none. */
export function tableOf(name: Name, input: Input | undefined): TableHere | null {
  if (input === undefined || !isRecord(input.value)) return null
  const identity = input.value[rowsPart]
  if (!isIdentity(identity)) return null
  const columns = new Map<Name, Column>()
  for (const [part, value] of Object.entries(input.value)) if (part !== rowsPart) columns.set(part, value as unknown as Column)
  const { file, records } = identity
  return {
    name,
    rows: records.length,
    records,
    columns,
    offered: (input.offers ?? [...columns.keys()]).filter((part) => part !== rowsPart),
    rowName: (row) => `row ${writtenCount((records[row] ?? 0) + 1)} of ${file}`,
  }
}

/** A column as an expression reads it. */
export const vectorOf = (column: Column): Vector =>
  "codes" in column
    ? { type: "category", codes: column.codes, levels: column.levels }
    : { type: column.type === "count" ? "number" : column.type, values: column.values }

/** A dial's or a value's finding as an expression reads it; null where it is neither. */
export const scalarOf = (value: Value | undefined): Scalar | null =>
  typeof value === "number"
    ? { type: "number", value }
    : typeof value === "boolean"
      ? { type: "truth", value: value ? 1 : 0 }
      : typeof value === "string"
        ? { type: "text", text: value }
        : null

const isRecord = (value: Value): value is { readonly [part: string]: Value } =>
  typeof value === "object" && value !== null && !Array.isArray(value) && !ArrayBuffer.isView(value)

const isIdentity = (value: Value | undefined): value is RowIdentity =>
  value !== undefined && isRecord(value) && value["records"] instanceof Uint32Array && typeof value["file"] === "string"
