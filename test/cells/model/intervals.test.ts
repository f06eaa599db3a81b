// Profiles as a late part: the finding is there before them, and whoever reads the fit neither waits for them nor runs again.

import { expect, it } from "vitest"
import { kinds } from "../../../cells/index.ts"
import { words } from "../../../cells/words.ts"
import { createEngine, createEvaluator, read } from "../../../runtime/index.ts"
import { count, finding, number, summaryOf, wholeOf } from "./laboratory.ts"

const cells = [
  'data d\n  from "d.csv"\n  column x number\n  column y count',
  "model m\n  data d\n  response y\n  family poisson\n  link log\n  predictor x",
  "scales\n  model m\n  beside log",
  'value slope = coefficient(m, "x")',
  "note\nThe slope is {slope} with a deviance of {deviance(m)}.",
]

it("comes after the rest of the finding, and runs no reader again", async () => {
  const engine = createEngine({
    words,
    evaluator: createEvaluator({
      kinds,
      bytes: async function* () {
        yield new TextEncoder().encode("x,y\n1,2\n2,3\n3,7\n4,8\n5,12\n")
      },
      pause: async () => {},
    }),
    notebook: {
      id: "late",
      title: "",
      cells: cells.map((text, k) => ({ id: `c${k}`, text })),
      enclosures: [{ name: "d.csv", media: "text/csv", size: 30, sha256: "0".repeat(64) }],
      rest: null,
    },
  })
  const ran: string[] = []
  engine.subscribe((event) => {
    if (event.type === "ran") ran.push(read(cells[Number(event.id.slice(1))] ?? "").kind ?? "")
  })
  const intervals = (): readonly unknown[] => {
    const state = engine.state("c1")
    if (state.status !== "ready") throw new Error(`the model is ${state.status}`)
    const summary = state.shown.summary as {
      readonly coefficients: readonly { readonly interval: unknown; readonly interval_by: string }[]
    }
    return summary.coefficients.map(({ interval, interval_by: by }) => [by, interval === null])
  }
  // A gesture leaves late parts for later.
  engine.dispatch({ changes: [{ type: "write", id: "c0", text: `${cells[0]}\n` }] }, { gesture: "drag" })
  await engine.settled()
  engine.rest()
  await engine.settled()
  expect(intervals()).toEqual([
    ["profile", false],
    ["profile", false],
  ])
  ran.length = 0
  engine.dispatch({ changes: [{ type: "write", id: "c1", text: `${cells[1]}\n  interval wald` }] })
  engine.rest()
  await engine.settled()
  expect(intervals()).toEqual([
    ["wald", false],
    ["wald", false],
  ])
  // The fit is the same, so nobody who reads it runs.
  expect(ran).toEqual(["model"])
})

it("shows the finding without intervals first", async () => {
  const table = { x: number(1, 2, 3, 4, 5), y: count(2, 3, 7, 8, 12) }
  const clauses = "response y\nfamily poisson\nlink log\npredictor x"
  const outcome = await finding(clauses, table)
  expect(wholeOf(outcome).intervals.ends?.length).toBe(2)
  const [, slope] = summaryOf(outcome)["coefficients"] as readonly { readonly interval: readonly number[]; readonly beta: number }[]
  expect(slope?.interval[0]).toBeLessThan(slope?.beta ?? 0)
  expect(slope?.interval[1]).toBeGreaterThan(slope?.beta ?? 0)
})
