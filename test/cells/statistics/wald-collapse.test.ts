// The collapse of Wald's ratio in two groups, where its slope has a closed form.

import { describe, expect, it } from "vitest"
import { collapsedRatios } from "../../../cells/statistics/wald-collapse.ts"
import { fitted, numbers, problem, type Stated } from "./problems.ts"

const collapsed = async (stated: Stated): Promise<readonly number[]> => {
  const of = problem(stated)
  return collapsedRatios(of, await fitted(of), async () => {})
}

/** Two groups of so many trials: half succeed in the first, and this share in the second. */
const groups = (share: number, trials: number): Stated => ({
  family: "binomial",
  link: "logit",
  terms: ["x"],
  y: [0.5, share],
  trials: Float64Array.of(trials, trials),
  variables: { x: numbers([0, 1]) },
})

describe("Wald's ratio of a difference of logits", () => {
  // Along the ridge η₁ moves by w₀/(w₀ + w₁) and η₀ by −w₁/(w₀ + w₁), with w = p(1 − p); its variance is (1/w₀ + 1/w₁) over the trials.
  const falls = (p0: number, p1: number): boolean => {
    const [w0, w1] = [p0 * (1 - p0), p1 * (1 - p1)]
    const slope = (-w1 / (w0 + w1)) * ((2 * p0 - 1) / w0) + (w0 / (w0 + w1)) * ((2 * p1 - 1) / w1)
    const beta = Math.log(p1 / (1 - p1)) - Math.log(p0 / (1 - p0))
    return beta * slope > 2 * (1 / w0 + 1 / w1)
  }

  it.each([0.8, 0.9, 0.93, 0.945, 0.95, 0.96, 0.98])("falls at a share of %d where its closed form does", async (share) => {
    expect(await collapsed(groups(share, 1000))).toEqual(falls(0.5, share) ? [1] : [])
  })

  it("has both answers among these shares", () => {
    expect([falls(0.5, 0.8), falls(0.5, 0.98)]).toEqual([false, true])
  })

  it("falls on both sides, whatever the number of trials and wherever a predictor is counted from", async () => {
    expect(await collapsed(groups(0.02, 1000))).toEqual([1])
    expect(await collapsed(groups(0.98, 50))).toEqual([1])
    expect(await collapsed({ ...groups(0.98, 1000), variables: { x: numbers([1000, 1001]) } })).toContain(1)
    expect(await collapsed({ ...groups(0.8, 1000), variables: { x: numbers([1000, 1001]) } })).not.toContain(1)
  })

  it("is not looked at under sandwich errors, which do not go by the model", async () => {
    const stated = {
      ...groups(0.98, 1000),
      standardErrors: "sandwich" as const,
      y: [0.5, 0.98, 0.5],
      trials: Float64Array.of(100, 100, 100),
    }
    expect(await collapsed({ ...stated, variables: { x: numbers([0, 1, 0]) } })).toEqual([])
  })
})

it("never falls for the normal law under the identity, whose weights do not move", async () => {
  expect(
    await collapsed({
      family: "normal",
      link: "identity",
      terms: ["x"],
      y: [1, 5, 2, 900, 4],
      variables: { x: numbers([1, 2, 3, 400, 5]) },
    }),
  ).toEqual([])
})
