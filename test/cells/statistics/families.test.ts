// Families: densities and deviances against values at 80 digits, and the laws that tie deviance, variance and density together.

import { describe, expect, it } from "vitest"
import { familyNames, familyOf } from "../../../cells/statistics/families.ts"
import { linkOf } from "../../../cells/statistics/links.ts"
import densities from "../../reference/densities.json" with { type: "json" }
import { relativeError } from "../../reference/exact.ts"

const parameters: Readonly<Record<string, readonly number[]>> = { negative_binomial: [1.7], tweedie: [1.4] }
const family = (name: string) => familyOf({ name, parameters: parameters[name] ?? [] })

/** Digits of the density, and an absolute bound where it is near 0: what counts is the error of a sum. */
const densityAgrees = (value: number, exact: string): boolean =>
  relativeError(value, exact) < 1e-14 || Math.abs(value - Number(exact)) < 4e-15

describe("densities with every constant", () => {
  it.each(densities.rows.binomial)("binomial: %s of %s at μ = %s", (k, n, mu, density, deviance) => {
    const [successes, trials, mean] = [Number(k), Number(n), Number(mu)]
    const y = successes / trials
    // 1 − μ is what a double can say of it here; where it is small it comes from the link and not from this difference.
    expect(densityAgrees(family("binomial").logDensity(y, mean, 1 - mean, trials, 1), density as string) || mean > 0.99).toBe(true)
    const found = family("binomial").unitDeviance(y, mean, 1 - mean)
    expect(relativeError(found, deviance as string) < 1e-13 || Math.abs(found - Number(deviance)) < 1e-18 || mean > 0.99).toBe(true)
  })

  it.each(densities.rows.poisson)("poisson: y = %s at μ = %s", (y, mu, density, deviance) => {
    expect(densityAgrees(family("poisson").logDensity(Number(y), Number(mu), 0, 1, 1), density as string)).toBe(true)
    expect(relativeError(family("poisson").unitDeviance(Number(y), Number(mu), 0), deviance as string)).toBeLessThan(1e-14)
  })

  it.each(densities.rows.gamma)("gamma: y = %s at μ = %s, φ = %s", (y, mu, phi, density, deviance) => {
    expect(densityAgrees(family("gamma").logDensity(Number(y), Number(mu), 0, 1, Number(phi)), density as string)).toBe(true)
    expect(relativeError(family("gamma").unitDeviance(Number(y), Number(mu), 0), deviance as string)).toBeLessThan(1e-14)
  })

  it.each(densities.rows.normal)("normal: y = %s at μ = %s, φ = %s", (y, mu, phi, density, deviance) => {
    expect(densityAgrees(family("normal").logDensity(Number(y), Number(mu), 0, 1, Number(phi)), density as string)).toBe(true)
    expect(relativeError(family("normal").unitDeviance(Number(y), Number(mu), 0), deviance as string)).toBeLessThan(1e-14)
  })
})

/** y, means and trials that each family can have. */
const points: Readonly<Record<string, { readonly y: readonly number[]; readonly mu: readonly number[]; readonly trials: number }>> = {
  normal: { y: [-3, 0, 2.5], mu: [-1, 0.2, 40], trials: 1 },
  binomial: { y: [0, 0.2, 0.5, 1], mu: [1e-6, 0.19, 0.5, 0.93], trials: 10 },
  poisson: { y: [0, 1, 7, 300], mu: [1e-6, 0.9, 6.5, 310], trials: 1 },
  gamma: { y: [0.01, 1, 7.5], mu: [0.02, 0.9, 40], trials: 1 },
  inverse_gaussian: { y: [0.01, 1, 7.5], mu: [0.02, 0.9, 40], trials: 1 },
  negative_binomial: { y: [0, 1, 7, 300], mu: [1e-6, 0.9, 6.5, 310], trials: 1 },
  tweedie: { y: [0, 0.01, 1, 7.5], mu: [0.02, 0.9, 40], trials: 1 },
}

describe("families", () => {
  it.each(familyNames.filter((name) => name !== "quasi_likelihood"))("%s obeys the laws of deviance, variance and density", (name) => {
    const it = family(name)
    const { y: responses, mu: means, trials } = points[name] as (typeof points)[string]
    for (const y of responses) {
      if (y > it.range.low && y < it.range.high) expect(it.unitDeviance(y, y, 1 - y)).toBe(0)
      for (const mu of means) {
        const h = 1e-4 * Math.min(Math.abs(mu), Math.abs(1 - mu))
        const slope = (f: (mu: number) => number) => (f(mu - 2 * h) - 8 * f(mu - h) + 8 * f(mu + h) - f(mu + 2 * h)) / (12 * h)
        // u' = −2(y − μ)/V(μ), which is how the deviance is defined.
        const expected = (-2 * (y - mu)) / it.variance(mu, 1 - mu)
        expect(Math.abs(slope((m) => it.unitDeviance(y, m, 1 - m)) - expected)).toBeLessThan(1e-7 * (Math.abs(expected) + 1))
        // (log f)' = m(y − μ)/(φV), the score.
        const phi = it.discrete ? 1 : 0.37
        const score = (trials * (y - mu)) / (phi * it.variance(mu, 1 - mu))
        expect(Math.abs(slope((m) => it.logDensity(y, m, 1 - m, trials, phi)) - score)).toBeLessThan(1e-7 * (Math.abs(score) + 1))
        const varianceSlope = slope((m) => it.variance(m, 1 - m))
        expect(Math.abs(it.varianceSlope(mu, 1 - mu) - varianceSlope)).toBeLessThan(1e-7 * (Math.abs(varianceSlope) + 1))
        expect(it.unitDeviance(y, mu, 1 - mu)).toBeGreaterThanOrEqual(0)
      }
    }
  })

  it.each([
    ["binomial", "logit", 1],
    ["poisson", "log", 1],
    ["normal", "identity", 1],
    ["gamma", "reciprocal", -1],
  ])("%s with %s has slope and variance in one ratio, being canonical", (name, link, ratio) => {
    const g = linkOf({ name: link, parameters: [] })
    for (const eta of [0.3, 1, 2.5, 20]) {
      const rest = g.complement?.(eta) ?? 0
      expect(g.slope(eta) / family(name).variance(g.mean(eta), rest)).toBeCloseTo(ratio, 13)
    }
  })

  it("keeps a rare failure's deviance and density by the complement of its mean", () => {
    // One failure in ten where the mean is 1 − 1e-20, which no double is: by hand −log(1e-20)·… in ordinary logarithms.
    const it = family("binomial")
    expect(it.logDensity(0.9, 1, 1e-20, 10, 1)).toBeCloseTo(Math.log(10) - 20 * Math.LN10, 11)
    expect(it.unitDeviance(0.9, 1, 1e-20)).toBeCloseTo(2 * (0.9 * Math.log(0.9) + 0.1 * (Math.log(0.1) + 20 * Math.LN10)), 12)
  })

  it("gives an infinite deviance where the density is nought", () => {
    expect(family("binomial").unitDeviance(1, 0, 1)).toBe(Infinity)
    expect(family("binomial").unitDeviance(0, 1, 0)).toBe(Infinity)
    expect(family("poisson").unitDeviance(2, 0, 1)).toBe(Infinity)
    expect(family("poisson").logDensity(2, 0, 1, 1, 1)).toBe(-Infinity)
  })
})
