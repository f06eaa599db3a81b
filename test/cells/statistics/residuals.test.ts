// Residuals and influence against published and computed figures, and by what must hold of them. Leverages and Cook's distances of the
// beetles were computed at 40 digits (Bliss 1935, on log10 dose); the others are those of the reference files.

import { describe, expect, it } from "vitest"
import { tails } from "../../../cells/statistics/cumulative.ts"
import { cookDistances, leverages } from "../../../cells/statistics/influence.ts"
import type { Problem } from "../../../cells/statistics/problem.ts"
import { random, randomFrom } from "../../../cells/statistics/random.ts"
import {
  devianceResiduals,
  partialResiduals,
  pearsonResiduals,
  quantileResiduals,
  workingResiduals,
} from "../../../cells/statistics/residuals.ts"
import { digits } from "../../reference/printed.ts"
import { problemOf, referenceSets } from "../../reference/reference-models.ts"
import { factor, fitted, numbers, problem } from "./problems.ts"

const pause = async (): Promise<void> => {}

const beetles = (): Problem => {
  const [set] = referenceSets("published-glm.json").filter(({ id }) => id === "beetles")
  const model = set?.models.find(({ id }) => id === "logit")
  const found = set && model ? problemOf(set, model) : null
  if (!found) throw new Error("the beetles are not among the sets")
  return found
}

describe("leverages and Cook's distances", () => {
  it("are those of the beetles", async () => {
    const of = beetles()
    const fit = await fitted(of)
    const h = await leverages(of, fit, pause)
    const d = await cookDistances(of, fit, pause)
    const printed = [
      ["0.26814", "0.345932", "0.310461", "0.232528", "0.269422", "0.237636", "0.198754", "0.137126"],
      ["0.497143", "0.490195", "0.451715", "0.513162", "0.0891855", "0.00335519", "0.184392", "0.118234"],
    ] as const
    expect([...(h ?? [])].map((value) => Number(value.toPrecision(6)))).toEqual(printed[0].map(Number))
    expect([...(d ?? [])].map((value) => Number(value.toPrecision(6)))).toEqual(printed[1].map(Number))
  })

  const cases = ["published-glm.json", "generated-glm.json"].flatMap((file) =>
    referenceSets(file).flatMap((set) =>
      set.models.flatMap((model) => {
        const of = problemOf(set, model)
        const {
          leverage,
          deviance_residual: residuals,
          deviance,
        } = (model.reference ?? {}) as {
          readonly leverage?: readonly string[]
          readonly deviance_residual?: readonly string[]
          readonly deviance?: string
        }
        if (!of || !leverage || !residuals || !(Number(deviance) > 0)) return []
        // Rows of no weight are not used.
        const used = (_: string, i: number): boolean => model.weights === undefined || Number(set.data[model.weights]?.[i]) > 0
        return [[`${set.id}, ${model.id}`, of, leverage.filter(used), residuals.filter(used), Number(deviance)] as const]
      }),
    ),
  )

  it.each(cases)("%s: leverages and deviance residuals", async (_, of, leverage, residuals, deviance) => {
    const fit = await fitted(of)
    if (fit.parameters?.length > 0) return
    const h = await leverages(of, fit, pause)
    const least = fit.certificate.condition > 1e4 ? 7 : 9
    leverage.forEach((exact, i) => {
      expect(digits(h?.[i], exact, 1e-2)).toBeGreaterThan(least)
    })
    expect((h ?? new Float64Array(0)).reduce((sum, own) => sum + own, 0)).toBeCloseTo(fit.rank, 8)
    const scale = Math.sqrt(deviance / fit.rows)
    devianceResiduals(of, fit).forEach((found, i) => {
      expect(digits(found, residuals[i] as string, scale)).toBeGreaterThan(least - 1)
    })
  })

  it("count each copy of a row that stands several times", async () => {
    const stated = { family: "poisson", link: "log", terms: ["x"] }
    const once = problem({ ...stated, y: [1, 1, 3, 4, 4, 4], variables: { x: numbers([0, 0, 1, 2, 2, 2]) } })
    const often = problem({ ...stated, y: [1, 3, 4], repeat: Float64Array.of(2, 1, 3), variables: { x: numbers([0, 1, 2]) } })
    const [a, b] = [await leverages(once, await fitted(once), pause), await leverages(often, await fitted(often), pause)]
    const [c, d] = [await cookDistances(once, await fitted(once), pause), await cookDistances(often, await fitted(often), pause)]
    for (const [row, copy] of [
      [0, 0],
      [1, 2],
      [2, 3],
    ] as const) {
      expect(b?.[row]).toBeCloseTo(a?.[copy] ?? 0, 13)
      expect(d?.[row]).toBeCloseTo(c?.[copy] ?? 0, 13)
      expect(pearsonResiduals(often, await fitted(often))[row]).toBeCloseTo(pearsonResiduals(once, await fitted(once))[copy] as number, 12)
    }
  })

  it("are nothing where a mean has run to its end", async () => {
    const of = problem({
      family: "poisson",
      link: "log",
      terms: ["lot"],
      y: [1, 3, 0, 0],
      variables: { lot: factor(["a", "a", "b", "b"]) },
    })
    expect([...((await leverages(of, await fitted(of), pause)) ?? [])]).toEqual([0.5, 0.5, 0, 0].map((h) => expect.closeTo(h, 12)))
  })
})

