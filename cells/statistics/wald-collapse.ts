// Where Wald's ratio collapses: a coefficient so far out that its standard error grows faster than itself, so that a larger effect would look
// less certain. The ratio is then no measure of evidence. Hauck & Donner 1977, JASA 72:851.

import { designCoefficients, outOfScore } from "./change.ts"
import { type Fit, searched } from "./fit.ts"
import { Factor } from "./gram.ts"
import type { Problem } from "./problem.ts"
import { directionOf } from "./recession.ts"
import { dot } from "./scoring.ts"
import { weightSlopes } from "./weight-slopes.ts"

/**
 * Which coefficients have a ratio z that falls as they grow, d|z|/d|β| < 0. The others follow along the ridge of the likelihood, so that it
 * does not matter from where a predictor is counted. With v the entry jj of (X'WX)⁻¹, t = X(X'WX)⁻¹e_j and dη = t/v along the ridge,
 *     d|z|/d|β| < 0   where   β·v'/(2v) > 1,   v' = −Σ (dW/dη)·t³/v.
 * By the expected information; none where errors are sandwich, where they mean
 * nothing, or in penalised fits.
 */
export async function collapsedRatios(problem: Problem, fit: Fit, pause: () => Promise<void>): Promise<readonly number[]> {
  if (problem.standardErrors === "sandwich" || problem.estimate === "bias_reduced") return []
  if (!fit.coefficients.some(({ ratio }) => ratio !== null)) return []
  const search = await searched(problem, pause, fit)
  if (!search.ok || search.found.limit.type !== "inside") return []
  const { equations, design, found, responses } = search.found.climb
  const { basis } = equations
  const { point } = found
  await equations.fill(point, "expected", true)
  const factor = Factor.of(point.gram)
  if (factor === null) return []
  const beta = designCoefficients(basis, design.recipe.columns.length, point.gamma, point.gammaLow)
  const slope = weightSlopes(responses, point.state.eta, point.state.mu, point.state.weight)
  const collapsed: number[] = []
  for (const [place, column] of basis.change.column.entries()) {
    await pause()
    const unit = new Float64Array(basis.size)
    unit[place] = 1
    const c = outOfScore(basis, unit)
    const direction = factor.solve(c)
    const along = directionOf(equations, direction)
    const v = dot(c, direction)
    let change = 0
    for (let i = 0; i < along.length; i++) {
      const t = along[i] as number
      change -= (slope[i] as number) * t * t * (t / v)
    }
    if (((beta[column] as number) * change) / (2 * v) > 1) collapsed.push(column)
  }
  return collapsed.sort((a, b) => a - b)
}
