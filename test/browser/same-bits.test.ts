// A fit has the same bits wherever it is made: nothing in it is left to a browser's own mathematics.

import { describe, expect, inject, it } from "vitest"
import { legalLinks } from "../../cells/statistics/legal-pairs.ts"
import { allBits, digest, plainFamilies } from "./same-bits.ts"

describe("the same bits", () => {
  it("come out of a browser and of Node, for every family and link and over many arguments", async () => {
    const inNode = inject("bitsInNode")
    const here = await allBits()
    expect(here).toEqual(inNode)
    expect(navigator.userAgent).toContain("Chrome")
  }, 60_000)

  it("are those of fits, not of refusals", () => {
    const inNode = inject("bitsInNode")
    for (const family of plainFamilies) {
      for (const link of legalLinks({ name: family, parameters: [] }))
        expect(inNode[`${family} ${link}`]).toMatch(/^(interior|boundary) [0-9a-f]{64}$/)
    }
    for (const [name, bits] of Object.entries(inNode))
      if (name.startsWith("cell ")) expect(`${name}: ${bits}`).toMatch(/: ready [0-9a-f]{32}$/)
    expect(inNode["a separated share"]).toMatch(/^infinite /)
    expect(inNode["counts at the edge"]).toMatch(/^boundary /)
  })

  it("would show one last bit that differs", () => {
    expect(digest([1, { a: Float64Array.of(2) }])).not.toBe(digest([1, { a: Float64Array.of(2 + 2 * Number.EPSILON) }]))
    expect(digest(0)).not.toBe(digest(-0))
  })
})
