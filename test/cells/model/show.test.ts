// What is shown of a model: its equation, its effects in the terms of the link, and how rows, errors and certificates are put in words.

import { describe, expect, it } from "vitest"
import type { Block } from "../../../cells/block.ts"
import { model } from "../../../cells/model/index.ts"
import { modelWords } from "../../../cells/model/words.ts"
import { read } from "../../../runtime/statement.ts"
import type { Value } from "../../../runtime/value.ts"
import { category, count, type Found, finding, fitOf, number, type Table, truth, wholeOf } from "./laboratory.ts"

const beds: Table = {
  frost: { ...number(1, 2, 3, 4, 5, 6, 7, 8), called: "hours of frost", unit: "h" },
  share: number(0.01, 0.02, 0.03, 0.05, 0.06, 0.07, 0.09, 0.1),
  weight: number(1200, 3400, 2100, 9900, 5600, 8700, 4300, 6500),
  buds: count(2, 3, 3, 6, 5, 9, 8, 13),
  pots: count(20, 20, 18, 20, 22, 20, 20, 20),
  hours: number(2, 2.5, 3, 2, 4, 3, 2, 5),
  lot: category(["a", "b", "c", "a", "b", "c", "a", "b"]),
  alive: truth(0, 0, 1, 0, 1, 0, 1, 1),
}

const blocks = (outcome: Found): readonly Block[] =>
  model.show(wholeOf(outcome), modelWords.parse(read(outcome.text)).said) as readonly Block[]
const sentences = (outcome: Found, tone: string): readonly string[] =>
  blocks(outcome).flatMap((block) => (block.type === "sentence" && block.tone === tone ? [block.text] : []))
const formula = (outcome: Found): string => blocks(outcome).flatMap((block) => (block.type === "formula" ? [block.text] : []))[0] ?? ""

describe("equations", () => {
  it.each([
    ["response buds\nfamily normal\nlink identity\npredictor frost", "μ = β₀ + β₁·frost"],
    ["response buds\nfamily poisson\nlink log\npredictor frost", "ln μ = β₀ + β₁·frost"],
    ["response buds\nfamily poisson\nlink square_root\npredictor frost - intercept", "√μ = β₁·frost"],
    ["response buds\nfamily gamma\nlink reciprocal\npredictor lot", "1/μ = β₀ + β₁·[lot is b] + β₂·[lot is c]"],
    ["response buds\nfamily gamma\nlink power(-0.5)\npredictor intercept", "μ^−0.5 = β₀"],
    ["response buds\nfamily poisson\nlink power(0)\npredictor alive", "ln μ = β₀ + β₁·[alive is true]"],
    ["response buds out of pots\nfamily binomial\nlink logit\npredictor frost", "ln(μ/(1 − μ)) = β₀ + β₁·frost"],
    ["response buds out of pots\nfamily binomial\nlink probit\npredictor frost", "Φ⁻¹(μ) = β₀ + β₁·frost"],
    ["response buds out of pots\nfamily binomial\nlink cauchit\npredictor frost", "tan(π(μ − ½)) = β₀ + β₁·frost"],
    [
      "response buds out of pots\nfamily binomial\nlink cloglog\npredictor frost\nexposure hours",
      "ln(−ln(1 − μ)) = β₀ + β₁·frost + ln hours",
    ],
    ["response buds out of pots\nfamily binomial\nlink loglog\npredictor frost\noffset hours/2", "−ln(−ln μ) = β₀ + β₁·frost + hours/2"],
    ["response buds\nfamily poisson\nlink identity\npredictor frost\nexposure hours", "(μ/hours) = β₀ + β₁·frost"],
    [
      "response buds\nfamily poisson\nlink log\npredictor lot.frost",
      "ln μ = β₀ + β₁·[lot is a]·frost + β₂·[lot is b]·frost + β₃·[lot is c]·frost",
    ],
  ])("%j", async (clauses, text) => {
    expect(formula(await finding(clauses, beds))).toBe(text)
  })

  it("leave out what cannot be told apart, and shorten what is long", async () => {
    const table = { ...beds, twice: number(2, 4, 6, 8, 10, 12, 14, 16) }
    expect(formula(await finding("response buds\nfamily poisson\nlink log\npredictor frost + twice + hours", table))).toBe(
      "ln μ = β₀ + β₁·frost + β₃·hours",
    )
    const letters = category("a b c d e f g h i j a b c d e f g h i j".split(" "))
    const long = await finding("response y\nfamily normal\nlink identity\npredictor lot", {
      lot: letters,
      y: number(...Array.from({ length: 20 }, (_, i) => i * i)),
    })
    expect(formula(long)).toBe("μ = β₀ + β₁·[lot is b] + β₂·[lot is c] + β₃·[lot is d] + β₄·[lot is e] + β₅·[lot is f] + ⋯ + β₉·[lot is j]")
  })

  it("are the same as a tree", async () => {
    const [block] = blocks(await finding("response buds\nfamily poisson\nlink square_root\npredictor frost", beds)).filter(
      ({ type }) => type === "formula",
    )
    expect(block).toMatchObject({
      formula: {
        type: "row",
        of: [
          { type: "root", of: { type: "name", text: "μ" } },
          { type: "sign", text: "=" },
          {
            type: "row",
            of: [
              { type: "sub", base: { text: "β" }, with: { text: "0" } },
              { type: "sign", text: "+" },
              { type: "row", of: [{ type: "sub" }, { type: "sign", text: "·" }, { type: "word", text: "frost" }] },
            ],
          },
        ],
      },
    })
  })
})