describe("residuals", () => {
  it("of Pearson have X² as the sum of their squares, working ones are on the scale of η", async () => {
    const of = beetles()
    const fit = await fitted(of)
    expect(pearsonResiduals(of, fit).reduce((sum, r) => sum + r * r, 0)).toBeCloseTo(fit.pearson, 11)
    expect(devianceResiduals(of, fit).reduce((sum, r) => sum + r * r, 0)).toBeCloseTo(fit.deviance ?? 0, 11)
    const working = workingResiduals(of, fit)
    fit.mu.forEach((mu, i) => {
      expect(working[i]).toBeCloseTo(((of.y[i] as number) - mu) / (mu * (1 - mu)), 10)
    })
  })

  it("keep their sign under a link that falls", async () => {
    const of = problem({ family: "gamma", link: "reciprocal", terms: ["x"], y: [9, 4, 3.5, 2], variables: { x: numbers([1, 2, 3, 4]) } })
    const fit = await fitted(of)
    pearsonResiduals(of, fit).forEach((r, i) => {
      expect(Math.sign(r)).toBe(Math.sign((of.y[i] as number) - (fit.mu[i] as number)))
    })
  })

  it("of a part are its line and the working residual", async () => {
    const x = [1, 2, 3, 4, 5]
    const of = problem({ family: "normal", link: "identity", terms: ["x"], y: [2, 3, 5, 4, 8], variables: { x: numbers(x) } })
    const fit = await fitted(of)
    const slope = fit.coefficients[1]?.beta as number
    const found = partialResiduals(of, fit, "x")
    x.forEach((v, i) => {
      expect(found?.[i]).toBeCloseTo(slope * (v - 3) + ((of.y[i] as number) - (fit.mu[i] as number)), 12)
    })
    expect(partialResiduals(of, fit, "z")).toBeNull()
  })
})

describe("quantile residuals", () => {
  it("of the normal law are the standardised residuals, whatever the seed", async () => {
    const of = problem({
      family: "normal",
      link: "identity",
      terms: ["x"],
      y: [2, 3, 5, 4, 80],
      variables: { x: numbers([1, 2, 3, 4, 5]) },
    })
    const fit = await fitted(of)
    const found = quantileResiduals(of, fit, 5)
    if (!found.ok) throw new Error(found.why)
    found.values.forEach((r, i) => {
      expect(r).toBeCloseTo(((of.y[i] as number) - (fit.mu[i] as number)) / Math.sqrt(fit.dispersion.value as number), 12)
    })
  })

  it("lie between the quantiles of their steps, change with the seed and are the same with the same", async () => {
    const of = problem({ family: "poisson", link: "log", terms: [], y: [0, 2, 3, 1, 30, 0] })
    const fit = await fitted(of)
    const [first, second, again] = [quantileResiduals(of, fit, 1), quantileResiduals(of, fit, 2), quantileResiduals(of, fit, 1)]
    if (!first.ok || !second.ok || !again.ok) throw new Error("there is a law")
    expect(first.values).toEqual(again.values)
    expect(first.values).not.toEqual(second.values)
    // P(Y < 0) is 0 and P(Y ≤ 0) is e^−6.
    expect(first.values[0]).toBeLessThan(-2.81)
    expect(first.values[4]).toBeGreaterThan(5)
    expect(Number.isFinite(first.values[4])).toBe(true)
  })

  it("have no law to go by where a discrete family has a dispersion of its own", async () => {
    const of = problem({ family: "poisson", link: "log", terms: [], y: [0, 2, 3, 1, 3, 0], dispersion: "pearson" })
    expect(quantileResiduals(of, await fitted(of), 1)).toEqual({ ok: false, why: "dispersion" })
  })
})

