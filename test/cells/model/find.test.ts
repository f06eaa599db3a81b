// What a model makes of a table: which rows it uses, what each clause comes to, and laws that tie one way of saying a model to another.

import { describe, expect, it } from "vitest"
import { modelWords } from "../../../cells/model/words.ts"
import type { ModelFinding } from "../../../cells/model-finding.ts"
import { read } from "../../../runtime/statement.ts"
import type { Value } from "../../../runtime/value.ts"
import { category, codes, count, date, type Found, finding, fitOf, number, summaryOf, type Table, truth } from "./laboratory.ts"

const betas = (outcome: Found): readonly (number | null)[] => fitOf(outcome).fit.coefficients.map(({ beta }) => beta)
const terms = (outcome: Found): readonly string[] => fitOf(outcome).fit.coefficients.map(({ of }) => of)

const close = (a: readonly (number | null)[], b: readonly (number | null)[]): void => {
  expect(a.length).toBe(b.length)
  a.forEach((value, k) => {
    expect(Math.abs((value ?? Number.NaN) - (b[k] ?? Number.NaN))).toBeLessThan(1e-10 * Math.max(1, Math.abs(b[k] ?? 0)))
  })
}

const x = [1, 2, 3, 4, 5, 6, 7, 8]
const beds: Table = {
  x: number(...x),
  buds: count(2, 3, 3, 6, 5, 9, 8, 13),
  pots: count(20, 20, 18, 20, 22, 20, 20, 20),
  hours: number(2, 2.5, 3, 2, 4, 3, 2, 5),
  lot: category(["a", "b", "c", "a", "b", "c", "a", "b"]),
  alive: truth(0, 0, 1, 0, 1, 0, 1, 1),
  night: date(19783, 19784, 19785, 19786, 19787, 19788, 19789, 19790),
}

describe("rows", () => {
  it("are used where everything is there and weighs something, and the others are accounted for", async () => {
    const table = {
      ...beds,
      x: number(null, 2, 3, 4, 5, 6, 7, 8),
      buds: count(2, null, 0, 6, 5, 9, 8, 13),
      pots: count(20, 20, 0, 20, 22, 20, 20, 20),
      r: count(1, 1, 1, 0, 2, 1, 1, null),
    }
    const outcome = await finding("response buds out of pots\nfamily binomial\nlink logit\npredictor x\nrepeat r", table)
    expect(codes(outcome)).toEqual([])
    const found = fitOf(outcome)
    expect(Array.from(found.records)).toEqual([13, 14, 15])
    expect(found.unused).toEqual([
      { by: "buds is missing", rows: 1 },
      { by: "x is missing", rows: 1 },
      { by: "r is missing", rows: 1 },
      { by: "there are no trials", rows: 1 },
      { by: "repeat is 0", rows: 1 },
    ])
    expect([found.fit.rows, found.fit.n]).toEqual([3, 4])
  })

  it("with successes out of no trials are a fault, though rows without trials take no part", async () => {
    const table = {
      ...beds,
      x: number(1, 2, 3, 4, 5, 6, 7, 8),
      buds: count(2, 1, 3, 6, 5, 9, 8, 13),
      pots: count(20, 20, 0, 20, 22, 20, 20, 20),
    }
    expect(codes(await finding("response buds out of pots\nfamily binomial\nlink logit\npredictor x", table))).toEqual(["more-than-trials"])
  })

  it("that are repeated count as if they stood there", async () => {
    const r = [1, 2, 1, 3, 1, 1, 2, 1]
    const written = x.flatMap((_, row) => Array<number>(r[row] as number).fill(row))
    const long: Table = {
      x: number(...written.map((row) => x[row] as number)),
      y: count(...written.map((row) => [2, 3, 3, 6, 5, 9, 8, 13][row] as number)),
    }
    for (const [family, link] of [
      ["poisson", "square_root"],
      ["gamma", "log"],
      ["normal", "identity"],
    ]) {
      const clauses = `response y\nfamily ${family}\nlink ${link}\npredictor x`
      const short = summaryOf(await finding(`${clauses}\nrepeat r`, { x: number(...x), y: beds["buds"] as Table[string], r: count(...r) }))
      const full = summaryOf(await finding(clauses, long))
      for (const member of ["n", "coefficients", "fit", "criteria", "pearson", "dispersion", "intercept_only"]) {
        const numbers = (value: unknown): readonly number[] =>
          JSON.stringify(value)
            .match(/-?\d+(\.\d+)?(e-?\d+)?/g)
            ?.map(Number) ?? []
        close(numbers(short[member]), numbers(full[member]))
      }
    }
  })
})

