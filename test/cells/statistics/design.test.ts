import { describe, expect, it } from "vitest"
import {
  denseColumns,
  designAtRows,
  designOf,
  presentRows,
  recipeOf,
  type WrittenColumn,
  writtenColumns,
} from "../../../cells/statistics/design.ts"
import type { Variable } from "../../../cells/statistics/problem.ts"
import { factor, numbers, term } from "./problems.ts"

const lots = ["a", "b", "c", "a", "b", "c", "b"]
const variables: Record<string, Variable> = {
  lot: factor(lots),
  site: factor(["p", "q", "q", "q", "p", "p", "q"], "sum_to_zero"),
  night: numbers([1, 2, 3, 5, 8, 13, 21]),
  year: numbers([2001, 2001, 2003, 2002, 2003, 2001, 2002]),
}

const made = (terms: readonly string[], intercept = true) => {
  const recipe = recipeOf(terms.map(term), intercept, variables, 7, null)
  return { recipe, columns: denseColumns(designOf(recipe, variables, 7)).map((column) => [...column]) }
}

describe("columns and their names", () => {
  it.each<[string, string[], boolean, string[]]>([
    ["a number", ["night"], true, ["intercept", "night"]],
    ["a factor by contrasts", ["lot"], true, ["intercept", "lot is b", "lot is c"]],
    ["a factor without the constant", ["lot"], false, ["lot is a", "lot is b", "lot is c"]],
    [
      "slopes by contrasts where the number is there",
      ["lot", "night", "lot.night"],
      true,
      ["intercept", "lot is b", "lot is c", "night", "lot is b . night", "lot is c . night"],
    ],
    [
      "a slope a level where it is not",
      ["lot", "lot.night"],
      true,
      ["intercept", "lot is b", "lot is c", "lot is a . night", "lot is b . night", "lot is c . night"],
    ],
    [
      "two factors",
      ["lot", "site", "lot.site"],
      true,
      ["intercept", "lot is b", "lot is c", "site is q", "lot is b . site is q", "lot is c . site is q"],
    ],
    [
      "a factor within another",
      ["lot", "lot.site"],
      true,
      ["intercept", "lot is b", "lot is c", "lot is a . site is q", "lot is b . site is q", "lot is c . site is q"],
    ],
    [
      "cells without margins",
      ["lot.site"],
      false,
      [
        "lot is a . site is p",
        "lot is a . site is q",
        "lot is b . site is p",
        "lot is b . site is q",
        "lot is c . site is p",
        "lot is c . site is q",
      ],
    ],
    ["calls", ["log(night)", "square_root(night)", "power(night, 2)"], false, ["log(night)", "square_root(night)", "power(night, 2)"]],
    [
      "polynomials and splines",
      ["polynomial(night, 2)", "natural_spline(night, 1)"],
      false,
      ["polynomial(night) 1", "polynomial(night) 2", "natural_spline(night) 1", "natural_spline(night) 2"],
    ],
    ["a number as a category", ["category(year)"], true, ["intercept", "category(year) is 2002", "category(year) is 2003"]],
  ])("%s", (_, terms, intercept, names) => {
    expect(made(terms, intercept).recipe.columns).toEqual(names)
  })

  it("crosses a factor with a number by cells", () => {
    const { columns } = made(["lot", "night", "lot.night"])
    expect(columns[4]).toEqual([0, 2, 0, 0, 8, 0, 21])
    expect(columns[5]).toEqual([0, 0, 3, 0, 0, 13, 0])
  })

  it("gives the first level −1 in every column of sum_to_zero", () => {
    const { columns } = made(["site", "lot.site", "lot"])
    expect(columns[1]).toEqual([-1, 1, 1, 1, -1, -1, 1])
    expect(columns[2]).toEqual([0, 1, 0, 0, -1, 0, 1])
  })

  it("makes orthonormal polynomials with a positive leading coefficient", () => {
    const { columns } = made(["polynomial(night, 3)"])
    const inner = (a: number, b: number): number =>
      (columns[a] as number[]).reduce((sum, x, i) => sum + x * ((columns[b] as number[])[i] as number), 0)
    for (let j = 1; j <= 3; j++) {
      expect(inner(j, j)).toBeCloseTo(1, 14)
      for (let k = 0; k < j; k++) expect(inner(j, k)).toBeCloseTo(0, 14)
      expect((columns[j] as number[])[6]).toBeGreaterThan(0)
    }
  })

  it("counts repeats in polynomials as rows that stand again", () => {
    const x = [1, 2, 4, 7]
    const times = [2, 1, 3, 1]
    const long = x.flatMap((value, i) => new Array<number>(times[i] as number).fill(value))
    const terms = [term("polynomial(x, 2)"), term("natural_spline(x, 2)")]
    const counted = recipeOf(terms, true, { x: numbers(x) }, 4, Float64Array.from(times))
    const written = recipeOf(terms, true, { x: numbers(long) }, long.length, null)
    const at = { x: numbers([0.5, 3, 9]) }
    const one = denseColumns(designOf(counted, at, 3))
    const other = denseColumns(designOf(written, at, 3))
    one.forEach((column, j) => {
      column.forEach((value, i) => {
        expect(value).toBeCloseTo((other[j] as Float64Array)[i] as number, 12)
      })
    })
  })

  it("puts spline knots at the quantiles and goes on straight beyond the ends", () => {
    const { recipe } = made(["natural_spline(night, 2)"])
    const piece = recipe.terms[0]?.pieces[0]
    expect(piece?.type === "number" && [...piece.learned]).toEqual([1, 3, 8, 21])
    const far = denseColumns(designOf(recipe, { night: numbers([30, 40, 50]) }, 3))
    for (const [a, b, c] of far as unknown as number[][])
      expect((c as number) - (b as number)).toBeCloseTo((b as number) - (a as number), 8)
  })

  it("makes periodic columns that return", () => {
    const recipe = recipeOf([term("periodic(day, 365)")], true, { day: numbers([0]) }, 1, null)
    const [, sine, cosine] = denseColumns(designOf(recipe, { day: numbers([10, 10 + 365 * 1000]) }, 2))
    expect(sine?.[0]).toBeCloseTo(Math.sin((2 * Math.PI * 10) / 365), 15)
    expect(cosine?.[1]).toBeCloseTo(cosine?.[0] as number, 12)
  })

  it("drops levels that no row has, and knows levels by name elsewhere", () => {
    const used = factor(["b", "c", "b"], "corner", ["a", "b", "c", "d"])
    const recipe = recipeOf([term("lot")], true, { lot: used }, 3, null)
    expect(recipe.columns).toEqual(["intercept", "lot is c"])
    const columns = denseColumns(designOf(recipe, { lot: factor(["c", "z"], "corner", ["z", "c"]) }, 2))
    expect(columns[1]?.[0]).toBe(1)
    expect(columns[1]?.[1]).toBeNaN()
  })

  it("says which rows have every piece", () => {
    const mixed = {
      x: numbers([1, 0, -1, Number.NaN, 4]),
      lot: { ...factor(["a", "b", "a", "b", "a"]), codes: Int32Array.of(0, 1, 0, 1, -1) } as Variable,
    }
    expect([...presentRows([term("log(x)")], mixed, 5)]).toEqual([1, 0, 0, 0, 1])
    expect([...presentRows([term("x"), term("lot")], mixed, 5)]).toEqual([1, 1, 1, 0, 0])
  })
})

