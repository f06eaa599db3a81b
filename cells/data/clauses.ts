// Clauses of `data` written out: what a mend or a dropped file puts into a statement. Each gives what stands after the keyword, and reads
// back as what was meant.

import type { ClauseEdit } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import type { ColumnType } from "../table/column.ts"

/** A text of the language; it cannot hold a line feed, so whoever has one to write asks `canBeText` first. */
export const quoted = (text: string): string => `"${text.replace(/["\\]/g, "\\$&")}"`

export const canBeText = (text: string): boolean => !/[\n\r]/.test(text)

/** How a column clause is written. `headed` is null where the file heads the column by its name. */
export const columnSays = (column: {
  readonly name: Name
  readonly headed: string | null
  readonly type: ColumnType
  readonly unit: string | null
  readonly called?: string | null
  readonly levels?: readonly string[] | null
  readonly coding?: "corner" | "sum_to_zero"
}): string => {
  const parts: string[] = [column.name]
  if (column.headed !== null) parts.push(`headed ${quoted(column.headed)}`)
  parts.push(column.type)
  if (column.unit !== null && (column.type === "number" || column.type === "count")) parts.push(`unit ${quoted(column.unit)}`)
  if ((column.called ?? null) !== null) parts.push(`called ${quoted(column.called as string)}`)
  if (column.type === "category") {
    if ((column.levels ?? null) !== null) parts.push(`levels ${textsSay(column.levels as readonly string[])}`)
    if (column.coding === "sum_to_zero") parts.push("coding sum_to_zero")
  }
  return parts.join(" ")
}

export const textsSay = (texts: readonly string[]): string => texts.map(quoted).join(", ")

/** The clause that says this separator: for tabs it is the format that says so, since nobody can see one in quotes. */
export const separatorEdit = (separator: string, file: string): ClauseEdit =>
  separator === "\t" ? edit("from", 0, `${quoted(file)} as tsv`) : edit("separator", 0, quoted(separator))

/** This cell's clause, said so. */
export const edit = (clause: string, nth: number, says: string | null): ClauseEdit => ({ cell: null, clause, nth, says })
