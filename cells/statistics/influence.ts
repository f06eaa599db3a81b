// How far each row draws the fit to itself: leverages and Cook's distances, of one copy of a row where it stands several times. Cook 1977;
// Pregibon 1981.

import { type Fit, searched } from "./fit.ts"
import { Factor } from "./gram.ts"
import type { Problem } from "./problem.ts"
import { pearsonResiduals } from "./residuals.ts"
import type { Equations } from "./scoring.ts"

/**
 * h = W·x'(X'WX)⁻¹x of each row, divided by its copies; their sum over copies is the rank. Null where the best means lie at an end of what is
 * possible, and there are no weights; a row whose mean has run to an end draws nothing.
 */
export async function leverages(problem: Problem, fit: Fit, pause: () => Promise<void>): Promise<Float64Array | null> {
  const search = await searched(problem, pause, fit)
  if (!search.ok) return null
  const { climb, limit } = search.found
  if (limit.type === "edge" || limit.type === "gave_up") return null
  const inner = limit.type === "infinite" ? limit.rest : climb
  const out = new Float64Array(problem.rows)
  if (inner === null) return out
  const { equations, found } = inner
  const { point } = found
  if (!(await equations.fill(point, "expected", true))) return null
  const factor = Factor.of(point.gram)
  if (factor === null) return null
  const h = await rowLeverages(equations, point.state.weight, factor)
  const copies = (row: number): number => (problem.repeat ? (problem.repeat[row] as number) : 1)
  if (limit.type !== "infinite") return h.map((of, i) => of / copies(i))
  limit.rows.forEach((row, k) => {
    out[row] = (h[k] as number) / copies(row)
  })
  return out
}

/** Cook's distance: r²h/(φ·p·(1 − h)²), r Pearson's residual. Null where there are no leverages, or no dispersion; Infinity where h is 1. */
export async function cookDistances(problem: Problem, fit: Fit, pause: () => Promise<void>): Promise<Float64Array | null> {
  const h = await leverages(problem, fit, pause)
  const phi = fit.dispersion.value
  if (h === null || phi === null || !(phi > 0)) return null
  const residuals = pearsonResiduals(problem, fit)
  return h.map((own, i) => {
    const rest = 1 - own
    const r = residuals[i] as number
    return r === 0 ? 0 : (r * r * own) / (phi * fit.rank * rest * rest)
  })
}

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
