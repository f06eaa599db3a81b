// How the expected weight of a row changes with its linear predictor: what the bias of an estimate and the collapse of Wald's ratio go by.

import type { Responses } from "./rows.ts"

/** dW/dη of each row: W(2d'/d − d·V'/V); 0 where the weight is. */
export function weightSlopes(
  { family, link, scale, a }: Responses,
  eta: Float64Array,
  mu: Float64Array,
  weight: Float64Array,
): Float64Array {
  return eta.map((e, i) => {
    const w = weight[i] as number
    if (w === 0 || (a[i] as number) === 0) return 0
    const times = scale ? (scale[i] as number) : 1
    const m = mu[i] as number
    const rest = link.complement === null || m < 0.5 ? 1 - m : link.complement(e)
    const d = link.slope(e)
    return w * ((2 * link.curvature(e)) / d - (times * d * family.varianceSlope(m, rest)) / family.variance(m, rest))
  })
}
