// Averaged curves by their definition: the mean of the means over the rows used, worked out here from the coefficients.

import { expect, it } from "vitest"
import { settledBook } from "../../book.ts"

const rows: readonly (readonly [x: number, lot: string, y: number])[] = [
  [0.3, "a", 2],
  [1.1, "a", 3],
  [2.7, "a", 9],
  [0.9, "b", 1],
  [1.9, "b", 1],
  [3.3, "b", 4],
]
const csv = `x,lot,y\n${rows.map((row) => row.join(",")).join("\n")}\n`

it("moves each working response to the averaged curve at its own x, between the points of the grid too", async () => {
  const book = await settledBook(
    [
      'data d\n  from "d.csv"\n  column x number\n  column lot category\n  column y count',
      "model m\n  data d\n  response y\n  family poisson\n  link log\n  predictor x*lot",
      "scales\n  model m\n  across x\n  averaged yes\n  beside log",
    ],
    { "d.csv": csv },
  )
  const model = book.summary("m") as unknown as { readonly coefficients: readonly { readonly beta: number }[] }
  const [constant, slope, level, slopeBy] = model.coefficients.map(({ beta }) => beta) as [number, number, number, number]
  const mean = (x: number, lot: string): number => Math.exp(constant + slope * x + (lot === "b" ? level + slopeBy * x : 0))
  const { points } = book.summary("scales") as unknown as { readonly points: { readonly x: number[]; readonly working: number[] } }
  const expected = rows
    .map(([x, lot, y]) => {
      const averaged = rows.reduce((sum, [, other]) => sum + mean(x, other), 0) / rows.length
      return { x, working: Math.log(averaged) + (y - mean(x, lot)) / mean(x, lot) }
    })
    .sort((a, b) => a.x - b.x)
  expect(points.x).toEqual(expected.map(({ x }) => x))
  for (const [i, { working }] of expected.entries()) expect(points.working[i]).toBeCloseTo(working, 11)
})
