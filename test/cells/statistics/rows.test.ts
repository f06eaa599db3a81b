// The loops of their own against the scalar functions they stand for, at every pair that has one and far into both tails.

import { describe, expect, it } from "vitest"
import { anyRows, fillRows, responsesOf, rowState } from "../../../cells/statistics/rows.ts"
import { generator, problem } from "./problems.ts"

const etas = [-300, -40, -12, -6.9, -6.5, -3.2, -1, -0.01, 0, 0.3, 1, 1.93, 1.94, 2.9, 6.5, 6.94, 8, 30]

describe.each([
  ["binomial", "logit"],
  ["binomial", "cloglog"],
  ["binomial", "loglog"],
  ["binomial", "probit"],
  ["poisson", "log"],
  ["gamma", "log"],
  ["normal", "identity"],
])("rows of %s with %s", (family, link) => {
  it.each([
    ["expected", "of shares"],
    ["observed", "of shares"],
    ["expected", "of single successes"],
    ["observed", "of single successes"],
    ["expected", "of single failures"],
    ["observed", "of single failures"],
  ] as const)("agree with the scalar functions, %s weights %s", (information, what) => {
    const binomial = what === "of shares" ? [0, 1, 0.25, 0.75] : what === "of single successes" ? [1] : [0]
    const y = etas.map((_, i) => (family === "binomial" ? binomial[i % binomial.length] : family === "gamma" ? 0.5 + i : i % 4) as number)
    const trials = family === "binomial" ? Float64Array.from(y, () => (what === "of shares" ? 4 : 1)) : null
    const of = responsesOf(problem({ family, link, terms: [], y, trials }))
    const [own, plain] = [rowState(y.length), rowState(y.length)]
    const [ownSums, plainSums] = [new Float64Array(2), new Float64Array(2)]
    // One row at a time, since far out a row against the odds has no finite deviance and stops the pass.
    for (let i = 0; i < y.length; i++) {
      own.eta[i] = etas[i] as number
      plain.eta[i] = etas[i] as number
      ownSums.fill(0)
      plainSums.fill(0)
      const possible = fillRows(of, information, i, i + 1, own, ownSums)
      expect(possible).toBe(anyRows(of, information, i, i + 1, plain, plainSums))
      if (!possible) continue
      const near = (a: number, b: number, size: number): void =>
        expect(Math.abs(a - b)).toBeLessThanOrEqual(6e-15 * Math.max(size, Math.abs(b)))
      near(own.mu[i] as number, plain.mu[i] as number, 0)
      near(own.score[i] as number, plain.score[i] as number, 0)
      // Observed weights are differences: of terms that grow as e^|η| under these links.
      const parts = link.endsWith("loglog") ? 2 + Math.exp(Math.abs(etas[i] as number)) : 2
      near(own.weight[i] as number, plain.weight[i] as number, parts * Math.abs(own.score[i] as number))
      near(ownSums[0] as number, plainSums[0] as number, 1e-12)
      near(ownSums[1] as number, plainSums[1] as number, 1e-12)
    }
  })

  it("add up over a block to what its rows add up to one by one", () => {
    const next = generator(5)
    const rows = 96
    const y = Array.from({ length: rows }, (_, i) =>
      family === "binomial" ? (next() < 0.5 ? 1 : 0) : family === "gamma" ? 0.5 + i : i % 7,
    )
    const of = responsesOf(problem({ family, link, terms: [], y }))
    const state = rowState(rows)
    const width = family === "binomial" ? 12 : 4
    for (let i = 0; i < rows; i++) state.eta[i] = width * (next() - 0.5) + (family === "gamma" || family === "poisson" ? 1 : 0)
    const [whole, single] = [new Float64Array(2), new Float64Array(2)]
    fillRows(of, "expected", 0, rows, state, whole)
    for (let i = 0; i < rows; i++) anyRows(of, "expected", i, i + 1, state, single)
    for (const k of [0, 1]) expect(Math.abs((whole[k] as number) / (single[k] as number) - 1)).toBeLessThan(1e-14)
  })
})
