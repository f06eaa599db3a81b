// Both scales of made-up designs against fits computed at 45 digits by make_two_scales.py, which shares no code with the program: every
// family with every link that is there, with categories, interactions, offset, exposure, repeat and precision.

import { readFileSync } from "node:fs"
import { describe, expect, it } from "vitest"
import { settledBook } from "../book.ts"
import { relativeError } from "./exact.ts"

type Point = readonly [x: string, mean: string, working: string, weight: string]
interface Case {
  readonly name: string
  readonly csv: string
  readonly cells: readonly string[]
  readonly coefficients: readonly string[]
  readonly standard_errors: readonly string[]
  readonly covariance_10: string
  readonly deviance: string
  readonly log_likelihood: string
  readonly pearson: string
  readonly df: number
  readonly point: string
  readonly curve: readonly {
    readonly x: string
    readonly eta: string
    readonly mu: string
    readonly bounds: readonly [string, string] | null
  }[]
  readonly points: readonly Point[] | null
}

const { cases } = JSON.parse(readFileSync(new URL("two-scales.json", import.meta.url), "utf8")) as { readonly cases: readonly Case[] }

/** The error as a share of the exact value or of `scale`, whichever is larger. */
const error = (value: number, exact: string, scale = 0): number =>
  relativeError(value, exact) * (Math.abs(Number(exact)) / Math.max(Math.abs(Number(exact)), scale, Number.MIN_VALUE))

interface Curve {
  readonly x: readonly number[]
  readonly mu: readonly number[]
  readonly mu_lower: readonly number[]
  readonly mu_upper: readonly number[]
  readonly eta: readonly number[]
}
interface Points {
  readonly x: readonly number[]
  readonly mean: readonly number[]
  readonly working: readonly number[]
  readonly weight: readonly number[]
}
interface Model {
  readonly coefficients: readonly { readonly beta: number; readonly standard_error: number; readonly interval: readonly [number, number] }[]
  readonly covariance: readonly (readonly number[])[]
  readonly fit: { readonly deviance: number; readonly df: number; readonly log_likelihood: number }
  readonly pearson: number
}

describe("made-up designs at 45 digits", () => {
  it.each(cases)("$name agrees in estimates, curves, bands and working responses", async (made) => {
    const book = await settledBook(made.cells, { "made.csv": made.csv })
    const model = book.summary("k") as unknown as Model
    made.coefficients.forEach((beta, i) => {
      const [found, se] = [model.coefficients[i], made.standard_errors[i] as string]
      expect(error(found?.beta ?? Number.NaN, beta, Number(se)), `coefficient ${i}`).toBeLessThan(1e-10)
      expect(error(found?.standard_error ?? Number.NaN, se), `standard error ${i}`).toBeLessThan(1e-10)
      const low = Number(beta) - Number(made.point) * Number(se)
      expect(Math.abs((found?.interval[0] ?? Number.NaN) - low), `interval ${i}`).toBeLessThan(1e-9 * Math.max(Number(se), Math.abs(low)))
    })
    expect(error(model.covariance[1]?.[0] ?? Number.NaN, made.covariance_10)).toBeLessThan(1e-9)
    expect(error(model.fit.deviance, made.deviance)).toBeLessThan(1e-11)
    expect(error(model.fit.log_likelihood, made.log_likelihood)).toBeLessThan(1e-11)
    expect(error(model.pearson, made.pearson)).toBeLessThan(1e-10)
    expect(model.fit.df).toBe(made.df)

    const { curves, points } = book.summary("scales") as unknown as { readonly curves: readonly Curve[]; readonly points: Points }
    const curve = curves[0] as Curve
    for (const at of made.curve) {
      const i = curve.x.findIndex((x) => Math.abs(x - Number(at.x)) < 1e-12)
      expect(i, `x ${at.x} is on the grid`).toBeGreaterThanOrEqual(0)
      expect(error(curve.eta[i] as number, at.eta, 0.01)).toBeLessThan(1e-10)
      // A line that leaves the possible means has none there.
      if (at.mu === null) expect(curve.mu[i]).toBe(null)
      else expect(error(curve.mu[i] as number, at.mu)).toBeLessThan(1e-10)
      if (at.bounds === null) continue
      expect(error(curve.mu_lower[i] as number, at.bounds[0])).toBeLessThan(1e-9)
      expect(error(curve.mu_upper[i] as number, at.bounds[1])).toBeLessThan(1e-9)
    }
    if (made.points === null) return
    expect(points.x.length).toBe(made.points.length)
    // Rows with the same x stand in the order of the file in both.
    made.points.forEach(([x, mean, working, weight], i) => {
      expect(points.x[i]).toBe(Number(x))
      expect(error(points.mean[i] as number, mean, 0.01)).toBeLessThan(1e-12)
      expect(error(points.working[i] as number, working, 0.01)).toBeLessThan(1e-9)
      expect(error(points.weight[i] as number, weight)).toBeLessThan(1e-9)
    })
  })
})
