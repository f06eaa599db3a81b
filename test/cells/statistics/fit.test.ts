// Laws of fits: what must not change a fit, and what must change it in a known way. Digits are held by test/reference.

import { describe, expect, it } from "vitest"
import type { Fit } from "../../../cells/statistics/fit.ts"
import { criticalValue, designAt, fit, predicted, workingRows } from "../../../cells/statistics/index.ts"
import type { Problem, Variable } from "../../../cells/statistics/problem.ts"
import { digits, expectPrinted } from "../../reference/printed.ts"
import { betas, errors, factor, fitted, generator, numbers, problem } from "./problems.ts"

const random = generator(7)
const rows = 60
const x = Array.from({ length: rows }, () => Math.round(random() * 1000) / 100)
const z = Array.from({ length: rows }, () => Math.round(random() * 100) / 10)
const lot = Array.from({ length: rows }, () => "abcd"[Math.floor(random() * 4)] as string)
const site = Array.from({ length: rows }, () => "pqr"[Math.floor(random() * 3)] as string)
const share = x.map((v, i) => 1 / (1 + Math.exp(2 - 0.4 * v + (lot[i] === "b" ? 0.7 : 0))))
const counts = share.map((p) => Math.floor(-Math.log(1 - random() * 0.95) * 8 * p + 1))
const wins = share.map((p) => (random() < p ? 1 : 0))
const sizes = x.map((v, i) => Math.exp(0.1 * v) * (0.5 + random()) + (site[i] === "q" ? 0.4 : 0))
const variables: Record<string, Variable> = { x: numbers(x), z: numbers(z), lot: factor(lot), site: factor(site) }

const poisson = problem({ family: "poisson", link: "log", terms: ["x", "lot", "z"], y: counts, variables })
const binomial = problem({ family: "binomial", link: "cloglog", terms: ["x", "lot", "x.lot"], y: wins, variables })
const gamma = problem({ family: "gamma", link: "log", terms: ["x", "z", "site"], y: sizes, variables })
const normal = problem({ family: "normal", link: "square_root", terms: ["x", "site"], y: sizes, variables })
const all: readonly [string, Problem][] = [
  ["poisson log", poisson],
  ["binomial cloglog", binomial],
  ["gamma log", gamma],
  ["normal square_root", normal],
  ["poisson square_root", { ...poisson, link: { name: "square_root", parameters: [] } }],
  ["gamma power", { ...gamma, link: { name: "power", parameters: [0.4] } }],
]

/** Both fits agree in every number shown, to a share of 10^−places. */
function expectSame(one: Fit, other: Fit, places: number, means = true): void {
  const near = (a: number | null, b: number | null, size: number): void => {
    if (a === null || b === null) expect(a).toBe(b)
    else expect(Math.abs(a - b)).toBeLessThanOrEqual(10 ** -places * Math.max(size, Math.abs(a)))
  }
  one.coefficients.forEach((own, j) => {
    const theirs = other.coefficients[j]
    near(own.beta, theirs?.beta ?? null, own.standardError ?? 1)
    near(own.standardError, theirs?.standardError ?? null, 0)
    near(own.low, theirs?.low ?? null, own.standardError ?? 1)
  })
  near(one.deviance, other.deviance, 0)
  near(one.logLikelihood, other.logLikelihood, 1)
  near(one.pearson, other.pearson, 0)
  expect([one.n, one.df, one.rank]).toEqual([other.n, other.df, other.rank])
  if (means) one.mu.forEach((m, i) => void near(m, other.mu[i] as number, 0))
}

/** Rows in another order, or some of them several times. */
function taken(of: Problem, order: readonly number[]): Problem {
  const take = (values: Float64Array | null): Float64Array | null => (values ? Float64Array.from(order, (i) => values[i] as number) : null)
  return {
    ...of,
    rows: order.length,
    y: Float64Array.from(order, (i) => of.y[i] as number),
    trials: take(of.trials),
    repeat: take(of.repeat),
    precision: take(of.precision),
    offset: take(of.offset),
    exposure: take(of.exposure),
    cluster: of.cluster ? Int32Array.from(order, (i) => of.cluster?.[i] as number) : null,
    variables: Object.fromEntries(
      Object.entries(of.variables).map(([name, variable]): [string, Variable] => [
        name,
        variable.type === "number"
          ? { ...variable, values: take(variable.values) as Float64Array }
          : { ...variable, codes: Int32Array.from(order, (i) => variable.codes[i] as number) },
      ]),
    ),
  }
}

