// Columns over the rows used, as a problem wants them: numbers, and categories by codes of the levels that occur. Where all rows are used
// the column's own array is taken, so that it is held once.

import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import type { Variable } from "../statistics/problem.ts"
import type { Column } from "../table/column.ts"
import * as say from "./notices.ts"

type Say = (notice: Notice) => void

export function keptRows(used: Uint8Array, count: number): Uint32Array {
  const kept = new Uint32Array(count)
  let at = 0
  for (let row = 0; row < used.length; row++) if (used[row] === 1) kept[at++] = row
  return kept
}

/** The values in the rows kept: the same array where all are, so that a column is held once. */
export function numbersAt(values: Float64Array, kept: Uint32Array): Float64Array {
  if (kept.length === values.length) return values
  const some = new Float64Array(kept.length)
  for (let i = 0; i < kept.length; i++) some[i] = values[kept[i] as number] as number
  return some
}

export function codesAt(codes: Int32Array | Float64Array, kept: Uint32Array): Int32Array {
  if (codes instanceof Int32Array && kept.length === codes.length) return codes
  const some = new Int32Array(kept.length)
  for (let i = 0; i < kept.length; i++) some[i] = codes[kept[i] as number] as number
  return some
}

/** A column over the rows used. Levels that are in none of them are left out, and said. */
export function variableOf(name: Name, column: Column, kept: Uint32Array, at: Place, notice: Say): Variable {
  if (column.type === "truth") return factorOf(name, codesAt(column.values, kept), ["false", "true"], "corner", at, notice)
  if ("codes" in column) return factorOf(name, codesAt(column.codes, kept), column.levels, column.coding, at, notice)
  return { type: "number", values: numbersAt(column.values, kept) }
}

function factorOf(
  name: Name,
  codes: Int32Array,
  levels: readonly string[],
  coding: "corner" | "sum_to_zero",
  at: Place,
  notice: Say,
): Variable {
  const there = new Uint8Array(levels.length)
  for (const code of codes) there[code] = 1
  const left = levels.filter((_, code) => there[code] === 1)
  const out = levels.filter((_, code) => there[code] !== 1)
  if (out.length > 0 && left.length > 1) notice(say.levelsDropped(name, out, at))
  if (left.length === 1) notice(say.oneLevel(name, left[0] as string, at))
  if (out.length === 0) return { type: "factor", codes, levels, coding }
  const next = new Int32Array(levels.length)
  let count = 0
  for (let code = 0; code < levels.length; code++) if (there[code] === 1) next[code] = count++
  return { type: "factor", codes: codes.map((code) => next[code] as number), levels: left, coding }
}

/** Each different value of the column is a cluster, numbered as they come. */
export function clusterCodes(column: Column, kept: Uint32Array): Int32Array {
  const numbers = new Map<number, number>()
  return Int32Array.from(kept, (row) => {
    const value = "codes" in column ? (column.codes[row] as number) : (column.values[row] as number)
    const known = numbers.get(value)
    if (known !== undefined) return known
    numbers.set(value, numbers.size)
    return numbers.size - 1
  })
}
