// The bridge: which lines are labelled, that their two ends say the same thing on both scales, and that no labels touch.

import { describe, expect, it } from "vitest"
import type { ScalesBlock } from "../../../../cells/block.ts"
import { bridgeHairs, etaAt, falls, labelledLines } from "../../../../ui/drawing/scales/bridge.ts"
import { labelled, waysOf } from "../../../../ui/drawing/scales/bridge-marks.ts"
import { scalesLayout } from "../../../../ui/drawing/scales/layout.ts"
import { textWidth } from "../../../../ui/drawing/scene.ts"
import { beetleScales, clottingScales, levelScales, maths } from "../../../browser/gallery/samples.ts"

const WIDTHS = [340, 390, 560, 640, 700, 860, 1000, 1300]

const blocks: readonly (readonly [string, ScalesBlock])[] = [
  ...["logit", "probit", "cloglog", "loglog", "cauchit"].map((link) => [link, beetleScales(link)] as const),
  ...["reciprocal", "log", "identity"].map((link) => [`${link}, positive means`, clottingScales(link)] as const),
  ["log over levels", levelScales()],
]

const number = (text: string): number => Number(text.replace("−", "-").replaceAll("\u202f", ""))

describe.each(blocks)("the bridge under %s", (_, block) => {
  it.each(WIDTHS)("has labels that do not touch on either edge, at a width of %i", (width) => {
    const layout = scalesLayout(block, width)
    expect(layout).not.toBeNull()
    if (layout === null) return
    const lines = labelled(layout)
    expect(lines.length).toBeGreaterThanOrEqual(layout.arrangement === "beside" ? 3 : 2)
    const { runs, low, high } = waysOf(layout)
    const size = (text: string): number => (runs === "down" ? 11.5 : textWidth(text, 11.5))
    for (const [place, text] of [["from", "muText"] as const, ["to", "etaText"] as const]) {
      const sorted = lines.toSorted((a, b) => a[place] - b[place])
      sorted.forEach((line, i) => {
        expect(line[place]).toBeGreaterThanOrEqual(low)
        expect(line[place]).toBeLessThanOrEqual(high)
        const next = sorted[i + 1]
        if (next !== undefined) expect(next[place] - line[place]).toBeGreaterThanOrEqual((size(line[text]) + size(next[text])) / 2)
      })
    }
  })

  it("joins each mean to its own g(μ), as both labels say", () => {
    const layout = scalesLayout(block, 860)
    if (layout === null) return
    const g = maths[layout.subject.link]?.g as (mu: number) => number
    for (const line of labelled(layout)) {
      expect(number(line.muText)).toBe(line.mu)
      const decimals = line.etaText.split(".")[1]?.length ?? 0
      // Half a unit of the last place, and what looking up between pairs may lose.
      expect(Math.abs(number(line.etaText) - g(line.mu))).toBeLessThan(0.55 * 10 ** -decimals)
      expect(line.from).toBeCloseTo(layout.mean.y.place(line.mu), 9)
      expect(line.to).toBeCloseTo(layout.predictor.y.place(etaAt(layout.subject.bridge, line.mu)), 9)
    }
  })
})

describe("looking up g between pairs", () => {
  it("gives a pair back as it is, and NaN outside", () => {
    const pairs = { mu: Float64Array.of(0.1, 0.2, 0.4, 0.7, 0.9), eta: Float64Array.of(1, 2, 3, 5, 8) }
    for (const [i, mu] of pairs.mu.entries()) expect(etaAt(pairs, mu)).toBe(pairs.eta[i])
    expect(etaAt(pairs, 0.05)).toBeNaN()
    expect(etaAt(pairs, 0.95)).toBeNaN()
  })

  it("agrees with the link to a thousandth, in the tails too", () => {
    for (const candidate of beetleScales().candidates) {
      const g = maths[candidate.link]?.g as (mu: number) => number
      // The cauchit runs off so fast that its tails want more pairs than there are; there the bridge leaves its numbers out.
      for (const mu of candidate.link === "cauchit"
        ? [0.1, 0.25, 0.5, 0.75, 0.9]
        : [0.002, 0.01, 0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95, 0.99, 0.998])
        expect(Math.abs(etaAt(candidate.bridge, mu) - g(mu))).toBeLessThan(0.001 * Math.max(1, Math.abs(g(mu))))
    }
  })
})

it("knows a link that falls", () => {
  const links = clottingScales().candidates
  expect(links.map((candidate) => [candidate.link, falls(candidate.bridge)])).toEqual([
    ["reciprocal", true],
    ["log", false],
    ["identity", false],
  ])
})

it("thins hairlines until neighbours stand apart on one edge", () => {
  const layout = scalesLayout(beetleScales(), 860)
  if (layout === null) throw new Error("The sample has curves.")
  const edges = { mu: layout.bridge.mu, eta: layout.bridge.eta, runs: "down" as const }
  const hairs = bridgeHairs(layout.subject.bridge, edges, 8)
  expect(hairs.length).toBeGreaterThan(10)
  hairs.forEach((hair, i) => {
    const next = hairs[i + 1]
    if (next !== undefined) expect(Math.max(Math.abs(next.from - hair.from), Math.abs(next.to - hair.to))).toBeGreaterThanOrEqual(8)
  })
  expect(labelledLines(layout.subject.bridge, edges, 3)).toHaveLength(3)
})