describe.each(all)("a fit, %s", (_, of) => {
  it("comes out with the same bits each time", async () => {
    const one = await fitted(of)
    const other = await fitted(of)
    expect(JSON.stringify(betas(one))).toBe(JSON.stringify(betas(other)))
    expect(one.covariance).toEqual(other.covariance)
    expect([one.deviance, one.logLikelihood, one.aic]).toEqual([other.deviance, other.logLikelihood, other.aic])
  })

  it("leaves its inputs as they were", async () => {
    const before = JSON.stringify(of)
    await fitted(of)
    expect(JSON.stringify(of)).toBe(before)
  })

  it("does not depend on the order of the rows", async () => {
    const order = Array.from({ length: rows }, (_, i) => (i * 23 + 11) % rows)
    const one = await fitted(of)
    expectSame(await fitted(taken(of, order)), { ...one, mu: Float64Array.from(order, (i) => one.mu[i] as number) }, 11)
  })

  it("takes `repeat` as rows that stand so often, sandwich errors too", async () => {
    const repeat = Float64Array.from({ length: rows }, (_, i) => 1 + (i % 3))
    const order = [...repeat].flatMap((times, i) => new Array<number>(times).fill(i))
    for (const standardErrors of ["expected", "observed", "sandwich"] as const) {
      const counted = await fitted({ ...of, repeat, standardErrors })
      const written = await fitted({ ...taken(of, order), standardErrors })
      expectSame(counted, written, 10, false)
      expect(counted.goodnessOfLink?.statistic).toBeCloseTo(written.goodnessOfLink?.statistic as number, 8)
      expect(counted.bic === null ? null : counted.bic.toFixed(8)).toBe(written.bic === null ? null : written.bic.toFixed(8))
    }
  })

  it("follows a shift and a scale of a predictor", async () => {
    const one = await fitted(of)
    const moved = await fitted({ ...of, variables: { ...of.variables, x: numbers(x.map((v) => 100 * v + 30000)) } })
    const at = one.coefficients.findIndex((c) => c.of === "x")
    expect(100 * (moved.coefficients[at]?.beta as number)).toBeCloseTo(one.coefficients[at]?.beta as number, 11)
    expect(100 * (moved.coefficients[at]?.standardError as number)).toBeCloseTo(one.coefficients[at]?.standardError as number, 11)
    expect(digits(moved.deviance, `${one.deviance}`)).toBeGreaterThan(11)
    expect(moved.certificate.condition).toBeGreaterThan(one.certificate.condition)
  })

  it("is the same model under sum_to_zero", async () => {
    const zero = Object.fromEntries(
      Object.entries(of.variables).map(([name, variable]): [string, Variable] => [
        name,
        variable.type === "factor" ? { ...variable, coding: "sum_to_zero" } : variable,
      ]),
    )
    const corner = await fitted(of)
    const sum = await fitted({ ...of, variables: zero })
    expect(digits(sum.deviance, `${corner.deviance}`)).toBeGreaterThan(11)
    sum.mu.forEach((m, i) => {
      expect(digits(m, `${corner.mu[i]}`)).toBeGreaterThan(11)
    })
  })

  it("arrives at the same place from nearby", async () => {
    const cold = await fitted(of)
    const elsewhere = await fitted({ ...of, y: of.y.map((value, i) => (of.family.name === "binomial" && i < 3 ? 1 - value : value * 1)) })
    expectSame(await fitted(of, elsewhere), cold, 10)
  })

  it("predicts its own η, and errors that agree with the covariance", async () => {
    const found = await fitted(of)
    const { eta, error } = predicted(found, of.variables, rows)
    const columns = designAt(found, of.variables, rows)
    eta.forEach((value, i) => {
      expect(value).toBeCloseTo(found.eta[i] as number, 12)
      let variance = 0
      for (let j = 0; j < columns.length; j++)
        for (let k = 0; k < columns.length; k++)
          variance +=
            (columns[j]?.[i] as number) *
            (columns[k]?.[i] as number) *
            (found.covariance[j >= k ? (j * (j + 1)) / 2 + k : (k * (k + 1)) / 2 + j] as number)
      expect(error[i]).toBeCloseTo(Math.sqrt(variance), 9)
    })
  })

  it("has working residuals whose weighted sums with every column vanish", async () => {
    const found = await fitted(of)
    const { residual, weight } = workingRows(of, found)
    for (const column of designAt(found, of.variables, rows)) {
      let [sum, size] = [0, 0]
      column.forEach((value, i) => {
        sum += value * (weight[i] as number) * (residual[i] as number)
        size += Math.abs(value * (weight[i] as number) * (residual[i] as number))
      })
      expect(Math.abs(sum)).toBeLessThan(1e-11 * size)
    }
  })

  it("has intervals as wide as its critical value says", async () => {
    const found = await fitted(of)
    const c = criticalValue(found, 0.95)
    const { beta, standardError, low, high } = found.coefficients[1] as Fit["coefficients"][number]
    expect((high as number) - (low as number)).toBeCloseTo(2 * c * (standardError as number), 12)
    expect(((high as number) + (low as number)) / 2).toBeCloseTo(beta as number, 12)
    expect(found.lawDf).toBe(of.dispersion === "one" ? null : found.df)
  })
})

