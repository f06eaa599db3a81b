// What one number says of a column: mean, median and their like, over the values that are there (NaN is missing). Definitions as in
// the conventions: sd with n − 1, quantiles linear between order statistics at (n − 1)p.

/** Sum of the values there are, with the lost low-order parts added back (Neumaier 1974, ZAMM 54:39). */
export function sum(values: Float64Array): number {
  let [total, lost] = [0, 0]
  for (let i = 0; i < values.length; i++) {
    const value = values[i] as number
    if (Number.isNaN(value)) continue
    const next = total + value
    lost += Math.abs(total) >= Math.abs(value) ? total - next + value : value - next + total
    total = next
  }
  return total + lost
}

export function count(values: Float64Array): number {
  let there = 0
  for (let i = 0; i < values.length; i++) if (!Number.isNaN(values[i])) there++
  return there
}

/** NaN for a column without a value. */
export const mean = (values: Float64Array): number => sum(values) / count(values)

/** NaN for a column with fewer than two values. Two passes, the second corrected for what rounding left of the sum of differences. */
export function sd(values: Float64Array): number {
  const n = count(values)
  if (n < 2) return Number.NaN
  const middle = mean(values)
  let [squares, differences] = [0, 0]
  for (let i = 0; i < values.length; i++) {
    const value = values[i] as number
    if (Number.isNaN(value)) continue
    squares += (value - middle) * (value - middle)
    differences += value - middle
  }
  return Math.sqrt((squares - (differences * differences) / n) / (n - 1))
}

/** @param p  a share, 0 to 1 */
export function quantile(values: Float64Array, p: number): number {
  const there = values.filter((value) => !Number.isNaN(value)).sort()
  const last = there.length - 1
  if (last < 0) return Number.NaN
  const at = last * p
  const below = Math.floor(at)
  const low = there[below] as number
  const high = there[Math.min(below + 1, last)] as number
  return low + (at - below) * (high - low)
}

export const median = (values: Float64Array): number => quantile(values, 0.5)

/** NaN for a column without a value. */
export function smallest(values: Float64Array): number {
  let least = Number.NaN
  for (let i = 0; i < values.length; i++) if (!(least <= (values[i] as number)) && !Number.isNaN(values[i])) least = values[i] as number
  return least
}

export function largest(values: Float64Array): number {
  let greatest = Number.NaN
  for (let i = 0; i < values.length; i++)
    if (!(greatest >= (values[i] as number)) && !Number.isNaN(values[i])) greatest = values[i] as number
  return greatest
}
