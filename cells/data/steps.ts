// What is done to the rows after reading: `make` and `where` in the order written, `total` last. Every row that goes is counted under the
// clause that let it go, and which record of the file a row is stays with it.

import type { Input, Work } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { ClauseEdit, Notice } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { evaluated } from "../language/evaluate.ts"
import { namesIn, type Scalar, type Vector } from "../language/expression.ts"
import { faultFrom, saidWith, warningFrom } from "../language/slip.ts"
import type { Column } from "../table/column.ts"
import { inBlocks, type Pause } from "./blocks.ts"
import { edit } from "./clauses.ts"
import type { Dropped } from "./finding.ts"
import * as say from "./notices.ts"
import { Sum } from "./profile.ts"
import type { FileTable } from "./read.ts"
import type { DataSaid, Step } from "./words.ts"

export type Rows = {
  readonly columns: ReadonlyMap<Name, Column>
  readonly rows: number
  /** Which record of the file each row is, or the first of those it was made of. */
  readonly records: Uint32Array
}

export type Done = Rows & {
  readonly kept: number
  readonly dropped: readonly Dropped[]
  readonly total: string | null
  readonly notices: readonly Notice[]
}

type Inputs = ReadonlyMap<Name, Input>

export async function afterSteps(said: DataSaid, table: FileTable, inputs: Inputs, work: Work): Promise<Done> {
  const pause: Pause = () => work.checkpoint()
  const notices: Notice[] = []
  const dropped: Dropped[] = []
  const unread = new Set(table.unread)
  let state: Rows = {
    columns: new Map(table.columns.map(({ name, column }) => [name, column])),
    rows: table.rows,
    records: counting(table.rows),
  }
  for (const step of said.steps) {
    await work.checkpoint()
    const vector = valueHere(step, state, unread, inputs, said.name, notices)
    if (step.type === "make") {
      if (vector === null) unread.add(step.name)
      else if (state.columns.has(step.name)) notices.push(say.columnExists(step.name, step.at))
      else state = { ...state, columns: new Map([...state.columns, [step.name, columnOf(vector, state.rows)]]) }
      continue
    }
    if (vector === null) continue
    const truths = truthsOf(vector, state.rows)
    if (truths === null) {
      notices.push(say.notATruth(typeWords(vector), step.at))
      continue
    }
    const by = `where ${saidWith(step.clause, [])}`
    const before = state.rows
    const { kept, unknown } = keptRows(truths)
    state = await gathered(state, kept, pause)
    if (kept.length < before) dropped.push({ by, rows: before - kept.length, unknown })
    else dropped.push({ by, rows: 0, unknown: 0 })
    if (state.rows === 0 && before > 0) notices.push(say.nothingKept(saidWith(step.clause, []), step.at))
  }
  const kept = state.rows
  if (said.total === null) return { ...state, kept, dropped, total: null, notices }
  const totalled = await totals(said.total, said, state, unread, pause, notices)
  return { ...(totalled ?? state), kept, dropped, total: totalled === null ? null : said.total.says, notices }
}

/** The value of an expression over the rows; null once a fault was said. */
function valueHere(
  step: Step,
  state: Rows,
  unread: ReadonlySet<Name>,
  inputs: Inputs,
  data: Name | null,
  notices: Notice[],
): Vector | Scalar | null {
  const { expression, clause, nth } = step
  let ok = true
  const fault = (notice: Notice): void => {
    ok = false
    notices.push(notice)
  }
  for (const { name, at } of namesIn(expression)) {
    const isColumn = state.columns.has(name)
    const input = inputs.get(name)
    if (isColumn && input !== undefined) fault(say.bothColumnAndCell(step.type, name, data, at))
    else if (unread.has(name)) fault(say.stepWaits(step.type, name, at))
    else if (!isColumn && input === undefined) {
      const columns = [...state.columns.keys()]
      const near = nearest(name, columns)
      const better: ClauseEdit | null =
        near === null ? null : edit(step.type, nth, saidWith(clause, [{ from: at.from, to: at.to, text: near }]))
      fault(say.unknownName(step.type, name, columns, near, at, better))
    } else if (!isColumn && scalarOf(input) === null) fault(say.notAValue(step.type, name, at))
  }
  if (!ok) return null
  const result = evaluated(expression, state.rows, (name) => {
    const column = state.columns.get(name)
    return column === undefined ? scalarOf(inputs.get(name)) : vectorOf(column)
  })
  if (!result.ok) {
    for (const trouble of result.troubles) notices.push(faultFrom(trouble, step.type))
    return null
  }
  for (const doubt of result.doubts) notices.push(warningFrom(doubt, step.type))
  if (result.lost > 0)
    notices.push(step.type === "make" ? say.lostValues(step.name, result.lost, step.at) : say.comparisonLost(result.lost, step.at))
  return result.vector
}

