// Which of the rows used are as they cannot be.

import type { RowsAt } from "./notices.ts"

/** How many of the rows marked are so, and the first of them; null where there is none. */
export function rowsWhere(values: Float64Array, used: Uint8Array, is: (value: number, row: number) => boolean): RowsAt | null {
  let count = 0
  let first = -1
  for (let row = 0; row < values.length; row++) {
    if (used[row] !== 1 || !is(values[row] as number, row)) continue
    if (first < 0) first = row
    count++
  }
  return first < 0 ? null : { count, first, value: values[first] as number }
}