describe("weights, offsets and exposure", () => {
  it("fits single trials and groups to the same coefficients, errors and BIC", async () => {
    const dose = [1, 2, 3, 4, 5]
    const killed = [1, 3, 6, 8, 11]
    const trials = Float64Array.from([10, 12, 12, 11, 12])
    const grouped = problem({
      family: "binomial",
      link: "probit",
      terms: ["dose"],
      y: killed.map((k, i) => k / (trials[i] as number)),
      trials,
      variables: { dose: numbers(dose) },
    })
    const singles = dose.flatMap((d, i) =>
      Array.from({ length: trials[i] as number }, (_, k) => ({ d, y: k < (killed[i] as number) ? 1 : 0 })),
    )
    const single = problem({
      family: "binomial",
      link: "probit",
      terms: ["dose"],
      y: singles.map(({ y }) => y),
      variables: { dose: numbers(singles.map(({ d }) => d)) },
    })
    const [a, b] = [await fitted(grouped), await fitted(single)]
    betas(a).forEach((beta, j) => {
      expect(digits(beta, `${betas(b)[j]}`)).toBeGreaterThan(12)
      expect(digits(errors(a)[j], `${errors(b)[j]}`)).toBeGreaterThan(12)
    })
    expect(b.fitTest).toEqual([])
    expect(a.fitTest.map(({ by, df }) => [by, df])).toEqual([
      ["deviance", 3],
      ["pearson", 3],
    ])
    // BIC counts trials in both; the likelihoods differ by the binomial coefficients.
    expect((a.bic as number) + 2 * (a.logLikelihood as number)).toBeCloseTo((b.bic as number) + 2 * (b.logLikelihood as number), 12)
  })

  it("takes an exposure under log and cloglog for the offset log E", async () => {
    const exposure = Float64Array.from(x, (v) => 1 + v)
    for (const of of [poisson, binomial, gamma]) {
      const one = await fitted({ ...of, exposure })
      const other = await fitted({ ...of, offset: exposure.map(Math.log) })
      expectSame(one, other, 11)
      expect(one.goodnessOfLink?.statistic).toBeCloseTo(other.goodnessOfLink?.statistic as number, 9)
    }
  })

  it("fits μ = E·h(η) as rates y/E of precision E, for counts under any link", async () => {
    const exposure = Float64Array.from(x, (v) => 1 + Math.round(v))
    for (const link of ["identity", "square_root", "reciprocal"]) {
      const of = problem({ family: "poisson", link, terms: ["z"], y: counts, variables, exposure })
      const one = await fitted(of)
      const rates = problem({
        family: "poisson",
        link,
        terms: ["z"],
        y: counts.map((y, i) => y / (exposure[i] as number)),
        variables,
        precision: exposure,
      })
      const other = await fitted(rates)
      betas(one).forEach((beta, j) => {
        expect(digits(beta, `${betas(other)[j]}`)).toBeGreaterThan(11)
        expect(digits(errors(one)[j], `${errors(other)[j]}`)).toBeGreaterThan(11)
      })
      expect(digits(one.deviance, `${other.deviance}`)).toBeGreaterThan(11)
      expect(digits(one.interceptOnly?.deviance, `${other.interceptOnly?.deviance}`)).toBeGreaterThan(11)
    }
  })

  it("takes only ratios of precision where the dispersion is estimated, and the whole where it is one", async () => {
    const precision = Float64Array.from(z, (v) => 1 + v)
    const double = precision.map((w) => 2 * w)
    expectSame(
      { ...(await fitted({ ...gamma, precision: double })), deviance: null, pearson: 0 },
      { ...(await fitted({ ...gamma, precision })), deviance: null, pearson: 0 },
      11,
    )
    const [one, two] = [await fitted({ ...poisson, precision }), await fitted({ ...poisson, precision: double })]
    expect((errors(one)[1] as number) / (errors(two)[1] as number)).toBeCloseTo(Math.SQRT2, 12)
  })

  it("gives the mean of the offset back to the constant", async () => {
    const offset = Float64Array.from(z, (v) => 0.3 * v)
    const one = await fitted({ ...poisson, offset })
    const none = await fitted(poisson)
    const at = none.coefficients.findIndex((c) => c.of === "z")
    expect(one.coefficients[at]?.beta).toBeCloseTo((none.coefficients[at]?.beta as number) - 0.3, 11)
    expect(digits(one.deviance, `${none.deviance}`)).toBeGreaterThan(12)
  })

  it("fits negative responses under the reciprocal link as the mirror of positive ones", async () => {
    const positive = problem({ family: "normal", link: "reciprocal", terms: ["x"], y: sizes, variables })
    const one = await fitted(positive)
    const other = await fitted({ ...positive, y: positive.y.map((value) => -value) })
    betas(one).forEach((beta, j) => {
      expect(digits(-(betas(other)[j] as number), `${beta}`)).toBeGreaterThan(12)
    })
  })
})