/** The finding of a dial or a value: a number, a text or a truth, by itself or as `value`. */
const scalarOf = (input: Input | undefined): Scalar | null => {
  const found = input?.value
  const value = typeof found === "object" && found !== null && "value" in found ? found["value"] : found
  if (typeof value === "number") return Number.isNaN(value) ? { type: "missing" } : { type: "number", value }
  if (typeof value === "string") return { type: "text", text: value }
  if (typeof value === "boolean") return { type: "truth", value: value ? 1 : 0 }
  return null
}

const vectorOf = (column: Column): Vector =>
  "codes" in column
    ? { type: "category", codes: column.codes, levels: column.levels }
    : { type: column.type === "count" ? "number" : column.type, values: column.values }

/** A column of what an expression gave; a single value stands in every row. */
const columnOf = (of: Vector | Scalar, rows: number): Column => {
  if ("values" in of) return { type: of.type, values: of.values, unit: null, called: null }
  if ("codes" in of) return coded(of.codes, of.levels)
  if (of.type === "text") return coded(new Int32Array(rows), [of.text])
  const value = of.type === "missing" ? Number.NaN : of.value
  return { type: of.type === "missing" ? "number" : of.type, values: new Float64Array(rows).fill(value), unit: null, called: null }
}

const coded = (codes: Int32Array, levels: readonly string[]): Column => ({
  type: "category",
  codes,
  levels,
  coding: "corner",
  unit: null,
  called: null,
})

const truthsOf = (of: Vector | Scalar, rows: number): Float64Array | null => {
  if (of.type === "truth") return "values" in of ? of.values : new Float64Array(rows).fill(of.value)
  return of.type === "missing" ? new Float64Array(rows).fill(Number.NaN) : null
}

const typeWords = (of: Vector | Scalar): string =>
  of.type === "text" || of.type === "category" ? "a text" : of.type === "date" ? "a date" : "a number"

const keptRows = (truths: Float64Array): { readonly kept: Uint32Array; readonly unknown: number } => {
  const kept = new Uint32Array(truths.length)
  let count = 0
  let unknown = 0
  for (let row = 0; row < truths.length; row++) {
    const truth = truths[row] as number
    if (truth === 1) kept[count++] = row
    else if (Number.isNaN(truth)) unknown++
  }
  return { kept: kept.slice(0, count), unknown }
}

/** The rows with these places, in their order. */
async function gathered(state: Rows, places: Uint32Array, pause: Pause): Promise<Rows> {
  if (places.length === state.rows) return state
  const columns = new Map<Name, Column>()
  for (const [name, column] of state.columns) columns.set(name, await gatheredColumn(column, places, pause))
  return { columns, rows: places.length, records: taken(state.records, places) }
}

async function gatheredColumn(column: Column, places: Uint32Array, pause: Pause): Promise<Column> {
  if ("codes" in column) {
    const codes = new Int32Array(places.length)
    await inBlocks(places.length, pause, (from, to) => {
      for (let row = from; row < to; row++) codes[row] = column.codes[places[row] as number] as number
    })
    return { ...column, codes }
  }
  const values = new Float64Array(places.length)
  await inBlocks(places.length, pause, (from, to) => {
    for (let row = from; row < to; row++) values[row] = column.values[places[row] as number] as number
  })
  return { ...column, values }
}

/**
 * One row for each pattern of the columns after `by`, in the order of first appearance; a missing value there is a pattern like any other,
 * so that no row goes. A total with a missing value in it is missing, as a sum is.
 */