describe("columns with 32 digits", () => {
  // In units of 2^−150, where powers and products of these x are whole.
  const x = [1 + 2 ** -30, 3 - 2 ** -25, -(2 ** 0.5), 7]
  const whole = (value: number): bigint => BigInt(value * 2 ** 52) << 98n
  const times = (a: bigint, b: bigint): bigint => (a * b) >> 150n
  const sum = (high: number, low: number): bigint => BigInt(high * 2 ** 80) * (1n << 70n) + BigInt(Math.round(low * 2 ** 120)) * (1n << 30n)
  const at = { x: numbers(x), lot: factor(["a", "b", "b", "a"]) }
  const design = designOf(recipeOf(["x", "power(x, 3)", "x.power(x, 3)", "lot", "lot.power(x, 3)"].map(term), true, at, 4, null), at, 4)
  const column = (of: string, rows = design) => writtenColumns(rows)[design.recipe.columns.indexOf(of)]

  it("hold powers, products of powers and powers within a level to 31 digits", () => {
    x.forEach((value, i) => {
      const cube = times(times(whole(value), whole(value)), whole(value))
      const share = (of: WrittenColumn | undefined, exact: bigint): number =>
        Number(sum(of?.high[i] ?? 0, of?.low?.[i] ?? 0) - exact) / Number(cube)
      expect(Math.abs(share(column("power(x, 3)"), cube))).toBeLessThan(1e-30)
      expect(Math.abs(share(column("x . power(x, 3)"), times(cube, whole(value))))).toBeLessThan(1e-30)
      expect(Math.abs(share(column("lot is b . power(x, 3)"), i === 1 || i === 2 ? cube : 0n))).toBeLessThan(1e-30)
    })
  })

  it("have no low part where the numbers are exact", () => {
    expect([column("x")?.low, column("intercept")?.low, column("lot is b")?.low]).toEqual([null, null, null])
  })

  it("are the same at some of the rows", () => {
    const some = designAtRows(design, Int32Array.of(2, 0))
    expect([...(column("power(x, 3)", some)?.low ?? [])]).toEqual([2, 0].map((i) => column("power(x, 3)")?.low?.[i]))
  })
})