describe("effects in words", () => {
  const effect = async (clauses: string): Promise<string> => sentences(await finding(clauses, beds), "lead").join(" ")

  it.each([
    [
      "response buds\nfamily poisson\nlink log\npredictor frost",
      /^Each 1 h more of hours of frost multiplies the mean by 1\.\d\d \(95\s% interval 1\.\d+ to 1\.\d+\)\.$/u,
    ],
    ["response buds out of pots\nfamily binomial\nlink logit\npredictor frost", /multiplies the odds by/],
    ["response buds out of pots\nfamily binomial\nlink cloglog\npredictor frost", /multiplies the cumulative hazard −ln\(1 − μ\) by/],
    ["response buds\nfamily poisson\nlink identity\npredictor frost", /^Each 1 h more of hours of frost adds 1\.\d+ to the mean \(/],
    ["response buds\nfamily poisson\nlink log\npredictor frost\nexposure hours", /multiplies the mean per unit of exposure by/],
    ["response buds\nfamily poisson\nlink log\npredictor share", /^Each 0\.1 more of share|^Each 0\.01 more of share/],
    ["response buds\nfamily poisson\nlink log\npredictor weight", /^Each 1000 more of weight multiplies the mean by/],
    [
      "response buds\nfamily poisson\nlink log\npredictor lot",
      /^lot b against a multiplies the mean by .*lot c against a multiplies the mean by /,
    ],
    ["response buds\nfamily gamma\nlink reciprocal\npredictor alive", /^alive true against false adds .* to one over the mean/],
  ])("%j", async (clauses, says) => {
    expect(await effect(clauses)).toMatch(says)
  })

  it("are the exponential of the coefficient where the link multiplies", async () => {
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor frost", beds)
    const beta = fitOf(outcome).fit.coefficients[1]?.beta ?? 0
    expect(sentences(outcome, "lead")[0]).toContain(`by ${Math.exp(beta).toPrecision(3)}`)
  })

  it("are not said of columns that enter in several ways", async () => {
    expect(await effect("response buds\nfamily poisson\nlink log\npredictor frost + power(frost, 2)")).toBe("")
    expect(await effect("response buds\nfamily poisson\nlink log\npredictor alive*hours")).toBe("")
    expect(await effect("response buds\nfamily poisson\nlink log\npredictor log(frost)")).toBe("")
  })
})

describe("what qualifies a finding", () => {
  it("says rows, certificate and errors quietly", async () => {
    const table = { ...beds, frost: number(1, null, 3, 4, 5, 6, 7, 8) }
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor frost\nstandard_errors sandwich by lot", table)
    expect(sentences(outcome, "quiet")[0]).toMatch(
      /^μ is the mean of buds\. 7 rows used; not used: 1 row where frost is missing\. The maximum of the likelihood, reached in \d+ steps; there is no other, since the log-likelihood is concave in η under this family and link\. Sandwich standard errors by 3 clusters\.$/,
    )
  })

  it.each([
    ["response buds out of pots", "μ is the expected share, buds out of pots."],
    ["response alive", "μ is the chance of alive: true, or 1, counts as success."],
    ["response alive is false", "μ is the chance that alive is false."],
  ])("says what μ is under %j", async (response, says) => {
    const outcome = await finding(`${response}\nfamily binomial\nlink logit\npredictor intercept`, beds)
    expect(sentences(outcome, "quiet")[0]?.startsWith(`${says} `)).toBe(true)
  })

  it("says what was maximised, and by what rows were weighted", async () => {
    const reduced = await finding("response buds out of pots\nfamily binomial\nlink logit\npredictor frost\nestimate bias_reduced", beds)
    expect(sentences(reduced, "quiet")[0]).toContain("The maximum of the likelihood penalised by ½ ln |X'WX|")
    const sampled = await finding("response buds\nfamily poisson\nlink log\npredictor frost\nsampling hours", beds)
    expect(sentences(sampled, "quiet")[0]).toContain("8 rows used, weighted by sampling weights of mean one.")
  })

  it("says where there may be another maximum", async () => {
    const outcome = await finding("response buds\nfamily normal\nlink log\npredictor frost", beds)
    expect(sentences(outcome, "quiet")[0]).toContain("with this family and link there may be others")
  })

  it("says the fit in numbers", async () => {
    const outcome = await finding("response buds out of pots\nfamily binomial\nlink logit\npredictor frost", beds)
    const { fit } = fitOf(outcome)
    const [says = ""] = sentences(outcome, "plain")
    expect(says).toContain(`Deviance ${fit.deviance?.toPrecision(4)} on 6 degrees of freedom`)
    expect(says).toContain(`AIC ${fit.aic?.toPrecision(5)}`)
    expect(says).toMatch(/by chance with p /)
  })

  it("has a row for each coefficient, those left out too", async () => {
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor frost + twice", {
      ...beds,
      twice: number(2, 4, 6, 8, 10, 12, 14, 16),
    })
    const [table] = blocks(outcome).flatMap((block) => (block.type === "table" ? [block] : []))
    expect(table?.rows.map(([head]) => head)).toEqual(["β₀ intercept", "β₁ frost", "β₂ twice"])
    expect(table?.rows[2]).toEqual(["β₂ twice", "not told apart", null, null, null, null])
  })
})

