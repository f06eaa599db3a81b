import { describe, expect, it } from "vitest"
import { familyNames } from "../../../cells/statistics/families.ts"
import { canonicalLink, isCanonical, isLegal, legalFamilies, legalLinks } from "../../../cells/statistics/legal-pairs.ts"
import { linkNames } from "../../../cells/statistics/links.ts"

const spec = (name: string, ...parameters: number[]) => ({ name, parameters })

describe("legal pairs", () => {
  it("lets normal and binomial responses have every link", () => {
    for (const link of Object.keys(linkNames))
      expect([isLegal(spec("normal"), spec(link)), isLegal(spec("binomial"), spec(link))]).toEqual([true, true])
  })

  it("lets means above 1 have the links that are defined there, the canonical one first", () => {
    expect(legalLinks(spec("poisson"))).toEqual(["log", "identity", "reciprocal", "reciprocal_square", "square_root", "power", "box_cox"])
    expect(legalLinks(spec("inverse_gaussian"))[0]).toBe("reciprocal_square")
    expect(new Set(legalLinks(spec("gamma")))).toEqual(new Set(legalLinks(spec("poisson"))))
    expect(isLegal(spec("gamma"), spec("probit"))).toBe(false)
    expect(legalFamilies(spec("cloglog"))).toEqual(["normal", "binomial", "quasi_likelihood"])
  })

  it("knows no family and no link that is not there", () => {
    expect([isLegal(spec("cauchy"), spec("log")), isLegal(spec("normal"), spec("arcsine"))]).toEqual([false, false])
  })

  it("names each family's canonical link, also where a power is that link", () => {
    expect(familyNames.map((name) => canonicalLink(spec(name)).name)).toEqual([
      "identity",
      "logit",
      "log",
      "reciprocal",
      "reciprocal_square",
      "log",
      "log",
      "identity",
    ])
    expect(isCanonical(spec("tweedie", 1.5), spec("power", -0.5))).toBe(true)
    expect(isCanonical(spec("tweedie", 1.5), spec("log"))).toBe(false)
    expect(isCanonical(spec("negative_binomial", 3), spec("log"))).toBe(false)
    expect(isCanonical(spec("inverse_gaussian"), spec("box_cox", -2))).toBe(true)
    expect(isCanonical(spec("gamma"), spec("power", -1))).toBe(true)
    expect(isCanonical(spec("gamma"), spec("power", -1.01))).toBe(false)
    expect(isCanonical(spec("poisson"), spec("power", 0))).toBe(true)
    expect(isCanonical(spec("binomial"), spec("probit"))).toBe(false)
  })
})
