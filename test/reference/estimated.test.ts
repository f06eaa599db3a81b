// Parameters estimated beside the coefficients, against multiple-precision values: k of the negative binomial (reference fits), parameters of
// links along their profiles, and the values that the conventions state for Stukel's link, for limits and for joint errors.

import { describe, expect, it } from "vitest"
import type { Fit } from "../../cells/statistics/fit.ts"
import { fit, parameterIntervals, profileIntervals } from "../../cells/statistics/index.ts"
import type { LinkSpec, Problem } from "../../cells/statistics/problem.ts"
import linkProfiles from "./link-profiles.json" with { type: "json" }
import { digits, expectPrinted } from "./printed.ts"
import { problemOf, type ReferenceModel, referenceSets } from "./reference-models.ts"

const pause = async (): Promise<void> => {}

async function fitted(problem: Problem): Promise<Fit> {
  const found = await fit(problem, pause)
  if (!found.ok) throw new Error(found.detail)
  return found.fit
}

type WithK = ReferenceModel["reference"] & { readonly k: string; readonly se_k_observed: string }

const withK = ["published-glm.json", "generated-glm.json"].flatMap((file) =>
  referenceSets(file).flatMap((set) =>
    set.models.flatMap((model) =>
      model.family.k === "ml" ? [[`${set.id}, ${model.id}`, problemOf(set, model) as Problem, model.reference as WithK] as const] : [],
    ),
  ),
)

describe("k of the negative binomial by maximum likelihood", () => {
  it.each(withK)("%s", async (_, problem, reference) => {
    const found = await fitted(problem)
    const k = found.parameters[0]
    expect(k?.of).toBe("k")
    expect(digits(k?.value, reference.k)).toBeGreaterThan(12)
    expect(digits(k?.standardError, reference.se_k_observed)).toBeGreaterThan(12)
    expect(found.parametersCounted).toBe(reference.parameters_counted)
    expect(found.certificate.global).toBe(false)
  })

  it("has both ends of its interval where the profile of ℓ is lower by ½χ²", async () => {
    const [, problem, reference] = withK[0] as (typeof withK)[number]
    const found = await fitted(problem)
    const [interval] = await parameterIntervals(problem, found, pause)
    expect(interval?.low).toBeLessThan(Number(reference.k))
    for (const end of [interval?.low, interval?.high]) {
      const held = await fitted({ ...problem, family: { name: "negative_binomial", parameters: [end as number] } })
      const rise = 2 * ((found.logLikelihood as number) - (held.logLikelihood as number))
      expect(Math.abs(rise - 3.841458820694124)).toBeLessThan(1e-9)
    }
  })

  it("is infinite, and the fit Poisson's, where counts vary no more than that", async () => {
    const set = referenceSets("published-glm.json").find(({ id }) => id === "dobson-counts")
    const model = set?.models.find(({ id }) => id === "poisson-identity")
    if (!set || !model) throw new Error("the set is there")
    const problem = problemOf(set, model) as Problem
    const found = await fitted({ ...problem, family: { name: "negative_binomial", parameters: [2], estimated: [0] } })
    expect(found.certificate.class).toBe("boundary")
    expect(found.parameters).toEqual([{ of: "k", value: null, standardError: null, end: -1 }])
    expect(digits(found.logLikelihood, model.reference.loglik)).toBeGreaterThan(12)
    expect(digits(found.deviance, model.reference.deviance)).toBeGreaterThan(12)
    expect(found.parametersCounted).toBe(model.reference.parameters_counted + 1)
  })
})

describe("the power of a Tweedie family by its profile", () => {
  // Computed at 32 digits by mpmath: the root of the profile score, φ at its best for each power.
  it("is that of the made-up amounts g18", async () => {
    const set = referenceSets("generated-glm.json").find(({ id }) => id === "g18")
    const model = set?.models.find(({ id }) => id === "tweedie-1.5-log")
    if (!set || !model) throw new Error("the set is there")
    const problem: Problem = { ...(problemOf(set, model) as Problem), family: { name: "tweedie", parameters: [1.5], estimated: [0] } }
    const found = await fitted(problem)
    expect(digits(found.parameters[0]?.value, "1.27626980615878")).toBeGreaterThan(12)
    expect(digits(found.parameters[0]?.standardError, "0.088866152603698")).toBeGreaterThan(10)
    expect(digits(found.logLikelihood, "-61.4877616525493518")).toBeGreaterThan(13)
    expect(digits(found.coefficients[0]?.beta, "0.5179810520722611")).toBeGreaterThan(12)
    expect(digits(found.coefficients[1]?.beta, "0.4287223808969423")).toBeGreaterThan(12)
    // Two coefficients, φ and p.
    expect([found.df, found.parametersCounted]).toEqual([28, 4])
    const [interval] = await parameterIntervals(problem, found, pause)
    for (const end of [interval?.low, interval?.high]) {
      const held = await fitted({ ...problem, family: { name: "tweedie", parameters: [end as number] } })
      expect(Math.abs(2 * ((found.logLikelihood as number) - (held.logLikelihood as number)) - 3.841458820694124)).toBeLessThan(1e-8)
    }
  })
})