describe("errors", () => {
  // Conventions: sandwich errors of Bliss's beetles on log10 dose, computed at 40 digits.
  it.each([
    ["logit", ["6.428159", "3.588488"]],
    ["cloglog", ["1.832703", "1.017185"]],
  ])("gives the sandwich errors of the beetles under %s", async (link, exact) => {
    const n = Float64Array.from([59, 60, 62, 56, 63, 59, 62, 60])
    const beetles = problem({
      family: "binomial",
      link,
      terms: ["dose"],
      y: [6, 13, 18, 28, 52, 53, 61, 60].map((k, i) => k / (n[i] as number)),
      trials: n,
      variables: { dose: numbers([1.6907, 1.7242, 1.7552, 1.7842, 1.8113, 1.8369, 1.861, 1.8839]) },
      standardErrors: "sandwich",
    })
    const found = await fitted(beetles)
    expectPrinted(errors(found), exact)
  })

  it("makes clusters of one row each the sandwich by rows, but for the law", async () => {
    const plain = await fitted({ ...poisson, standardErrors: "sandwich" })
    const clustered = await fitted({ ...poisson, standardErrors: "sandwich", cluster: Int32Array.from({ length: rows }, (_, i) => i) })
    // n/(n − p) = G/(G − 1)·(n − 1)/(n − p) where G = n.
    errors(plain).forEach((error, j) => {
      expect(digits(errors(clustered)[j], `${error}`)).toBeGreaterThan(12)
    })
    expect([plain.lawDf, clustered.lawDf, clustered.clusters]).toEqual([null, rows - 1, rows])
  })

  it("sums scores within clusters", async () => {
    // Each row twice in one cluster: the meat of a doubled score is four times, the bread half.
    const order = Array.from({ length: 2 * rows }, (_, i) => Math.floor(i / 2))
    const doubled = await fitted({ ...taken(poisson, order), standardErrors: "sandwich", cluster: Int32Array.from(order) })
    const single = await fitted({ ...poisson, standardErrors: "sandwich" })
    const p = single.rank
    const factorOfSample = ((rows / (rows - 1)) * (2 * rows - 1)) / (2 * rows - p) / (rows / (rows - p))
    errors(single).forEach((error, j) => {
      expect(digits(errors(doubled)[j], `${(error as number) * Math.sqrt(factorOfSample)}`)).toBeGreaterThan(11)
    })
  })

  it("has no errors where nothing is left to estimate the dispersion from", async () => {
    const of = problem({ family: "gamma", link: "log", terms: ["x"], y: [1, 3], variables: { x: numbers([0, 1]) } })
    const found = await fitted(of)
    expect([found.df, found.dispersion.value, errors(found)]).toEqual([0, null, [null, null]])
  })

  it("has errors of 0 and no tests in a perfect fit", async () => {
    const of = problem({ family: "normal", link: "identity", terms: ["x"], y: [1, 3, 5, 7, 9], variables: { x: numbers([0, 1, 2, 3, 4]) } })
    const found = await fitted(of)
    expect([found.deviance, found.dispersion.value, found.logLikelihood, found.aic]).toEqual([0, 0, null, null])
    expect(errors(found)).toEqual([0, 0])
    expect(found.coefficients.map(({ ratio }) => ratio)).toEqual([null, null])
  })

  it("has no AIC where the dispersion of counts is estimated", async () => {
    const found = await fitted({ ...poisson, dispersion: "pearson" })
    expect([found.aic, found.bic]).toEqual([null, null])
    expect(found.logLikelihood).toBeCloseTo((await fitted(poisson)).logLikelihood as number, 10)
    expect((errors(found)[1] as number) / (errors(await fitted(poisson))[1] as number)).toBeCloseTo(Math.sqrt(found.pearson / found.df), 10)
  })
})