describe("the trail", () => {
  it("notes a fit with its predictor as a clause would say it", async () => {
    const tried = async (predictor: string) =>
      model.tried(wholeOf(await finding(`response buds\nfamily poisson\nlink log\npredictor ${predictor}`, beds)))[0]
    expect(await tried("lot*frost - intercept")).toMatchObject({
      family: "poisson",
      link: "log",
      predictor: "lot + frost + lot.frost - intercept",
      n: 8,
      df: 2,
    })
    expect(await tried("intercept")).toMatchObject({ predictor: "intercept" })
  })
})

it("writes infinities as words and what is not available as null", async () => {
  const found = wholeOf(await finding("response buds\nfamily poisson\nlink log\npredictor frost", beds)).parts.fit
  const [first, ...rest] = found.fit.coefficients
  const bent = {
    ...found,
    fit: {
      ...found.fit,
      deviance: Infinity,
      coefficients: [{ ...first, beta: null, toward: "infinity" }, ...rest],
    },
  }
  const ends = [{ low: -Infinity, high: Number.NaN }]
  const summary = model.summary({ parts: { fit: bent as unknown as typeof found }, intervals: { by: "wald", ends, parameters: [] } }) as {
    readonly [member: string]: Value
  }
  expect(summary["fit"]).toMatchObject({ deviance: "infinity" })
  expect((summary["coefficients"] as readonly Value[])[0]).toMatchObject({ beta: null, toward: "infinity", interval: ["-infinity", null] })
  expect(summary["mean_range"]).toMatchObject({ possible: [0, "infinity"] })
})
