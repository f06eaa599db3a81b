// What `scales` shows while a hand is on a dial.

import { describe, expect, it } from "vitest"
import type { ScalesBlock } from "../../../cells/block.ts"
import { type Book, settledBook } from "../../book.ts"

const csv = "x,n,k\n1,20,3\n2,20,7\n3,20,9\n4,20,14\n5,20,16\n6,20,19\n"
const texts = [
  'data d\n  from "d.csv"\n  column x number\n  column n count\n  column k count',
  "dial low\n  from -3 to 0\n  step 1\n  start 0",
  "model m\n  data d\n  response k out of n\n  family binomial\n  link logit\n  predictor x",
  "scales\n  model m\n  across x\n  from low to 7\n  beside logit, probit, cloglog",
]

async function drag(book: Book, name: string, to: string): Promise<ScalesBlock> {
  const cell = book.engine.notebook.cells.find(({ text }) => text.startsWith(`dial ${name}`))
  if (cell === undefined) throw new Error(`There is no dial ${name}`)
  book.engine.dispatch(
    { changes: [{ type: "write", id: cell.id, text: cell.text.replace(/start .*/, `start ${to}`) }] },
    { gesture: "hand" },
  )
  await book.engine.settled()
  const state = book.state("scales")
  if (state.status !== "ready") throw new Error(`scales is ${state.status}`)
  return state.shown.blocks[0] as ScalesBlock
}

describe("scales in a gesture", () => {
  it("goes on drawing every candidate while a dial moves the range", async () => {
    const book = await settledBook(texts, { "d.csv": csv })
    const block = await drag(book, "low", "-2")
    expect(block.range).toEqual([-2, 7])
    expect(block.candidates.map(({ curves }) => curves[0]?.x[0])).toEqual([-2, -2, -2])
  })

  it("ends, at rest, where a fresh notebook of the same text begins", async () => {
    const book = await settledBook(texts, { "d.csv": csv })
    await drag(book, "low", "-1")
    await drag(book, "low", "-3")
    book.engine.rest()
    await book.engine.settled()
    const fresh = await settledBook(
      texts.map((text) => text.replace("step 1\n  start 0", "step 1\n  start -3")),
      { "d.csv": csv },
    )
    expect(book.summary("scales")).toEqual(fresh.summary("scales"))
  })
})
