// Where a previewed candidate stands on the subject's η axis. Two links give η in units of their own, so a ghost drawn on the same numbers
// would mean nothing; it is drawn so that both links agree in value and slope at a mean in the middle of the data, which is what `aligned`
// does for all candidates. This only places; every number that is read off is the candidate's own.

import type { ScalesCandidate } from "../../../cells/block.ts"
import { etaAt } from "./bridge.ts"

/** The mean at which the ghost is made to agree: that of the observed means, by rows. */
export function agreementMean(subject: ScalesCandidate): number {
  let sum = 0
  let rows = 0
  for (const points of subject.points) {
    points.mean.forEach((mean, i) => {
      if (!Number.isFinite(mean)) return
      sum += mean * (points.rows[i] as number)
      rows += points.rows[i] as number
    })
  }
  if (rows > 0) return sum / rows
  const { mu } = subject.bridge
  return mu[Math.floor(mu.length / 2)] ?? Number.NaN
}

/** The η of `other`, moved to where the subject's axis has it. */
export function onSubjectScale(subject: ScalesCandidate, other: ScalesCandidate): (eta: number) => number {
  const at = agreementMean(subject)
  const own = tangent(subject, at)
  const its = tangent(other, at)
  const factor = own.slope / its.slope
  if (!Number.isFinite(factor) || factor === 0) return (eta) => eta
  return (eta) => own.eta + factor * (eta - its.eta)
}

/** g and its slope at a mean, from the pairs around it. */
function tangent(candidate: ScalesCandidate, at: number): { readonly eta: number; readonly slope: number } {
  const { mu } = candidate.bridge
  const first = mu[0] ?? 0
  const last = mu.at(-1) ?? 0
  const step = (last - first) / 200
  const middle = Math.min(last - step, Math.max(first + step, at))
  return {
    eta: etaAt(candidate.bridge, middle),
    slope: (etaAt(candidate.bridge, middle + step) - etaAt(candidate.bridge, middle - step)) / (2 * step),
  }
}
