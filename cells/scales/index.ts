// `scales`: a model's fit on the mean scale and on the linear-predictor scale, with the link as the bridge between them.

import type { Kind } from "../../runtime/kind.ts"
import type { Json } from "../../runtime/value.ts"
import { found } from "./find.ts"
import type { CandidateFound, ScalesFinding } from "./finding.ts"
import { deltaAic, leastAic, shown } from "./show.ts"
import { type ScalesSaid, scalesWords } from "./words.ts"

export const scales: Kind<ScalesSaid, ScalesFinding> = {
  words: scalesWords,
  version: 1,
  evaluate: found,
  show: shown,
  summary,
  tried: (finding) => finding.candidates.filter(({ own, fitted }) => !own && fitted).map((candidate) => triedFit(candidate, finding)),
}

/** A gap in a curve has no number. */
const numbers = (values: Float64Array): Json => Array.from(values, (value) => (Number.isFinite(value) ? value : null))

function summary(finding: ScalesFinding): Json {
  const { levels } = finding.across
  const xs = (values: Float64Array): Json => (levels === null ? numbers(values) : Array.from(values, (value) => levels[value] ?? null))
  const points = ({ points: all }: CandidateFound, i: number): Json => {
    const of = all[i]
    return of === undefined ? null : { x: xs(of.x), mean: numbers(of.mean), working: numbers(of.working), weight: numbers(of.weight) }
  }
  const least = leastAic(finding)
  return {
    across: finding.across.name,
    held: finding.held,
    curves: finding.candidates.flatMap((candidate) =>
      candidate.curves.map((curve, i) => ({
        link: candidate.link,
        level: curve.level,
        x: xs(curve.x),
        mu: numbers(curve.mu),
        mu_lower: numbers(curve.muLow),
        mu_upper: numbers(curve.muHigh),
        eta: numbers(curve.eta),
        inside: Array.from(curve.inside, (is) => is === 1),
        ...(finding.split === null ? {} : { points: points(candidate, i) }),
      })),
    ),
    points: points(finding.candidates[0] as CandidateFound, 0),
    strip: finding.candidates.map((candidate) => ({ link: candidate.link, delta_aic: deltaAic(candidate, finding, least) })),
  }
}

const triedFit = (candidate: CandidateFound, finding: ScalesFinding): Json => ({
  family: finding.family,
  link: candidate.link,
  predictor: finding.predictor,
  n: finding.n,
  deviance: candidate.deviance,
  df: candidate.df,
  aic: candidate.aic,
})
