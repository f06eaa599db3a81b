// Fits that have no maximum inside: limits known from outside (Heinze & Schemper 2002 in Agresti 2015; Petersen & Deddens 2008; closed
// forms), and near misses that must not be called infinite or on the edge.

import { describe, expect, it } from "vitest"
import { predicted } from "../../../cells/statistics/index.ts"
import { digits, expectPrinted } from "../../reference/printed.ts"
import { betas, errors, factor, fitted, generator, numbers, problem } from "./problems.ts"

const shares = ["logit", "probit", "cauchit", "cloglog", "loglog"]
const toward = (found: Awaited<ReturnType<typeof fitted>>): (string | null)[] => found.coefficients.map((c) => c.toward)

describe("coefficients that run to infinity", () => {
  const split = (link: string, y: readonly number[]) =>
    problem({ family: "binomial", link, terms: ["x"], y, variables: { x: numbers([1, 2, 3, 4, 6, 7, 8, 9]) } })

  it.each(shares)("are found where %s separates all rows", async (link) => {
    const found = await fitted(split(link, [0, 0, 0, 0, 1, 1, 1, 1]))
    expect(found.certificate.class).toBe("infinite")
    expect([found.deviance, found.logLikelihood, found.df]).toEqual([0, 0, 6])
    expect(betas(found)).toEqual([null, null])
    expect(toward(found)).toEqual(["-infinity", "infinity"])
    expect([...found.mu]).toEqual([0, 0, 0, 0, 1, 1, 1, 1])
    // The direction can be rechecked by hand: it is below 0 for every failure and above for every success.
    const [constant, slope] = (found.certificate.evidence?.directions[0] ?? []).map(({ times }) => times) as [number, number]
    expect(constant + 4 * slope).toBeLessThan(0)
    expect(constant + 6 * slope).toBeGreaterThan(0)
  })

  it.each(shares)("are not found where %s has one row on the other side", async (link) => {
    const found = await fitted(split(link, [0, 0, 0, 1, 0, 1, 1, 1]))
    expect(found.certificate.class).toBe("interior")
    expect(toward(found)).toEqual([null, null])
  })

  it("leave the rest of the fit as that of the rows that stay (a level with zero counts only)", async () => {
    const g = "aaaabbbbcccc".split("")
    const x = [0, 1, 2, 3, 0, 1, 2, 3, 0, 1, 2, 3]
    const y = [2, 1, 4, 3, 5, 4, 9, 8, 0, 0, 0, 0]
    const found = await fitted(
      problem({ family: "poisson", link: "log", terms: ["g", "x"], y, variables: { g: factor(g), x: numbers(x) } }),
    )
    expect(found.certificate.class).toBe("infinite")
    expect(toward(found)).toEqual([null, null, "-infinity", null])
    // Limits computed at 80 digits.
    const exact = ["0.5466537871245576564773462", "0.9555114450274363614527281", null, "0.2254052566009881677507111"]
    const spread = ["0.4162920483914335802559626", "0.3721042037676253685707668", null, "0.1522901301005746745268174"]
    exact.forEach((value, j) => {
      if (value === null) return
      expect(digits(betas(found)[j], value)).toBeGreaterThan(12)
      expect(digits(errors(found)[j], spread[j] as string)).toBeGreaterThan(12)
    })
    expect(digits(found.deviance, "2.562917756115689241653578")).toBeGreaterThan(12)
    expect(digits(found.logLikelihood, "-14.08616610643199361639533")).toBeGreaterThan(12)
    expect([found.df, found.aic]).toEqual([8, 8 - 2 * (found.logLikelihood as number)])
    const at = predicted(found, { g: factor(["b", "c"], "corner", ["a", "b", "c"]), x: numbers([1, 1]) }, 2)
    expect(at.eta[0]).toBeCloseTo(1.727570488753, 12)
    expect([at.eta[1], at.error[1]]).toEqual([Number.NEGATIVE_INFINITY, Number.NaN])
  })

  it("are found one after the other where several levels are empty or full", async () => {
    const g = [..."aaaabbbbccccdddd"]
    const y = [0, 1, 0, 1, 0, 0, 0, 0, 1, 1, 1, 1, 1, 0, 0, 1]
    const found = await fitted(problem({ family: "binomial", link: "probit", terms: ["g"], y, variables: { g: factor(g) } }))
    expect(found.certificate.class).toBe("infinite")
    expect(toward(found)).toEqual([null, "-infinity", "infinity", null])
    expect(digits(found.deviance, `${16 * Math.log(2)}`)).toBeGreaterThan(12)
  })

  it("are found for binomial log where all rows of a level failed", async () => {
    const g = [..."aaaabbbb"]
    const found = await fitted(
      problem({ family: "binomial", link: "log", terms: ["g"], y: [0, 1, 0, 1, 0, 0, 0, 0], variables: { g: factor(g) } }),
    )
    expect([found.certificate.class, toward(found)[1]]).toEqual(["infinite", "-infinity"])
    expect(betas(found)[0]).toBeCloseTo(Math.log(0.5), 12)
  })

  it("are all that is left of counts that are all 0", async () => {
    const found = await fitted(
      problem({ family: "poisson", link: "log", terms: ["x"], y: [0, 0, 0], variables: { x: numbers([1, 2, 4]) } }),
    )
    expect([found.certificate.class, found.deviance, found.logLikelihood, found.interceptOnly?.deviance]).toEqual(["infinite", 0, 0, 0])
    expect(betas(found)).toEqual([null, null])
  })
})

