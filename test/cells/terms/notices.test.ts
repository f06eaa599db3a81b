// Every notice of `terms`: its code, its place, its words, and what its click writes.

import { describe, expect, it } from "vitest"
import type { Json } from "../../../runtime/index.ts"
import { read, rewritten, textRange } from "../../../runtime/index.ts"
import { settledBook } from "../../book.ts"

const sprouts =
  "warmth,lot,sown,up,few\n4,a,40,3,0\n8,a,40,9,0\n12,a,40,22,1\n16,a,40,33,3\n4,b,40,6,0\n8,b,40,17,2\n12,b,40,30,2\n16,b,40,38,5\n"
const data =
  'data sprouts\n  from "sprouts.csv"\n  column warmth number\n  column lot category\n  column sown count\n  column up count\n  column few count\n  make twice = 2*warmth'
const model = (predictor: string, more = ""): string =>
  `model m\n  data sprouts\n  response up out of sown\n  family binomial\n  link logit\n  predictor ${predictor}${more}`

const book = (predictor: string, terms: string, more = "") =>
  settledBook([data, model(predictor, more), `terms t${terms}`], { "sprouts.csv": sprouts })

/** `level code at "words": text` for each notice of the cell. */
async function told(predictor: string, terms: string, more = ""): Promise<readonly string[]> {
  const text = `terms t${terms}`
  return (await book(predictor, terms, more)).notices("t").map(({ level, code, at, text: says }) => {
    const { from, to } = textRange(read(text), at)
    return `${level} ${code.replace("terms/", "")}${at.clause < 0 ? "" : ` at "${text.slice(from, to)}"`}: ${says}`
  })
}

const mended = async (predictor: string, terms: string): Promise<string> => {
  const text = `terms t${terms}`
  const [notice] = (await book(predictor, terms)).notices("t")
  return (notice?.mend?.edits ?? []).reduce((now, edit) => rewritten(now, edit), text)
}

const rows = async (predictor: string, terms: string, more = ""): Promise<readonly { readonly [member: string]: Json }[]> =>
  (await book(predictor, terms, more)).summary("t")["rows"] as readonly { readonly [member: string]: Json }[]

describe("faults", () => {
  it.each([
    ["warmth", "", ["fault no-model: This cell does not say whose terms it takes out."]],
    ["warmth", "\n  model sprouts", ['fault not-a-model at "sprouts": sprouts is not a model.']],
    ["intercept", "\n  model m", ['fault no-terms at "m": The model m has no terms that could be taken out.']],
    [
      "warmth",
      "\n  model m\n  without warmth - intercept",
      ['fault constant-stays at "warmth - intercept": The constant is taken out of the model, not here.'],
    ],
    [
      "warmth",
      "\n  model m\n  without intercept",
      ['fault nothing-taken-out at "intercept": The constant alone is no term that could go.'],
    ],
    ["warmth + lot", "\n  model m\n  without warmht", ['fault not-in-predictor at "warmht": The predictor of m has no term warmht.']],
    [
      "warmth*lot",
      "\n  model m\n  without lot",
      ['fault contained at "lot": lot is contained in warmth.lot, which would have another meaning without it.'],
    ],
  ])("%j: %j", async (predictor, terms, says) => {
    expect(await told(predictor, terms)).toEqual(says)
  })

  it("are mended by what was meant", async () => {
    expect(await mended("warmth + lot", "\n  model m\n  without lot\n  without warmht")).toBe(
      "terms t\n  model m\n  without lot\n  without warmth",
    )
    expect(await mended("warmth*lot", "\n  model m\n  without lot")).toBe("terms t\n  model m\n  without lot + warmth.lot")
    expect(await mended("warmth + power(warmth, 2)", "\n  model m\n  without warmth")).toBe(
      "terms t\n  model m\n  without warmth + power(warmth, 2)",
    )
  })
})

describe("what is said of rows", () => {
  it("says that a term which others already say goes without loss", async () => {
    expect(await told("warmth + twice", "\n  model m\n  without twice")).toEqual([
      "remark nothing-apart: twice can go without loss: the other terms already say what it says.",
    ])
    expect(await rows("warmth + twice", "\n  model m\n  without twice")).toMatchObject([{ df: 6, test: null, statistic: null, p: null }])
  })

  it("says where there is no test, since coefficients run to infinity under sandwich errors", async () => {
    const text = [
      data,
      "model m\n  data sprouts\n  response few\n  family poisson\n  link log\n  predictor lot + category(warmth)\n  standard_errors sandwich",
      "terms t\n  model m\n  without lot",
    ]
    const found = await settledBook(text, { "sprouts.csv": sprouts })
    expect(found.notices("t").map(({ code }) => code)).toEqual(["terms/no-test"])
  })

  it("tests by F where the dispersion is estimated, and by Wald under sandwich errors", async () => {
    const [f] = await rows("warmth + lot", "\n  model m\n  without lot", "\n  dispersion pearson")
    const [wald] = await rows("warmth + lot", "\n  model m\n  without lot", "\n  standard_errors sandwich")
    const [ratio] = await rows("warmth + lot", "\n  model m\n  without lot")
    expect([f?.["test"], wald?.["test"], ratio?.["test"]]).toEqual(["F", "wald", "likelihood_ratio"])
    expect(f?.["deviance"]).toBe(ratio?.["deviance"])
  })

  it("takes out by itself only what may go by itself", async () => {
    const found = await rows("warmth*lot + power(warmth, 2)", "\n  model m")
    expect(found.map((row) => row["without"])).toEqual(["power(warmth, 2)", "warmth.lot"])
  })

  it("shows the rows as a table under a sentence", async () => {
    const state = (await book("warmth*lot", "\n  model m")).state("t")
    if (state.status !== "ready") throw new Error(state.status)
    const blocks = state.shown.blocks as readonly {
      readonly type: string
      readonly text?: string
      readonly rows?: readonly (readonly unknown[])[]
    }[]
    expect(blocks.map(({ type }) => type)).toEqual(["sentence", "table", "sentence"])
    expect(blocks[0]?.text).toMatch(/^Taken out of m: without warmth\.lot p /)
    expect(blocks[1]?.rows?.map(([head]) => head)).toEqual(["nothing", "warmth.lot"])
    expect(blocks[2]?.text).toBe(
      "warmth is contained in warmth.lot and does not go by itself; lot is contained in warmth.lot and does not go by itself.",
    )
  })
})

it("says where the smaller fit cannot be begun", async () => {
  // A power link needs a positive linear predictor, and without the constant's part a column of both signs has none.
  const text = [
    'data d\n  from "d.csv"\n  column x number\n  column y number',
    "model m\n  data d\n  response y\n  family gamma\n  link square_root\n  predictor category(x) + x - intercept",
    "terms t\n  model m\n  without category(x)",
  ]
  const found = await settledBook(text, { "d.csv": "x,y\n-1,2\n-1,3\n1,5\n1,4\n2,6\n2,7\n" })
  expect(found.notices("t").map(({ code }) => code)).toEqual(["terms/no-fit"])
})