describe("responses", () => {
  it("of single trials and of groups have one estimate", async () => {
    const k = [1, 2, 2, 4]
    const n = [4, 4, 5, 5]
    const singles = k.flatMap((successes, g) => Array.from({ length: n[g] as number }, (_, i) => ({ g, y: i < successes ? 1 : 0 })))
    for (const link of ["logit", "probit", "cauchit", "cloglog", "loglog"]) {
      const grouped = await finding(`response k out of n\nfamily binomial\nlink ${link}\npredictor g`, {
        g: number(0, 1, 2, 3),
        k: count(...k),
        n: count(...n),
      })
      const single = await finding(`response y\nfamily binomial\nlink ${link}\npredictor g`, {
        g: number(...singles.map(({ g }) => g)),
        y: truth(...singles.map(({ y }) => y)),
      })
      close(betas(grouped), betas(single))
      expect(fitOf(grouped).response).toEqual({ label: "k out of n", unit: null, measured: "share" })
      expect(fitOf(single).response.measured).toBe("truth")
    }
  })

  it("that are a level, a truth or 0 and 1 are the same, and the other level turns the sign", async () => {
    const clauses = (response: string) => `response ${response}\nfamily binomial\nlink logit\npredictor x`
    const lived = [0, 0, 1, 0, 1, 0, 1, 1]
    const table = { ...beds, state: category(lived.map((is) => (is === 1 ? "alive" : "dead"))), one: count(...lived) }
    const all = await Promise.all(
      ["alive", "alive is true", 'state is "alive"', "one"].map((response) => finding(clauses(response), table)),
    )
    for (const outcome of all) close(betas(outcome), betas(all[0] as Found))
    close(
      betas(await finding(clauses("alive is false"), table)),
      betas(all[0] as Found).map((beta) => -(beta as number)),
    )
    expect(fitOf(all[2] as Found).response.label).toBe("state is alive")
  })

  it("of counts are called counts, with what the data call them", async () => {
    const buds = { ...(beds["buds"] as Table[string]), called: "opened buds" } as Table[string]
    const found = fitOf(await finding("response buds\nfamily poisson\nlink log\npredictor x", { ...beds, buds }))
    expect(found.response).toEqual({ label: "opened buds", unit: null, measured: "count" })
  })
})

describe("predictors", () => {
  it("take a truth as a category, a date as days, and call coefficients by their terms", async () => {
    const outcome = await finding(
      "response buds\nfamily poisson\nlink log\npredictor alive + night + lot + lot.x + category(x) - category(x)",
      beds,
    )
    expect(terms(outcome)).toEqual([
      "intercept",
      "alive is true",
      "night",
      "lot is b",
      "lot is c",
      "lot is a . x",
      "lot is b . x",
      "lot is c . x",
    ])
    expect(fitOf(outcome).problem.variables["night"]).toEqual({
      type: "number",
      values: (beds["night"] as { values: Float64Array }).values,
    })
  })

  it("leave out levels that are in none of the rows used", async () => {
    const table = {
      ...beds,
      lot: category(["c", "b", "c", "a", "b", "c", "c", "b"], ["a", "b", "c", "d"]),
      x: number(1, 2, 3, null, 5, 6, 7, 8),
    }
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor lot + x", table)
    expect(codes(outcome)).toEqual(["levels-dropped"])
    expect(terms(outcome)).toEqual(["intercept", "lot is c", "x"])
    expect(fitOf(outcome).problem.variables["lot"]).toMatchObject({ levels: ["b", "c"], codes: Int32Array.of(1, 0, 1, 0, 1, 1, 0) })
  })

  it("keep what the data call them, with units", async () => {
    const named = { ...(beds["x"] as Table[string]), called: "hours of frost", unit: "h" } as Table[string]
    const found = fitOf(
      await finding("response buds\nfamily poisson\nlink log\npredictor x + lot\noffset log(hours)", { ...beds, x: named }),
    )
    expect(found.labels).toEqual({
      x: { label: "hours of frost", unit: "h" },
      lot: { label: "lot", unit: null },
      hours: { label: "hours", unit: null },
    })
  })

  it("may have names that mean something to a program", async () => {
    const odd = Object.fromEntries([
      ["__proto__", beds["x"] as Table[string]],
      ["constructor", beds["hours"] as Table[string]],
      ["buds", beds["buds"] as Table[string]],
    ])
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor __proto__\noffset log(constructor)", odd)
    close(betas(outcome), betas(await finding("response buds\nfamily poisson\nlink log\npredictor x\noffset log(hours)", beds)))
  })

  it("may be none, and may do without the constant", async () => {
    expect(terms(await finding("response buds\nfamily poisson\nlink log\npredictor intercept", beds))).toEqual(["intercept"])
    const through = await finding("response buds\nfamily poisson\nlink identity\npredictor x - intercept", beds)
    expect(terms(through)).toEqual(["x"])
    // Σy/Σx, as the score says.
    close(betas(through), [49 / 36])
  })
})

