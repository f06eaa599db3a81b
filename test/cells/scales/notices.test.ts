// Every notice of `scales`, by its code and the words it stands at.

import { describe, expect, it } from "vitest"
import { textRange } from "../../../runtime/place.ts"
import { read } from "../../../runtime/statement.ts"
import { settledBook } from "../../book.ts"

const csv = "x,lot,n,k,zero\n1,a,20,3,0\n2,b,20,7,0\n3,a,20,9,0\n4,b,20,14,0\n5,a,20,16,0\n6,b,20,19,0\n"
const others = [
  'data d\n  from "d.csv"\n  column x number\n  column lot category\n  column n count\n  column k count\n  column zero number',
  "model m\n  data d\n  response k out of n\n  family binomial\n  link logit\n  predictor x + lot",
  "model bare\n  data d\n  response k out of n\n  family binomial\n  link logit\n  predictor intercept",
  "model line\n  data d\n  response k\n  family poisson\n  link identity\n  predictor x",
  "model rate\n  data d\n  response k out of n\n  family binomial\n  link cloglog\n  predictor x\n  exposure x",
  'value word = "a"',
  "value one = 1",
]

async function noticesOf(text: string): Promise<readonly string[]> {
  const book = await settledBook([...others, text], { "d.csv": csv })
  const statement = read(text)
  return book.notices("scales").map(({ code, at }) => {
    const { from, to } = textRange(statement, at)
    return `${code} at ${JSON.stringify(text.slice(from, to))}`
  })
}

describe("a notice of scales", () => {
  it.each([
    ["says no model", "scales\n  across x", 'scales/no-model at ""'],
    ["names what is not a model", "scales\n  model one", 'scales/not-a-model at "one"'],
    ["finds nothing to draw across", "scales\n  model bare", 'scales/nothing-across at ""'],
    ["misses a column across", "scales\n  model m\n  across n", 'scales/not-in-predictor at "n"'],
    ["misses a column to split by", "scales\n  model m\n  across x\n  split k", 'scales/not-in-predictor at "k"'],
    ["will not split by a number", "scales\n  model m\n  across lot\n  split x", 'scales/split-number at "x"'],
    ["will not split by the axis", "scales\n  model m\n  across lot\n  split lot", 'scales/split-across at "lot"'],
    ["will not hold what is drawn", "scales\n  model m\n  across x\n  hold x = 2", 'scales/hold-drawn at "x"'],
    ["misses a column to hold", "scales\n  model m\n  across x\n  hold n = 2", 'scales/not-in-predictor at "n"'],
    ["misses a level", 'scales\n  model m\n  across x\n  hold lot = "z"', 'scales/no-such-level at "\\"z\\""'],
    ["wants a number to hold at", 'scales\n  model m\n  across lot\n  hold x = "a"', 'scales/held-wrongly at "\\"a\\""'],
    ["wants a number for a range", "scales\n  model m\n  across x\n  from 0 to word", 'scales/not-a-number at "word"'],
    ["wants a range that holds something", "scales\n  model m\n  across x\n  from 3 to 3", 'scales/empty-range at "from 3 to 3"'],
    ["wants finite ends", "scales\n  model m\n  across x\n  from 0 to infinity", 'scales/not-a-number at "from 0 to infinity"'],
    ["has no range across levels", "scales\n  model m\n  across lot\n  from 0 to 2", 'scales/range-of-levels at "from 0 to 2"'],
    ["does not know a link", "scales\n  model m\n  across x\n  beside logit, prbit", 'scales/no-such-link at "prbit"'],
    [
      "knows what a parameter can be",
      "scales\n  model m\n  across x\n  beside aranda_ordaz(-3)",
      'scales/parameter-outside at "aranda_ordaz(-3)"',
    ],
    ["refuses a link of other means", "scales\n  model line\n  across x\n  beside logit", 'scales/link-not-legal at "logit"'],
    ["wants a parameter", "scales\n  model line\n  across x\n  beside power", 'scales/link-parameters at "power"'],
    ["wants no parameter", "scales\n  model line\n  across x\n  beside log(2)", 'scales/link-parameters at "log(2)"'],
    ["refuses a link that has no mean per unit", "scales\n  model rate\n  beside cloglog, logit", 'scales/link-not-per-unit at "logit"'],
    ["says where a line leaves the means", "scales\n  model line\n  across x\n  from -9 to 3", 'scales/leaves-range at "from -9 to 3"'],
  ])("%s", async (_, text, expected) => {
    expect(await noticesOf(text)).toEqual([expected])
  })

  it("offers the nearest column as a mend", async () => {
    const book = await settledBook([...others, "scales\n  model m\n  across lott"], { "d.csv": csv })
    expect(book.notices("scales")[0]?.mend?.edits).toEqual([{ cell: null, clause: "across", nth: 0, says: "lot" }])
  })

  it("puts cloglog alone on the strip of a binomial model with an exposure", async () => {
    const book = await settledBook([...others, "scales\n  model rate\n  across x"], { "d.csv": csv })
    expect(book.notices("scales")).toEqual([])
    expect(book.summary("scales")["strip"]).toEqual([{ link: "cloglog", delta_aic: 0 }])
  })
})
