import { describe, expect, it } from "vitest"
import { canonicalLink, families, legalLinks, linkFormula, links } from "../../../cells/language/vocabulary.ts"
import { familyNames } from "../../../cells/statistics/families.ts"
import { canonicalLink as canonicalSpec, legalLinks as legalNames } from "../../../cells/statistics/legal-pairs.ts"
import { linkNames, linkOf } from "../../../cells/statistics/links.ts"

describe("the vocabulary", () => {
  it("has the families and links that the statistics fit", () => {
    expect(Object.keys(families)).toEqual([...familyNames])
    expect(new Set(Object.keys(links))).toEqual(new Set(Object.keys(linkNames)))
  })

  it.each(familyNames)("says of %s the links that the statistics take, and the same one where none is said", (name) => {
    expect(new Set(legalLinks(name))).toEqual(new Set(legalNames({ name, parameters: [] })))
    expect(canonicalLink(name)).toBe(canonicalSpec({ name, parameters: [] }).name)
    expect(legalLinks(name)[0]).toBe(canonicalLink(name))
  })

  it("says where each link is defined as the statistics do", () => {
    for (const [name, { mean, parameters }] of Object.entries(links)) {
      const { range } = linkOf({ name, parameters: parameters.map(() => 0.5) })
      const expected = { any: [-Infinity, Infinity], positive: [0, Infinity], unit: [0, 1] }[mean]
      expect([name, range.low, range.high]).toEqual([name, ...expected])
    }
  })

  it.each([
    ["logit", "ln(μ/(1 − μ))"],
    ["power(0.5)", "μ^0.5"],
    ["power(-2)", "μ^−2"],
    ["power(0)", "ln μ"],
    ["power", "μ^a"],
    ["box_cox(-0.5)", "(1 − μ^−0.5)/0.5"],
    ["aranda_ordaz(0)", "ln(−ln(1 − μ))"],
    ["aranda_ordaz(-0.5)", "ln((1 − (1 − μ)^0.5)/0.5)"],
    ["symmetric_power(0)", "ln(μ/(1 − μ))"],
    ["aranda_ordaz(2)", "ln(((1 − μ)^−2 − 1)/2)"],
    ["mine", "mine"],
    ["constructor", "constructor"],
  ])("writes %s as %s", (says, formula) => {
    expect(linkFormula(says)).toBe(formula)
  })

  it("knows no links for a family there is not", () => {
    expect(legalLinks("toString")).toEqual([])
    expect(canonicalLink("cauchy")).toBeNull()
  })
})
