// A number that the predictor takes as a category: the model has a mean at the values it was fitted to, and nowhere between.

import { describe, expect, it } from "vitest"
import { settledBook } from "../../book.ts"

const csv = "c,x,y\n1,1,3\n2,2,1\n3,4,5\n2,6,0\n1,3,2\n3,1,1\n"
const others = [
  'data d\n  from "d.csv"\n  column c count\n  column x number\n  column y count',
  "model m\n  data d\n  response y\n  family normal\n  link identity\n  predictor x + category(c)",
]
const bookOf = (...texts: string[]) => settledBook([...others, ...texts], { "d.csv": csv })
const codesOf = async (text: string): Promise<readonly string[]> => (await bookOf(text)).notices("scales").map(({ code }) => code)

interface Scales {
  readonly held: Readonly<Record<string, number>>
  readonly curves: readonly { readonly x: readonly number[]; readonly mu: readonly (number | null)[] }[]
}

describe("a number taken as a category", () => {
  it("is held at its least value, where the model has a mean", async () => {
    const book = await bookOf(
      "scales\n  model m\n  across x\n  beside identity",
      "value v = mean_at(m, x = 1)",
      "value w = mean_at(m, x = 1, c = 1)",
    )
    const found = book.summary("scales") as unknown as Scales
    expect(found.held).toEqual({ c: 1 })
    expect(found.curves[0]?.mu.every(Number.isFinite)).toBe(true)
    expect(book.notices("scales")).toEqual([])
    expect(book.summary("v")).toEqual(book.summary("w"))
    expect(found.curves[0]?.mu[0]).toBe(book.summary("w")["value"])
  })

  it("is drawn across at its values only", async () => {
    const book = await bookOf("scales\n  model m\n  across c\n  beside identity")
    const [curve] = (book.summary("scales") as unknown as Scales).curves
    expect(curve?.x).toEqual([1, 2, 3])
    expect(curve?.mu.every(Number.isFinite)).toBe(true)
    expect(book.notices("scales")).toEqual([])
  })

  it("is held and drawn nowhere else", async () => {
    expect(await codesOf("scales\n  model m\n  across x\n  hold c = 7")).toEqual(["scales/no-such-value"])
    expect(await codesOf("scales\n  model m\n  across c\n  from 4 to 9")).toEqual(["scales/empty-range"])
    const book = await bookOf("value v = mean_at(m, x = 1, c = 9)")
    expect(book.notices("v").map(({ code, text }) => [code, text])).toEqual([
      ["value/unknown-level", "c is taken as a category, and none of the rows used has c 9."],
    ])
  })
})