async function totals(
  total: NonNullable<DataSaid["total"]>,
  said: DataSaid,
  state: Rows,
  unread: ReadonlySet<Name>,
  pause: Pause,
  notices: Notice[],
): Promise<Rows | null> {
  const before = notices.length
  const names = [...state.columns.keys()]
  for (const { name, at } of [...total.by, ...total.columns]) {
    if (unread.has(name)) notices.push(say.stepWaits("total", name, at))
    else if (!state.columns.has(name)) notices.push(say.noSuchTotalColumn(name, names, nearest(name, names), at))
  }
  for (const { name, at } of total.columns) {
    const type = state.columns.get(name)?.type
    if (type === "category" || type === "text" || type === "date") notices.push(say.notSummable(name, type, at))
  }
  if ([...total.by, ...total.columns].some(({ name }) => name === "rows")) notices.push(say.rowsTaken(total.at))
  if (notices.length > before) return null

  const groups = new Uint32Array(state.rows)
  let count = Math.min(1, state.rows)
  for (const { name } of total.by) {
    count = await regrouped(groups, count, state.columns.get(name) as Column, pause)
  }
  const first = new Uint32Array(count)
  const sizes = new Float64Array(count)
  for (let row = state.rows - 1; row >= 0; row--) {
    const group = groups[row] as number
    first[group] = row
    sizes[group] = (sizes[group] as number) + 1
  }
  const columns = new Map<Name, Column>()
  for (const { name } of total.by) columns.set(name, await gatheredColumn(state.columns.get(name) as Column, first, pause))
  for (const { name, at } of total.columns) {
    const column = state.columns.get(name) as Column & { readonly values: Float64Array }
    const sums = Array.from({ length: count }, () => new Sum())
    const missing = new Uint32Array(count)
    await inBlocks(state.rows, pause, (from, to) => {
      for (let row = from; row < to; row++) {
        const value = column.values[row] as number
        const group = groups[row] as number
        if (Number.isNaN(value)) missing[group] = (missing[group] as number) + 1
        else (sums[group] as Sum).add(value)
      }
    })
    const values = Float64Array.from(sums, (sum, group) => ((missing[group] as number) > 0 ? Number.NaN : sum.total))
    const lost = missing.reduce((groupsLost, rows) => groupsLost + (rows > 0 ? 1 : 0), 0)
    if (lost > 0) {
      const nth = said.steps.filter(({ type }) => type === "where").length
      notices.push(
        say.totalMissing(
          name,
          lost,
          missing.reduce((sum, rows) => sum + rows, 0),
          at,
          edit("where", nth, `known(${name})`),
        ),
      )
    }
    columns.set(name, { type: column.type === "number" ? "number" : "count", values, unit: column.unit, called: column.called })
  }
  columns.set("rows", { type: "count", values: sizes, unit: null, called: null })
  return { columns, rows: count, records: taken(state.records, first) }
}

/** Splits the groups by one more column; groups are numbered by first appearance. Gives how many there are. */
async function regrouped(groups: Uint32Array, count: number, column: Column, pause: Pause): Promise<number> {
  const codes = "codes" in column ? column.codes : await codesOf(column.values, pause)
  const numbers = new Map<number, number>()
  await inBlocks(groups.length, pause, (from, to) => {
    for (let row = from; row < to; row++) {
      // Groups and codes are both fewer than rows, of which a file of 512 MiB has less than 2^26: so the pair is one exact number.
      const pair = ((codes[row] as number) + 1) * count + (groups[row] as number)
      const number = numbers.get(pair) ?? numbers.size
      if (number === numbers.size) numbers.set(pair, number)
      groups[row] = number
    }
  })
  return numbers.size
}

/** A number for each different value, −1 for a missing one. */
async function codesOf(values: Float64Array, pause: Pause): Promise<Int32Array> {
  const known = new Map<number, number>()
  const codes = new Int32Array(values.length).fill(-1)
  await inBlocks(values.length, pause, (from, to) => {
    for (let row = from; row < to; row++) {
      const value = values[row] as number
      if (Number.isNaN(value)) continue
      const code = known.get(value) ?? known.size
      if (code === known.size) known.set(value, code)
      codes[row] = code
    }
  })
  return codes
}

// Loops, where `from` with a function would take ten times as long over a million rows.
const counting = (rows: number): Uint32Array => {
  const records = new Uint32Array(rows)
  for (let row = 0; row < rows; row++) records[row] = row
  return records
}

const taken = (records: Uint32Array, places: Uint32Array): Uint32Array => {
  const some = new Uint32Array(places.length)
  for (let row = 0; row < places.length; row++) some[row] = records[places[row] as number] as number
  return some
}