describe("maxima on the edge", () => {
  // Petersen, M. R. and Deddens, J. A. (2008). BMC Medical Research Methodology, 8, 9.
  it("are found for binomial log, as printed, and to the limit's digits", async () => {
    const x = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10]
    const found = await fitted(
      problem({ family: "binomial", link: "log", terms: ["x"], y: [0, 0, 0, 0, 1, 0, 1, 1, 1, 1], variables: { x: numbers(x) } }),
    )
    expect(found.certificate.class).toBe("boundary")
    expectPrinted(betas(found), ["-2.094", "0.2094"])
    expect(digits(betas(found)[0], "-2.093586127866669717389669")).toBeGreaterThan(11)
    expect(digits(found.deviance, "7.679999606018922720679968")).toBeGreaterThan(11)
    expect(errors(found)).toEqual([null, null])
    expect(found.certificate.evidence?.edge.map(({ row }) => row)).toEqual([9])
    expect(found.certificate.evidence?.edge[0]?.multiplier).toBeGreaterThan(0)
  })

  it("are found for counts under the identity, by hand", async () => {
    // μ = b(x − 1) with b = Σy/Σ(x − 1) once the first row is held at 0: the slope inside would make it negative.
    const x = [1, 2, 3, 4]
    const y = [0, 0, 3, 9]
    const found = await fitted(problem({ family: "poisson", link: "identity", terms: ["x"], y, variables: { x: numbers(x) } }))
    expect(found.certificate.class).toBe("boundary")
    expect(betas(found)[1]).toBeCloseTo(12 / 6, 11)
    expect(betas(found)[0]).toBeCloseTo(-12 / 6, 11)
    expect(found.mu[0]).toBe(0)
  })

  it.each(["identity", "log", "square_root"])("are at 1 where every trial succeeded, under %s", async (link) => {
    const found = await fitted(problem({ family: "binomial", link, terms: [], y: [1, 1, 1] }))
    expect(found.certificate.class).toBe("boundary")
    expect(found.deviance).toBeCloseTo(0, 12)
    expect(betas(found)[0]).toBeCloseTo(link === "log" ? 0 : 1, 12)
  })

  it("are not claimed where the maximum is just inside", async () => {
    const x = [1, 2, 3, 4, 5, 6, 7, 8]
    const y = [1, 2, 2, 4, 5, 5, 8, 7]
    const found = await fitted(problem({ family: "poisson", link: "identity", terms: ["x"], y, variables: { x: numbers(x) } }))
    expect(found.certificate.class).toBe("interior")
  })
})