describe("tails of laws", () => {
  const sum = (values: readonly number[]): number => values.reduce((total, v) => total + v, 0)
  const factorial = (n: number): number => (n < 2 ? 1 : n * factorial(n - 1))

  it("are sums of the probabilities", () => {
    const poisson = Array.from({ length: 40 }, (_, k) => (Math.exp(-3.5) * 3.5 ** k) / factorial(k))
    const found = tails({ name: "poisson", parameters: [] }, 4, 3.5, 0, 1, 1)
    expect(found.upTo).toBeCloseTo(sum(poisson.slice(0, 5)), 14)
    expect(found.below).toBeCloseTo(sum(poisson.slice(0, 4)), 14)
    expect(found.above).toBeCloseTo(sum(poisson.slice(5)), 14)
    const binomial = Array.from({ length: 13 }, (_, k) => (factorial(12) / factorial(k) / factorial(12 - k)) * 0.3 ** k * 0.7 ** (12 - k))
    const share = tails({ name: "binomial", parameters: [] }, 5 / 12, 0.3, 0.7, 12, 1)
    expect(share.upTo).toBeCloseTo(sum(binomial.slice(0, 6)), 14)
    expect(share.from).toBeCloseTo(sum(binomial.slice(5)), 14)
    // k = 1 is the geometric law.
    const geometric = tails({ name: "negative_binomial", parameters: [1] }, 3, 2, 0, 1, 1)
    expect(geometric.above).toBeCloseTo((2 / 3) ** 4, 14)
    expect(geometric.from).toBeCloseTo((2 / 3) ** 3, 14)
  })

  it("are those of waiting times and of first passages", () => {
    const gamma = tails({ name: "gamma", parameters: [] }, 5, 2, 0, 1, 1)
    expect(gamma.above).toBeCloseTo(Math.exp(-2.5), 14)
    expect(gamma.below).toBeCloseTo(1 - Math.exp(-2.5), 14)
    // By the trapezoidal rule on the density of the inverse Gaussian law.
    const [mu, phi, y] = [1.5, 0.4, 2.25]
    const density = (t: number): number => Math.exp(-((t - mu) ** 2) / (2 * phi * mu * mu * t)) / Math.sqrt(2 * Math.PI * phi * t ** 3)
    const steps = 200_000
    const area = sum(Array.from({ length: steps }, (_, k) => (density(((k + 0.5) * y) / steps) * y) / steps))
    const passage = tails({ name: "inverse_gaussian", parameters: [] }, y, mu, 0, 1, phi)
    expect(passage.upTo).toBeCloseTo(area, 9)
    expect(passage.above).toBeCloseTo(1 - area, 9)
  })

  it("of Tweedie's law jump at 0, and are a Poisson number of exponential amounts at p = 1.5", () => {
    const [mu, phi] = [2, 0.7]
    const spec = { name: "tweedie", parameters: [1.5] }
    const lambda = Math.sqrt(mu) / (phi * 0.5)
    const nought = tails(spec, 0, mu, 0, 1, phi)
    expect([nought.below, nought.upTo]).toEqual([0, expect.closeTo(Math.exp(-lambda), 14)])
    const scale = phi * 0.5 * Math.sqrt(mu)
    const x = 3 / scale
    // P(sum of j exponentials ≤ 3) = 1 − e^−x Σ_{i<j} x^i/i!.
    const term = (j: number): number => 1 - Math.exp(-x) * sum(Array.from({ length: j }, (_, i) => x ** i / factorial(i)))
    const exact = sum(Array.from({ length: 60 }, (_, j) => ((Math.exp(-lambda) * lambda ** j) / factorial(j)) * (j === 0 ? 1 : term(j))))
    expect(tails(spec, 3, mu, 0, 1, phi).upTo).toBeCloseTo(exact, 11)
  })
})

describe("random numbers", () => {
  it("are those of xoshiro128** from the state 1, 2, 3, 4", () => {
    // By hand from its definition: 5·2 = 10, turned by 7 bits 1280, times 9; the next is 0.
    const { bits } = randomFrom([1, 2, 3, 4])
    expect([bits(), bits(), bits(), bits()]).toEqual([11520, 0, 5927040, 70819200])
  })

  it("are uniform between 0 and 1, and differ between seeds", () => {
    const draws = random(1)
    const values = Array.from({ length: 20_000 }, () => draws.next())
    expect(values.every((v) => v > 0 && v < 1)).toBe(true)
    const counts = new Array<number>(20).fill(0)
    for (const v of values) counts[Math.floor(20 * v)] = (counts[Math.floor(20 * v)] ?? 0) + 1
    // χ² on 19 degrees of freedom passes 43.8 once in a thousand times.
    expect(counts.reduce((total, k) => total + (k - 1000) ** 2 / 1000, 0)).toBeLessThan(43.8)
    expect(random(2).next()).not.toBe(random(1).next())
    expect(random(2 ** 40).next()).not.toBe(random(2 ** 41).next())
  })
})
