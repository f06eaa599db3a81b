// Which work keeps a worker from answering: found out by elimination, given up as a crash, and nobody else with it.

import { describe, expect, it } from "vitest"
import type { Evaluator, Result, Task } from "../../../runtime/evaluator.ts"
import { withSuspects } from "../../../ui/page/suspects.ts"

const task = (id: number, cell: string, text = cell): Task => ({ id, cell, text, inputs: [], files: [], gesture: false, near: null })
const events = { published: () => {}, soFar: () => {} }
const lost: Result = { type: "lost", hashes: [] }
const cancelled: Result = { type: "cancelled" }

/** An evaluator whose tasks come back when told to. */
function inHand() {
  const under = new Map<number, { task: Task; events: Parameters<Evaluator["evaluate"]>[1]; done: (result: Result) => void }>()
  const account: string[] = []
  const evaluator: Evaluator = {
    evaluate: (sent, told) => new Promise((done) => under.set(sent.id, { task: sent, events: told, done })),
    cancel: () => {},
    rest: () => {},
    ask: async () => ({ type: "lost" }),
    keep: () => {},
  }
  const suspects = withSuspects(evaluator, {
    began: () => void account.push("began"),
    ended: () => void account.push("ended"),
    cancelled: () => void account.push("cancelled"),
  })
  const end = (id: number, result: Result): void => {
    under.get(id)?.done(result)
    under.delete(id)
  }
  return {
    suspects,
    account,
    end,
    events: (id: number) => under.get(id)?.events,
    underWay: () => [...under.values()].map(({ task: { cell } }) => cell),
    /** The worker falls silent and is replaced: all that was under way is lost. */
    replaced: () => {
      suspects.silent("it was silent")
      for (const id of [...under.keys()]) end(id, lost)
    },
  }
}

const turn = () => new Promise((done) => setTimeout(done))

describe("suspects", () => {
  it("are lost at a first silence, like everything under way", async () => {
    const { suspects, replaced, account } = inHand()
    const both = [suspects.evaluate(task(1, "a"), events), suspects.evaluate(task(2, "b"), events)]
    replaced()
    expect(await Promise.all(both)).toEqual([lost, lost])
    expect(account).toEqual(["began", "began", "ended", "ended"])
  })

  it("are tried one at a time, and the one at fault is given up", async () => {
    const { suspects, replaced, underWay, end } = inHand()
    const first = [suspects.evaluate(task(1, "a"), events), suspects.evaluate(task(2, "b"), events)]
    replaced()
    await Promise.all(first)
    const [a, b] = [suspects.evaluate(task(3, "a"), events), suspects.evaluate(task(4, "b"), events)]
    await turn()
    expect(underWay()).toEqual(["a"])
    replaced()
    expect(await a).toEqual({ type: "crash", text: "it was silent", stack: "" })
    await turn()
    expect(underWay()).toEqual(["b"])
    end(4, cancelled)
    expect(await b).toEqual(cancelled)
  })

  it("are tried again as anyone once they were given up, or written otherwise", async () => {
    const { suspects, replaced, underWay } = inHand()
    for (const id of [1, 2]) {
      const result = suspects.evaluate(task(id, "a"), events)
      await turn()
      replaced()
      await result
    }
    void suspects.evaluate(task(3, "a"), events)
    void suspects.evaluate(task(4, "a", "a, otherwise"), events)
    expect(underWay()).toEqual(["a", "a"])
  })

  it("are not those that wait for rest while others work", async () => {
    const { suspects, replaced, events: told } = inHand()
    const calm = suspects.evaluate(task(1, "calm"), events)
    told(1)?.soFar({
      ok: true,
      version: 1,
      whole: null,
      parts: {},
      bytes: {},
      shown: { blocks: [], notices: [], summary: null },
      tried: [],
    })
    replaced()
    await calm
    const again = suspects.evaluate(task(2, "calm"), events)
    replaced()
    expect(await again).toEqual(lost)
  })

  it("that were taken back while they stood in line never begin", async () => {
    const { suspects, replaced, underWay, end, account } = inHand()
    const first = [suspects.evaluate(task(1, "a"), events), suspects.evaluate(task(2, "b"), events)]
    replaced()
    await Promise.all(first)
    const [a, b] = [suspects.evaluate(task(3, "a"), events), suspects.evaluate(task(4, "b"), events)]
    await turn()
    suspects.cancel(4)
    suspects.cancel(3)
    expect(account.filter((each) => each === "cancelled")).toHaveLength(1)
    end(3, cancelled)
    expect(await Promise.all([a, b])).toEqual([cancelled, cancelled])
    expect(underWay()).toEqual([])
  })
})
