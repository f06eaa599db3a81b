import { describe, expect, it } from "vitest"
import { dispersionByLikelihood, logLessDigamma } from "../../../cells/statistics/dispersion.ts"
import { digits } from "../../reference/printed.ts"
import { problem } from "./problems.ts"

describe("log ν − ψ(ν)", () => {
  // mpmath 1.3.0, log(n) - digamma(n) at 40 digits.
  it.each([
    [0.001, "993.6678166528281634194"],
    [0.5, "1.270362845461478170024"],
    [3.7, "0.1411792802886673744762"],
    [4.25, "0.1222357641758387327525"],
    [9.5, "0.05355392220354561742446"],
    [15.9, "0.03177603905041198393995"],
    [16.1, "0.03137726647579433364224"],
    [300, "0.001667592591563791451588"],
    [1e8, "5.000000008333333333333e-9"],
  ])("at %d is %s", (nu, exact) => {
    expect(digits(logLessDigamma(nu), exact)).toBeGreaterThan(13)
  })
})

describe("the dispersion of a gamma by likelihood", () => {
  const of = (deviance: number, n: number): number =>
    dispersionByLikelihood(problem({ family: "gamma", link: "log", terms: [], y: new Array<number>(n).fill(1) }), deviance, n)

  it.each([1e-12, 1e-6, 0.01, 1, 10, 300])("solves its equation at D/n = %d", (share) => {
    const phi = of(40 * share, 40)
    expect(2 * logLessDigamma(1 / phi)).toBeCloseTo(share, 12)
    expect(digits(2 * logLessDigamma(1 / phi), `${share}`)).toBeGreaterThan(12)
  })

  it("is 0 in a perfect fit", () => {
    expect(of(0, 5)).toBe(0)
  })
})
