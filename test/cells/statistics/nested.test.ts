// Tests of nested fits where they have a closed form: independence in a table, one-way analysis of variance, a single coefficient.

import { describe, expect, it } from "vitest"
import type { Fit } from "../../../cells/statistics/fit.ts"
import { containing, type NestedTest, nestedTest, scoreTest, without } from "../../../cells/statistics/nested.ts"
import type { Problem } from "../../../cells/statistics/problem.ts"
import { factor, fitted, generator, numbers, problem, type Stated, term } from "./problems.ts"

const pause = async (): Promise<void> => {}

async function pair(
  stated: Stated,
  out: readonly number[],
): Promise<{ problem: Problem; larger: Fit; smaller: { problem: Problem; fit: Fit } }> {
  const of = problem(stated)
  const less = without(of, out)
  return { problem: of, larger: await fitted(of), smaller: { problem: less, fit: await fitted(less) } }
}

const test = async (stated: Stated, out: readonly number[]): Promise<NestedTest | null> => {
  const { problem: of, larger, smaller } = await pair(stated, out)
  return nestedTest(of, larger, smaller, pause)
}

const rows = ["a", "a", "a", "b", "b", "b"]
const columns = ["p", "q", "r", "p", "q", "r"]
const table: Stated = {
  family: "poisson",
  link: "log",
  terms: ["row", "column", "row.column"],
  y: [12, 7, 31, 20, 25, 9],
  variables: { row: factor(rows), column: factor(columns) },
}

describe("independence in a table", () => {
  const y = [...table.y]
  const total = y.reduce((sum, k) => sum + k, 0)
  const of = (levels: readonly string[], level: string): number => y.reduce((sum, k, i) => (levels[i] === level ? sum + k : sum), 0)
  const expected = y.map((_, i) => (of(rows, rows[i] as string) * of(columns, columns[i] as string)) / total)

  it("has G² as its likelihood ratio", async () => {
    const found = await test(table, [2])
    const ratio = 2 * y.reduce((sum, k, i) => sum + k * Math.log(k / (expected[i] as number)), 0)
    expect(found).toMatchObject({ by: "likelihood_ratio", terms: 2 })
    expect(found?.statistic).toBeCloseTo(ratio, 11)
    // χ² on two degrees of freedom has an exponential tail.
    expect(found?.p).toBeCloseTo(Math.exp(-ratio / 2), 14)
  })

  it("has Pearson's X² as its score", async () => {
    const { problem: whole, smaller } = await pair(table, [2])
    const found = await scoreTest(whole, smaller, 1, pause)
    const pearson = y.reduce((sum, k, i) => sum + (k - (expected[i] as number)) ** 2 / (expected[i] as number), 0)
    expect(found).toMatchObject({ by: "score", terms: 2 })
    expect(found?.statistic).toBeCloseTo(pearson, 10)
    expect(found?.p).toBeCloseTo(Math.exp(-pearson / 2), 13)
  })
})

describe("one-way analysis of variance", () => {
  const y = [4.1, 3.9, 5.2, 6.8, 7.1, 6.2, 5.5, 4.9, 5.1, 9.0]
  const lot = ["a", "a", "a", "b", "b", "b", "c", "c", "c", "b"]
  const stated: Stated = { family: "normal", link: "identity", terms: ["lot"], y, variables: { lot: factor(lot) } }

  it("has its F", async () => {
    const mean = (of: readonly number[]): number => of.reduce((sum, v) => sum + v, 0) / of.length
    const groups = ["a", "b", "c"].map((level) => y.filter((_, i) => lot[i] === level))
    const within = groups.reduce((sum, group) => sum + group.reduce((inner, v) => inner + (v - mean(group)) ** 2, 0), 0)
    const between = groups.reduce((sum, group) => sum + group.length * (mean(group) - mean(y)) ** 2, 0)
    const found = await test(stated, [0])
    expect(found).toMatchObject({ by: "F", terms: 2 })
    expect(found?.statistic).toBeCloseTo(between / 2 / (within / 7), 10)
  })

  it("has the same Wald form whichever way the category is coded", async () => {
    const sandwich = { ...stated, standardErrors: "sandwich" as const }
    const corner = await test(sandwich, [0])
    const zero = await test({ ...sandwich, variables: { lot: factor(lot, "sum_to_zero") } }, [0])
    expect(corner?.by).toBe("wald")
    expect(corner?.terms).toBe(2)
    expect(zero?.statistic).toBeCloseTo(corner?.statistic ?? 0, 9)
  })
})

describe("Wald's form", () => {
  const random = generator(11)
  const x = Array.from({ length: 40 }, () => 4 * random())
  const z = Array.from({ length: 40 }, () => random())
  const y = x.map((v) => Math.floor(v + 3 * random()))
  const cluster = Int32Array.from(x, (_, i) => i % 9)
  const stated: Stated = {
    family: "poisson",
    link: "log",
    terms: ["x", "z"],
    y,
    standardErrors: "sandwich",
    variables: { x: numbers(x), z: numbers(z) },
  }

  it("is the square of the ratio for a single coefficient", async () => {
    const { larger } = await pair(stated, [1])
    const found = await test(stated, [1])
    const { ratio, p } = larger.coefficients[2] as { ratio: number; p: number }
    expect(found?.statistic).toBeCloseTo(ratio * ratio, 10)
    expect(found?.p).toBeCloseTo(p, 12)
  })

  it("goes by F where ratios go by t", async () => {
    const clustered = { ...stated, cluster }
    const { larger } = await pair(clustered, [1])
    const found = await test(clustered, [1])
    const { ratio, p } = larger.coefficients[2] as { ratio: number; p: number }
    expect(found?.statistic).toBeCloseTo(ratio * ratio, 10)
    expect(found?.p).toBeCloseTo(p, 12)
  })
})

it("has no test where nothing is apart, or nothing is left to judge the dispersion by", async () => {
  const x = [1, 2, 3, 4, 5]
  const twice = {
    family: "poisson",
    link: "log",
    terms: ["x", "w"],
    y: [1, 2, 2, 5, 7],
    variables: { x: numbers(x), w: numbers(x.map((v) => 2 * v)) },
  }
  expect(await test(twice, [1])).toBeNull()
  const full: Stated = { family: "normal", link: "identity", terms: ["x"], y: [1, 3], variables: { x: numbers([1, 2]) } }
  expect(await test(full, [0])).toBeNull()
})

describe("which terms may go by themselves", () => {
  it.each([
    [
      ["a", "b", "a.b"],
      [[2], [2], []],
    ],
    [
      ["a", "a.b", "a.b.c", "c"],
      [[1, 2], [2], [], [2]],
    ],
    [
      ["x", "power(x, 2)", "power(x, 3)"],
      [[1, 2], [2], []],
    ],
    [
      ["x", "power(x, 0.5)", "log(x)"],
      [[], [], []],
    ],
    [
      ["x", "x.b", "power(x, 2)", "power(x, 2).b"],
      [[1, 2, 3], [3], [3], []],
    ],
  ])("%j: those that contain each are %j", (terms, found) => {
    expect(containing(terms.map(term))).toEqual(found)
  })
})
