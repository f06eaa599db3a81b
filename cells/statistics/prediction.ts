// Predictions at other rows: η without offset and its standard error, and the columns of the design there. Errors are taken in the basis of
// the fit, where the columns are centred, so that nothing cancels far from the origin.

import { denseColumns, designOf, type Variables, type WrittenColumn, writtenColumns } from "./design.ts"
import { productError, WideSum } from "./double-double.ts"
import type { Fit } from "./fit.ts"
import type { Problem } from "./problem.ts"
import { anyRows, responsesOf, rowState } from "./rows.ts"

/** η without offset and its standard error at other rows; variables as the recipe wants them. NaN where a piece is missing there. */
export function predicted(fit: Fit, variables: Variables, rows: number): { readonly eta: Float64Array; readonly error: Float64Array } {
  const design = designOf(fit.recipe, variables, rows)
  const columns: readonly WrittenColumn[] =
    fit.frame.type === "orthogonal" ? writtenColumns(design) : denseColumns(design).map((high) => ({ high, low: null }))
  const eta = new Float64Array(rows)
  const error = new Float64Array(rows)
  const { frame } = fit
  const p = frame.column.length
  const z = new Float64Array(p)
  for (let i = 0; i < rows; i++) {
    basisRow(fit, columns, i, z)
    let sum = 0
    for (let j = 0; j < p; j++) sum += (z[j] as number) * (frame.gamma[j] as number)
    eta[i] = sum
    error[i] = frame.covariance.length === 0 ? Number.NaN : Math.sqrt(Math.max(0, quadratic(frame.covariance, z)))
    for (const direction of fit.recession) {
      // A row that a direction moves is at the end of its range; one that it leaves alone has the fit of the rows that stayed.
      let [along, size] = [0, 0]
      direction.forEach((times, j) => {
        const part = times * ((columns[j] as WrittenColumn).high[i] as number)
        along += part
        size += Math.abs(part)
      })
      if (Math.abs(along) <= 1e-9 * size) continue
      eta[i] = along > 0 ? Number.POSITIVE_INFINITY : Number.NEGATIVE_INFINITY
      error[i] = Number.NaN
      break
    }
  }
  return { eta, error }
}

/** The columns of the design at other rows, one array a coefficient. */
export const designAt = (fit: Fit, variables: Variables, rows: number): Float64Array[] =>
  denseColumns(designOf(fit.recipe, variables, rows))

/** Working residual (y − μ)/d and expected weight a·d²/V of each row of the problem, at its fit. */
export function workingRows(problem: Problem, fit: Fit): { readonly residual: Float64Array; readonly weight: Float64Array } {
  const responses = responsesOf(problem)
  const state = rowState(problem.rows)
  state.eta.set(fit.eta)
  anyRows(responses, "expected", 0, problem.rows, state, new Float64Array(2))
  const residual = new Float64Array(problem.rows)
  for (let i = 0; i < problem.rows; i++) {
    const eta = fit.eta[i] as number
    const times = responses.scale ? (responses.scale[i] as number) : 1
    const y = problem.y[i] as number
    const rest = responses.link.complement
    const difference = rest !== null && y > 0.5 && problem.family.name === "binomial" ? rest(eta) - (1 - y) : y - (state.mu[i] as number)
    residual[i] = difference / (times * responses.link.slope(eta))
  }
  return { residual, weight: state.weight }
}

/** One row in the basis of the fit. */
function basisRow(fit: Fit, columns: readonly WrittenColumn[], row: number, z: Float64Array): void {
  const { frame } = fit
  const p = frame.column.length
  if (frame.type === "scaled") {
    for (let j = 0; j < p; j++) {
      const x = (columns[frame.column[j] as number] as WrittenColumn).high[row] as number
      const on = frame.carrier[j] as number
      const carried = on < 0 ? 0 : (frame.centre[j] as number) * ((columns[on] as WrittenColumn).high[row] as number)
      z[j] = (x - carried) / (frame.scale[j] as number)
    }
    return
  }
  // R'·q = x from the first row down, in 32 digits.
  const low = new Float64Array(p)
  const sum = new WideSum()
  for (let j = 0; j < p; j++) {
    sum.clear()
    const x = columns[frame.column[j] as number] as WrittenColumn
    sum.add(x.high[row] as number)
    if (x.low) sum.add(x.low[row] as number)
    for (let k = 0; k < j; k++) {
      const r = frame.high[k * p + j] as number
      sum.addProduct(-r, z[k] as number)
      sum.add(-(r * (low[k] as number) + (frame.low[k * p + j] as number) * (z[k] as number)))
    }
    const r = frame.high[j * p + j] as number
    const q = sum.high / r
    const product = q * r
    const rest = (sum.high - product - productError(q, r, product) + sum.low - q * (frame.low[j * p + j] as number)) / r
    z[j] = q + rest
    low[j] = q - (z[j] as number) + rest
  }
}

const quadratic = (matrix: Float64Array, z: Float64Array): number => {
  const p = z.length
  let sum = 0
  for (let i = 0; i < p; i++) {
    let row = 0
    for (let j = 0; j < p; j++) row += (matrix[i * p + j] as number) * (z[j] as number)
    sum += (z[i] as number) * row
  }
  return sum
}