describe("links whose parameter is estimated, against profiles at 20 digits", () => {
  const stated = (profile: (typeof linkProfiles.profiles)[number]): Problem => {
    const name = profile.family_of_links === "power" ? "power" : "aranda-ordaz"
    const model = { ...profile.model, link: { name, lambda: "1" } } as unknown as ReferenceModel
    const data = profile.data as unknown as Readonly<Record<string, readonly string[]>>
    return problemOf({ id: profile.id, n: 0, data, models: [] }, model) as Problem
  }
  const estimating = (problem: Problem): Problem => ({ ...problem, link: { ...problem.link, estimated: [0] } })
  const inside = linkProfiles.profiles.filter(({ reference }) => "deviance_min" in reference)

  it.each(linkProfiles.profiles.map((profile) => [profile.id, profile] as const))("%s at each value of its grid", async (_, profile) => {
    const problem = stated(profile)
    for (const { lambda, deviance, coefficients } of profile.reference.grid) {
      const found = await fitted({ ...problem, link: { ...problem.link, parameters: [Number(lambda)] } })
      expect(digits(found.deviance, deviance), lambda).toBeGreaterThan(11.5)
      coefficients.forEach((beta, j) => {
        expect(digits(found.coefficients[j]?.beta, beta, found.coefficients[j]?.standardError ?? 0), lambda).toBeGreaterThan(10.5)
      })
    }
  })

  it.each(inside.map((profile) => [profile.id, profile] as const))("%s at its best, with its interval", async (_, profile) => {
    const reference = profile.reference as unknown as {
      readonly lambda_hat: string
      readonly deviance_min: string
      readonly profile_95: { readonly lower: string; readonly upper: string }
    }
    const problem = estimating(stated(profile))
    const found = await fitted(problem)
    expect(digits(found.parameters[0]?.value, reference.lambda_hat)).toBeGreaterThan(11)
    expect(digits(found.deviance, reference.deviance_min)).toBeGreaterThan(13)
    const given = await fitted(stated(profile))
    expect([found.df, found.parametersCounted]).toEqual([given.df - 1, given.parametersCounted + 1])
    const [interval] = await parameterIntervals(problem, found, pause)
    const grid = profile.grid.map(Number)
    for (const [end, exact, beyond] of [
      [interval?.low, reference.profile_95.lower, (at: number) => at < Math.min(...grid)],
      [interval?.high, reference.profile_95.upper, (at: number) => at > Math.max(...grid)],
    ] as const) {
      if (exact === "beyond the grid") expect(typeof end !== "number" || beyond(end)).toBe(true)
      else expect(digits(end as number, exact)).toBeGreaterThan(10.5)
    }
  })

  it("has joint errors, expected, for rotenone", async () => {
    const profile = linkProfiles.profiles.find(({ id }) => id === "rotenone-aranda-ordaz")
    if (!profile) throw new Error("the profile is there")
    const found = await fitted(estimating(stated(profile)))
    expectPrinted(found.parameters[0]?.value ?? null, "1.39384565")
    expectPrinted(
      found.coefficients.map(({ standardError }) => standardError),
      ["1.7051995", "3.4279654"],
    )
    expectPrinted(found.parameters[0]?.standardError ?? null, "1.2261312")
  })
})

