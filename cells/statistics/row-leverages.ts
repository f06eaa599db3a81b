// Leverages of the rows of a basis: how much of a row's fit is the row itself.

import type { Factor } from "./gram.ts"
import type { Equations } from "./scoring.ts"

/** W·z'G⁻¹z of each row of a basis, all copies together. */
export async function rowLeverages({ basis, pace }: Equations, weight: Float64Array, factor: Factor): Promise<Float64Array> {
  const { rows, plain, blocks, size: p } = basis
  const inverse = factor.inverse()
  const out = new Float64Array(rows)
  const at = new Int32Array(p)
  const value = new Float64Array(p)
  for (let i = 0; i < rows; i++) {
    let count = 0
    for (let j = 0; j < plain.length; j++) {
      const x = plain[j] as Float64Array | null
      at[count] = j
      value[count++] = x === null ? 1 : (x[i] as number)
    }
    for (const block of blocks) {
      const cell = block.cells[i] as number
      const times = block.multiplier === null ? 1 : (block.multiplier[i] as number)
      for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++) {
        at[count] = block.column[e] as number
        value[count++] = times * (block.value[e] as number)
      }
    }
    let sum = 0
    for (let j = 0; j < count; j++) {
      const row = (at[j] as number) * p
      let inner = 0
      for (let k = 0; k < j; k++) inner += (inverse[row + (at[k] as number)] as number) * (value[k] as number)
      sum += (value[j] as number) * (2 * inner + (inverse[row + (at[j] as number)] as number) * (value[j] as number))
    }
    out[i] = (weight[i] as number) * sum
    if (pace.due(count * count)) await pace.rest()
  }
  return out
}
