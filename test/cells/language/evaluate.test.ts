import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { type Evaluated, evaluated } from "../../../cells/language/evaluate.ts"
import type { Scalar, Vector } from "../../../cells/language/expression.ts"
import { anyExpression, expressionOf } from "./sample.ts"

const NONE = Number.NaN
const columns: Readonly<Record<string, Vector | Scalar>> = {
  x: { type: "number", values: Float64Array.of(1, -2, NONE, 4) },
  y: { type: "number", values: Float64Array.of(0, 2, 3, NONE) },
  wet: { type: "truth", values: Float64Array.of(1, 0, NONE, 1) },
  lot: { type: "category", codes: Int32Array.of(0, 1, -1, 1), levels: ["a", "b"] },
  plot: { type: "category", codes: Int32Array.of(1, 1, 0, -1), levels: ["b", "a"] },
  day: { type: "date", values: Float64Array.of(0, 59, NONE, -1) },
  k: { type: "number", value: 3 },
  pick: { type: "text", text: "b" },
  été: { type: "number", value: 1 },
}
const lookup = (name: string): Vector | Scalar | null => columns[name] ?? null
const run = (text: string): Evaluated => evaluated(expressionOf(text), 4, lookup, Object.keys(columns))

/** A result as one text: a number a row, `_` for a missing value; a single value stands alone. */
const result = (text: string): string => {
  const found = run(text)
  if (!found.ok) return found.troubles.map((trouble) => trouble.code).join(" ")
  const { vector } = found
  const shown = (value: number): string => (Number.isNaN(value) ? "_" : `${Number(value.toPrecision(12))}`)
  const lost = found.lost > 0 ? ` lost ${found.lost}` : ""
  if (vector.type === "missing") return "_"
  if (vector.type === "text") return `"${vector.text}"`
  if (vector.type === "category") return Array.from(vector.codes, (code) => (code < 0 ? "_" : vector.levels[code])).join(", ") + lost
  const type = vector.type === "number" ? "" : `${vector.type} `
  return `${type}${"values" in vector ? Array.from(vector.values, shown).join(" ") : shown(vector.value)}${lost}`
}

