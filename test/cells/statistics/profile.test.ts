// Profile intervals where an end is no ordinary number: never reached, stopped by the end of the possible means, or of a fit that lies there
// itself. Expected numbers were found by bisection on the profiled deviance in 40 digits (mpmath), each by a formula of its own.

import { describe, expect, it } from "vitest"
import { type ProfileInterval, profileIntervals, profilesAreLight } from "../../../cells/statistics/profile.ts"
import { fitted, numbers, problem, type Stated } from "./problems.ts"

async function intervals(stated: Stated): Promise<Readonly<Record<string, ProfileInterval | null>>> {
  const of = problem(stated)
  const fit = await fitted(of)
  const found = await profileIntervals(of, fit, async () => {})
  return Object.fromEntries(fit.coefficients.map(({ of: name }, j) => [name, found[j] ?? null]))
}

const cut = 3.841458820694124

describe("coefficients that run to infinity", () => {
  it("are bounded on the other side, and are never reached on their own", async () => {
    const { intercept, x } = await intervals({
      family: "binomial",
      link: "logit",
      terms: ["x"],
      y: [0, 0, 0, 0, 1, 1, 1, 1],
      variables: { x: numbers([1, 2, 3, 4, 6, 7, 8, 9]) },
    })
    expect(x?.high).toBe("infinity")
    // By symmetry the constant is −5 times the slope: 4·Σ log(1 + exp(−b·d)) over d = 1 … 4.
    const b = x?.low as number
    expect(4 * [1, 2, 3, 4].reduce((sum, d) => sum + Math.log1p(Math.exp(-b * d)), 0)).toBeCloseTo(cut, 9)
    expect(intercept?.low).toBe("-infinity")
    expect(intercept?.high).toBeLessThan(0)
  })

  it("have the closed form where all are successes", async () => {
    const { intercept } = await intervals({ family: "binomial", link: "logit", terms: [], y: new Array(26).fill(1) })
    expect(intercept?.high).toBe("infinity")
    // −52·log μ is the cut.
    const mu = Math.exp(-cut / 52)
    expect(intercept?.low).toBeCloseTo(Math.log(mu / (1 - mu)), 10)
  })
})

describe("fits at the end of the possible means", () => {
  it("have ends that numbers give where other means may still move", async () => {
    const { intercept, x } = await intervals({
      family: "binomial",
      link: "log",
      terms: ["x"],
      y: [0, 0, 0, 0, 1, 0, 1, 1, 1, 1],
      variables: { x: numbers([1, 2, 3, 4, 5, 6, 7, 8, 9, 10]) },
    })
    expect(x?.low).toBeCloseTo(0.05275474912636, 10)
    expect(x?.high).toBeCloseTo(0.500409387576978, 10)
    // On that side the last row stays at a mean of one, so the constant is −10 times the slope.
    expect(intercept?.low).toBeCloseTo(-5.004093875769789, 9)
  })

  it.each([
    [[0, 1, 2, 2, 3, 5], [0.308333642797572, 1.426746446101624], 1.468824926280271],
    [[0, 0, 1, 2, 3, 5], [0.346861874850794, 1.255949753814996], 0.919482981282176],
  ] as const)("stop at the edge where nothing may move further: counts %j", async (y, [low, high], most) => {
    const { intercept, x } = await intervals({
      family: "poisson",
      link: "identity",
      terms: ["x"],
      y,
      variables: { x: numbers([0, 1, 2, 3, 4, 5]) },
    })
    expect(x?.low).toBeCloseTo(low, 9)
    expect(x?.high).toBeCloseTo(high, 9)
    expect(intercept?.low).toBe("edge")
    expect(intercept?.high).toBeCloseTo(most, 9)
  })

  it("are met on the way from a maximum inside", async () => {
    const y = [0, 3, 2, 3, 3, 5]
    const x = [0, 1, 2, 3, 4, 5]
    const stated = { family: "poisson", link: "identity", terms: ["x"], y, variables: { x: numbers(x) } }
    const fit = await fitted(problem(stated))
    expect(fit.certificate.class).toBe("interior")
    const found = await intervals(stated)
    // At a constant of 0 the slope is Σy/Σx, and the deviance has not risen by the cut.
    const deviance = y.reduce((sum, k, i) => sum + 2 * (k > 0 ? k * Math.log(k / ((16 / 15) * (x[i] as number))) : 0), 0)
    expect(deviance - (fit.deviance as number)).toBeLessThan(cut)
    expect(found["intercept"]?.low).toBe("edge")
    expect(found["x"]?.high).toBe("edge")
    expect(found["x"]?.low).toBeGreaterThan(0)
  })
})

it("has no interval for a coefficient that was left out, nor for a perfect fit", async () => {
  const x = [1, 2, 3, 4]
  const twice = await intervals({
    family: "poisson",
    link: "log",
    terms: ["x", "z"],
    y: [1, 3, 2, 6],
    variables: { x: numbers(x), z: numbers(x.map((v) => 2 * v)) },
  })
  expect(twice["z"]).toBeNull()
  expect(typeof twice["x"]?.low).toBe("number")
  const perfect = await intervals({ family: "normal", link: "identity", terms: ["x"], y: [3, 5, 7, 9], variables: { x: numbers(x) } })
  expect(perfect["x"]).toBeNull()
})

it("can be given up at any pause", async () => {
  const of = problem({ family: "poisson", link: "log", terms: ["x"], y: [1, 3, 2, 6], variables: { x: numbers([1, 2, 3, 4]) } })
  const fit = await fitted(of)
  let pauses = 0
  await expect(
    profileIntervals(of, fit, async () => {
      if (++pauses === 1) throw new Error("given up")
    }),
  ).rejects.toThrow("given up")
})

it("is light by rows times columns cubed, whatever the clock says", async () => {
  const fit = await fitted(
    problem({ family: "poisson", link: "log", terms: ["x"], y: [1, 3, 2, 6], variables: { x: numbers([1, 2, 3, 4]) } }),
  )
  expect(profilesAreLight(fit)).toBe(true)
  expect(profilesAreLight({ ...fit, rows: 500_000, rank: 10 })).toBe(true)
  expect(profilesAreLight({ ...fit, rows: 500_001, rank: 10 })).toBe(false)
})
