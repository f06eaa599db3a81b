// Profile intervals against the multiple-precision ends in the reference files, by χ² with the dispersion held and by F where it is
// estimated. An error is measured as a share of the end or of the standard error, whichever is larger.

import { describe, expect, it } from "vitest"
import { fit } from "../../cells/statistics/index.ts"
import type { Problem } from "../../cells/statistics/problem.ts"
import { profileIntervals } from "../../cells/statistics/profile.ts"
import { digits } from "./printed.ts"
import { problemOf, type ReferenceFit, type ReferenceModel, referenceSets } from "./reference-models.ts"

type Ends = { readonly lower: readonly string[]; readonly upper: readonly string[] }
type Case = readonly [string, Problem, ReferenceFit, Ends]

const pause = async (): Promise<void> => {}

const casesOf = (file: string): readonly Case[] =>
  referenceSets(file).flatMap((set) =>
    set.models.flatMap((model: ReferenceModel) => {
      const problem = problemOf(set, model)
      const reference = model.reference as ReferenceFit & { readonly profile_95_chi2?: Ends; readonly profile_95_f?: Ends }
      if (!problem || !reference) return []
      const { profile_95_chi2: chiSquare, profile_95_f: f, dispersion_used: phi } = reference
      // The same dispersion, said as a number, counts as known.
      const held = problem.dispersion === "pearson" ? { ...problem, dispersion: Number(phi) } : problem
      const cases: Case[] = []
      if (chiSquare) cases.push([`${set.id}, ${model.id}, χ²`, held, reference, chiSquare])
      if (f) cases.push([`${set.id}, ${model.id}, F`, problem, reference, f])
      return cases
    }),
  )

describe.each(["published-glm.json", "generated-glm.json", "nist-linear.json", "nist-nonlinear.json"])("%s", (file) => {
  it.each(casesOf(file))("%s: both ends of every coefficient", async (_, problem, reference, ends) => {
    const found = await fit(problem, pause)
    if (!found.ok) throw new Error(found.detail)
    const least = found.fit.certificate.condition > 1e4 ? 7 : 10
    const intervals = await profileIntervals(problem, found.fit, pause)
    intervals.forEach((interval, j) => {
      const error = Number(reference.se_expected[j])
      for (const [end, exact] of [
        [interval?.low, ends.lower[j] as string],
        [interval?.high, ends.upper[j] as string],
      ] as const) {
        expect(digits(typeof end === "number" ? end : null, exact, error), found.fit.coefficients[j]?.of).toBeGreaterThan(least)
      }
    })
  })
})
