// The rows a model uses: those where everything it reads is there and that weigh something. Every other row is counted under the first
// reason that holds; what no weight or exposure can be is a fault that names the row.

import type { Work } from "../../runtime/kind.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { variablesOf } from "../language/predictor.ts"
import type { ModelFinding } from "../model-finding.ts"
import { presentRows } from "../statistics/index.ts"
import type { Term } from "../statistics/problem.ts"
import type { Column } from "../table/column.ts"
import * as say from "./notices.ts"
import type { OffsetHere } from "./offset.ts"
import type { Response } from "./response.ts"
import { rowsWhere } from "./response-rows.ts"
import type { TableHere } from "./table.ts"
import { columnsOf, type ModelSaid, type Named } from "./words.ts"

type Say = (notice: Notice) => void

type Read = {
  readonly response: Response
  readonly terms: readonly Term[]
  readonly predictors: ReadonlyMap<Name, Column>
  readonly offset: OffsetHere | null
  readonly repeat: Float64Array | null
  readonly precision: Float64Array | null
  readonly sampling: Float64Array | null
  /** Rows of no dose: nothing is read of them but response and weights. */
  readonly isControl: Uint8Array | null
}

/** Which rows have everything and weigh something (1), and why the others do not; each row goes by the first reason that holds. */
export async function rowsUsed(
  said: ModelSaid,
  table: TableHere,
  read: Read,
  notice: Say,
  work: Work,
): Promise<{ readonly used: Uint8Array; readonly control: Uint8Array | null; readonly unused: ModelFinding["unused"] }> {
  const { isControl } = read
  const used = new Uint8Array(table.rows).fill(1)
  const control = isControl === null ? null : controlUsed(said, table, read, isControl)
  if (isControl !== null) for (let row = 0; row < table.rows; row++) if (isControl[row] === 1) used[row] = 0
  const unused: { by: string; rows: number }[] = []
  const without = (by: string, values: Float64Array | Int32Array | Uint8Array, is: (value: number) => boolean): void => {
    let count = 0
    for (let row = 0; row < values.length; row++) {
      if (!is(values[row] as number) || used[row] !== 1) continue
      used[row] = 0
      count++
    }
    if (count > 0) unused.push({ by, rows: count })
  }
  const missing = new Set<Name>()
  for (const { name } of columnsOf(said)) {
    const column = table.columns.get(name)
    if (column === undefined || missing.has(name)) continue
    missing.add(name)
    if ("codes" in column) without(`${name} is missing`, column.codes, (code) => code < 0)
    else without(`${name} is missing`, column.values, Number.isNaN)
    await work.checkpoint()
  }
  const { offset, repeat, precision, sampling, response } = read
  if (offset !== null) without("the offset is missing", offset.values, (value) => !Number.isFinite(value))
  for (const { pieces } of read.terms) {
    for (const piece of pieces) {
      const column = read.predictors.get(piece.variable)
      if (piece.as === "itself" || piece.as === "category" || column === undefined || "codes" in column) continue
      const variables = { [piece.variable]: { type: "number" as const, values: column.values } }
      const present = presentRows([{ pieces: [piece], says: "" }], variables, table.rows)
      const says = `${piece.as}(${piece.variable})`
      const lost = rowsWhere(column.values, used, (_, row) => present[row] === 0)
      if (lost === null) continue
      notice(say.pieceLost(says, lost, table.rowName, pieceAt(said, piece.variable)))
      without(`${says} has no value`, present, isNought)
      await work.checkpoint()
    }
  }
  if (response.trials !== null) {
    // Successes out of no trials are infinite as a share: such a row stays, and is a fault that names it.
    const { trials, y } = response
    const none = trials.map((count, row) => (count === 0 && Math.abs(y[row] as number) !== Infinity ? 1 : 0))
    without("there are no trials", none, (is) => is === 1)
  }
  if (repeat !== null) without("repeat is 0", repeat, isNought)
  if (precision !== null) without("precision is 0", precision, isNought)
  if (sampling !== null) without("the sampling weight is 0", sampling, isNought)
  const lost = isControl === null || control === null ? 0 : isControl.reduce((sum, is, row) => sum + is - (control[row] as number), 0)
  if (lost > 0) unused.push({ by: "a row of no dose lacks its response or its weight", rows: lost })
  return { used, control, unused }
}

/** The rows of no dose that have a response and weigh something. */
function controlUsed(
  said: ModelSaid,
  table: TableHere,
  { response, repeat, precision, sampling }: Read,
  isControl: Uint8Array,
): Uint8Array {
  const used = isControl.slice()
  const clauses = new Set(["response", "repeat", "precision", "sampling"])
  for (const { name, clause } of columnsOf(said)) {
    const column = table.columns.get(name)
    if (column === undefined || !clauses.has(clause)) continue
    for (let row = 0; row < table.rows; row++) {
      if ("codes" in column ? (column.codes[row] as number) < 0 : Number.isNaN(column.values[row] as number)) used[row] = 0
    }
  }
  for (const weight of [response.trials, repeat, precision, sampling]) {
    if (weight === null) continue
    for (let row = 0; row < table.rows; row++) if (weight[row] === 0) used[row] = 0
  }
  return used
}

const isNought = (value: number): boolean => value === 0

const pieceAt = (said: ModelSaid, name: Name): Place =>
  said.predictor === null
    ? { clause: -1, from: 0, to: 0 }
    : (variablesOf(said.predictor).find((of) => of.name === name)?.at ?? { clause: -1, from: 0, to: 0 })

/** Exposures and weights that cannot be, in rows that are used or would be but for them. */
export function weightFaults(
  said: ModelSaid,
  table: TableHere,
  used: Uint8Array,
  of: {
    readonly exposure: Float64Array | null
    readonly repeat: Float64Array | null
    readonly precision: Float64Array | null
    readonly sampling: Float64Array | null
  },
  notice: Say,
): void {
  const check = (
    named: Named | null,
    values: Float64Array | null,
    is: (value: number) => boolean,
    made: (named: Named, at: say.RowsAt) => Notice,
  ): void => {
    if (named === null || values === null) return
    const at = rowsWhere(values, used, is)
    if (at !== null) notice(made(named, at))
  }
  check(
    said.exposure,
    of.exposure,
    (value) => value <= 0,
    ({ name, at }, rows) => say.exposureNotPositive(name, rows, table.rowName, at),
  )
  check(
    said.repeat,
    of.repeat,
    (value) => value < 0,
    ({ name, at }, rows) => say.weightNegative("repeat", name, rows, table.rowName, at),
  )
  check(
    said.repeat,
    of.repeat,
    (value) => !Number.isInteger(value),
    ({ name, at }, rows) => say.repeatNotWhole(name, rows, table.rowName, at),
  )
  check(
    said.precision,
    of.precision,
    (value) => value < 0,
    ({ name, at }, rows) => say.weightNegative("precision", name, rows, table.rowName, at),
  )
  check(
    said.sampling,
    of.sampling,
    (value) => value < 0,
    ({ name, at }, rows) => say.weightNegative("sampling", name, rows, table.rowName, at),
  )
}
