// Profiles of a fit whose best means lie at the end of what is possible: no curvature to follow there, so the coefficient is moved into the
// offset, the rest is fitted again with its own edge, and the end is found by bracketing.

import { basisOver } from "./basis.ts"
import { basisCoefficients, designCoefficients } from "./change.ts"
import { denseColumns } from "./design.ts"
import type { Edge } from "./edge.ts"
import { type Climb, leastDeviance, limitOf } from "./limits.ts"
import type { ProfileInterval } from "./profile.ts"
import type { Responses } from "./rows.ts"
import { dot, Equations, maximum } from "./scoring.ts"
import { startingPoint } from "./start.ts"

/** Relative width to which an end is bracketed. */
const width = 1e-11

/** So many times is the distance doubled or halved before it is said that there is no end. */
const mostDoublings = 60

export async function edgeProfile(climb: Climb, edge: Edge, column: number, rise: number, phi: number): Promise<ProfileInterval | null> {
  const { equations, design } = climb
  const { change } = equations.basis
  if (!change.column.includes(column)) return null
  const columns = design.recipe.columns.length
  const beta = designCoefficients(equations.basis, columns, edge.point.gamma, edge.point.gammaLow)
  const x = denseColumns(design)[column] as Float64Array
  const basis = basisOver(
    design,
    [...change.column].filter((other) => other !== column),
  )
  const base = edge.point.deviance
  let warm = beta
  const best = beta[column] as number

  /** The least deviance with the coefficient held, above the least of all; Infinity where no mean is possible. */
  const riseAt = async (b: number): Promise<number> => {
    const { offset } = climb.responses
    const responses: Responses = { ...climb.responses, offset: x.map((value, i) => b * value + (offset ? (offset[i] as number) : 0)) }
    const held = new Equations(basis, responses, climb.equations.pace)
    if (basis.size === 0) {
      const point = held.point()
      return (await held.fill(point, "expected")) ? point.deviance - base : Number.POSITIVE_INFINITY
    }
    const constant = design.constant && column !== 0 && basis.change.column.includes(0) ? 0 : -1
    const start = await startingPoint(held, constant, columns, null, warm)
    if (!start) return Number.POSITIVE_INFINITY
    const found = await maximum(held, start, () => phi)
    const ended = await limitOf({ ...climb, responses, equations: held, found }, () => phi)
    if (ended.type === "edge") {
      warm = designCoefficients(basis, columns, ended.edge.point.gamma)
      return ended.edge.point.deviance - base
    }
    if (ended.type === "infinite") return leastDeviance(ended) - base
    if (ended.type === "gave_up") return Number.POSITIVE_INFINITY
    warm = designCoefficients(basis, columns, found.point.gamma, found.point.gammaLow)
    return found.point.deviance - base
  }

  const unit = unitOf(climb, edge, column, phi)
  const end = async (side: 1 | -1): Promise<ProfileInterval["low"]> => {
    let [inside, outside] = [0, Number.POSITIVE_INFINITY]
    let [below, above] = [-rise, Number.POSITIVE_INFINITY]
    let step = unit * Math.sqrt(rise / phi)
    for (let k = 0; k < mostDoublings && outside === Number.POSITIVE_INFINITY; k++) {
      const gap = (await riseAt(best + side * step)) - rise
      if (gap >= 0) [outside, above] = [step, gap]
      else {
        ;[inside, below] = [step, gap]
        step *= 2
      }
    }
    if (outside === Number.POSITIVE_INFINITY) return side > 0 ? "infinity" : "-infinity"
    // False position with halving of the end that stays (Dowell & Jarratt 1971, BIT 11:168), bisection where an end has no finite rise.
    let stayed = 0
    for (let k = 0; k < 200 && outside - inside > width * Math.max(outside, Math.abs(best)); k++) {
      const middle = Number.isFinite(above) ? (inside * above - outside * below) / (above - below) : (inside + outside) / 2
      const next = middle > inside && middle < outside ? middle : (inside + outside) / 2
      const gap = (await riseAt(best + side * next)) - rise
      if (Math.abs(gap) <= 1e-12 * rise) return best + side * next
      if (gap > 0) {
        outside = next
        above = gap
        if (stayed === 1) below /= 2
        stayed = 1
      } else {
        inside = next
        below = gap
        if (stayed === -1) above /= 2
        stayed = -1
      }
    }
    return Number.isFinite(above) ? best + (side * (inside + outside)) / 2 : "edge"
  }
  return { low: await end(-1), high: await end(1) }
}

/** A first step: the error the coefficient would have if all others were known. */
function unitOf({ equations, design }: Climb, edge: Edge, column: number, phi: number): number {
  const unit = new Float64Array(design.recipe.columns.length)
  unit[column] = 1
  const z = basisCoefficients(equations.basis, unit)
  const information = dot(edge.point.gram.times(z), z)
  return information > 0 && Number.isFinite(information) ? Math.sqrt(phi / information) : Math.sqrt(phi)
}
