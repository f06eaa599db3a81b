// Every fault, warning and remark of a model: what it says, at which words, and what a click on its mend writes.

import { describe, expect, it } from "vitest"
import { category, codes, count, date, finding, mended, number, type Table, text, told, truth } from "./laboratory.ts"

const beds: Table = {
  frost: number(2, 3, 5, 6, 8, 9),
  lot: category(["a", "a", "b", "b", "c", "c"]),
  half: category(["yes", "no", "yes", "no", "yes", "no"]),
  pots: count(20, 20, 20, 18, 20, 20),
  buds: count(3, 5, 8, 11, 15, 17),
  hours: number(5.5, 5, 7.25, 6, 8, 7.5),
  alive: truth(1, 1, 0, 1, 0, 0),
  night: date(19783, 19784, 19785, 19786, 19787, 19788),
  note: text("wet", "dry", "", "windy", "x", "y"),
}

const counts = "response buds\nfamily poisson\nlink log\npredictor frost"

describe("faults of the statement", () => {
  it.each([
    ["", ["clause-missing", "clause-missing", "clause-missing"]],
    ["response buds\nfamily poisson", ["clause-missing"]],
  ])("says each clause that is missing: %j", async (clauses, expected) => {
    expect(codes(await finding(clauses, beds))).toEqual(expected)
  })

  it("names the clause that is missing", async () => {
    expect(told(await finding("response buds\nfamily poisson\nlink log", beds))).toEqual([
      "fault clause-missing: This model does not say its predictor.",
    ])
  })

  it.each([
    ["family poison", 'fault no-such-family at "poison": There is no family called poison.', "family poisson"],
    ["family zeta", 'fault no-such-family at "zeta": There is no family called zeta.', null],
    [
      "family tweedie(2)",
      'fault parameter-outside at "tweedie(2)": The parameter p of tweedie is a number between 1 and 2, and 2 is not.',
      "family gamma",
    ],
    [
      "family negative_binomial(-1)",
      'fault parameter-outside at "negative_binomial(-1)": The parameter k of negative_binomial is a number above 0, and −1 is not.',
      null,
    ],
    [
      "family negative_binomial(infinity)",
      'fault parameter-infinite at "negative_binomial(infinity)": With an infinite k the negative binomial is the Poisson family.',
      "family poisson",
    ],
    [
      "family quasi_likelihood",
      'fault variance-missing at "quasi_likelihood": Quasi-likelihood needs the variance as an expression of the mean mu.',
      "family quasi_likelihood(mu)",
    ],
    [
      "family quasi_likelihood(abs(mu))",
      'fault variance-not-smooth at "quasi_likelihood(abs(mu))": A variance is a smooth function of mu, and abs(mu) has no place in it.',
      null,
    ],
    [
      "family quasi_likelihood(mu - 3)",
      'fault variance-not-positive at "quasi_likelihood(mu - 3)": The variance mu - 3 is not above 0 for all numbers, nor for all above 0, nor for all shares between 0 and 1.',
      null,
    ],
    ["family poisson(2)", 'fault parameters-off at "poisson(2)": The family poisson has no parameter.', "family poisson"],
  ])("%s", async (family, says, mend) => {
    const outcome = await finding(`response buds\n${family}\nlink log\npredictor frost`, beds)
    expect(told(outcome)).toEqual([says])
    expect(
      outcome.notices[0]?.mend === null
        ? null
        : mended(outcome, outcome.notices[0]?.mend ?? null)
            .split("\n")[3]
            ?.trim(),
    ).toBe(mend)
  })

  it.each([
    ["link lgo", 'fault no-such-link at "lgo": There is no link called lgo.', "link log"],
    [
      "link cloglog",
      'fault link-not-legal at "cloglog": The link cloglog is not defined for every mean that the family poisson can have.',
      "link log",
    ],
    ["link power", 'fault parameters-off at "power": The link power has one parameter, a.', null],
    ["link power(1, 2)", 'fault parameters-off at "power(1, 2)": The link power has one parameter, a.', null],
    ["link log(2)", 'fault parameters-off at "log(2)": The link log has no parameter.', "link log"],
    ["link power(infinity)", 'fault parameter-infinite at "power(infinity)": The parameter of the link power is a finite number.', null],
  ])("%s", async (link, says, mend) => {
    const outcome = await finding(`response buds\nfamily poisson\n${link}\npredictor frost`, beds)
    expect(told(outcome)).toEqual([says])
    expect(
      outcome.notices[0]?.mend === null
        ? null
        : mended(outcome, outcome.notices[0]?.mend ?? null)
            .split("\n")[4]
            ?.trim(),
    ).toBe(mend)
  })

  it("lists the links that are legal", async () => {
    const [notice] = (await finding("response buds\nfamily gamma\nlink probit\npredictor frost", beds)).notices
    expect(notice?.hint).toBe(
      "Links for gamma are reciprocal, identity, log, reciprocal_square and square_root; probit goes with normal, binomial and quasi_likelihood.",
    )
  })

  it.each([
    ["dispersion -1", 'fault dispersion-not-positive at "-1": A dispersion is above 0, and -1 is not.'],
    ["confidence 95", 'fault confidence-outside at "95": A level of confidence lies between 0 and 100%, and 95 does not.'],
    [
      "repeat pots\nprecision hours",
      'fault two-weights at "precision hours": A row is either repeated or of known precision, and here it is said to be both.',
    ],
  ])("%s", async (clause, says) => {
    expect(told(await finding(`${counts}\n${clause}`, beds))).toEqual([says])
  })

  it("writes the percent sign that was forgotten", async () => {
    const outcome = await finding(`${counts}\nconfidence 95`, beds)
    expect(mended(outcome, outcome.notices[0]?.mend ?? null)).toContain("confidence 95%")
  })

  it.each([
    ["response buds out of pots", "trials-not-of-family"],
    ['response half is "yes"', "level-not-of-family"],
  ])("%s is for binomial", async (response, code) => {
    const outcome = await finding(`${response}\nfamily poisson\nlink log\npredictor frost`, beds)
    expect(codes(outcome)).toEqual([code])
    expect(mended(outcome, outcome.notices[0]?.mend ?? null)).toContain("family binomial")
  })

  it.each([
    ["normal", "identity", "A mean per unit of exposure is for means above 0, and those of the family normal can be below."],
    ["binomial", "logit", "Under the link logit a binomial mean has no value per unit of exposure."],
  ])("an exposure means nothing for %s with %s", async (family, link, says) => {
    const response = family === "binomial" ? "buds out of pots" : "buds"
    const outcome = await finding(`response ${response}\nfamily ${family}\nlink ${link}\npredictor frost\nexposure hours`, beds)
    expect(told(outcome)[0]).toContain(says)
    expect(outcome.ok).toBe(false)
  })
})

