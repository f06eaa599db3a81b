// The loops of their own against the scalar functions they stand for, at every pair that has one and far into both tails.

import { describe, expect, it } from "vitest"
import { anyRows, fillRows, responsesOf, rowState } from "../../../cells/statistics/rows.ts"
import { problem } from "./problems.ts"

const etas = [-300, -40, -12, -3.2, -1, -0.01, 0, 0.3, 1, 2.9, 8, 30]

describe.each([
  ["binomial", "logit"],
  ["binomial", "cloglog"],
  ["poisson", "log"],
  ["gamma", "log"],
  ["normal", "identity"],
])("rows of %s with %s", (family, link) => {
  it.each(["expected", "observed"] as const)("agree with the scalar functions, %s weights", (information) => {
    const y = etas.map((_, i) => (family === "binomial" ? [0, 1, 0.25, 0.75][i % 4] : family === "gamma" ? 0.5 + i : i % 4) as number)
    const trials = family === "binomial" ? Float64Array.from(y, () => 4) : null
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
        expect(Math.abs(a - b)).toBeLessThanOrEqual(4e-15 * Math.max(size, Math.abs(b)))
      near(own.mu[i] as number, plain.mu[i] as number, 0)
      near(own.score[i] as number, plain.score[i] as number, 0)
      near(own.weight[i] as number, plain.weight[i] as number, Math.abs(own.score[i] as number))
      near(ownSums[0] as number, plainSums[0] as number, 1e-12)
      near(ownSums[1] as number, plainSums[1] as number, 1e-12)
    }
  })
})
