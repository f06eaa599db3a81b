// Models with parameters to estimate, limits of the mean and rows of no dose: what is found, what is shown, what is at fault.

import { describe, expect, it } from "vitest"
import type { Block } from "../../../cells/block.ts"
import { model } from "../../../cells/model/index.ts"
import type { Json } from "../../../runtime/value.ts"
import { codes, count, finding, fitOf, number, told } from "./laboratory.ts"

/** Deaths by dose with some at no dose, of which one in ten dies. */
const doses = {
  dose: number(0, 0, 1, 2, 4, 8, 16, 32),
  logdose: number(null, null, 0, 1, 2, 3, 4, 5),
  n: count(50, 50, 40, 40, 40, 40, 40, 40),
  dead: count(6, 4, 5, 7, 15, 27, 36, 39),
  amount: number(3, 0, 1.2, 2.5, 0, 4.1, 7.7, 9.4),
}
const deaths = "response dead out of n\nfamily binomial\nlink probit\npredictor logdose"

const summaryOf = (outcome: Awaited<ReturnType<typeof finding>>): { readonly [member: string]: Json } => {
  if (outcome.found === null) throw new Error(outcome.notices.map(({ text }) => text).join(" "))
  return model.summary(outcome.found) as { readonly [member: string]: Json }
}

describe("rows of no dose", () => {
  it("need no predictor, have the lower limit for a mean, and count as rows", async () => {
    const outcome = await finding(`${deaths}\nlimits estimate to 1\ncontrol dose = 0`, doses)
    expect(codes(outcome)).toEqual([])
    const { fit, problem } = fitOf(outcome)
    expect([problem.rows, fit.rows, fit.n, fit.df]).toEqual([6, 8, 8, 5])
    expect(problem.control?.y.length).toBe(2)
    const low = fit.parameters[0]?.value as number
    expect(low).toBeGreaterThan(0.05)
    expect(low).toBeLessThan(0.15)
    expect(fit.meanRange.possible).toEqual([low, 1])
    expect(summaryOf(outcome)["parameters"]).toMatchObject([{ of: "lower limit", value: low }])
  })

  it("tell more of a lower limit than the other rows alone", async () => {
    const without = fitOf(await finding(`${deaths}\nlimits estimate to 1`, doses))
    const found = fitOf(await finding(`${deaths}\nlimits estimate to 1\ncontrol dose = 0`, doses))
    expect(found.fit.parameters[0]?.standardError).toBeLessThan(without.fit.parameters[0]?.standardError as number)
  })

  it.each([
    ["control dose = 0", ["control-without-limits"]],
    ["limits 0 to 1\ncontrol dose = 0", ["control-above-limit"]],
    ["limits 0.1 to 1\ncontrol dose", ["control-wants-truth"]],
    ["limits 0.1 to 1\ncontrol doze = 0", ["no-such-column"]],
    ["limits 0.1 to 1\ncontrol dose > 99", ["no-control-rows"]],
    ["limits 0.3 to 0.2", ["limits-outside"]],
    ["limits -0.1 to 0.2", ["limits-outside"]],
    ["limits 0 to infinity", ["limits-outside"]],
  ])("%s", async (clauses, expected) => {
    expect(codes(await finding(`${deaths}\n${clauses}`, doses))).toEqual(expected)
  })

  it("limits are for shares", async () => {
    expect(codes(await finding("response amount\nfamily normal\nlink identity\npredictor dose\nlimits 0 to 0.5", doses))).toEqual([
      "limits-not-of-family",
    ])
  })
})

describe("parameters to estimate", () => {
  it("k shows 1/k beside it, and where counts vary no more than Poisson's it is said and the fit is theirs", async () => {
    const table = { x: number(0, 1, 2, 3, 4, 5), few: count(3, 4, 6, 8, 12, 17), wild: count(0, 9, 1, 31, 2, 60) }
    const wild = await finding("response wild\nfamily negative_binomial\nlink log\npredictor x\ninterval wald", table)
    expect(codes(wild)).toEqual([])
    if (wild.found === null) throw new Error("a fit")
    const rows = (model.show(wild.found, null as never) as readonly Block[]).flatMap((block) =>
      block.type === "table" ? block.rows.map(([head]) => head) : [],
    )
    expect(rows).toContain("k of negative_binomial")
    expect(rows).toContain("1/k")
    const few = await finding("response few\nfamily negative_binomial\nlink log\npredictor x", table)
    expect(codes(few)).toEqual(["parameter-at-end"])
    expect(fitOf(few).fit.certificate.class).toBe("boundary")
    expect(summaryOf(few)["parameters"]).toMatchObject([{ of: "k", value: null }])
    const poisson = fitOf(await finding("response few\nfamily poisson\nlink log\npredictor x", table))
    expect(fitOf(few).fit.logLikelihood).toBeCloseTo(poisson.fit.logLikelihood as number, 10)
  })

  it("a link's parameter stands in the link, costs a degree of freedom and has an interval", async () => {
    const outcome = await finding(deaths.replace("probit", "aranda_ordaz(estimate)"), doses)
    expect(codes(outcome)).toEqual([])
    const found = fitOf(outcome)
    expect(found.link).toMatch(/^aranda_ordaz\([\d.-]+\)$/)
    expect(found.fit.df).toBe(3)
    expect(outcome.found?.intervals.parameters?.length).toBe(1)
    expect(found.problem.link.parameters[0]).toBe(found.fit.parameters[0]?.value)
  })

  it.each([
    ["family poisson", "response amount", ["count-not-whole"]],
    ["family negative_binomial(2)", "response amount", ["count-not-whole"]],
    ["family inverse_gaussian", "response amount", ["not-positive"]],
    ["family tweedie(1.5)", "response amount", []],
  ])("%s has responses of its own", async (family, response, expected) => {
    expect(codes(await finding(`${response}\n${family}\nlink log\npredictor dose`, doses))).toEqual(expected)
  })

  it("a Tweedie response below 0 is a fault that names the row", async () => {
    const outcome = await finding("response y\nfamily tweedie(1.5)\nlink log\npredictor x", { x: number(1, 2, 3), y: number(0, -2, 1) })
    expect(told(outcome)).toEqual([
      'fault below-zero at "y": The family tweedie is for amounts of 0 and above, but y is −2 in row 11 of terrace.csv.',
    ])
  })
})
