// Quasi-likelihood by models that have a law as well: where the variance is that of a family, coefficients, errors and deviance are the same,
// and nothing that needs a likelihood is there.

import { describe, expect, it } from "vitest"
import { familyOf } from "../../../cells/statistics/families.ts"
import { codes, count, finding, fitOf, number, told } from "./laboratory.ts"

const table = {
  x: number(0, 1, 2, 3, 4, 5, 6, 7),
  counts: count(2, 0, 3, 8, 5, 11, 14, 30),
  amounts: number(0.4, 1.2, 0.9, 2.5, 3.1, 2.2, 5.9, 7.5),
  shares: number(0.02, 0.1, 0, 0.3, 0.45, 0.5, 0.9, 1),
  ones: count(1, 1, 1, 1, 1, 1, 1, 1),
}
const fitted = async (response: string, family: string, link: string, more = "") =>
  fitOf(await finding(`response ${response}\nfamily ${family}\nlink ${link}\npredictor x\ninterval wald${more}`, table)).fit

describe("quasi_likelihood", () => {
  it.each([
    ["counts", "mu", "poisson", "log"],
    ["counts", "mu", "poisson", "square_root"],
    ["amounts", "mu^2", "gamma", "log"],
    ["amounts", "mu^3", "inverse_gaussian", "log"],
    ["amounts", "1", "normal", "identity"],
    ["counts", "mu^1.5", "tweedie(1.5)", "log"],
    ["counts", "mu + mu^2/3", "negative_binomial(3)", "log"],
  ])("of %s with variance %s is what %s finds under %s", async (response, variance, family, link) => {
    const [quasi, law] = [
      await fitted(response, `quasi_likelihood(${variance})`, link),
      await fitted(response, family, link, "\ndispersion pearson"),
    ]
    law.coefficients.forEach(({ beta, standardError }, j) => {
      expect(quasi.coefficients[j]?.beta).toBeCloseTo(beta as number, 11)
      expect(quasi.coefficients[j]?.standardError).toBeCloseTo(standardError as number, 11)
    })
    expect(Math.abs((quasi.deviance as number) / (law.deviance as number) - 1)).toBeLessThan(1e-11)
    expect(Math.abs(quasi.pearson / law.pearson - 1)).toBeLessThan(1e-11)
    expect([quasi.logLikelihood, quasi.aic, quasi.bic]).toEqual([null, null, null])
  })

  it("takes shares without trials, ends included", async () => {
    const quasi = await fitted("shares", "quasi_likelihood(mu*(1 - mu))", "logit")
    expect(quasi.deviance).toBeGreaterThan(0)
    expect(quasi.meanRange.possible).toEqual([0, 1])
    // Wedderburn's variance for shares: at an end no mean is near enough, so the deviance is infinite and the fit is not.
    const steeper = await fitted("shares", "quasi_likelihood(mu^2*(1 - mu)^2)", "logit")
    expect(steeper.deviance).toBeNull()
    expect(steeper.interceptOnly?.deviance).toBeNull()
    expect(steeper.certificate.class).toBe("interior")
    expect(steeper.certificate.scaledScore).toBeLessThan(1e-9)
  })

  it("takes identity where no link is said", async () => {
    const outcome = await finding("response amounts\nfamily quasi_likelihood(mu)\npredictor x\ninterval wald", table)
    expect(fitOf(outcome).link).toBe("identity")
  })

  it.each([
    ["response shares\nfamily quasi_likelihood(mu)\nlink logit", ["link-not-legal"]],
    ["response amounts\nfamily quasi_likelihood(mu*(1 - mu))\nlink logit", ["outside-variance"]],
    ["response amounts\nfamily quasi_likelihood(mu)\nlink log\ndispersion likelihood", ["dispersion-without-likelihood"]],
    ["response shares\nfamily quasi_likelihood(mu*(1 - mu))\nlink logit\nexposure ones", ["exposure-not-of-family"]],
    ["response counts\nfamily quasi_likelihood(mu^power)\nlink log", ["not-a-number"]],
  ])("%s", async (clauses, expected) => {
    expect(codes(await finding(`${clauses}\npredictor x`, table))).toEqual(expected)
  })

  it("names the row of a response that the variance cannot have", async () => {
    expect(told(await finding("response amounts\nfamily quasi_likelihood(mu*(1 - mu))\nlink logit\npredictor x", table))).toEqual([
      'fault outside-variance at "amounts": With the variance mu*(1 - mu) a response is between 0 and 1, but amounts is not in 6 rows (first: row 11 of terrace.csv, with 1.2).',
    ])
  })
})

describe("its deviance by quadrature", () => {
  it("has an end at 0 where the integral has one, and none where it has not", async () => {
    const spec = async (variance: string) =>
      fitOf(await finding(`response amounts\nfamily quasi_likelihood(${variance})\nlink log\npredictor x\ninterval wald`, table)).problem
        .family
    const [mu, square, nearly] = [familyOf(await spec("mu")), familyOf(await spec("mu^2")), familyOf(await spec("mu^1.9"))]
    expect([mu.isEndless?.(0), square.isEndless?.(0), nearly.isEndless?.(0)]).toEqual([false, true, false])
    // u(0, μ) = 2μ, and 2μ^0.1/0.1 for the power 1.9.
    expect(mu.unitDeviance(0, 3.7, 0)).toBeCloseTo(7.4, 11)
    expect(nearly.unitDeviance(0, 1, 0) / 20 - 1).toBeLessThan(1e-11)
    // Differences are those of 2(y/μ + ln μ), y at 0.
    expect(square.unitDeviance(0, 5, 0) - square.unitDeviance(0, 0.2, 0)).toBeCloseTo(2 * Math.log(25), 10)
  })
})
