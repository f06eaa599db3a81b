// One column in a line: missing values, ends, mean and spread, and how the values lie, as marks where there are few and bins where there
// are many. Sums are compensated, so that the mean of a million rows keeps its last digits.

import type { Name } from "../../runtime/value.ts"
import type { CodedColumn, Column } from "../table/column.ts"
import { inBlocks, type Pause } from "./blocks.ts"
import type { Profile } from "./finding.ts"

/** Up to so many different values are shown one by one. */
const marksAtMost = 40
const binCount = 48
/** The bound of the format for arrays in a summary. */
const levelsAtMost = 2000

export async function profile(name: Name, column: Column, pause: Pause): Promise<Profile> {
  if (!("values" in column)) return codedProfile(name, column, pause)
  const { values, type } = column
  const { count, ...of } = await moments(values, pause)
  const plain = { name, type, missing: values.length - count, ...of, different: null }
  if (type === "truth") {
    const trues = count === 0 ? 0 : Math.round(of.mean * count)
    return { ...plain, marks: null, bins: null, levels: { names: ["false", "true"], rows: Float64Array.of(count - trues, trues) } }
  }
  const marks = count === 0 ? null : await marksOf(values, pause)
  const bins = marks === null && count > 0 ? await binsOf(values, of.least, of.greatest, pause) : null
  return { ...plain, marks, bins, levels: null }
}

type Moments = { readonly count: number; readonly least: number; readonly greatest: number; readonly mean: number; readonly sd: number }

async function codedProfile(name: Name, column: CodedColumn, pause: Pause): Promise<Profile> {
  const { codes, levels } = column
  const rows = new Float64Array(levels.length)
  let missing = 0
  await inBlocks(codes.length, pause, (from, to) => {
    for (let row = from; row < to; row++) {
      const code = codes[row] as number
      if (code < 0) missing++
      else rows[code] = (rows[code] as number) + 1
    }
  })
  const none = { least: Number.NaN, greatest: Number.NaN, mean: Number.NaN, sd: Number.NaN, marks: null, bins: null }
  const different = levels.length
  return { name, type: column.type, missing, ...none, different, levels: different > levelsAtMost ? null : { names: levels, rows } }
}

/** Mean and standard deviation in two passes, both sums compensated (Neumaier 1974). */
async function moments(values: Float64Array, pause: Pause): Promise<Moments> {
  let count = 0
  let least = Number.POSITIVE_INFINITY
  let greatest = Number.NEGATIVE_INFINITY
  const sum = new Sum()
  await inBlocks(values.length, pause, (from, to) => {
    for (let row = from; row < to; row++) {
      const value = values[row] as number
      if (Number.isNaN(value)) continue
      count++
      if (value < least) least = value
      if (value > greatest) greatest = value
      sum.add(value)
    }
  })
  if (count === 0) return { count, least: Number.NaN, greatest: Number.NaN, mean: Number.NaN, sd: Number.NaN }
  const mean = sum.total / count
  const squares = new Sum()
  const differences = new Sum()
  await inBlocks(values.length, pause, (from, to) => {
    for (let row = from; row < to; row++) {
      const value = values[row] as number
      if (Number.isNaN(value)) continue
      const difference = value - mean
      squares.add(difference * difference)
      differences.add(difference)
    }
  })
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

/** Few values as they are; null for many. */
async function marksOf(values: Float64Array, pause: Pause): Promise<Profile["marks"]> {
  const rows = new Map<number, number>()
  await inBlocks(values.length, pause, (from, to) => {
    for (let row = from; row < to && rows.size <= marksAtMost; row++) {
      const value = values[row] as number
      if (!Number.isNaN(value)) rows.set(value, (rows.get(value) ?? 0) + 1)
    }
  })
  if (rows.size > marksAtMost) return null
  const sorted = [...rows].sort(([a], [b]) => a - b)
  return { values: Float64Array.from(sorted, ([value]) => value), rows: Float64Array.from(sorted, ([, count]) => count) }
}

async function binsOf(values: Float64Array, least: number, greatest: number, pause: Pause): Promise<Float64Array> {
  const bins = new Float64Array(binCount)
  // Halved, so that the width of a column from one end of the doubles to the other is still a double.
  const width = greatest / 2 - least / 2
  await inBlocks(values.length, pause, (from, to) => {
    for (let row = from; row < to; row++) {
      const value = values[row] as number
      if (Number.isNaN(value)) continue
      const bin = Math.min(binCount - 1, Math.floor(((value / 2 - least / 2) / width) * binCount))
      bins[bin] = (bins[bin] as number) + 1
    }
  })
  return bins
}