describe("factors with many levels", () => {
  const many = 2000
  const draw = generator(3)
  const code = Int32Array.from({ length: many }, () => Math.floor(draw() * 60))
  const level = Float64Array.from({ length: 60 }, () => draw())
  const w = Float64Array.from({ length: many }, () => draw() * 4)
  const y = Float64Array.from(code, (c, i) => (draw() < 1 / (1 + Math.exp(1 - (level[c] as number) - 0.3 * (w[i] as number))) ? 1 : 0))
  const names = Array.from({ length: 60 }, (_, c) => `s${String(c).padStart(2, "0")}`)
  const site: Variable = { type: "factor", codes: code, levels: names, coding: "corner" }

  it("gives the same fit as the columns written out", async () => {
    const dummies = Object.fromEntries(
      names.slice(1).map((name, k): [string, Variable] => [name, numbers(code.map((c) => (c === k + 1 ? 1 : 0)))]),
    )
    const byCode = await fitted(problem({ family: "binomial", link: "logit", terms: ["w", "site"], y, variables: { w: numbers(w), site } }))
    const written = await fitted(
      problem({ family: "binomial", link: "logit", terms: ["w", ...names.slice(1)], y, variables: { w: numbers(w), ...dummies } }),
    )
    expectSame(byCode, { ...written, coefficients: written.coefficients }, 10)
    expect(digits(byCode.certificate.condition, `${written.certificate.condition}`)).toBeGreaterThan(9)
    byCode.covariance.forEach((v, at) => {
      expect(Math.abs(v - (written.covariance[at] as number))).toBeLessThan(1e-12)
    })
  })

  it("gives a slope a level too", async () => {
    const few = code.map((c) => c % 30)
    const slopes = Object.fromEntries(
      names
        .slice(0, 30)
        .map((name, k): [string, Variable] => [`w${name}`, numbers(Float64Array.from(few, (c, i) => (c === k ? (w[i] as number) : 0)))]),
    )
    const lots: Variable = { type: "factor", codes: few, levels: names.slice(0, 30), coding: "corner" }
    const byCode = await fitted(problem({ family: "binomial", link: "probit", terms: ["lots.w"], y, variables: { w: numbers(w), lots } }))
    const written = await fitted(problem({ family: "binomial", link: "probit", terms: Object.keys(slopes), y, variables: slopes }))
    expectSame(byCode, written, 10)
  })
})

describe("what cannot be fitted", () => {
  it("says so without rows", async () => {
    expect(await fit(problem({ family: "normal", link: "identity", terms: [], y: [] }), async () => {})).toMatchObject({
      ok: false,
      why: "no_rows",
    })
  })

  it("says how many columns are too many", async () => {
    const codes = Int32Array.from({ length: 3000 }, (_, i) => i)
    const id: Variable = { type: "factor", codes, levels: [...codes].map(String), coding: "corner" }
    const found = await fit(problem({ family: "normal", link: "identity", terms: ["id"], y: codes, variables: { id } }), async () => {})
    expect(found).toMatchObject({ ok: false, why: "gave_up" })
    expect(!found.ok && found.detail).toContain("3001 columns")
  })

  it("does not start where no coefficients keep the means possible", async () => {
    const of = problem({
      family: "poisson",
      link: "identity",
      intercept: false,
      terms: ["x"],
      y: [1, 2, 3],
      variables: { x: numbers([-1, 1, 2]) },
    })
    expect(await fit(of, async () => {})).toMatchObject({ ok: false, why: "no_start" })
  })

  it("pauses while it works", async () => {
    const many = 60_000
    const draw = generator(5)
    const v = Float64Array.from({ length: many }, () => draw())
    let pauses = 0
    await fit(
      problem({ family: "binomial", link: "logit", terms: ["v"], y: v.map((p) => (draw() < p ? 1 : 0)), variables: { v: numbers(v) } }),
      async () => {
        pauses++
      },
    )
    expect(pauses).toBeGreaterThan(3)
  })
})
