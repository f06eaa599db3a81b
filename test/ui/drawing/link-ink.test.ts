// Colours and dashes of links: the same everywhere, and no two links of a family alike.

import { describe, expect, it } from "vitest"
import { inkRules } from "../../../ui/drawing/ink.ts"
import { dashRole, linkInk } from "../../../ui/drawing/link-ink.ts"

describe("the ink of a link", () => {
  it.each([
    [["logit", "probit", "cloglog", "loglog", "cauchit", "log", "identity", "square_root", "log_complement", "power(0.3)"]],
    [["log", "identity", "square_root", "reciprocal", "reciprocal_square", "power(0.5)", "box_cox(0.2)"]],
  ])("tells by dash alone those that stand on one strip (%#)", (links) => {
    const dashes = links.map((link) => linkInk(link).dash)
    expect(new Set(dashes).size).toBe(links.length)
  })

  it("does not depend on the parameter", () => {
    expect(linkInk("power(0.3)")).toEqual(linkInk("power(-1)"))
  })

  it("is found for a link of one's own too, the same each time", () => {
    const own = linkInk("ln(mu/(0.9 - mu))")
    expect(own).toEqual(linkInk("ln(mu/(0.9 - mu))"))
    expect(inkRules).toContain(`.${dashRole(own.dash)} {`)
    expect(own.colour).toBeGreaterThanOrEqual(1)
    expect(own.colour).toBeLessThanOrEqual(8)
  })
})
