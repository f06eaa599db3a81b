// What is said beside a finding: what was taken without being said, what means something else than may be thought, and what was hard about
// the fit.

import type { Notice, Place } from "../../runtime/notice.ts"
import type { Fit } from "../statistics/fit.ts"
import { biasIsGone } from "../statistics/index.ts"
import type { Problem } from "../statistics/problem.ts"
import { isDiscrete } from "./family.ts"
import * as say from "./notices.ts"
import type { Response } from "./response.ts"
import { separationSays } from "./separation.ts"
import type { ModelSaid } from "./words.ts"

type Say = (notice: Notice) => void

/** What was taken without being said, or means something else than may be thought. */
export function remarks(
  said: ModelSaid,
  problem: Problem,
  response: Response,
  link: { readonly says: string; readonly chosen: boolean },
  notice: Say,
): void {
  const family = problem.family.name
  if (!link.chosen) notice(say.linkNotChosen(link.says, family))
  if (said.precision !== null && isDiscrete(family)) notice(say.precisionCounts(family, said.precision.name, said.precision.at))
  const power =
    family === "gamma" ? 2 : family === "inverse_gaussian" ? 3 : family === "tweedie" ? (problem.family.parameters[0] ?? 1.5) : null
  if (said.exposure !== null && power !== null && said.response?.type === "column")
    notice(say.exposureAsAmount(said.exposure.name, said.response.column.name, power, said.exposure.at))
  if (problem.sampling && said.modelErrors !== null) notice(say.samplingErrors(said.modelErrors))
  if (problem.estimate === "bias_reduced" && said.estimate !== null && !biasIsGone(problem))
    notice(say.biasNotGone(link.says, family, said.estimate.at))
  const [first] = problem.y
  if (said.response !== null && problem.rows > 1 && first !== undefined && problem.y.every((value) => value === first))
    notice(say.constantResponse(response.finding.label, constantSays(first, response), responsePlace(said)))
}

const constantSays = (value: number, response: Response): string =>
  response.finding.measured === "truth"
    ? value === 1
      ? "true"
      : "false"
    : response.finding.measured === "share"
      ? `a share of ${value}`
      : String(value)

const responsePlace = (said: ModelSaid): Place =>
  said.response?.type === "successes" ? said.response.successes.at : (said.response?.column.at ?? { clause: -1, from: 0, to: 0 })

/** At most so many dependent columns are named one by one. */
const namedDependences = 4

/** What was hard about the fit. */
export function fitNotices(said: ModelSaid, problem: Problem, of: Fit, rowName: say.RowName, notice: Say): void {
  const { certificate } = of
  const at: Place = { clause: said.predictorAt, from: 0, to: 1 }
  const placeOf = (term: number): Place => {
    const places = said.predictor?.terms[term]?.pieces.map((piece) => piece.at) ?? []
    if (places.length === 0) return at
    return { ...at, from: Math.min(...places.map(({ from }) => from)), to: Math.max(...places.map(({ to }) => to)) }
  }
  const dependent = certificate.evidence?.dependent ?? []
  for (const { column, on } of dependent.slice(0, namedDependences)) {
    notice(
      say.dependentTerm(
        column,
        on.map((part) => part.column),
        placeOf(of.coefficients.find((coefficient) => coefficient.of === column)?.term ?? -1),
      ),
    )
  }
  if (dependent.length > namedDependences)
    notice(
      say.moreDependentTerms(
        dependent.slice(namedDependences).map(({ column }) => column),
        at,
      ),
    )
  if (certificate.class === "gave_up") notice(say.gaveUp(certificate.iterations, certificate.scaledScore))
  of.parameters.forEach(({ of: name, end, value }) => {
    const clause = name === "k" || name === "p" ? "family" : name.endsWith("limit") ? "limits" : "link"
    if (end !== 0) notice(say.parameterAtEnd(name, clause, value))
  })
  if ((certificate.evidence?.edge.length ?? 0) > 0) {
    notice(
      say.atBoundary(
        (certificate.evidence?.edge ?? []).map(({ row }) => row),
        rowName,
        said.link?.at ?? null,
      ),
    )
  }
  if ((certificate.evidence?.directions.length ?? 0) > 0) {
    const moved = of.coefficients.flatMap(({ of: term, toward }) => (toward === null ? [] : [{ of: term, toward }]))
    notice(say.atInfinity(moved, separationSays({ problem, fit: of }), problem.family.name, at))
  }
  if (certificate.class === "several_maxima") notice(say.severalMaxima())
  if (of.df === 0 && of.dispersion.estimated && of.dispersion.value === null) notice(say.nothingLeft())
  if (of.clusters === 1 && said.cluster !== null) notice(say.oneCluster(said.cluster.name, said.cluster.at))
}
