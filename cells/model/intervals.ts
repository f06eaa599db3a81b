// The intervals of a model's coefficients, and what they say about its Wald tests. Profile intervals are a late part: the finding is shown
// without them, and those who read its fit do not wait.

import type { Outcome, Work } from "../../runtime/kind.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { IntervalsFound, ModelFinding, ModelFound } from "../model-finding.ts"
import { collapsedRatios, type ProfileInterval, parameterIntervals, profileIntervals, profilesAreLight } from "../statistics/index.ts"
import * as say from "./notices.ts"
import type { ModelSaid } from "./words.ts"

/** The finding with its intervals: Wald's at once, profiles as a late part. */
export async function withIntervals(
  said: ModelSaid,
  finding: ModelFinding,
  notices: readonly Notice[],
  work: Work,
): Promise<Outcome<ModelFound>> {
  const { problem, fit } = finding
  const outcome = (intervals: IntervalsFound, more: readonly Notice[]): Outcome<ModelFound> => ({
    ok: true,
    found: { parts: { fit: finding }, intervals },
    notices: [...notices, ...more],
  })
  const { by, remark } = intervalsBy(said, finding)
  const own = remark === null ? [] : [remark]
  const none = fit.parameters.length === 0 ? [] : null
  const soFar = outcome({ by, ends: by === "wald" ? waldEnds(finding) : null, parameters: none }, own)
  const hasErrors = fit.coefficients.some(({ ratio }) => ratio !== null)
  if (by === "wald" && none !== null && (!hasErrors || problem.standardErrors === "sandwich")) return soFar
  if (!(await work.late(soFar))) return soFar
  const pause = () => work.checkpoint()
  const parameters = await parameterIntervals(problem, fit, pause)
  if (by === "wald" && (!hasErrors || problem.standardErrors === "sandwich"))
    return outcome({ by, ends: waldEnds(finding), parameters }, own)
  const collapsed = (await collapsedRatios(problem, fit, pause)).filter((j) => misleads(finding, j))
  const names = (places: readonly number[]): readonly string[] => places.map((j) => fit.coefficients[j]?.of ?? "")
  if (collapsed.length > 0) own.push(say.waldCollapses(names(collapsed), said.predictorAt))
  if (by === "wald") return outcome({ by, ends: waldEnds(finding), parameters }, own)
  const ends = await profileIntervals(problem, fit, pause)
  const disagree = disagreeing(finding, ends)
  if (disagree.length > 0) own.push(say.waldDisagrees(names(disagree), problem.confidence, said.predictorAt))
  return outcome({ by, ends, parameters }, own)
}

/** Beyond this ratio a test says the same whether the ratio falls or not. */
const beyondDoubt = 6

/** Whether a ratio that falls can mislead: that of the constant, whose 0 is seldom a question, and one beyond all doubt do not. */
const misleads = ({ fit }: ModelFinding, j: number): boolean => {
  const coefficient = fit.coefficients[j]
  return coefficient !== undefined && coefficient.term >= 0 && coefficient.ratio !== null && Math.abs(coefficient.ratio) < beyondDoubt
}

/** Which intervals are meant and can be had; what is said where it is not the same. */
function intervalsBy(
  said: ModelSaid,
  { problem, fit }: ModelFinding,
): { readonly by: IntervalsFound["by"]; readonly remark: Notice | null } {
  if (said.interval?.by === "wald") return { by: "wald", remark: null }
  if (problem.standardErrors === "sandwich")
    return { by: "wald", remark: said.interval === null ? null : say.noProfileUnderSandwich(said.interval.at) }
  if (said.interval === null && !profilesAreLight(fit)) return { by: "wald", remark: say.profilesOnRequest(fit.rows, fit.rank) }
  return { by: "profile", remark: null }
}

export const waldEnds = ({ fit }: ModelFinding): readonly (ProfileInterval | null)[] =>
  fit.coefficients.map(({ low, high }) => (low === null || high === null ? null : { low, high }))

/** Coefficients that are away from 0 by Wald's test and not by the profile, or the other way round; the constant's 0 is no question. */
function disagreeing({ fit, problem }: ModelFinding, ends: readonly (ProfileInterval | null)[]): readonly number[] {
  return fit.coefficients.flatMap(({ p, term }, j) => {
    const interval = ends[j]
    if (p === null || term < 0 || interval === null || interval === undefined) return []
    const [low, high] = [placed(interval.low), placed(interval.high)]
    if (low === null || high === null) return []
    const away = low > 0 || high < 0
    return away === p < 1 - problem.confidence ? [] : [j]
  })
}

/** An end as a place on the line; null for one that is not known beyond the edge. */
const placed = (end: ProfileInterval["low"]): number | null =>
  end === "infinity" ? Number.POSITIVE_INFINITY : end === "-infinity" ? Number.NEGATIVE_INFINITY : end === "edge" ? null : end
