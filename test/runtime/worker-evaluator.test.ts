import { MessageChannel, type MessagePort } from "node:worker_threads"
import { afterEach, describe, expect, it } from "vitest"
import { createEvaluator } from "../../runtime/evaluate.ts"
import type { BlockLike } from "../../runtime/kind.ts"
import type { Port } from "../../runtime/worker-evaluator.ts"
import { remoteEvaluator, serveEvaluator } from "../../runtime/worker-evaluator.ts"
import { book } from "./book.ts"
import { kinds } from "./kinds.ts"
import { calm, turn } from "./troubled-evaluator.ts"

const opened: MessagePort[] = []

afterEach(() => {
  for (const port of opened.splice(0)) port.close()
})

/** Two ends of a connection that copies and transfers as a worker's does. */
function ports(): { readonly here: Port; readonly there: Port } {
  const { port1, port2 } = new MessageChannel()
  opened.push(port1, port2)
  const port = (end: MessagePort): Port => ({
    post: (message, transfer) => end.postMessage(message, [...transfer]),
    listen: (hear) => end.on("message", hear),
  })
  return { here: port(port1), there: port(port2) }
}

describe("an evaluator in a worker", () => {
  it("does for the engine what one in the same place does: parts, late parts, gestures and questions", async () => {
    const { here, there } = ports()
    serveEvaluator(there, calm())
    const remote = remoteEvaluator(here)
    const texts = [
      "number a\n  is 3",
      "table t\n  of a\n  column x 1, 2 early\n  column y 4",
      "mean m\n  column x in t",
      "tardy l\n  of m",
      "sum s\n  of l, a",
    ]
    const its = book(texts, remote)
    const near = book(texts)
    await its.rested()
    await near.rested()
    for (const { id } of its.engine.notebook.cells) expect(its.engine.state(id)).toEqual(near.engine.state(id))
    its.write("a", "number a\n  is 5", "g")
    await its.engine.settled()
    expect(its.value("s")).toBe(13 + 5 + 0.009)
    await its.rested()
    expect(its.value("s")).toBe(18)
    expect(await its.engine.ask(its.id("s"), "rows")).toEqual({ asked: "rows", value: 18 })
  })

  it("that does not answer is replaced, and the engine asks again for what was under way and what was held", async () => {
    const first = ports()
    serveEvaluator(first.there, calm())
    const remote = remoteEvaluator(first.here)
    const its = book(["number a\n  is 3", "sum s\n  of a", "sum t\n  of a"], remote)
    await its.rested()
    const second = ports()
    // Nobody serves the second: it is a worker that hangs.
    remote.replace(second.here)
    its.write("s", "sum s\n  of a, a\n  again")
    await turn()
    expect(its.state("s").status).toBe("working")
    const asked = its.engine.ask(its.id("t"), "rows")
    const third = ports()
    serveEvaluator(third.there, calm())
    remote.replace(third.here)
    await its.rested()
    expect(its.state("s").status).toBe("ready")
    expect(await asked).toEqual({ asked: "rows", value: 3 })
  })

  it("ignores what else passes on the connection", async () => {
    const { here, there } = ports()
    serveEvaluator(there, calm())
    const remote = remoteEvaluator(here)
    there.post({ placed: "abc" }, [])
    here.post("hello", [])
    here.post({ type: "greeting" }, [])
    const its = book(["number a\n  is 3"], remote)
    await its.rested()
    expect(its.value("a")).toBe(3)
  })

  it("gives the arrays of blocks away and keeps those of values", async () => {
    const column = new Float64Array([1, 2, 3])
    const drawn = new Float64Array([4, 5])
    const kind = kinds.map((each) =>
      each.words.word !== "number"
        ? each
        : {
            ...each,
            evaluate: async () => ({ ok: true as const, found: { value: 1, leaves: {}, column }, notices: [] }),
            show: (found: { column: Float64Array }): readonly BlockLike[] => [{ type: "figure", drawn, column: found.column } as BlockLike],
          },
    )
    const { here, there } = ports()
    serveEvaluator(there, createEvaluator({ kinds: kind, bytes: () => column as never, pause: turn }))
    const its = book(["number a"], remoteEvaluator(here))
    await its.rested()
    const state = its.state("a")
    const block = (state.status === "ready" ? state.shown.blocks[0] : null) as unknown as { drawn: Float64Array; column: Float64Array }
    expect([...block.drawn, ...block.column]).toEqual([4, 5, 1, 2, 3])
    expect(drawn.length).toBe(0)
    expect(column.length).toBe(3)
  })

  it("answers with a crash where a finding cannot be sent at all", async () => {
    const kind = kinds.map((each) => ({ ...each, show: () => [{ type: "sentence", text: () => "no" } as unknown as BlockLike] }))
    const { here, there } = ports()
    serveEvaluator(there, createEvaluator({ kinds: kind, bytes: () => kind as never, pause: turn }))
    const its = book(["number a"], remoteEvaluator(here))
    await its.rested()
    expect(its.state("a")).toMatchObject({ status: "crash", text: expect.stringContaining("DataCloneError") })
  })
})
