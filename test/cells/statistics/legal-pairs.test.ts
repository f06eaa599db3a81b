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
    expect(legalLinks(spec("poisson"))).toEqual(["log", "identity", "reciprocal", "square_root", "power"])
    expect(legalLinks(spec("gamma"))).toEqual(["reciprocal", "identity", "log", "square_root", "power"])
    expect(isLegal(spec("gamma"), spec("probit"))).toBe(false)
    expect(legalFamilies(spec("cloglog"))).toEqual(["normal", "binomial"])
  })

  it("knows no family and no link that is not there", () => {
    expect([isLegal(spec("tweedie"), spec("log")), isLegal(spec("normal"), spec("stukel"))]).toEqual([false, false])
  })

  it("names each family's canonical link, also where a power is that link", () => {
    expect(familyNames.map((name) => canonicalLink(spec(name)).name)).toEqual(["identity", "logit", "log", "reciprocal"])
    expect(isCanonical(spec("gamma"), spec("power", -1))).toBe(true)
    expect(isCanonical(spec("gamma"), spec("power", -1.01))).toBe(false)
    expect(isCanonical(spec("poisson"), spec("power", 0))).toBe(true)
    expect(isCanonical(spec("binomial"), spec("probit"))).toBe(false)
  })
})