describe("an expression over columns", () => {
  it.each([
    ["x + 1", "2 -1 _ 5"],
    ["x*y", "0 -4 _ _"],
    ["-x", "-1 2 _ -4"],
    ["k^2 - 1", "8"],
    ["2^-1*3", "1.5"],
    ["x/y", "_ -1 _ _ lost 1"],
    ["log(x)", "0 _ _ 1.38629436112 lost 1"],
    ["1/(1/y)", "_ 2 3 _ lost 1"],
    ["exp(1000)", "_ lost 4"],
    ["x^0", "1 1 _ 1"],
    ["(0 - 8)^(1/3)", "_ lost 4"],
    ["if(x > 0, log(x), 0)", "0 0 _ 1.38629436112"],
    ["if(wet, log(x), 0)", "0 0 _ 1.38629436112"],
    ["if(not wet, log(x), 0)", "0 _ _ 0 lost 1"],
    ["if(x = -2, missing, x)", "1 _ _ 4"],
    ["if(k > 2, x, y)", "1 -2 _ 4"],
    ['if(x > 0, "up", "down")', "up, down, _, up"],
    ['if(x > 0, lot, "down")', "a, down, _, b"],
    ['if(k > 2, "up", "down")', '"up"'],
    ["if(wet, lot, plot)", "a, a, _, b"],
    ["if(wet, missing, lot)", "_, b, _, _"],
    ["x > 0", "truth 1 0 _ 1"],
    ["x >= 1 and y < 1", "truth 1 0 0 _"],
    ["x > 0 or y > 0", "truth 1 1 1 1"],
    ["x < 0 and log(y) > 0", "truth 0 1 _ 0"],
    ["not wet", "truth 0 1 _ 0"],
    ["wet = true", "truth 1 0 _ 1"],
    ['lot = "b"', "truth 0 1 _ 1"],
    ['"b" != lot', "truth 1 0 _ 0"],
    ["lot = plot", "truth 1 0 _ _"],
    ["lot = pick", "truth 0 1 _ 1"],
    ['pick = "b"', "truth 1"],
    ['lot in ("a", "b")', "truth 1 1 _ 1"],
    ["x in (1, 4)", "truth 1 0 _ 1"],
    ["x in (y + 1, k)", "truth 1 0 _ _"],
    ['day in ("1970-01-01", "1970-03-01")', "truth 1 1 _ 0"],
    ['day < "1970-01-01"', "truth 0 0 _ 1"],
    ['"1970-03-01" <= day', "truth 0 1 _ 0"],
    ["year(day)", "1970 1970 _ 1969"],
    ["month(day)", "1 3 _ 12"],
    ["day - day", "0 0 _ 0"],
    ["day + 1", "date 1 60 _ 0"],
    ["month(day - 1)", "12 2 _ 12"],
    ['month("2024-02-29")', "2"],
    ["max(day, day + 2)", "date 2 61 _ 1"],
    ["known(x)", "truth 1 1 0 1"],
    ["known(lot)", "truth 1 1 0 1"],
    ["known(log(x))", "truth 1 0 0 1"],
    ["min(x, y, 0)", "0 -2 _ _"],
    ["max(x, k)", "3 3 _ 4"],
    ["mod(x, k)", "1 1 _ 1"],
    ["mod(x, 0)", "_ _ _ _ lost 3"],
    ["round(x/4)", "0 -1 _ 1"],
    ["round(0.49999999999999994)", "0"],
    ["floor(x/4)", "0 -1 _ 1"],
    ["ceil(x/4)", "1 0 _ 1"],
    ["sign(x)", "1 -1 _ 1"],
    ["abs(x)", "1 2 _ 4"],
    ["square_root(x)", "1 _ _ 2 lost 1"],
    ["band(x, 0, 4)", "0 to 4, below 0, _, 4 and above"],
    ["band(x, k)", "below 3, below 3, _, 3 and above"],
    ["mean(x)", "1"],
    ["x - mean(x)", "0 -3 _ 3"],
    ["median(x)", "1"],
    ["sd(x)", "3"],
    ["sum(x)", "3"],
    ["count(x)", "3"],
    ["count(lot)", "3"],
    ["smallest(x)", "-2"],
    ["largest(x)", "4"],
    ["largest(day)", "date 59"],
    ["quantile(x, 25%)", "-0.5"],
    ["sum(x > 0)", "2"],
    ["mean(wet)", "0.666666666667"],
    ["mean(log(x))", "0.69314718056 lost 1"],
    ["count(log(x))", "2"],
    ["mean(if(x > 9, x, missing))", "_"],
    ["normal_cdf(0)", "0.5"],
    ["normal_quantile(0.975)", "1.95996398454"],
    ["normal_quantile(1)", "_ lost 4"],
    ["logit(0.5)", "0"],
    ["inverse_logit(-800)", "0"],
    ["inverse_logit(logit(0.2))", "0.2"],
    ["x + missing", "_ _ _ _"],
    ["missing", "_"],
    ["pick", '"b"'],
  ])("%s is %s", (text, expected) => {
    expect(result(text)).toBe(expected)
  })

  it.each([
    ["z + 1", "expression/unknown-name"],
    ["lot + 1", "expression/type"],
    ["wet + 1", "expression/type"],
    ["log(day)", "expression/type"],
    ['"a" + 1', "expression/type"],
    ["not x", "expression/type"],
    ["x and wet", "expression/type"],
    ["if(x, 1, 2)", "expression/type"],
    ['if(wet, 1, "a")', "expression/type"],
    ['x = "a"', "expression/type"],
    ["lot = 1", "expression/type"],
    ["lot < pick", "expression/type"],
    ["lot < plot", "expression/type"],
    ["wet < true", "expression/type"],
    ["day*2", "expression/type"],
    ["day + day", "expression/type"],
    ["1 - day", "expression/type"],
    ["day > 3", "expression/type"],
    ['day > "yesterday"', "expression/date"],
    ['day > "2023-02-29"', "expression/date"],
    ["max(day, 1)", "expression/type"],
    ["year(x)", "expression/type"],
    ["band(x, 2, 1)", "expression/cut-points"],
    ["band(x, y)", "expression/constant"],
    ["quantile(x, 2)", "expression/share"],
    ["quantile(x, y)", "expression/constant"],
    ["mean(lot)", "expression/type"],
    ["lot in (1, 2)", "expression/type"],
  ])("%s has a trouble of code %s", (text, code) => {
    expect(result(text)).toBe(code)
  })

  it("names the part at fault, in words, with the nearest name", () => {
    const found = run("x + 2*plott")
    expect(found).toEqual({
      ok: false,
      troubles: [
        {
          at: { clause: -1, from: 8, to: 9 },
          code: "expression/unknown-name",
          text: "There is no column and no cell called plott here.",
          hint: "The nearest name is plot.",
        },
      ],
    })
    expect(run("1 + log(lot)")).toMatchObject({
      troubles: [
        {
          text: "log takes a number, but lot is a category.",
          hint: 'A category is compared with a text, as in lot = "b", and the comparison turned into a number by if.',
          at: { from: 8, to: 9 },
        },
      ],
    })
  })

  it("doubts a comparison with a level that is not there, and goes on", () => {
    const found = run('plot = "B" or lot in ("a", "c")')
    expect(found).toMatchObject({
      ok: true,
      doubts: [{ code: "expression/unknown-level", hint: 'The nearest is "b".' }, { code: "expression/unknown-level" }],
    })
  })

  it("never throws, and never gives an infinity, whatever the expression", () => {
    fc.assert(
      fc.property(anyExpression, (expression) => {
        const found = evaluated(expression, 4, lookup)
        if (!found.ok) expect(found.troubles.length).toBeGreaterThan(0)
        else if ("values" in found.vector) {
          expect(found.vector.values.length).toBe(4)
          for (const value of found.vector.values) expect(Math.abs(value)).not.toBe(Number.POSITIVE_INFINITY)
        }
      }),
      { numRuns: 2_000 },
    )
  })

  it("leaves its columns as they were", () => {
    const before = JSON.stringify(columns, (_, value) => (ArrayBuffer.isView(value) ? Array.from(value as Float64Array) : value))
    for (const text of ["x + y", "median(x)", "if(wet, x, y)", "quantile(y, 0.5)"]) run(text)
    expect(JSON.stringify(columns, (_, value) => (ArrayBuffer.isView(value) ? Array.from(value as Float64Array) : value))).toBe(before)
  })
})

describe("dates", () => {
  it("count every day of four centuries once, and give year and month back", () => {
    // The calendar of the platform is the outside value here.
    for (let day = -80_000; day < 80_000; day += 13) {
      const iso = new Date(day * 86_400_000).toISOString().slice(0, 10)
      if (iso.length !== 10 || !/^\d{4}-/.test(iso)) continue
      const found = evaluated(expressionOf(`date_ = "${iso}"`), 1, () => ({ type: "date", value: day }))
      expect(found).toMatchObject({ ok: true, vector: { value: 1 } })
      const month = evaluated(expressionOf("month(d)*10000 + year(d)"), 1, () => ({ type: "date", value: day }))
      expect(month).toMatchObject({ vector: { value: Number(iso.slice(5, 7)) * 10_000 + Number(iso.slice(0, 4)) } })
    }
  })
})
