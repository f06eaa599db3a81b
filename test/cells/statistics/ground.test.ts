import { describe, expect, it } from "vitest"
import { groundOf } from "../../../cells/statistics/ground.ts"
import { Pace } from "../../../cells/statistics/scoring.ts"
import { factor, fitted, generator, numbers, problem } from "./problems.ts"

const pace = (): Pace => new Pace(async () => {})

const next = generator(3)
const rows = 60
const x = numbers(Array.from({ length: rows }, next))
const lot = factor(Array.from({ length: rows }, () => "abc"[Math.floor(next() * 3)] as string))
const y = Array.from({ length: rows }, () => (next() < 0.4 ? 1 : 0))
const of = problem({ family: "binomial", link: "logit", terms: ["x", "lot"], variables: { x, lot }, y })

describe("the ground of a fit", () => {
  it("is the same for another link over the same columns", async () => {
    const first = await groundOf(of, pace())
    expect(await groundOf({ ...of, variables: { lot, x } }, pace())).toBe(first)
  })

  it("is made anew for another column, coding, term or weight", async () => {
    const first = await groundOf(of, pace())
    const others = [
      { ...of, variables: { x, lot: { ...lot, coding: "sum_to_zero" } as typeof lot } },
      { ...of, variables: { x: numbers(Array.from({ length: rows }, next)), lot } },
      { ...of, terms: of.terms.slice(0, 1) },
      { ...of, intercept: false },
      { ...of, repeat: new Float64Array(rows).fill(1) },
      { ...of, rows: rows - 1 },
    ]
    for (const other of others) {
      expect(await groundOf(other, pace())).not.toBe(first)
      await groundOf(of, pace())
    }
  })

  it("changes no bit of a fit that finds it made", async () => {
    const copied = numbers(x.type === "number" ? x.values : [])
    const cold = await fitted({ ...of, variables: { x: copied, lot } })
    await fitted(of)
    const warm = await fitted({ ...of, link: { name: "cloglog", parameters: [] } })
    expect(warm).toEqual(await fitted({ ...of, variables: { x: copied, lot }, link: { name: "cloglog", parameters: [] } }))
    expect(await fitted(of)).toEqual(cold)
  })
})