describe("offsets and exposures", () => {
  const models = async (clauses: string, one: string, other: string): Promise<void> => {
    const [a, b] = await Promise.all([one, other].map((clause) => finding(`${clauses}\n${clause}`, beds)))
    close(betas(a as Found), betas(b as Found))
    close([fitOf(a as Found).fit.logLikelihood], [fitOf(b as Found).fit.logLikelihood])
  }

  it("are the same under log, and under cloglog, as the logarithm of the exposure", async () => {
    await models("response buds\nfamily poisson\nlink log\npredictor x", "exposure hours", "offset log(hours)")
    await models("response buds\nfamily gamma\nlink log\npredictor x", "exposure hours", "offset log(hours)")
    await models("response buds out of pots\nfamily binomial\nlink cloglog\npredictor x", "exposure hours", "offset log(hours)")
  })

  it("tie the mean per unit of exposure under other links", async () => {
    const counts = await finding("response buds\nfamily poisson\nlink identity\npredictor intercept\nexposure hours", beds)
    close(betas(counts), [49 / 23.5])
    const amounts = await finding("response buds\nfamily gamma\nlink reciprocal\npredictor intercept\nexposure hours", beds)
    const rates = [2 / 2, 3 / 2.5, 3 / 3, 6 / 2, 5 / 4, 9 / 3, 8 / 2, 13 / 5]
    close(betas(amounts), [8 / rates.reduce((sum, rate) => sum + rate, 0)])
    expect(fitOf(counts).exposure).toEqual({ name: "hours", label: "hours", unit: null })
  })

  it("read columns, dials and values, and keep them for the rows used", async () => {
    const table = { ...beds, hours: number(2, null, 3, 2, 4, 3, 2, 5) }
    const clauses = "response buds\nfamily poisson\nlink log\npredictor x"
    const outcome = await finding(`${clauses}\noffset a*log(hours) + b`, table, { a: 1, b: 0.5 })
    const { offset, problem } = fitOf(outcome)
    expect(offset?.numbers).toEqual({ a: 1, b: 0.5 })
    expect(offset?.variables).toEqual({ hours: { type: "number", values: Float64Array.of(2, 3, 2, 4, 3, 2, 5) } })
    expect(problem.offset?.[0]).toBeCloseTo(Math.log(2) + 0.5, 15)
    const plain = await finding(`${clauses}\nexposure hours`, table)
    close([(betas(outcome)[0] as number) + 0.5, betas(outcome)[1] as number], betas(plain))
  })

  it("may be the same in every row", async () => {
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor x\noffset 1", beds)
    expect(Array.from(fitOf(outcome).problem.offset ?? [])).toEqual(Array(8).fill(1))
  })
})

describe("errors and dispersion", () => {
  const clauses = "response buds\nfamily poisson\nlink log\npredictor x"

  it("are as the clauses say", async () => {
    const plain = fitOf(await finding(clauses, beds))
    expect([plain.problem.dispersion, plain.problem.standardErrors, plain.problem.confidence]).toEqual(["one", "expected", 0.95])
    const said = fitOf(await finding(`${clauses}\ndispersion pearson\nstandard_errors observed\nconfidence 90%`, beds))
    expect([said.problem.dispersion, said.problem.standardErrors, said.problem.confidence]).toEqual(["pearson", "observed", 0.9])
    const ratio = (said.fit.coefficients[1]?.standardError ?? 0) / (plain.fit.coefficients[1]?.standardError ?? 1)
    expect(ratio ** 2).toBeCloseTo(said.fit.pearson / said.fit.df, 10)
    expect([said.fit.aic, said.fit.lawDf]).toEqual([null, 6])
    const number = fitOf(await finding(`${clauses}\ndispersion 4`, beds))
    expect((number.fit.coefficients[1]?.standardError ?? 0) / (plain.fit.coefficients[1]?.standardError ?? 1)).toBeCloseTo(2, 12)
    expect(fitOf(await finding("response buds\nfamily gamma\nlink log\npredictor x", beds)).problem.dispersion).toBe("pearson")
  })

  it("take each different value as a cluster", async () => {
    for (const by of ["lot", "alive", "pots"]) {
      const found = fitOf(await finding(`${clauses}\nstandard_errors sandwich by ${by}`, beds))
      const expected = { lot: [0, 1, 2, 0, 1, 2, 0, 1], alive: [0, 0, 1, 0, 1, 0, 1, 1], pots: [0, 0, 1, 0, 2, 0, 0, 0] }[by]
      expect(Array.from(found.problem.cluster ?? [])).toEqual(expected)
      expect(found.fit.clusters).toBe(new Set(expected).size)
    }
  })
})

