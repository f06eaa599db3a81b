// Certificates in words: each class with what it rests on, why errors or the test of the link are missing, and the rows that an estimate at
// infinity comes from.

import { describe, expect, it } from "vitest"
import type { Block } from "../../../cells/block.ts"
import { model } from "../../../cells/model/index.ts"
import { modelWords } from "../../../cells/model/words.ts"
import { read } from "../../../runtime/statement.ts"
import { category, codes, count, type Found, finding, number, summaryOf, type Table, told, wholeOf } from "./laboratory.ts"

const letters = (text: string) => category([...text])
const shown = (outcome: Found): readonly Block[] =>
  model.show(wholeOf(outcome), modelWords.parse(read(outcome.text)).said) as readonly Block[]
const sentence = (outcome: Found, tone: string): string =>
  shown(outcome).flatMap((block) => (block.type === "sentence" && block.tone === tone ? [block.text] : []))[0] ?? ""
const evidence = (outcome: Found): unknown => (summaryOf(outcome)["certificate"] as { readonly evidence: unknown }).evidence

const shares = "response y out of n\nfamily binomial\n"
const trials = "response y\nfamily binomial\n"
const counts = "response y\nfamily poisson\n"

describe("what separates", () => {
  const x = number(1, 2, 3, 4, 5, 6, 7, 8)
  const cases: readonly (readonly [string, string, Table, string])[] = [
    [
      "a number, wholly",
      `${trials}link probit\npredictor dose`,
      { dose: number(0.3, 0.7, 1.2, 1.8, 1.9, 2.5), y: count(0, 0, 0, 1, 1, 1) },
      "every row with dose up to 1.2 has no success and every row with dose from 1.8 on only successes",
    ],
    [
      "a number, but for one value",
      `${trials}link logit\npredictor x`,
      { x: number(1, 2, 3, 4, 4, 5, 6, 7), y: count(0, 0, 0, 0, 1, 1, 1, 1) },
      "every row with x up to 3 has no success and every row with x from 5 on only successes",
    ],
    [
      "a curve of a number",
      `${trials}link logit\npredictor x + power(x, 2)`,
      { x, y: count(0, 0, 1, 1, 1, 0, 0, 0) },
      "every row with x up to 2 has no success, every row with x from 3 to 5 only successes and every row with x from 6 on no success",
    ],
    [
      "a level, beside a number",
      `${trials}link cloglog\npredictor lot + x`,
      { lot: letters("aaaabbbb"), x: number(1, 2, 3, 4, 1, 2, 3, 4), y: count(0, 1, 0, 1, 1, 1, 1, 1) },
      "every row where lot is b has only successes",
    ],
    [
      "levels of a factor",
      `${counts}link log\npredictor lot`,
      { lot: letters("aabbccdd"), y: count(1, 2, 0, 0, 3, 1, 0, 0) },
      "every row where lot is b or lot is d has a count of 0",
    ],
    [
      "a cell of two factors",
      `${shares}link logit\npredictor f * g`,
      { f: letters("aabb"), g: letters("pqpq"), y: count(3, 4, 2, 10), n: count(10, 10, 10, 10) },
      "every row where f is b and g is q has only successes",
    ],
    [
      "two factors together",
      `${shares}link logit\npredictor f + g`,
      { f: letters("aabb"), g: letters("pqpq"), y: count(0, 4, 10, 10), n: count(10, 10, 10, 10) },
      "every row where f is b has only successes and every row where f is a and g is p no success",
    ],
    [
      "nothing but the constant",
      `${counts}link log\npredictor x`,
      { x, y: count(0, 0, 0, 0, 0, 0, 0, 0) },
      "every row used has a count of 0",
    ],
  ]

  it.each(cases)("is named: %s", async (_, clauses, table, says) => {
    const outcome = await finding(clauses, table)
    const notice = told(outcome).find((each) => each.startsWith("warning infinite"))
    expect(notice).toContain(`: ${says}. What is shown is the limit.`)
    expect(evidence(outcome)).toMatchObject({ separated: says })
  })

  it("is a combination of columns where no column does it alone, and every row agrees with it", async () => {
    const table = {
      x: number(0, 0, 1, 1, 0, 2, 2, 3),
      z: number(0, 1, 0, 2, 3, 1, 3, 2),
      y: count(0, 0, 0, 1, 1, 1, 1, 1),
    }
    const outcome = await finding(`${trials}link logit\npredictor x + z`, table)
    const { separated } = evidence(outcome) as { readonly separated: string }
    const [, times, high, low] =
      /^every row where x \+ ([\d.]+) × z is up to ([\d.]+) has no success and every row where x \+ \1 × z is from ([\d.]+) on only successes$/.exec(
        separated,
      ) ?? []
    const { x, z, y } = table
    y.values.forEach((success, i) => {
      const along = (x.values[i] as number) + Number(times) * (z.values[i] as number)
      if (success === 1) expect(along).toBeGreaterThan(Number(low) - 1e-5)
      else expect(along).toBeLessThan(Number(high) + 1e-5)
    })
    expect(Number(high)).toBeLessThan(Number(low))
  })

  it("is said too where terms repeat each other as well", async () => {
    const outcome = await finding(`${trials}link logit\npredictor x + z`, {
      x: number(1, 2, 3, 4),
      z: number(2, 4, 6, 8),
      y: count(0, 0, 1, 1),
    })
    expect(codes(outcome)).toEqual(["dependent-term", "infinite"])
    expect(sentence(outcome, "quiet")).toContain("not every coefficient can be told apart. In all rows used z = 2 × x. Adding t × (x − ")
  })
})

