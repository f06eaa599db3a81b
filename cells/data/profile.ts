// One column in a line: missing values, ends, mean and spread, and how the values lie, as marks where there are few and bins where there
// are many. Sums are compensated, so that the mean of a million rows keeps its last digits.

import type { Name } from "../../runtime/value.ts"
import type { CodedColumn, Column } from "../table/column.ts"
import type { Profile } from "./finding.ts"

/** Up to so many different values are shown one by one. */
const marksAtMost = 40
const binCount = 48
/** The bound of the format for arrays in a summary. */
const levelsAtMost = 2000

/** `pause` is awaited between the passes over the column. */
export async function profile(name: Name, column: Column, pause: () => Promise<void>): Promise<Profile> {
  if (!("values" in column)) return codedProfile(name, column)
  const { values, type } = column
  const { count, ...of } = await moments(values, pause)
  const plain = { name, type, missing: values.length - count, ...of, different: null }
  if (type === "truth") {
    const trues = count === 0 ? 0 : Math.round(of.mean * count)
    return { ...plain, marks: null, bins: null, levels: { names: ["false", "true"], rows: Float64Array.of(count - trues, trues) } }
  }
  const marks = count === 0 ? null : marksOf(values)
  await pause()
  return { ...plain, marks, bins: marks === null && count > 0 ? binsOf(values, of.least, of.greatest) : null, levels: null }
}

type Moments = { readonly count: number; readonly least: number; readonly greatest: number; readonly mean: number; readonly sd: number }

const codedProfile = (name: Name, column: CodedColumn): Profile => {
  const rows = new Float64Array(column.levels.length)
  let missing = 0
  for (const code of column.codes) {
    if (code < 0) missing++
    else rows[code] = (rows[code] as number) + 1
  }
  const none = { least: Number.NaN, greatest: Number.NaN, mean: Number.NaN, sd: Number.NaN, marks: null, bins: null }
  const different = column.levels.length
  return { name, type: column.type, missing, ...none, different, levels: different > levelsAtMost ? null : { names: column.levels, rows } }
}

/** Mean and standard deviation in two passes, both sums compensated (Neumaier 1974). */
const moments = async (values: Float64Array, pause: () => Promise<void>): Promise<Moments> => {
  let count = 0
  let least = Number.POSITIVE_INFINITY
  let greatest = Number.NEGATIVE_INFINITY
  const sum = new Sum()
  for (const value of values) {
    if (Number.isNaN(value)) continue
    count++
    if (value < least) least = value
    if (value > greatest) greatest = value
    sum.add(value)
  }
  if (count === 0) return { count, least: Number.NaN, greatest: Number.NaN, mean: Number.NaN, sd: Number.NaN }
  const mean = sum.total / count
  await pause()
  const squares = new Sum()
  const differences = new Sum()
  for (const value of values) {
    if (Number.isNaN(value)) continue
    const difference = value - mean
    squares.add(difference * difference)
    differences.add(difference)
  }
  // The mean is rounded, so the differences do not quite add up to zero; their square over n mends it (Chan, Golub & LeVeque 1983).
  const about = squares.total - (differences.total * differences.total) / count
  return { count, least, greatest, mean, sd: count < 2 ? Number.NaN : Math.sqrt(Math.max(0, about) / (count - 1)) }
}

/** A sum that carries what rounding lost. */
export class Sum {
  private sum = 0
  private lost = 0

  add(value: number): void {
    const next = this.sum + value
    this.lost += Math.abs(this.sum) >= Math.abs(value) ? this.sum - next + value : value - next + this.sum
    this.sum = next
  }

  get total(): number {
    // Once the sum is beyond the largest double there is nothing left to carry.
    return Number.isFinite(this.sum) ? this.sum + this.lost : this.sum
  }
}

const marksOf = (values: Float64Array): Profile["marks"] => {
  const rows = new Map<number, number>()
  for (const value of values) {
    if (Number.isNaN(value)) continue
    rows.set(value, (rows.get(value) ?? 0) + 1)
    if (rows.size > marksAtMost) return null
  }
  const sorted = [...rows].sort(([a], [b]) => a - b)
  return { values: Float64Array.from(sorted, ([value]) => value), rows: Float64Array.from(sorted, ([, count]) => count) }
}

const binsOf = (values: Float64Array, least: number, greatest: number): Float64Array => {
  const bins = new Float64Array(binCount)
  // Halved, so that the width of a column from one end of the doubles to the other is still a double.
  const width = greatest / 2 - least / 2
  for (const value of values) {
    if (Number.isNaN(value)) continue
    const bin = Math.min(binCount - 1, Math.floor(((value / 2 - least / 2) / width) * binCount))
    bins[bin] = (bins[bin] as number) + 1
  }
  return bins
}