describe("links", () => {
  it("take dials in the place of numbers, and say the numbers", async () => {
    const outcome = await finding("response buds\nfamily gamma\nlink power(a)\npredictor x", beds, { a: -1 })
    expect(fitOf(outcome).link).toBe("power(-1)")
    close(betas(outcome), betas(await finding("response buds\nfamily gamma\nlink reciprocal\npredictor x", beds)))
  })

  it("that nobody chose are the family's own", async () => {
    const taken = []
    for (const [response, family] of [
      ["buds", "normal"],
      ["buds out of pots", "binomial"],
      ["buds", "poisson"],
      ["buds", "gamma"],
    ])
      taken.push(fitOf(await finding(`response ${response}\nfamily ${family}\npredictor x`, beds)).link)
    expect(taken).toEqual(["identity", "logit", "log", "reciprocal"])
  })
})

describe("a gesture", () => {
  it("starts from the last finding and comes to the same", async () => {
    const clauses = (a: number) => `response buds\nfamily poisson\nlink power(${a})\npredictor x + lot`
    const cold = await finding(clauses(0.6), beds)
    const last = (await finding(clauses(0.5), beds)).found as unknown as Value
    const warm = await finding(clauses(0.6), beds, {}, last)
    betas(warm).forEach((beta, k) => {
      expect(Math.abs((beta as number) - (betas(cold)[k] as number))).toBeLessThan(1e-7)
    })
  })

  it("is not misled by a finding of another shape, or of another kind", async () => {
    const clauses = "response buds\nfamily poisson\nlink log\npredictor x"
    const cold = betas(await finding(clauses, beds))
    const other = (await finding("response buds\nfamily poisson\nlink log\npredictor lot", beds)).found as unknown as Value
    for (const near of [other, 3, null, { at: 1 }] as const) close(betas(await finding(clauses, beds, {}, near)), cold)
  })
})

describe("names", () => {
  const names = (clauses: string) => modelWords.names(modelWords.parse(read(`model m\n  data d\n${clauses}`)).said)

  it("are the columns that are read, each once, and the cells that may be meant", () => {
    const { defines, uses, files } = names(
      "response k out of n\nfamily binomial\nlink power(a)\npredictor x + log(x) + lot.x\noffset log(h) + b\nprecision w\nstandard_errors sandwich by c",
    )
    expect([defines, files]).toEqual(["m", []])
    expect(uses.map(({ name, parts, either }) => [name, parts, either])).toEqual([
      ["d", ["#", "b", "c", "h", "k", "lot", "n", "w", "x"], false],
      ["h", "all", true],
      ["b", "all", true],
      ["a", "all", false],
    ])
  })

  it("are there without evaluating, however little is said", () => {
    expect(names("").uses.map(({ name }) => name)).toEqual(["d"])
    expect(modelWords.names(modelWords.parse(read("model")).said)).toEqual({ defines: null, uses: [], files: [] })
  })
})

it("holds a finding that another kind can refit", async () => {
  const found: ModelFinding = fitOf(await finding("response buds\nfamily poisson\nlink log\npredictor x", beds))
  expect(Object.keys(found.problem).sort()).toEqual(
    [
      "cluster",
      "confidence",
      "control",
      "dispersion",
      "exposure",
      "family",
      "intercept",
      "link",
      "offset",
      "precision",
      "repeat",
      "rows",
      "standardErrors",
      "terms",
      "trials",
      "variables",
      "y",
    ].sort(),
  )
  expect(() => structuredClone(found)).not.toThrow()
})