describe("dependent columns", () => {
  it("are left out in the order of the terms and named with what makes them", async () => {
    const x = [1, 2, 3, 4, 5, 7]
    const variables = { x: numbers(x), twice: numbers(x.map((v) => 2 * v + 3)), z: numbers([1, 0, 2, 1, 0, 5]) }
    const found = await fitted(
      problem({ family: "normal", link: "identity", terms: ["x", "twice", "z"], y: [1, 3, 2, 5, 4, 4], variables }),
    )
    expect(found.certificate.class).toBe("unidentified")
    expect(found.certificate.evidence?.dependent).toEqual([
      {
        column: "twice",
        on: [
          { column: "intercept", times: 3 },
          { column: "x", times: 2 },
        ],
      },
    ])
    expect([found.rank, found.df, betas(found)[2], errors(found)[2]]).toEqual([3, 3, null, null])
    const without = await fitted(problem({ family: "normal", link: "identity", terms: ["x", "z"], y: [1, 3, 2, 5, 4, 4], variables }))
    expect(betas(found)[3]).toBeCloseTo(betas(without)[2] as number, 12)
    expect(found.covariance.filter(Number.isNaN)).toHaveLength(4)
  })

  it("are found among nested factors", async () => {
    const region = [..."ppppqqqq"]
    const shop = [..."aabbccdd"]
    const variables = { region: factor(region), shop: factor(shop) }
    const found = await fitted(problem({ family: "gamma", link: "log", terms: ["region", "shop"], y: [1, 2, 3, 2, 5, 4, 6, 5], variables }))
    expect(found.certificate.evidence?.dependent).toEqual([
      {
        column: "shop is d",
        on: [
          { column: "region is q", times: 1 },
          { column: "shop is c", times: -1 },
        ],
      },
    ])
  })

  it("are not seen where columns are nearly equal, as long as they differ by a ten-thousand-millionth", async () => {
    const x = Array.from({ length: 12 }, (_, i) => (i * 7) % 12)
    const near = x.map((v, i) => v + 1e-8 * ((i * 5) % 7))
    const found = await fitted(
      problem({
        family: "normal",
        link: "identity",
        terms: ["x", "near"],
        y: x.map((v, i) => v + ((i * 3) % 5)),
        variables: { x: numbers(x), near: numbers(near) },
      }),
    )
    expect([found.certificate.class, found.rank]).toEqual(["interior", 3])
    const same = await fitted(
      problem({
        family: "normal",
        link: "identity",
        terms: ["x", "near"],
        y: x.map((v, i) => v + ((i * 3) % 5)),
        variables: { x: numbers(x), near: numbers(x.map((v, i) => v + 1e-13 * ((i * 5) % 7))) },
      }),
    )
    expect([same.certificate.class, same.rank]).toEqual(["unidentified", 2])
  })

  it("are the constant itself where it says nothing new", async () => {
    const found = await fitted(
      problem({ family: "poisson", link: "log", terms: ["x"], y: [1, 2, 4], variables: { x: numbers([5, 5, 5]) } }),
    )
    expect(found.certificate.evidence?.dependent).toEqual([{ column: "x", on: [{ column: "intercept", times: 5 }] }])
  })
})

describe("what is odd but not wrong", () => {
  it("fits a single row", async () => {
    const found = await fitted(problem({ family: "poisson", link: "log", terms: [], y: [3] }))
    expect(betas(found)[0]).toBeCloseTo(Math.log(3), 14)
    expect([found.df, found.fitTest]).toEqual([0, []])
  })

  it("fits no column at all", async () => {
    const found = await fitted(
      problem({ family: "poisson", link: "log", intercept: false, terms: [], y: [1, 2], offset: Float64Array.of(0, 1) }),
    )
    expect([found.rank, found.df, found.coefficients.length, found.interceptOnly]).toEqual([0, 2, 0, null])
    expect(found.mu[1]).toBeCloseTo(Math.E, 14)
  })

  it("fits a constant response perfectly", async () => {
    const found = await fitted(
      problem({ family: "normal", link: "identity", terms: ["x"], y: [4, 4, 4, 4], variables: { x: numbers([1, 2, 3, 5]) } }),
    )
    expect([found.deviance, found.dispersion.value, found.aic]).toEqual([0, 0, null])
    expect(betas(found)[0]).toBeCloseTo(4, 13)
  })

  it("knows that a factor without the constant spans it", async () => {
    const g = factor([..."aabb"])
    const found = await fitted(
      problem({ family: "normal", link: "identity", intercept: false, terms: ["g"], y: [1, 2, 5, 7], variables: { g } }),
    )
    expect(found.coefficients.map((c) => c.of)).toEqual(["g is a", "g is b"])
    expectPrinted(betas(found), ["1.500000000000", "6.000000000000"])
    expect(found.interceptOnly?.deviance).toBeCloseTo(22.75, 12)
    const through = await fitted(
      problem({ family: "normal", link: "identity", intercept: false, terms: ["x"], y: [1, 2, 5], variables: { x: numbers([1, 2, 3]) } }),
    )
    expect(through.interceptOnly).toBeNull()
  })

  // With offsets only the outermost row reaches an end of the means that lies at a finite η, by hand: μ is 1, 0.75 and 0.5 on the line, and
  // (1)², (0.75)² and (0.5)² under the square root; counts of 0 have means 0, 0.25 and 0.5.
  it.each([
    ["binomial", "identity", 1, -2 * (Math.log(0.75) + Math.log(0.5))],
    ["binomial", "square_root", 1, -4 * (Math.log(0.75) + Math.log(0.5))],
    ["poisson", "identity", 0, 2 * (0.25 + 0.5)],
    ["binomial", "logit", 1, 0],
    ["poisson", "log", 0, 0],
  ])("has a null deviance for %s with %s where every response is %d, offsets kept", async (family, link, y, deviance) => {
    const found = await fitted(
      problem({ family, link, terms: ["x"], y: [y, y, y], offset: Float64Array.of(0.5, 0.25, 0), variables: { x: numbers([1, 2, 4]) } }),
    )
    expect(found.interceptOnly?.deviance).toBeCloseTo(deviance, 13)
    expect(found.deviance).toBeLessThanOrEqual(deviance)
  })
})

