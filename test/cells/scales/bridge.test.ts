// The pairs of the bridge, where the means on the plot are ordinary and where they are not.

import { describe, expect, it } from "vitest"
import { bridgeOf } from "../../../cells/scales/bridge.ts"
import { linkOf } from "../../../cells/statistics/index.ts"
import { settledBook } from "../../book.ts"

const positive = { low: 0, high: Infinity }
const any = { low: -Infinity, high: Infinity }

describe("the bridge", () => {
  it("has rising means, each with its η, and the round numbers among them", () => {
    const { mu, eta } = bridgeOf(linkOf({ name: "square_root", parameters: [] }, 1), positive, [0.3, 41])
    expect([...mu]).toEqual([...mu].toSorted((a, b) => a - b))
    expect([...mu]).toEqual(expect.arrayContaining([0.5, 1, 2, 5, 10, 20, 40]))
    for (const [i, mean] of mu.entries()) expect(eta[i]).toBe(Math.sqrt(mean))
  })

  it.each([
    [any, [3, 3]],
    [any, [0, 0]],
    [positive, [2, 2]],
    [any, [5e-324, 5e-324]],
    [any, [0, 5e-324]],
    [any, [-1.7e308, 1.7e308]],
    [any, [Infinity, -Infinity]],
    [positive, [1e-300, Infinity]],
    [any, [Number.NaN, Number.NaN]],
  ] as const)("comes to an end over %j, %j", (possible, span) => {
    const { mu, eta } = bridgeOf(linkOf({ name: "identity", parameters: [] }, 1), possible, span)
    expect(mu.every((mean, i) => Number.isFinite(mean) && Number.isFinite(eta[i]))).toBe(true)
  })
})

it("draws a model whose means are all one", async () => {
  const book = await settledBook(
    [
      'data d\n  from "d.csv"\n  column x number\n  column y number',
      "model m\n  data d\n  response y\n  family normal\n  link identity\n  predictor x",
      "scales\n  model m",
    ],
    { "d.csv": "x,y\n1,7\n2,7\n3,7\n" },
  )
  expect(book.state("scales").status).toBe("ready")
})