describe("faults of columns", () => {
  it("says every column that is not there, with the nearest and a mend", async () => {
    const outcome = await finding(
      "response bud\nfamily poisson\nlink log\npredictor frots + log(hous)\noffset log(pot)\nrepeat nothing_like_it",
      beds,
    )
    expect(told(outcome)).toEqual([
      'fault no-such-column at "bud": d has no column bud.',
      'fault no-such-column at "frots": d has no column frots.',
      'fault no-such-column at "log(hous)": d has no column hous.',
      'fault no-such-column at "nothing_like_it": d has no column nothing_like_it.',
      'fault no-such-column at "pot": d has no column pot.',
    ])
    expect(outcome.notices.map(({ hint }) => hint)).toEqual([
      "The nearest of its columns is buds.",
      "The nearest of its columns is frost.",
      "The nearest of its columns is hours.",
      "Its columns are frost, lot, half, pots, buds, hours, alive, night and note.",
      "The nearest of its columns is pots.",
    ])
    expect(mended(outcome, outcome.notices[1]?.mend ?? null)).toContain("predictor frost + log(hous)")
  })

  it.each([
    [
      "response buds\nfamily poisson\nlink log\npredictor note",
      'fault text-column at "note": note is text, and a text says nothing that can be counted or measured.',
    ],
    [
      "response note\nfamily poisson\nlink log\npredictor frost",
      'fault text-column at "note": note is text, and a text says nothing that can be counted or measured.',
    ],
    [
      "response buds\nfamily poisson\nlink log\npredictor log(lot)",
      'fault call-of-category at "log(lot)": log makes columns from a number, and lot is a category.',
    ],
    [
      "response buds\nfamily poisson\nlink log\npredictor frost\nrepeat lot",
      'fault wants-number at "lot": Repeat needs a number, and lot is a category.',
    ],
    [
      "response buds\nfamily poisson\nlink log\npredictor frost\nexposure night",
      'fault wants-number at "night": An exposure needs a number, and night is a date.',
    ],
    [
      "response lot out of pots\nfamily binomial\nlink logit\npredictor frost",
      'fault wants-number at "lot": Successes needs a number, and lot is a category.',
    ],
    [
      "response alive\nfamily poisson\nlink log\npredictor frost",
      'fault response-not-of-family at "alive": A count is what the family poisson is for, and alive is a truth.',
    ],
    [
      "response night\nfamily gamma\nlink log\npredictor frost",
      'fault response-not-of-family at "night": An amount above 0 is what the family gamma is for, and night is a date.',
    ],
    [
      "response lot\nfamily normal\nlink identity\npredictor frost",
      'fault response-not-of-family at "lot": A number is what the family normal is for, and lot is a category.',
    ],
    [
      "response half\nfamily binomial\nlink logit\npredictor frost",
      'fault needs-level at "half": half is a category, and which of its levels counts as success is not said.',
    ],
    [
      'response half is "maybe"\nfamily binomial\nlink logit\npredictor frost',
      'fault no-such-level at ""maybe"": half has no level "maybe".',
    ],
    [
      'response lot is "b"\nfamily binomial\nlink logit\npredictor frost',
      'fault more-than-two-levels at "lot": lot has 3 levels in the rows used ("b", "a" and "c"), and a binomial response has two.',
    ],
    [
      'response buds is "b"\nfamily binomial\nlink logit\npredictor frost',
      'fault level-of-number at "buds": buds is a count and has no levels.',
    ],
  ])("%j", async (clauses, says) => {
    expect(told(await finding(clauses, beds))).toEqual([says])
  })

  it("offers the level that a two-way category was not given", async () => {
    const outcome = await finding("response half\nfamily binomial\nlink logit\npredictor frost", beds)
    expect(mended(outcome, outcome.notices[0]?.mend ?? null)).toContain('response half is "no"')
  })

  it("says that a cell which is no table is none", async () => {
    expect(told(await finding(counts, beds, { d: 3 }))).toEqual(['fault not-a-table at "d": d is not a table.'])
  })

  it("says that a name is a column and a cell", async () => {
    const outcome = await finding(`${counts}\noffset hours`, beds, { hours: 2 })
    expect(told(outcome)).toEqual([
      'fault column-and-cell at "hours": hours is a column of d and the name of a cell, so it cannot be told which is meant.',
    ])
  })

  it.each([
    ["offset lot", 'fault offset-wants-number at "lot": An offset is a number, and this is a category.'],
    ["offset log(lot)", /^fault expression\//],
  ])("%s", async (clause, says) => {
    const [first] = told(await finding(`${counts}\n${clause}`, beds))
    expect(first).toMatch(says)
  })

  it("says that a dial's value is no number where a link wants one", async () => {
    const outcome = await finding("response buds\nfamily poisson\nlink power(a)\npredictor frost", beds, { a: "high" })
    expect(told(outcome)).toEqual(['fault not-a-number at "a": a is not a number here.'])
  })
})

describe("faults of rows", () => {
  const rows = async (clauses: string, more: Table): Promise<readonly string[]> => told(await finding(clauses, { ...beds, ...more }))
  const binary = "response y\nfamily binomial\nlink logit\npredictor frost"
  const shares = "response k out of n\nfamily binomial\nlink logit\npredictor frost"

  it("of a response that is not 0 or 1", async () => {
    expect(await rows(binary, { y: number(0, 1, 2, 1, 0, 3) })).toEqual([
      'fault not-zero-or-one at "y": A binomial response without trials is 0 or 1, but y is neither in 2 rows (first: row 12 of terrace.csv, with 2).',
    ])
    expect(await rows(binary, { y: number(0, 1, 0.25, 1, 0, 1) })).toEqual([
      'fault not-zero-or-one at "y": A binomial response without trials is 0 or 1, but y is 0.25 in row 12 of terrace.csv.',
    ])
  })

  it("of successes and trials", async () => {
    expect(await rows(shares, { k: number(1, 2, 3, 9, 2, 2.5), n: number(4, 4, 4, 4, 4, 4) })).toEqual([
      'fault not-whole at "k": k counts something, but it is 2.5 in row 15 of terrace.csv.',
      'fault more-than-trials at "k": Row 13 of terrace.csv has k 9 out of n 4.',
    ])
    expect(await rows(shares, { k: number(1, 2, 0, 1, 2, 2), n: number(4, 4, 0, 0, 4, 4) })).toEqual([
      'fault more-than-trials at "k": Row 13 of terrace.csv has k 1 out of n 0.',
    ])
    expect(await rows(shares, { k: number(1, 2, -1, 2, 2, 2), n: number(4, 4.5, 4, 4, 4, -2) })).toEqual([
      'fault count-negative at "k": k counts something, but it is −1 in row 12 of terrace.csv.',
      'fault not-whole at "n": n counts something, but it is 4.5 in row 11 of terrace.csv.',
      'fault count-negative at "n": n counts something, but it is −2 in row 15 of terrace.csv.',
    ])
  })

  it("of counts and amounts", async () => {
    const of = (family: string) => `response y\nfamily ${family}\nlink log\npredictor frost`
    expect(await rows(of("poisson"), { y: number(0, 1, -1, 2, 2.5, -4) })).toEqual([
      'fault count-negative at "y": y counts something, but it is below 0 in 2 rows (first: row 12 of terrace.csv, with −1).',
      'fault count-not-whole at "y": The family poisson is for counts, but y is 2.5 in row 14 of terrace.csv.',
    ])
    expect(await rows(of("gamma"), { y: number(0, 1, 1, 2, 2.5, 4) })).toEqual([
      'fault not-positive at "y": The family gamma is for amounts above 0, but y is 0 in row 10 of terrace.csv.',
    ])
  })

  it("of exposures and weights", async () => {
    expect(await rows(`${counts}\nexposure e`, { e: number(1, 1, 0, 1, 1, -2) })).toEqual([
      'fault exposure-not-positive at "e": An exposure is above 0, but e is 0 or below in 2 rows (first: row 12 of terrace.csv, with 0).',
    ])
    expect(await rows(`${counts}\nrepeat r`, { r: number(1, 1.5, 0, 1, 1, -2) })).toEqual([
      'fault weight-negative at "r": A repeat is not below 0, but r is −2 in row 15 of terrace.csv.',
      'fault repeat-not-whole at "r": A row is repeated a whole number of times, but r is 1.5 in row 11 of terrace.csv.',
    ])
    expect(await rows(`${counts}\nprecision w`, { w: number(1, 1, 0, 1, 1, -2) })).toEqual([
      'fault weight-negative at "w": A precision is not below 0, but w is −2 in row 15 of terrace.csv.',
    ])
  })

  it("does not fault rows that are not used", async () => {
    expect(codes(await finding(`${counts}`, { ...beds, buds: number(1, -5, 2, 2, 3, 4), frost: number(1, null, 2, 3, 4, 5) }))).toEqual([])
  })

  it("says that precision was meant where repeats are not whole", async () => {
    const outcome = await finding(`${counts}\nrepeat r`, { ...beds, r: number(1, 1.5, 1, 1, 1, 1) })
    expect(mended(outcome, outcome.notices[0]?.mend ?? null)).toContain("precision r")
  })

  it("says that no row is left, and why", async () => {
    expect(await rows(counts, { frost: number(null, null, null, 1, null, null), buds: count(1, 2, 3, null, 4, 5) })).toEqual([
      'fault no-rows at "d": No row of d has everything the model needs: buds is missing in 1 row and frost is missing in 5 rows.',
    ])
  })
})

describe("warnings and remarks", () => {
  it("says that nobody chose the link, and writes it out", async () => {
    const outcome = await finding("response buds\nfamily poisson\npredictor frost", beds)
    expect(told(outcome)).toEqual(["remark link-not-chosen: Nobody chose a link, so the canonical one of poisson was taken: log."])
    expect(mended(outcome, outcome.notices[0]?.mend ?? null)).toMatch(/^ {2}link log$/m)
  })

  it("calls no link canonical that is not", async () => {
    const outcome = await finding("response buds\nfamily negative_binomial(2)\npredictor frost", beds)
    expect(told(outcome).filter((text) => text.includes("link-not-chosen"))).toEqual([
      "remark link-not-chosen: Nobody chose a link, so log was taken, as for every model of negative_binomial that names none.",
    ])
  })

  it("says that a precision counts absolutely where the dispersion is one", async () => {
    expect(codes(await finding(`${counts}\nprecision hours`, beds))).toEqual(["precision-counts"])
    expect(codes(await finding("response hours\nfamily gamma\nlink log\npredictor frost\nprecision pots", beds))).toEqual([])
  })

  it("says which of two models with an exposure a gamma fit is", async () => {
    expect(told(await finding("response hours\nfamily gamma\nlink log\npredictor frost\nexposure pots", beds))).toEqual([
      'remark exposure-as-amount at "pots": Fitted with the whole of hours, whose variance goes with the square of pots.',
    ])
  })

  it("says where sampling weights cannot be, and what they mean for errors", async () => {
    const with_ = async (more: string): Promise<readonly string[]> => told(await finding(`${counts}\n${more}`, beds))
    expect(await with_("repeat pots\nsampling hours")).toEqual([
      'fault two-weights at "sampling hours": Sampling weights say how many others a row stands for, and here it is also said how often it stands itself.',
    ])
    expect(await with_("precision pots\nsampling hours")).toEqual([
      'fault two-weights at "sampling hours": Sampling weights say how many others a row stands for, and here it is also said how well each is known.',
    ])
    expect(await with_("sampling hours\nstandard_errors observed")).toEqual([
      'remark sampling-errors at "observed": Under sampling weights standard errors are sandwich, whatever is asked for here.',
    ])
    expect(await with_("sampling hours\nstandard_errors sandwich by half")).toEqual([])
    const odd = { ...beds, hours: number(5, -1, 7, 6, 0, 7) }
    expect(told(await finding(`${counts}\nsampling hours`, odd))).toEqual([
      'fault weight-negative at "hours": A sampling weight is not below 0, but hours is −1 in row 11 of terrace.csv.',
    ])
    const none = await finding(`${counts}\nsampling hours`, { ...beds, hours: number(5, 4, 7, 6, 0, null) })
    expect(none.found?.parts.fit.unused).toEqual([
      { by: "hours is missing", rows: 1 },
      { by: "the sampling weight is 0", rows: 1 },
    ])
  })

  it.each([
    [
      "response buds out of pots\nfamily binomial\nlink log\npredictor frost",
      "Under the link log the penalty of binomial has no upper limit at the edge of the means, so there is no such estimate.",
    ],
    [
      "response buds\nfamily gamma\nlink log\npredictor frost",
      "The bias is reduced in fits of binomial, poisson and negative_binomial(k), and this family is gamma.",
    ],
    [
      "response buds\nfamily poisson\nlink log\npredictor frost\ndispersion pearson",
      "The bias is reduced at a dispersion of one, and another is said.",
    ],
    [
      "response buds\nfamily poisson\nlink log\npredictor frost\nsampling hours",
      "Sampling weights make no likelihood that could be penalised.",
    ],
  ])("says why the bias is not reduced: %j", async (clauses, says) => {
    expect(told(await finding(`${clauses}\nestimate bias_reduced`, beds))).toEqual([`fault bias-not-reduced at "bias_reduced": ${says}`])
  })

  it("says where the bias is not gone, and nothing where it is", async () => {
    const shares = (link: string) =>
      finding(`response buds out of pots\nfamily binomial\nlink ${link}\npredictor frost\nestimate bias_reduced`, beds)
    expect(told(await shares("cloglog"))).toEqual([
      'remark bias-not-gone at "bias_reduced": Under cloglog, which is not canonical for binomial, the penalty keeps coefficients finite and does not take all of the first-order bias away.',
    ])
    expect(told(await shares("logit"))).toEqual([])
    expect(codes(await finding(`${counts}\nestimate likelihood`, beds))).toEqual([])
  })

  it("says that sandwich errors have no profile, only where profiles were asked for", async () => {
    expect(told(await finding(`${counts}\nstandard_errors sandwich\ninterval profile`, beds))).toEqual([
      'remark no-profile-under-sandwich at "profile": Wald intervals are shown: a profile goes by the likelihood, which sandwich errors do not trust.',
    ])
    expect(codes(await finding(`${counts}\nstandard_errors sandwich`, beds))).toEqual([])
    expect(codes(await finding(`${counts}\ninterval wald`, beds))).toEqual([])
  })

  it("says where a Wald ratio falls as the effect grows, and where its p disagrees with the profile", async () => {
    // Of 100 pots half live in lot a, and all but one in lot b.
    const pots = { lot: category(["a", "b"]), alive: count(50, 99), of: count(100, 100) }
    const far = await finding("response alive out of of\nfamily binomial\nlink logit\npredictor lot\nconfidence 99.9999%", pots)
    expect(told(far)).toEqual([
      'warning wald-collapses at "predictor": The Wald ratio of lot is b would fall if the estimate were farther from 0, so its p says little.',
      'remark wald-disagrees at "predictor": By its Wald p lot is b is on the other side of 0.0001\u202f% than by the profile interval.',
    ])
    const near = { ...pots, alive: count(50, 70) }
    expect(codes(await finding("response alive out of of\nfamily binomial\nlink logit\npredictor lot", near))).toEqual([])
  })

  it("offers profiles that would take long", async () => {
    const rows = 4001
    const levels = Array.from({ length: rows }, (_, i) => `l${i % 50}`)
    const table = { lot: category(levels), alive: count(...levels.map((_, i) => (i * 7) % 11)) }
    const outcome = await finding("response alive\nfamily poisson\nlink log\npredictor lot", table)
    expect(told(outcome)).toEqual([
      "remark profiles-on-request: Wald intervals are shown, since profiles of 50 coefficients over 4001 rows take long.",
    ])
    expect(mended(outcome, outcome.notices[0]?.mend ?? null)).toMatch(/interval profile/)
  })

  it("says which term says nothing that others do not", async () => {
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor frost + twice", {
      ...beds,
      twice: number(4, 6, 10, 12, 16, 18),
    })
    expect(told(outcome)).toEqual(['warning dependent-term at "twice": The term twice says nothing that frost does not already say.'])
    expect(outcome.ok).toBe(true)
  })

  it("says of what a term is a multiple, however small", async () => {
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor frost + lot.tiny", {
      ...beds,
      lot: category(Array(6).fill("a")),
      tiny: number(...[2, 3, 5, 6, 8, 9].map((frost) => frost * 1e-12)),
    })
    expect(told(outcome).at(-1)).toBe(
      'warning dependent-term at "lot.tiny": The term lot is a . tiny says nothing that frost does not already say.',
    )
  })

  it("says which levels were left out, and which column has one level only", async () => {
    const table = { ...beds, lot: category(["a", "a", "b", "b", "a", "b"], ["a", "b", "c", "d"]), one: category(Array(6).fill("x")) }
    expect(told(await finding("response buds\nfamily poisson\nlink log\npredictor lot + one + frost", table))).toEqual([
      'remark levels-dropped at "lot": 2 levels of lot are in none of the rows used and were left out: "c" and "d".',
      'warning one-level at "one": one is "x" in all rows used, so it says nothing about the response.',
    ])
  })

  it("says that a response does not vary", async () => {
    expect(
      codes(await finding("response y\nfamily poisson\nlink log\npredictor intercept", { ...beds, y: count(3, 3, 3, 3, 3, 3) })),
    ).toEqual(["constant-response"])
  })

  it("says where a piece of the predictor has no value, and uses the other rows", async () => {
    const outcome = await finding("response buds\nfamily poisson\nlink log\npredictor log(frost)", {
      ...beds,
      frost: number(0, 1, 2, 3, 0, 4),
    })
    expect(told(outcome)).toEqual([
      'warning piece-lost at "log(frost)": log(frost) has no finite value in 2 rows (first: row 10 of terrace.csv, with 0); they are not used.',
    ])
    expect(outcome.found?.parts.fit.unused).toEqual([{ by: "log(frost) has no value", rows: 2 }])
  })

  it("says where the offset has no value", async () => {
    const outcome = await finding(`${counts}\noffset log(h)`, { ...beds, h: number(1, 0, 2, null, 3, 4) })
    expect(told(outcome)).toEqual([
      'warning offset-lost at "log(h)": In 1 row the offset has no finite value although its columns are there; it is not used.',
    ])
    expect(outcome.found?.parts.fit.unused).toEqual([{ by: "the offset is missing", rows: 2 }])
  })

  it("says which coefficients run to infinity, and why", async () => {
    const apart = await finding("response y\nfamily binomial\nlink logit\npredictor x", { x: number(1, 2, 3, 4), y: truth(0, 0, 1, 1) })
    expect(told(apart)).toEqual([
      'warning infinite at "predictor": The fit gets ever better as intercept goes to −∞ and x goes to ∞: every row with x up to 2 has no success and every row with x from 3 on only successes. What is shown is the limit.',
    ])
    expect(apart.notices[0]?.hint).toBe(
      "Something separates successes from failures wholly; only data where both occur could say how much.",
    )
  })

  it("names a row whose mean is at the end of what is possible", async () => {
    const edge = await finding("response y\nfamily poisson\nlink identity\npredictor x", {
      x: number(1, 2, 3, 4, 5, 6),
      y: count(9, 3, 1, 0, 0, 0),
    })
    expect(told(edge)).toEqual([
      'warning boundary at "identity": The best fit lies where the mean of row 15 of terrace.csv reaches the end of what is possible, so errors in the usual sense do not exist.',
    ])
  })

  it("says that nothing is left for the dispersion", async () => {
    const outcome = await finding("response y\nfamily normal\nlink identity\npredictor x + power(x, 2)", {
      x: number(1, 2, 3),
      y: number(3, 1, 4),
    })
    expect(codes(outcome)).toEqual(["nothing-left"])
  })

  it("says that one cluster is none", async () => {
    const outcome = await finding(`${counts}\nstandard_errors sandwich by one`, { ...beds, one: count(1, 1, 1, 1, 1, 1) })
    expect(codes(outcome)).toEqual(["one-cluster"])
  })
})
