// Designs where a plain iteration fails or must refuse, against their limits at 25 digits: edge-cases.json names the source of each, and how
// the limits were had (by fitting what is left once the infinite part is taken out).

import { readFileSync } from "node:fs"
import { describe, expect, it } from "vitest"
import { settledBook } from "../book.ts"
import { relativeError } from "./exact.ts"

interface Case {
  readonly id: string
  readonly data: Readonly<Record<string, readonly string[]>>
  readonly expected: Readonly<Record<string, unknown>>
  readonly cases?: readonly {
    readonly family: string
    readonly y: readonly string[]
    readonly n?: readonly string[]
    readonly row: number
  }[]
}
interface Model {
  readonly rank: number
  readonly coefficients: readonly {
    readonly of: string
    readonly beta: number | null
    readonly toward: string | null
    readonly standard_error: number | null
    readonly wald: { readonly p: number } | null
  }[]
  readonly fit: { readonly deviance: number; readonly df: number; readonly log_likelihood: number | null }
  readonly intercept_only: { readonly deviance: number } | null
  readonly criteria: { readonly aic: number | null; readonly bic: number | null }
  readonly dispersion: { readonly value: number }
  readonly certificate: { readonly class: string; readonly evidence: Readonly<Record<string, readonly unknown[]>> | null }
  readonly mean_range: { readonly fitted: readonly [number, number] }
}

const all = (JSON.parse(readFileSync(new URL("edge-cases.json", import.meta.url), "utf8")) as { readonly cases: readonly Case[] }).cases

function caseOf(id: string): Case {
  const found = all.find((one) => one.id === id)
  if (found === undefined) throw new Error(`There is no case ${id}`)
  return found
}

const csvOf = (data: Case["data"]): string => {
  const names = Object.keys(data)
  const rows = (data[names[0] as string] ?? []).map((_, i) => names.map((name) => data[name]?.[i]).join(","))
  return `${names.join(",")}\n${rows.join("\n")}\n`
}

/** A model of a case: `types` are the column clauses, `clauses` those of the model. */
async function modelOf(id: string, types: readonly string[], clauses: readonly string[]): Promise<Model> {
  const book = await settledBook(
    [
      ["data d", 'from "edge.csv"', ...types.map((type) => `column ${type}`)].join("\n  "),
      ["model m", "data d", ...clauses, "interval wald"].join("\n  "),
    ],
    { "edge.csv": csvOf(caseOf(id).data) },
  )
  return book.summary("m") as unknown as Model
}

/** To eleven digits, or where the value is 0 to 1e-11. */
function expectExact(value: number | null | undefined, exact: string): void {
  if (value === null || value === undefined) throw new Error(`There is no value where ${exact} is right`)
  expect(Number(exact) === 0 ? Math.abs(value) : relativeError(value, exact)).toBeLessThan(1e-11)
}

const ends = { inf: "infinity", "-inf": "-infinity" } as const

/** Finite coefficients and errors agree; those at infinity are null, with their sign. */
function expectLimits(model: Model, expected: Case["expected"]): void {
  const betas = expected["limit_coefficients"] as readonly string[]
  const errors = expected["limit_standard_errors"] as readonly string[] | undefined
  model.coefficients.forEach(({ beta, toward, standard_error }, j) => {
    const exact = betas[j] as string
    if (exact === "inf" || exact === "-inf")
      expect({ beta, toward, standard_error }).toEqual({ beta: null, toward: ends[exact], standard_error: null })
    else {
      expectExact(beta, exact)
      if (errors !== undefined) expectExact(standard_error, errors[j] as string)
    }
  })
  expectExact(model.fit.deviance, expected["limit_deviance"] as string)
  expectExact(model.fit.log_likelihood, expected["limit_loglik"] as string)
}

