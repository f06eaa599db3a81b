// A link in a few pixels: the mean rising with η, or falling, over the means on the plot, so that the shape of a candidate is seen before
// it is tried. The far tails are left out, since there every link is a flat line.

import type { ScalesCandidate } from "../../../cells/block.ts"
import { tenth } from "../scene.ts"

/** Share of the means at either end that is not drawn. */
const TAIL = 0.04

/** The path of a thumbnail within a width and height, or an empty one where the pairs are too few. */
export function linkThumbnail(candidate: ScalesCandidate, width: number, height: number): string {
  const { mu, eta } = candidate.bridge
  const n = mu.length
  if (n < 4) return ""
  const least = mu[0] as number
  const extent = (mu[n - 1] as number) - least
  const kept = [...mu.keys()].filter((i) => {
    const share = ((mu[i] as number) - least) / extent
    return share >= TAIL && share <= 1 - TAIL && Number.isFinite(eta[i] as number)
  })
  const etas = kept.map((i) => eta[i] as number)
  const low = Math.min(...etas)
  const high = Math.max(...etas)
  if (!(high > low)) return ""
  const points = kept.map((i) => {
    const x = (((eta[i] as number) - low) / (high - low)) * (width - 4) + 2
    const y = height - 2 - (((mu[i] as number) - least) / extent) * (height - 4)
    return `${tenth(x)} ${tenth(y)}`
  })
  return `M${points.join("L")}`
}