describe("multipliers", () => {
  it("are shared by rows that are the same, and vouch for ∇ℓ = Σ λ·n", async () => {
    // The mean is at 1 in all four rows with x = 0: by hand, with μ = 1 − b·x, Σ over the others of (y − μ)/(μ(1 − μ))·(−x) vanishes.
    const x = [4, 2, 2, 1, 0, 4, 0, 1, 0, 0]
    const y = [1, 1, 1, 0, 1, 1, 1, 0, 1, 1]
    const found = await fitted(problem({ family: "binomial", link: "identity", terms: ["x"], y, variables: { x: numbers(x) } }))
    expect(found.certificate.class).toBe("boundary")
    const edge = found.certificate.evidence?.edge ?? []
    const [b = 0, slope = 0] = betas(found) as number[]
    const held = new Set(edge.map(({ row }) => row))
    // The score by the rows inside, and by the limits of the slope at the rows held: 1 at a mean of 1, −1 at a mean of 0.
    const score = [0, 0]
    x.forEach((v, i) => {
      const mu = b + slope * v
      const s = held.has(i) ? (y[i] === 1 ? 1 : -1) : ((y[i] as number) - mu) / (mu * (1 - mu))
      score[0] = (score[0] as number) + s
      score[1] = (score[1] as number) + s * v
    })
    const along = edge.reduce(
      ([one, times], { row, multiplier }) => {
        const out = y[row] === 1 ? 1 : -1
        return [one + out * multiplier, times + out * multiplier * (x[row] as number)] as const
      },
      [0, 0] as readonly [number, number],
    )
    expect(along[0]).toBeCloseTo(score[0] as number, 8)
    expect(along[1]).toBeCloseTo(score[1] as number, 8)
    expect(edge.every(({ multiplier }) => multiplier >= 0)).toBe(true)
  })

  it("are 0 where the likelihood is level at the edge, and infinite where it falls without bound", async () => {
    const x = numbers([1, 2, 3, 4])
    const level = await fitted(problem({ family: "poisson", link: "square_root", terms: ["x"], y: [0, 0, 0, 0], variables: { x } }))
    expect([level.certificate.class, betas(level), level.deviance]).toEqual(["boundary", [0, 0], 0])
    expect(level.certificate.evidence?.edge.map(({ multiplier }) => multiplier)).toEqual([0, 0, 0, 0])
    const steep = await fitted({
      ...problem({ family: "tweedie", link: "identity", terms: ["x"], y: [0, 0, 0, 0], variables: { x } }),
      family: { name: "tweedie", parameters: [1.5] },
    })
    expect([steep.certificate.class, betas(steep), steep.deviance]).toEqual(["boundary", [0, 0], 0])
    expect(steep.certificate.evidence?.edge.map(({ multiplier }) => multiplier)).toEqual(new Array(4).fill(Number.POSITIVE_INFINITY))
  })
})

