// Combinations of columns in words, such as `2 × x + 3`: the constant last, and as a number.

import { written } from "../figure/number.ts"

export type Part = { readonly column: string; readonly times: number }

/** Parts in their order, the constant last; but what is added stands before what is taken away. */
export function combinationSays(parts: readonly Part[]): string {
  const own = [...parts.filter(({ column }) => column !== "intercept"), ...parts.filter(({ column }) => column === "intercept")]
  const first = own.findIndex(({ times }) => times > 0)
  const ordered = first > 0 ? [own[first] as Part, ...own.slice(0, first), ...own.slice(first + 1)] : own
  return ordered.reduce((text, { column, times }, k) => {
    const size = Math.abs(times)
    const says =
      column === "intercept" ? writtenPlain(size) : size === 1 ? bracketed(column) : `${writtenPlain(size)} × ${bracketed(column)}`
    if (k === 0) return times < 0 ? `−${says}` : says
    return `${text} ${times < 0 ? "−" : "+"} ${says}`
  }, "")
}

/** `lot is b` stands for 1 where it is so and 0 elsewhere. */
const bracketed = (column: string): string => (/ is | \. /.test(column) ? `[${column}]` : column)

/** A direction scaled so that its first column but the constant moves by 1 or −1: only its ratios matter. */
export function scaledParts(parts: readonly Part[]): readonly Part[] {
  const unit = Math.abs((parts.find(({ column, times }) => column !== "intercept" && times !== 0) ?? parts[0])?.times ?? 1)
  return parts.map(({ column, times }) => ({ column, times: times / unit }))
}

/** A number of the data as it would be typed: to six digits at most, with no zeros for show. */
export const writtenPlain = (value: number): string => {
  const short = Number(value.toPrecision(mostDigits))
  const digits = short.toExponential().split("e")[0]?.replace(/[-.]/g, "").length ?? 1
  return written(short, Math.max(1, digits))
}

const mostDigits = 6
