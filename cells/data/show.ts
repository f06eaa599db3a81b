// A data finding as blocks: the account of the rows in a sentence, a ruled line for each column, and the first rows as a table, folded.

import type { Json } from "../../runtime/value.ts"
import type { Block, TableColumn, TableEntry, Tape } from "../block.ts"
import { written, writtenCount } from "../figure/number.ts"
import { type Column, type RowIdentity, rowsPart } from "../table/column.ts"
import { dateText } from "../table/date.ts"
import type { DataFinding, Profile } from "./finding.ts"

const rowsShown = 10

/** Digits written at the ends of a ruled line. */
const endDigits = 6

export const shown = (found: DataFinding): readonly Block[] => {
  const blocks: Block[] = [
    { type: "sentence", text: account(found), tone: "lead" },
    { type: "tapes", tapes: found.profiles.map((profile) => tape(profile, found.parts[profile.name] as Column, found.rows)) },
  ]
  if (found.rows > 0 && found.columns.length > 0) blocks.push(firstRows(found))
  return blocks
}

/** The members of the format, no more. */
export const summary = (found: DataFinding): Json => ({
  rows_read: found.read,
  rows_kept: found.kept,
  rows_dropped: found.dropped.filter(({ rows }) => rows > 0).map(({ by, rows }) => ({ by, rows })),
  columns: found.profiles.map(columnSummary),
})

/** Where every row went: `12 rows read, 10 kept; where buds > 0 dropped 2`. */
export const account = (found: DataFinding): string => {
  const { read, kept, dropped, total, rows } = found
  const parts = [
    dropped.length === 0
      ? `${rowCount(read)} read, all kept`
      : `${rowCount(read)} read, ${kept === read ? "all" : writtenCount(kept)} kept`,
  ]
  for (const { by, rows: gone, unknown } of dropped) {
    const why =
      unknown === 0 ? "" : unknown === gone ? ", where it cannot be said" : `, ${writtenCount(unknown)} of them where it cannot be said`
    parts.push(`${by} dropped ${gone === 0 ? "none" : writtenCount(gone)}${why}`)
  }
  if (total !== null) parts.push(`${total} made ${rowCount(rows)} of them`)
  return `${parts.join("; ")}.`
}

const rowCount = (count: number): string => (count === 1 ? "1 row" : `${writtenCount(count)} rows`)

const number = (value: number): Json => (Number.isFinite(value) ? value : null)

const columnSummary = (of: Profile): Json => {
  const { name, type, missing } = of
  if (type === "category" || type === "text" || type === "truth") return { name, type, missing, levels: of.levels?.names ?? null }
  if (type === "date") {
    const date = (day: number): Json => (Number.isNaN(day) ? null : dateText(day))
    return { name, type, missing, least: date(of.least), greatest: date(of.greatest), mean: null, sd: number(of.sd) }
  }
  return { name, type, missing, least: number(of.least), greatest: number(of.greatest), mean: number(of.mean), sd: number(of.sd) }
}

const tape = (of: Profile, column: Column, rows: number): Tape => {
  const end = (value: number): string => (of.type === "date" ? dateText(value) : written(value, significant(value, endDigits)))
  const spread = of.greatest - of.least
  return {
    name: of.name,
    called: column.called,
    unit: column.unit,
    columnType: of.type,
    ends: Number.isNaN(of.least) || of.type === "truth" ? null : [end(of.least), end(of.greatest)],
    marks:
      of.marks === null
        ? null
        : Array.from(of.marks.values, (value, i) => ({
            at: spread > 0 ? value / spread - of.least / spread : 0.5,
            rows: of.marks?.rows[i] ?? 0,
          })),
    bins: of.bins === null ? null : Array.from(of.bins),
    levels:
      of.levels === null || of.type === "text"
        ? null
        : Array.from(of.levels.names, (level, i) => ({ level, rows: of.levels?.rows[i] ?? 0 })),
    says: tapeSays(of, rows),
  }
}

const tapeSays = (of: Profile, rows: number): string => {
  const parts: string[] = []
  if (of.type === "text") parts.push(of.different === 1 ? "1 text" : `${writtenCount(of.different ?? 0)} different texts`)
  if (of.missing > 0) parts.push(of.missing === rows ? "missing in every row" : `missing in ${rowCount(of.missing)}`)
  return parts.join(", ")
}

const firstRows = (found: DataFinding): Block => {
  const count = Math.min(rowsShown, found.rows)
  const { records } = found.parts[rowsPart] as RowIdentity
  const heads: TableColumn[] = [
    {
      head: "row",
      says: `Which row of ${found.file} it is${found.total === null ? "" : ", or the first of those it was made of"}`,
      align: "number",
    },
    ...found.columns.map((name): TableColumn => {
      const column = found.parts[name] as Column
      const isNumber = column.type === "number" || column.type === "count"
      return { head: name, says: column.called, align: isNumber ? "number" : "text" }
    }),
  ]
  const rows = Array.from({ length: count }, (_, row): readonly TableEntry[] => [
    { value: (records[row] as number) + 1, digits: 1 },
    ...found.columns.map((name) => entry(found.parts[name] as Column, row)),
  ])
  return {
    type: "table",
    caption: count === found.rows ? "All rows" : `The first ${count} of ${writtenCount(found.rows)} rows`,
    columns: heads,
    rows,
    folded: true,
  }
}

const entry = (column: Column, row: number): TableEntry => {
  if ("codes" in column) return column.levels[column.codes[row] as number] ?? null
  const value = column.values[row] as number
  if (Number.isNaN(value)) return null
  if (column.type === "truth") return value === 1 ? "true" : "false"
  if (column.type === "date") return dateText(value)
  return { value, digits: significant(value, 17) }
}

/** How many significant digits a number has in its shortest form, at most so many: no zeros are written that nobody measured. */
const significant = (value: number, atMost: number): number => {
  const digits = value.toExponential().split("e")[0]?.replace(/[-.]/g, "").length ?? 1
  return Math.max(1, Math.min(atMost, digits))
}