describe("fits that have no maximum inside", () => {
  it("quasi-complete separation gives the limits, the others' errors and the sign of the one that runs off", async () => {
    const { expected } = caseOf("endometrial")
    // A column may not be called pi, which is a number of the language.
    const model = await modelOf(
      "endometrial",
      ["nv number", 'pulsatility headed "pi" number', "eh number", "hg count"],
      ["response hg", "family binomial", "link logit", "predictor nv + pulsatility + eh"],
    )
    expect(model.certificate.class).toBe("infinite")
    expectLimits(model, expected)
    expectExact(model.intercept_only?.deviance, expected["null_deviance"] as string)
  })

  it.each(["logit", "probit", "cloglog", "loglog", "cauchit"])("complete separation has deviance 0 under %s", async (link) => {
    const model = await modelOf(
      "complete-separation",
      ["x number", "y count"],
      ["response y", "family binomial", `link ${link}`, "predictor x"],
    )
    expect(model.certificate.class).toBe("infinite")
    expectLimits(model, { limit_coefficients: ["-inf", "inf"], limit_deviance: "0", limit_loglik: "0" })
  })

  it("a level with zero counts only runs to minus infinity, and leaves the others their errors", async () => {
    const model = await modelOf(
      "poisson-empty-level",
      ["g category", "x number", "y count"],
      ["response y", "family poisson", "link log", "predictor g + x"],
    )
    expect(model.certificate.class).toBe("infinite")
    expectLimits(model, caseOf("poisson-empty-level").expected)
    expect(model.mean_range.fitted[0]).toBe(0)
  })

  it.each(["logit", "probit", "cloglog", "loglog", "cauchit"])("no failure at all runs to infinity under %s", async (link) => {
    const model = await modelOf(
      "all-successes",
      ["x number", "n count", "y count"],
      ["response y out of n", "family binomial", `link ${link}`, "predictor intercept"],
    )
    expect(model.certificate.class).toBe("infinite")
    expectLimits(model, { limit_coefficients: ["inf"], limit_deviance: "0", limit_loglik: "0" })
  })

  it.each(["identity", "log"])("no failure at all is a finite fit at the edge under %s", async (link) => {
    const model = await modelOf(
      "all-successes",
      ["x number", "n count", "y count"],
      ["response y out of n", "family binomial", `link ${link}`, "predictor intercept"],
    )
    expect(model.certificate.class).toBe("boundary")
    expect(model.mean_range.fitted).toEqual([1, 1])
    expectLimits(model, { limit_coefficients: [link === "log" ? "0" : "1"], limit_deviance: "0", limit_loglik: "0" })
  })

  it("a maximum at the edge has the exact estimates, no errors, and names the row", async () => {
    const { expected } = caseOf("log-binomial-edge")
    const model = await modelOf("log-binomial-edge", ["x number", "y count"], ["response y", "family binomial", "link log", "predictor x"])
    expect(model.certificate.class).toBe("boundary")
    expect(model.certificate.evidence?.["edge"]).toMatchObject([{ row: 10 }])
    expectLimits(model, expected)
    expect(model.coefficients.map(({ standard_error }) => standard_error)).toEqual([null, null])
    expect(model.mean_range.fitted[1]).toBe(1)
  })
})

describe("designs that say the same twice, and perfect fits", () => {
  it("a repeated interaction column is left out, and all else stands", async () => {
    const { expected } = caseOf("aliased-interaction")
    const model = await modelOf(
      "aliased-interaction",
      ["f category", "g category", "y count"],
      ["response y", "family poisson", "link log", "predictor f*g"],
    )
    expect(model.certificate.class).toBe("unidentified")
    expect(model.rank).toBe(expected["rank"])
    expect(model.coefficients.filter(({ beta }) => beta === null).map(({ of }) => of)).toEqual(["f is c . g is q"])
    const kept = model.coefficients.filter(({ beta }) => beta !== null)
    kept.forEach(({ beta, standard_error }, j) => {
      const exact = (expected["coefficients_without_the_aliased_column"] as readonly string[])[j] as string
      if (Math.abs(Number(exact)) < 1e-30) expect(Math.abs(beta as number)).toBeLessThan(1e-14)
      else expectExact(beta, exact)
      expectExact(standard_error, (expected["standard_errors_without_it"] as readonly string[])[j] as string)
    })
    expectExact(model.fit.deviance, expected["deviance"] as string)
    expectExact(model.fit.log_likelihood, expected["loglik"] as string)
    expect(model.fit.df).toBe(expected["df_residual"])
  })

  it("a perfect fit has no dispersion, errors of 0, and no tests, likelihood or criteria", async () => {
    const model = await modelOf("exact-gaussian", ["x number", "y number"], ["response y", "family normal", "link identity", "predictor x"])
    expect(model.coefficients.map(({ beta }) => beta)).toEqual([1, 2])
    expect(model.coefficients.map(({ standard_error, wald }) => [standard_error, wald?.p ?? null])).toEqual([
      [0, null],
      [0, null],
    ])
    expect([model.fit.deviance, model.fit.log_likelihood, model.criteria, model.dispersion.value]).toEqual([
      0,
      null,
      { aic: null, bic: null },
      0,
    ])
  })
})

describe("responses a family cannot take", () => {
  const families: Readonly<Record<string, string>> = {
    binomial: "binomial",
    poisson: "poisson",
    gamma: "gamma",
    "inverse-gaussian": "inverse_gaussian",
    tweedie: "tweedie(1.5)",
    "negative-binomial": "negative_binomial(2)",
  }

  it.each(caseOf("response-outside-family").cases ?? [])(
    "$family with $y is refused, and the row is named",
    async ({ family, y, n, row }) => {
      const rows = y.map((value, i) => `${value},${n?.[i] ?? 1}`).join("\n")
      const book = await settledBook(
        [
          'data d\n  from "edge.csv"\n  column y number\n  column n number',
          `model m\n  data d\n  response ${n === undefined ? "y" : "y out of n"}\n  family ${families[family]}\n  predictor intercept`,
        ],
        { "edge.csv": `y,n\n${rows}\n` },
      )
      expect(book.state("m").status).toBe("fault")
      expect(book.notices("m").some(({ level, text }) => level === "fault" && new RegExp(`row ${row} of`, "i").test(text))).toBe(true)
    },
  )
})
