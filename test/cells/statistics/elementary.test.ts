// Elementary functions against values at 80 digits, and at the places where a value is special.

import { describe, expect, it } from "vitest"
import {
  acos,
  asin,
  atan,
  cos,
  cosh,
  exp,
  expm1,
  log,
  log1p,
  log2,
  log10,
  pow,
  sin,
  sinh,
  tan,
  tanh,
} from "../../../cells/statistics/elementary.ts"
import reference from "../../reference/elementary.json" with { type: "json" }
import { unitsInLastPlace } from "../../reference/exact.ts"

const elementary = { acos, asin, atan, cos, cosh, exp, expm1, log, log1p, log2, log10, sin, sinh, tan, tanh }
type Unary = keyof typeof elementary
const tables = reference.tables as unknown as Record<Unary | "pow", readonly (readonly string[])[]>
const unary = Object.keys(tables).filter((name) => name !== "pow") as Unary[]

/** The stated bounds, in units in the last place. */
const bound = (name: string): number => ({ sinh: 3, cosh: 2, tanh: 2 })[name] ?? 1

describe("elementary functions", () => {
  it.each(unary)("%s is within its stated bound of the exact value", (name) => {
    const far = (tables[name] ?? []).map(([x, exact]) => ({ x, units: unitsInLastPlace(elementary[name](Number(x)), exact as string) }))
    expect(far.length).toBeGreaterThan(50)
    expect(far.filter(({ units }) => !(units < bound(name)))).toEqual([])
  })

  it("pow is within its stated bound of the exact value", () => {
    const far = tables.pow.map(([x, y, exact]) => ({
      x,
      y,
      units: unitsInLastPlace(pow(Number(x), Number(y)), exact as string),
    }))
    expect(far.filter(({ units }) => !(units < 1))).toEqual([])
  })

  it.each(unary)("%s gives NaN for NaN", (name) => {
    expect(elementary[name](Number.NaN)).toBeNaN()
  })

  it.each([
    ["exp", Infinity, Infinity],
    ["exp", -Infinity, 0],
    ["exp", 709.79, Infinity],
    ["exp", -745.2, 0],
    ["exp", 0, 1],
    ["expm1", Infinity, Infinity],
    ["expm1", -Infinity, -1],
    ["expm1", -0, -0],
    ["expm1", 710, Infinity],
    ["log", 0, -Infinity],
    ["log", -0, -Infinity],
    ["log", -1, Number.NaN],
    ["log", Infinity, Infinity],
    ["log", 1, 0],
    ["log1p", -1, -Infinity],
    ["log1p", -1.5, Number.NaN],
    ["log1p", -0, -0],
    ["log1p", Infinity, Infinity],
    ["log10", 0, -Infinity],
    ["log10", -1, Number.NaN],
    ["log2", Infinity, Infinity],
    ["log2", 5e-324, -1074],
    ["sin", Infinity, Number.NaN],
    ["sin", -0, -0],
    ["cos", -Infinity, Number.NaN],
    ["cos", 0, 1],
    ["tan", Infinity, Number.NaN],
    ["tan", -0, -0],
    ["asin", 1.0000000000000002, Number.NaN],
    ["asin", -0, -0],
    ["acos", 1, 0],
    ["acos", -2, Number.NaN],
    ["atan", Infinity, Math.PI / 2],
    ["atan", -Infinity, -Math.PI / 2],
    ["atan", -0, -0],
    ["sinh", -Infinity, -Infinity],
    ["sinh", -0, -0],
    ["sinh", 711, Infinity],
    ["cosh", -Infinity, Infinity],
    ["cosh", 0, 1],
    ["tanh", Infinity, 1],
    ["tanh", -Infinity, -1],
    ["tanh", -0, -0],
  ] as const)("%s of %s is %s", (name, x, value) => {
    expect(elementary[name](x)).toBe(value)
  })

  it.each([
    [0, 0, 1],
    [Number.NaN, 0, 1],
    [Number.NaN, 1, Number.NaN],
    [1, Number.NaN, Number.NaN],
    [0, -1, Infinity],
    [-0, -3, -Infinity],
    [-0, 3, -0],
    [-0, 2.5, 0],
    [-8, 1 / 3, Number.NaN],
    [-2, 3, -8],
    [-2, 4, 16],
    [-1, 1e300, 1],
    [Infinity, -2, 0],
    [-Infinity, 3, -Infinity],
    [-Infinity, -3, -0],
    [0.5, Infinity, 0],
    [2, -Infinity, 0],
    [2, 1024, Infinity],
    [2, -1075, 0],
    [2, 1e30, Infinity],
    [0.999999999, 1e30, 0],
    [10, 309, Infinity],
    [10, 2, 100],
  ])("pow of %s and %s is %s", (x, y, value) => {
    expect(pow(x, y)).toBe(value)
  })

  it("logarithms to base ten are exact at every power of ten that is a double", () => {
    for (let k = 0; k <= 22; k++) expect(log10(Number(`1e${k}`))).toBe(k)
  })

  it("sines and tangents are odd, cosines even, for angles of every size", () => {
    for (const x of [1e-9, 0.3, 0.8, 2, 3.9, 5.5, 7e5, 2e6, 1e22, 1e300]) {
      expect(sin(-x)).toBe(-sin(x))
      expect(tan(-x)).toBe(-tan(x))
      expect(cos(-x)).toBe(cos(x))
    }
  })
})