describe("values of the conventions for Bliss's beetles", () => {
  const set = referenceSets("published-glm.json").find(({ id }) => id === "beetles")
  const model = set?.models.find(({ id }) => id === "logit")
  if (!set || !model) throw new Error("the set is there")
  const logit = problemOf(set, model) as Problem
  const under = (link: LinkSpec): Promise<Fit> => fitted({ ...logit, link })

  it("Stukel's link is at its best at (0.157334, −0.531807), 8.48992 above the logit", async () => {
    const found = await under({ name: "stukel", parameters: [0, 0], estimated: [0, 1] })
    expectPrinted(
      found.parameters.map(({ value }) => value),
      ["0.157334", "-0.531807"],
    )
    expectPrinted(Number(model.reference.deviance) - (found.deviance as number), "8.48992")
    expect(found.df).toBe(4)
  })

  it("the logit with a lower limit that is estimated", async () => {
    const found = await under({ name: "logit", parameters: [], limits: { low: 0.05, high: 1, estimated: ["low"] } })
    const [limit] = found.parameters
    expectPrinted(limit?.value ?? null, "0.129098444")
    expectPrinted(
      found.coefficients.map(({ beta }) => beta),
      ["-86.197344", "48.241105"],
    )
    expectPrinted(found.deviance, "4.1144022")
    expectPrinted(limit?.standardError ?? null, "0.0402149")
    expectPrinted(
      found.coefficients.map(({ standardError }) => standardError),
      ["12.02049", "6.647591"],
    )
  })

  it("an upper limit that would be above 1 is at its boundary, and the fit that of the lower one alone", async () => {
    const found = await under({ name: "logit", parameters: [], limits: { low: 0.1, high: 0.95, estimated: ["low", "high"] } })
    expect(found.certificate.class).toBe("boundary")
    expect(found.parameters.map(({ of, end }) => [of, end])).toEqual([
      ["lower limit", 0],
      ["upper limit", 1],
    ])
    expectPrinted(found.deviance, "4.1144022")
  })

  it("rows of no dose tell of the lower limit alone, and the joint errors fall", async () => {
    const limits = { low: 0.05, high: 1, estimated: ["low"] } as const
    const control = { y: Float64Array.of(0.13), trials: Float64Array.of(500), repeat: null, precision: null }
    const with500 = await fitted({ ...logit, link: { name: "logit", parameters: [], limits }, control })
    const without = await under({ name: "logit", parameters: [], limits })
    expect(with500.n).toBe(without.n + 1)
    expect(with500.parameters[0]?.standardError).toBeLessThan((without.parameters[0]?.standardError as number) / 2)
    expect(Math.abs((with500.parameters[0]?.value as number) - 0.13)).toBeLessThan(0.001)
  })

  it("a coefficient's interval is where everything else, the parameter included, is at its best again", async () => {
    const link: LinkSpec = { name: "aranda_ordaz", parameters: [1], estimated: [0] }
    const rotenone = linkProfiles.profiles.find(({ id }) => id === "rotenone-aranda-ordaz")
    if (!rotenone) throw new Error("the profile is there")
    const data = rotenone.data as unknown as Readonly<Record<string, readonly string[]>>
    const base = problemOf({ id: "", n: 0, data, models: [] }, { ...rotenone.model, link: { name: "logit" } } as unknown as ReferenceModel)
    const problem: Problem = { ...(base as Problem), link }
    const found = await fitted(problem)
    const intervals = await profileIntervals(problem, found, pause)
    // The slope held at each end by an offset, the constant and the parameter of the link free.
    const [name = ""] = Object.keys(problem.variables)
    const x = problem.variables[name]
    if (x?.type !== "number") throw new Error("the dose is a number")
    for (const end of [intervals[1]?.low, intervals[1]?.high]) {
      const held = await fitted({ ...problem, terms: [], offset: x.values.map((value) => value * (end as number)) })
      expect(Math.abs((held.deviance as number) - (found.deviance as number) - 3.841458820694124)).toBeLessThan(1e-8)
    }
  })
})

describe("separation between limits", () => {
  it("leaves failures at the lower limit and successes at the upper, and counts what that costs", async () => {
    const y = Float64Array.of(0, 0, 0, 1, 1, 1)
    const problem: Problem = {
      family: { name: "binomial", parameters: [] },
      link: { name: "logit", parameters: [], limits: { low: 0.1, high: 1, estimated: [] } },
      intercept: true,
      terms: [{ says: "x", pieces: [{ variable: "x", as: "itself", setting: null }] }],
      variables: { x: { type: "number", values: Float64Array.of(1, 2, 3, 4, 5, 6) } },
      rows: 6,
      y,
      trials: null,
      repeat: null,
      precision: null,
      offset: null,
      exposure: null,
      cluster: null,
      dispersion: "one",
      standardErrors: "expected",
      confidence: 0.95,
    }
    const found = await fitted(problem)
    expect(found.certificate.class).toBe("infinite")
    expect([...found.mu]).toEqual([0.1, 0.1, 0.1, 1, 1, 1])
    // Three failures at a mean of 0.1.
    expect(digits(found.deviance, "0.6321630939469578")).toBeGreaterThan(13)
    expect(digits(found.logLikelihood, "-0.3160815469734789")).toBeGreaterThan(13)
  })
})
