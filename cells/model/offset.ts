// The offset of a model: an expression over columns, dials and values, evaluated over the table and kept with what it reads, so that its
// columns can be held at other values later.

import type { Input } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name, Value } from "../../runtime/value.ts"
import { evaluated } from "../language/evaluate.ts"
import { namesIn } from "../language/expression.ts"
import { faultFrom } from "../language/slip.ts"
import type { OffsetFinding } from "../model-finding.ts"
import type { Variable } from "../statistics/problem.ts"
import type { Column } from "../table/column.ts"
import * as say from "./notices.ts"
import { scalarOf, type TableHere, vectorOf } from "./table.ts"
import { codesAt, numbersAt } from "./variables.ts"
import type { ModelSaid } from "./words.ts"

export type OffsetHere = {
  readonly values: Float64Array
  readonly said: NonNullable<ModelSaid["offset"]>
  readonly columns: ReadonlySet<Name>
  readonly numbers: Readonly<Record<Name, number>>
}

/** The offset over all rows; null where there is none, and once a fault was said. */
export function offsetOf(
  said: ModelSaid,
  table: TableHere,
  inputs: ReadonlyMap<Name, Input>,
  notice: (notice: Notice) => void,
): OffsetHere | null {
  if (said.offset === null) return null
  const { expression, at } = said.offset
  const columns = new Set<Name>()
  const cells = new Map<Name, Value>()
  let fault = false
  for (const { name, at: place } of namesIn(expression)) {
    const isColumn = table.columns.has(name)
    const cell = name === table.name || name === said.name ? undefined : inputs.get(name)
    if (isColumn && cell !== undefined) notice(say.columnAndCell(name, table.name, place))
    else if (isColumn) columns.add(name)
    else if (cell !== undefined) cells.set(name, cell.value)
    else notice(say.noSuchColumn(name, table.name, "offset", place, nearest(name, table.offered), table.offered, said.clauses["offset"]))
    fault ||= isColumn === (cell !== undefined)
  }
  if (fault) return null
  const numbers = Object.fromEntries([...cells].filter((cell): cell is [Name, number] => typeof cell[1] === "number"))
  const result = evaluated(expression, table.rows, (name) => {
    const column = table.columns.get(name)
    return column === undefined ? scalarOf(cells.get(name)) : vectorOf(column)
  })
  if (!result.ok) {
    for (const trouble of result.troubles) notice(faultFrom(trouble, "offset"))
    return null
  }
  for (const doubt of result.doubts) notice({ ...faultFrom(doubt, "offset"), level: "warning" })
  const { vector } = result
  if (vector.type === "category" || vector.type === "text") {
    notice(say.offsetWantsNumber(vector.type, at))
    return null
  }
  if (result.lost > 0) notice(say.offsetLost(result.lost, at))
  const values =
    "values" in vector ? vector.values : new Float64Array(table.rows).fill(vector.type === "missing" ? Number.NaN : vector.value)
  return { values, said: said.offset, columns, numbers }
}

/** The offset with its columns over the rows used. */
export function offsetFinding(offset: OffsetHere, table: TableHere, kept: Uint32Array): OffsetFinding {
  const variables = Object.fromEntries(
    [...offset.columns].map((name): [Name, Variable] => {
      const column = table.columns.get(name) as Column
      return "codes" in column
        ? [name, { type: "factor", codes: codesAt(column.codes, kept), levels: column.levels, coding: column.coding }]
        : [name, { type: "number", values: numbersAt(column.values, kept) }]
    }),
  )
  return { expression: offset.said.expression, variables, numbers: offset.numbers }
}
