import { describe, expect, it } from "vitest"
import { textRange } from "../../../runtime/place.ts"
import { read } from "../../../runtime/statement.ts"
import { type Book, settledBook } from "../../book.ts"

// Twelve rows made for this test; what is expected of them is worked out beside each value.
const beds = `night,lot,kept,n
1,a,8,10
2,a,6,10
3,a,3,10
1,b,9,10
2,b,7,10
3,b,5,10
`
const data = 'data beds\n  from "beds.csv"\n  column night number\n  column lot category\n  column kept count\n  column n count'
const model = "model m\n  data beds\n  response kept out of n\n  family binomial\n  link logit\n  predictor night + lot"

const bookOf = (...cells: string[]): Promise<Book> => settledBook([data, model, ...cells], { "beds.csv": beds })

/** What a value is worth, or its notices with the text they underline. */
const worth = async (expression: string, ...more: string[]): Promise<unknown> => {
  const text = `value v = ${expression}`
  const book = await bookOf(text, ...more)
  const state = book.state("v")
  if (state.status === "ready") return book.summary("v")["value"]
  return book.notices("v").map(({ code, at }) => {
    const { from, to } = textRange(read(text), at)
    return `${code} <${text.slice(from, to)}>`
  })
}

describe("a value over a model", () => {
  it("reads coefficients, deviance and AIC as the model's own summary has them", async () => {
    const book = await bookOf(
      'value slope = coefficient(m, "night")',
      'value shift = coefficient(m, "lot is b")',
      "value d = deviance(m)",
      "value a = aic(m)",
    )
    const summary = book.summary("m")
    const coefficients = summary["coefficients"] as readonly { readonly of: string; readonly beta: number }[]
    const beta = (of: string): number | undefined => coefficients.find((each) => each.of === of)?.beta
    expect(beta("night")).toBeTypeOf("number")
    expect(book.summary("slope")["value"]).toBe(beta("night"))
    expect(book.summary("shift")["value"]).toBe(beta("lot is b"))
    expect(book.summary("d")["value"]).toBe((summary["fit"] as { readonly deviance: number }).deviance)
    expect(book.summary("a")["value"]).toBe((summary["criteria"] as { readonly aic: number }).aic)
  })

  it("gives the mean by the formula of the link, and the default is the mean of a number and the first level", async () => {
    const logit = 'coefficient(m, "intercept") + 2.5*coefficient(m, "night") + coefficient(m, "lot is b")'
    const stated = await worth(`mean_at(m, night = 2.5, lot = "b") - inverse_logit(${logit})`)
    expect(Math.abs(stated as number)).toBeLessThan(1e-14)
    // Night runs 1, 2, 3 with ten trials each: its mean is 2.
    const held = await worth('mean_at(m) - mean_at(m, night = 2, lot = "a")')
    expect(Math.abs(held as number)).toBeLessThan(1e-14)
    const book = await bookOf("value v = mean_at(m, night = 1)")
    expect(book.notices("v").map(({ level, code, text }) => [level, code, text])).toEqual([
      ["remark", "value/held-by-default", "In mean_at(m, night = 1), lot at a is held there because nothing else is said."],
    ])
  })

  it("follows a dial and another value", async () => {
    const at = await worth(
      'mean_at(m, night = d, lot = l) - mean_at(m, night = 2, lot = "b")',
      "dial d\n  from 0 to 4\n  step 1\n  start 2",
      'dial l\n  choice "a", "b"\n  start "b"',
    )
    expect(at).toBe(0)
  })

  it.each([
    ["m + 1", ["value/not-a-number <m>"]],
    ["deviance(beds)", ["value/no-model <beds>"]],
    ["deviance(1)", ["value/no-model <1>"]],
    ['coefficient(m, "nigth")', ['value/unknown-term <"nigth">']],
    ["coefficient(m, 1)", ["value/term <1>"]],
    ["mean_at(m, 3)", ["value/held <3>"]],
    ["mean_at(m, nihgt = 3)", ["value/not-in-predictor <nihgt>"]],
    ["mean_at(m, night = 1, night = 2)", ["value/held-twice <night>"]],
    ['mean_at(m, night = "a")', ['value/held <"a">']],
    ['mean_at(m, night = 1, lot = "c")', ['value/unknown-level <"c">']],
    ["log(0)", ["value/missing <log(0)>"]],
    ["beds", ["value/not-a-number <beds>"]],
    ["1 + true", ["expression/type <true>"]],
    ["lgo(2)", ["expression/unknown-function <lgo>"]],
  ])("%s is a fault", async (expression, expected) => {
    expect(await worth(expression)).toEqual(expected)
  })

  it("doubts a comparison with a level there is not, in a value and in a note", async () => {
    const book = await settledBook(['value v = band(1.5, 1, 2) = "1 to 3"', 'note\nis it {band(1.5, 1, 2) = "1 to 3"}'])
    expect(book.summary("v")["value"]).toBe(false)
    for (const name of ["v", "note"])
      expect(book.notices(name).map(({ level, code }) => [level, code])).toEqual([["warning", "expression/unknown-level"]])
  })

  it("has no coefficient where the data give none", async () => {
    const single = "night,kept,n\n1,10,10\n2,10,10\n3,0,10\n"
    const book = await settledBook(
      [
        'data beds\n  from "beds.csv"\n  column night number\n  column kept count\n  column n count\n  make twice = 2*night',
        "model m\n  data beds\n  response kept out of n\n  family binomial\n  link logit\n  predictor night + twice",
        'value v = coefficient(m, "night")',
        'value w = coefficient(m, "twice")',
      ],
      { "beds.csv": single },
    )
    expect(book.notices("v").map(({ code }) => code)).toEqual(["value/no-coefficient"])
    expect(book.notices("w").map(({ code }) => code)).toEqual(["value/no-coefficient"])
  })

  it("is a fault of its heading where there is more than an expression, or nothing", async () => {
    const codes = async (text: string): Promise<readonly string[]> =>
      (await settledBook([text])).engine.notices("c0").map(({ code }) => code)
    expect(await codes("value v")).toEqual(["clause/unexpected"])
    expect(await codes("value v =")).toEqual(["clause/unexpected"])
    expect(await codes("value = 2")).toEqual(["heading/name-missing"])
    expect(await codes("value v = 2 3")).toEqual(["expression/unexpected"])
    expect(await codes("value v = 2\n  unit kg")).toEqual(["clause/unknown"])
  })
})