describe("estimates at infinity beside rows at the edge", () => {
  it("have the limit of one and the multipliers of the other, and no errors", async () => {
    // By hand: group a has no success, group b nothing else, group c 4 of 10.
    const found = await fitted(
      problem({
        family: "binomial",
        link: "log",
        terms: ["g"],
        y: [0, 1, 0.4],
        trials: Float64Array.of(10, 10, 10),
        variables: { g: factor(["a", "b", "c"]) },
      }),
    )
    expect(found.certificate.class).toBe("infinite")
    expect(toward(found)).toEqual(["-infinity", "infinity", "infinity"])
    expect(found.certificate.evidence?.edge).toEqual([{ row: 1, multiplier: expect.closeTo(10, 10) }])
    expect([...found.mu].map((mu) => Number(mu.toFixed(12)))).toEqual([0, 1, 0.4])
    expect(found.deviance).toBeCloseTo(0, 12)
    expect(errors(found)).toEqual([null, null, null])
  })

  it("leave those that stay finite where the closed form has them", async () => {
    // The same without group a's part in the constant: the reference level is b, whose mean is 1.
    const found = await fitted(
      problem({
        family: "binomial",
        link: "log",
        terms: ["g"],
        y: [1, 0, 0.4],
        trials: Float64Array.of(10, 10, 10),
        variables: { g: factor(["b", "a", "c"], "corner", ["b", "a", "c"]) },
      }),
    )
    expect([found.certificate.class, toward(found)]).toEqual(["infinite", [null, "-infinity", null]])
    expect(betas(found)[0]).toBeCloseTo(0, 12)
    expect(betas(found)[2]).toBeCloseTo(Math.log(0.4), 12)
  })
})

describe("constrained fits of small whole numbers", () => {
  const pairs = [
    ["binomial", "log"],
    ["binomial", "identity"],
    ["binomial", "log_complement"],
    ["poisson", "identity"],
    ["poisson", "square_root"],
  ] as const

  /** The deviance where the means are those of other coefficients; infinite where they are not possible. */
  const devianceAt = (family: string, y: readonly number[], mu: readonly number[]): number =>
    y.reduce((sum, response, i) => {
      const m = mu[i] as number
      if (!(m >= 0) || (family === "binomial" && m > 1)) return Number.POSITIVE_INFINITY
      const part = (of: number, at: number): number => (of === 0 ? 0 : of * Math.log(of / at))
      return sum + 2 * (family === "binomial" ? part(response, m) + part(1 - response, 1 - m) : part(response, m) - (response - m))
    }, 0)
  const means: Readonly<Record<string, (eta: number) => number>> = {
    log: Math.exp,
    identity: (eta) => eta,
    log_complement: (eta) => 1 - Math.exp(eta),
    square_root: (eta) => (eta < 0 ? Number.NaN : eta * eta),
  }

  // Likelihoods of these pairs are concave, so a maximum is one if no step towards another possible point raises it.
  it.each(pairs)("end in no worse place than any other: %s, %s", async (family, link) => {
    const draw = generator(31)
    const whole = (n: number): number => Math.floor(draw() * n)
    const seen: Record<string, number> = {}
    for (let k = 0; k < 40; k++) {
      const n = 5 + whole(7)
      const x = Array.from({ length: n }, () => whole(5))
      const z = Array.from({ length: n }, () => whole(4) - 1)
      const y = x.map((v) => (family === "binomial" ? (draw() < v / 5 + 0.1 ? 1 : 0) : draw() < 0.4 ? 0 : whole(2 + 2 * v)))
      const found = await fitted(problem({ family, link, terms: ["x", "z"], y, variables: { x: numbers(x), z: numbers(z) } }))
      seen[found.certificate.class] = (seen[found.certificate.class] ?? 0) + 1
      const evidence = found.certificate.evidence
      expect(evidence?.edge.every(({ multiplier }) => multiplier >= 0) ?? true).toBe(true)
      if (found.certificate.class !== "boundary") continue
      const [b = 0, bx = 0, bz = 0] = betas(found) as number[]
      const mean = means[link] as (eta: number) => number
      const least = found.deviance as number
      const at = (c: number, cx: number, cz: number): number =>
        devianceAt(
          family,
          y,
          x.map((v, i) => mean(c + cx * v + cz * (z[i] as number))),
        )
      for (let step = 0; step < 200; step++) {
        const size = 10 ** (-4 * draw())
        const [dc, dx, dz] = [draw() - 0.5, draw() - 0.5, draw() - 0.5].map((d) => size * d) as [number, number, number]
        expect(at(b + dc, bx + dx, bz + dz)).toBeGreaterThan(least - 1e-9)
      }
    }
    expect(seen["boundary"]).toBeGreaterThan(5)
    expect(seen["gave_up"] ?? 0).toBe(0)
  })
})
