// How far each row draws the fit to itself: leverages and Cook's distances, of one copy of a row where it stands several times. Cook 1977;
// Pregibon 1981.

import { penalisedSearch } from "./bias-reduced.ts"
import { type Fit, searched } from "./fit.ts"
import { Factor } from "./gram.ts"
import type { Problem } from "./problem.ts"
import { pearsonResiduals } from "./residuals.ts"
import { rowLeverages } from "./row-leverages.ts"

/**
 * h = W·x'(X'WX)⁻¹x of each row, divided by its copies; their sum over copies is the rank. Null where the best means lie at an end of what is
 * possible, and there are no weights; a row whose mean has run to an end draws nothing.
 */
export async function leverages(problem: Problem, fit: Fit, pause: () => Promise<void>): Promise<Float64Array | null> {
  const copies = (row: number): number => (problem.repeat ? (problem.repeat[row] as number) : 1)
  if (problem.estimate === "bias_reduced") {
    const penalised = await penalisedSearch(problem, fit, pause)
    const of = penalised === null ? null : Factor.of(penalised.point.gram)
    if (penalised === null || of === null) return null
    const all = await rowLeverages(penalised.equations, penalised.point.state.weight, of)
    return all.map((h, i) => h / copies(i))
  }
  const search = await searched(problem, pause, fit)
  if (!search.ok) return null
  const { climb, limit } = search.found
  if (limit.type === "edge" || limit.type === "gave_up" || (limit.type === "infinite" && limit.edge !== null)) return null
  const inner = limit.type === "infinite" ? limit.rest : climb
  const out = new Float64Array(problem.rows)
  if (inner === null) return out
  const { equations, found } = inner
  const { point } = found
  if (!(await equations.fill(point, "expected", true))) return null
  const factor = Factor.of(point.gram)
  if (factor === null) return null
  const h = await rowLeverages(equations, point.state.weight, factor)
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
