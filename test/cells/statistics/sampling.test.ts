// Sampling weights: a weighted estimate with sandwich errors and no likelihood. Expected errors are Binder's (1983) formula written out for a
// straight line.

import { describe, expect, it } from "vitest"
import { fit, samplingWeights } from "../../../cells/statistics/fit.ts"
import type { Problem } from "../../../cells/statistics/problem.ts"
import { profileIntervals } from "../../../cells/statistics/profile.ts"
import { betas, errors, fitted, numbers, problem, type Stated } from "./problems.ts"

const sampled = (stated: Stated, weights: readonly number[]): Problem => ({
  ...problem({ ...stated, standardErrors: "sandwich", precision: samplingWeights(Float64Array.from(weights)) }),
  sampling: true,
})

const x = [1, 2, 3, 4, 5, 6]
const y = [2, 3, 3, 6, 9, 8]
const weights = [10, 40, 25, 5, 30, 10]
const line: Stated = { family: "normal", link: "identity", terms: ["x"], y, variables: { x: numbers(x) } }

describe("sampling weights", () => {
  it("give the weighted line, with errors by the sandwich", async () => {
    const found = await fitted(sampled(line, weights))
    const mean = (of: (i: number) => number): number =>
      weights.reduce((sum, w, i) => sum + w * of(i), 0) / weights.reduce((sum, w) => sum + w, 0)
    const [mx, my] = [mean((i) => x[i] as number), mean((i) => y[i] as number)]
    const sxx = weights.reduce((sum, w, i) => sum + w * ((x[i] as number) - mx) ** 2, 0)
    const slope = weights.reduce((sum, w, i) => sum + w * ((x[i] as number) - mx) * ((y[i] as number) - my), 0) / sxx
    const constant = my - slope * mx
    expect(betas(found)).toEqual([expect.closeTo(constant, 12), expect.closeTo(slope, 12)])
    const squares = weights.reduce(
      (sum, w, i) => sum + (w * ((x[i] as number) - mx) * ((y[i] as number) - constant - slope * (x[i] as number))) ** 2,
      0,
    )
    expect(errors(found)[1]).toBeCloseTo((Math.sqrt(squares) / sxx) * Math.sqrt(6 / 4), 12)
  })

  it("are scaled to mean one, so that their unit changes nothing", async () => {
    const [once, often] = [
      await fitted(sampled(line, weights)),
      await fitted(
        sampled(
          line,
          weights.map((w) => 700 * w),
        ),
      ),
    ]
    once.covariance.forEach((value, j) => {
      expect(often.covariance[j]).toBeCloseTo(value, 12)
    })
    expect(often.deviance).toBeCloseTo(once.deviance ?? 0, 10)
    expect(samplingWeights(Float64Array.of(1, 3)).reduce((sum, w) => sum + w, 0)).toBe(2)
  })

  it("give the coefficients of rows that stand so many times, and no likelihood, criteria, fit test or profile", async () => {
    const stated: Stated = { family: "poisson", link: "log", terms: ["x"], y, variables: { x: numbers(x) } }
    const of = sampled(stated, weights)
    const found = await fitted(of)
    const repeated = await fitted(problem({ ...stated, repeat: Float64Array.from(weights) }))
    found.coefficients.forEach(({ beta }, j) => {
      expect(beta).toBeCloseTo(repeated.coefficients[j]?.beta ?? 0, 12)
    })
    expect([found.logLikelihood, found.aic, found.bic]).toEqual([null, null, null])
    expect(found.fitTest).toEqual([])
    expect(await profileIntervals(of, found, async () => {})).toEqual([null, null])
  })

  it("do not go with a reduced bias", async () => {
    const found = await fit(
      { ...sampled({ family: "poisson", link: "log", terms: [], y }, weights), estimate: "bias_reduced" },
      async () => {},
    )
    expect(found.ok).toBe(false)
  })
})