describe("the certificate", () => {
  it("says what a direction does, and that errors come from the rows that stay", async () => {
    const outcome = await finding(`${counts}link log\npredictor lot`, { lot: letters("aabbcc"), y: count(1, 2, 0, 0, 3, 1) })
    expect(sentence(outcome, "quiet")).toMatch(
      /The likelihood grows without end; what is shown is its limit, after \d+ steps\. Adding t × \(−\[lot is b\]\) to the linear predictor, t ≥ 0, lowers the likelihood of no row\. Standard errors from the expected information, from the rows whose means stay within their range\.$/,
    )
  })

  it("names the rows at the edge with their multipliers, and gives no errors", async () => {
    // By hand: μ = b(x − 1) with b = Σy/Σ(x − 1) = 2, and the score of the first row is −1 − Σ(y/μ − 1) over the others = −1.75.
    const outcome = await finding(`${counts}link identity\npredictor x`, { x: number(1, 2, 3, 4), y: count(0, 0, 3, 9) })
    expect(sentence(outcome, "quiet")).toMatch(
      /The best fit at the edge of the possible means, reached in \d+ steps\. The mean of row 10 \(multiplier 1\.75\) is held at the end of its range: since no multiplier is below 0, no step inwards raises the likelihood\. No standard errors: at an edge the likelihood is not round, and what is usual elsewhere does not hold\.$/,
    )
    expect(evidence(outcome)).toMatchObject({ edge: [{ row: 10, multiplier: expect.closeTo(1.75, 10) }] })
  })

  it("gives a dependent term as the combination that it is", async () => {
    const x = [1, 2, 3, 5, 8]
    const outcome = await finding(`${counts}link log\npredictor x + z`, {
      x: number(...x),
      z: number(...x.map((value) => 3 - value / 2)),
      y: count(3, 1, 4, 1, 5),
    })
    expect(sentence(outcome, "quiet")).toContain("In all rows used z = 3 − 0.5 × x.")
  })

  it("says why a fit without what is left has no errors, and that a perfect one has nothing to test", async () => {
    const full = await finding("response y\nfamily normal\nlink identity\npredictor x", { x: number(1, 2), y: number(3, 1) })
    expect(sentence(full, "quiet")).toContain("No standard errors: nothing is left from which the dispersion could be judged.")
    const perfect = await finding("response y\nfamily normal\nlink identity\npredictor x", { x: number(1, 2, 3), y: number(3, 5, 7) })
    expect(sentence(perfect, "quiet")).toContain("The fit is perfect, so the standard errors are 0 and there is nothing to test.")
  })
})

describe("the test of the link", () => {
  const table = {
    x: number(1, 2, 3, 4, 5, 6),
    z: number(2, 1, 2, 1, 1, 2),
    lot: letters("abcabc"),
    y: count(1, 3, 2, 6, 4, 9),
    h: number(1, 2, 1, 2, 1, 2),
  }

  it.each(["x", "x + power(x, 2)", "natural_spline(x, knots 1)"])(
    "is one of curvature too where all is a curve of one number: %s",
    async (predictor) => {
      const outcome = await finding(`${counts}link log\npredictor ${predictor}`, table)
      expect(sentence(outcome, "plain")).toMatch(/With one predictor that is a number, this test cannot tell the link from curvature\.$/)
    },
  )

  it.each(["x + z", "x + lot"])("is more than that with %s", async (predictor) => {
    const outcome = await finding(`${counts}link log\npredictor ${predictor}`, table)
    expect(sentence(outcome, "plain")).toContain("η² has a score of")
    expect(sentence(outcome, "plain")).not.toContain("curvature.")
  })

  it("is none where the model is saturated, or its terms make η²", async () => {
    const full = await finding(`${shares}link logit\npredictor lot`, { lot: letters("abc"), y: count(3, 4, 5), n: count(10, 10, 10) })
    expect(sentence(full, "plain")).toMatch(
      /The model has a coefficient for every row, so it fits under any link: there is no test of the link\.$/,
    )
    const cells = await finding(`${counts}link log\npredictor lot`, table)
    expect(sentence(cells, "plain")).toMatch(/The terms can make η² themselves, so there is no test of the link\.$/)
  })
})
