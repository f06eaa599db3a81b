// Penalised fits of the endometrial data (Heinze & Schemper 2002, with a predictor that separates), against coefficients computed at 40 digits,
// and by what has a closed form: a single share, whose penalised logit adds half a success and half a failure.

import { readFileSync } from "node:fs"
import { describe, expect, it } from "vitest"
import { whyNotReduced } from "../../../cells/statistics/bias-reduced.ts"
import type { Problem } from "../../../cells/statistics/problem.ts"
import { profileIntervals } from "../../../cells/statistics/profile.ts"
import { collapsedRatios } from "../../../cells/statistics/wald-collapse.ts"
import { factor, fitted, numbers, problem, type Stated } from "./problems.ts"

const pause = async (): Promise<void> => {}
const reduced = (stated: Stated): Problem => ({ ...problem(stated), estimate: "bias_reduced" })

const rows = readFileSync(new URL("./endometrial.csv", import.meta.url), "utf8")
  .trim()
  .split("\n")
  .slice(1)
const column = (k: number): readonly number[] => rows.map((row) => Number(row.split(",")[k]))
const endometrial = (link: string): Stated => ({
  family: "binomial",
  link,
  terms: ["nv", "pi", "eh"],
  y: column(3),
  variables: { nv: numbers(column(0)), pi: numbers(column(1)), eh: numbers(column(2)) },
})

describe("the endometrial data", () => {
  it.each([
    ["logit", ["3.774560", "2.929273", "-0.03475176", "-2.604164"]],
    ["probit", ["1.958256", "1.742583", "-0.01573743", "-1.404891"]],
  ] as const)("under %s have the coefficients computed at 40 digits", async (link, printed) => {
    const fit = await fitted(reduced(endometrial(link)))
    expect(fit.coefficients.map(({ beta }) => beta?.toPrecision(7))).toEqual(printed.map((text) => Number(text).toPrecision(7)))
    expect(fit.certificate).toMatchObject({ class: "interior", global: false })
    expect(fit.certificate.scaledScore).toBeLessThan(1e-9)
    expect([fit.aic, fit.bic, fit.goodnessOfLink]).toEqual([null, null, null])
    expect(fit.interceptOnly?.df).toBe(78)
  })

  it("have profiles of the same likelihood, finite at both ends", async () => {
    const of = reduced(endometrial("logit"))
    const fit = await fitted(of)
    const found = await profileIntervals(of, fit, pause)
    // By the secant on the penalised deviance in 30 digits (mpmath).
    const ends = [
      [1.0825371084477, 7.2092804982469],
      [0.6097244363032, 7.8546317138774],
      [-0.12445872085173, 0.04045547318061],
      [-4.3651832472633, -1.232721057217],
    ] as const
    ends.forEach(([low, high], j) => {
      expect(found[j]?.low).toBeCloseTo(low, 10)
      expect(found[j]?.high).toBeCloseTo(high, 10)
    })
    expect(await collapsedRatios(of, fit, pause)).toEqual([])
  })
})

describe("a single share", () => {
  it.each([
    [0, 7],
    [3, 7],
    [7, 7],
  ])("of %d successes in %d has half of each added under the logit", async (successes, trials) => {
    const of = reduced({ family: "binomial", link: "logit", terms: [], y: [successes / trials], trials: Float64Array.of(trials) })
    const fit = await fitted(of)
    expect(fit.coefficients[0]?.beta).toBeCloseTo(Math.log((successes + 0.5) / (trials - successes + 0.5)), 12)
    // The deviance shown is the plain one, and the null model likewise is the penalised one.
    expect(fit.interceptOnly?.deviance).toBeCloseTo(fit.deviance ?? Number.NaN, 12)
  })
})

it("adds half a count under the Poisson log, and grouping equal rows changes nothing", async () => {
  const single = await fitted(reduced({ family: "poisson", link: "log", terms: [], y: [0, 0, 0, 2] }))
  // The penalty is ½·ln Σμ, so half a count in all.
  expect(single.coefficients[0]?.beta).toBeCloseTo(Math.log(2.5 / 4), 12)
  const repeated = await fitted(reduced({ family: "poisson", link: "log", terms: [], y: [0, 2], repeat: Float64Array.of(3, 1) }))
  expect(repeated.coefficients[0]?.beta).toBeCloseTo(Math.log(2.5 / 4), 12)
})

it("is finite where a category has no count, whichever basis the columns are in", async () => {
  const lots = ["a", "a", "b", "b", "c", "c"]
  const fit = await fitted(
    reduced({ family: "poisson", link: "log", terms: ["lot"], y: [3, 5, 0, 0, 2, 1], variables: { lot: factor(lots) } }),
  )
  // One half of a count for each lot: the groups are apart.
  const means = [8.5, 0.5, 3.5].map((sum) => Math.log(sum / 2))
  expect(fit.coefficients.map(({ beta }) => beta)).toEqual(
    [means[0], (means[1] as number) - (means[0] as number), (means[2] as number) - (means[0] as number)].map((b) =>
      expect.closeTo(b as number, 11),
    ),
  )
  const profile = await profileIntervals(
    reduced({ family: "poisson", link: "log", terms: ["lot"], y: [3, 5, 0, 0, 2, 1], variables: { lot: factor(lots) } }),
    fit,
    pause,
  )
  expect(profile.every((interval) => typeof interval?.low === "number" && typeof interval.high === "number")).toBe(true)
})

describe("where the penalty has no limit, or something else is estimated", () => {
  const y = [0, 1, 1]
  const of = (stated: Partial<Stated> & { family: string; link: string }): Problem => reduced({ terms: [], y, ...stated })
  it.each([
    [of({ family: "binomial", link: "log" }), "link"],
    [of({ family: "binomial", link: "identity" }), "link"],
    [of({ family: "poisson", link: "square_root" }), "link"],
    [of({ family: "normal", link: "identity" }), "family"],
    [of({ family: "gamma", link: "log" }), "family"],
    [of({ family: "binomial", link: "logit", dispersion: "pearson" }), "dispersion"],
    [{ ...of({ family: "poisson", link: "log" }), family: { name: "negative_binomial", parameters: [1], estimated: [0] } }, "estimated"],
    [of({ family: "binomial", link: "probit" }), null],
    [{ ...of({ family: "poisson", link: "log" }), family: { name: "negative_binomial", parameters: [2] } }, null],
  ] as const)("%#: %s", (asked, why) => {
    expect(whyNotReduced(asked)).toBe(why)
  })
})
