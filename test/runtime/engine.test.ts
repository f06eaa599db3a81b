import { describe, expect, it } from "vitest"

import type { EngineEvent } from "../../runtime/engine.ts"
import { createEngine } from "../../runtime/engine.ts"
import type { AnyWords } from "../../runtime/kind.ts"
import { book, notebook, settledBook } from "./book.ts"
import { glitches, words } from "./kinds.ts"
import type { TroubledEvaluator } from "./troubled-evaluator.ts"
import { calm, troubledEvaluator, turn } from "./troubled-evaluator.ts"

/** An evaluator that does one thing at a time, the oldest first, when it is told to. */
const slow = (): TroubledEvaluator => troubledEvaluator(() => 0)

const steps = async (evaluator: TroubledEvaluator, count: number): Promise<void> => {
  await turn()
  for (let i = 0; i < count; i++) await evaluator.step()
}

const all = async (evaluator: TroubledEvaluator): Promise<void> => {
  await turn()
  while (await evaluator.step()) await turn()
}

describe("what did not happen", () => {
  it("does not refit when only a comment changes", async () => {
    const its = await settledBook("number a\n  is 3", "sum s\n  of a")
    its.write("a", "number a   # dose is log10 of CS2 in mg/l\n    is 3")
    its.write("s", "sum s\n  # of everything\n  of a")
    await its.rested()
    expect(its.ran()).toEqual([])
    expect(its.state("s").status).toBe("ready")
  })

  it("does not run a reader again when a column is added that it does not read", async () => {
    const its = await settledBook("table t\n  column x 1, 2", "mean m\n  column x in t", "mean n\n  column y in t")
    expect([its.state("m").status, its.state("n").status]).toEqual(["ready", "fault"])
    its.write("t", "table t\n  column x 1, 2\n  column y 5")
    await its.rested()
    expect(its.ran()).toEqual(["t", "n"])
    expect(its.value("n")).toBe(5)
  })

  it("runs who misses a column again for every other column, since the nearest name may be another", async () => {
    const its = await settledBook("table t\n  column x 1", "mean n\n  column z in t")
    its.write("t", "table t\n  column x 1\n  column y 5")
    await its.rested()
    expect(its.ran()).toEqual(["t", "n"])
    expect(its.engine.notices(its.id("n"))[0]?.text).toBe("Columns: x, y.")
  })

  it("stops where a result stays the same, and still gives readers their new keys", async () => {
    const its = await settledBook("number a\n  is 3", "rounded r\n  of a", "sum s\n  of r")
    const before = its.state("s")
    its.write("a", "number a\n  is 4")
    await its.rested()
    expect(its.ran()).toEqual(["a", "r"])
    const now = its.state("s")
    expect(now.status === "ready" && before.status === "ready" && now.hash === before.hash && now.key !== before.key).toBe(true)
  })

  it("takes what was found before from the memo", async () => {
    const its = await settledBook("number a\n  is 3", "sum s\n  of a")
    its.write("a", "number a\n  is 4")
    await its.rested()
    its.ran()
    its.write("a", "number a\n  is 3")
    await its.rested()
    expect(its.ran()).toEqual([])
    expect(its.value("s")).toBe(3)
  })

  it("does nothing for a move, a title, or a file that nobody reads", async () => {
    const its = await settledBook("number a\n  is 3", "sum s\n  of a", 'file f\n  from "one"')
    its.ran()
    its.change({ type: "move", id: its.id("s"), to: 0 }, { type: "title", title: "Another" })
    its.change({ type: "enclose", file: { name: "two", media: "", size: 2, sha256: "2".repeat(64) } })
    await its.rested()
    expect(its.ran()).toEqual([])
    its.change({ type: "enclose", file: { name: "one", media: "", size: 2, sha256: "1".repeat(64) } })
    await its.rested()
    expect(its.ran()).toEqual(["f"])
    expect(its.value("f")).toBe(98)
  })

  it("of a chain of 20,000 cells only the first runs when it comes to the same", async () => {
    const chain = Array.from({ length: 20_000 }, (_, i) => (i === 0 ? "number n0\n  is 3" : `sum n${i}\n  of n${i - 1}`))
    const its = await settledBook(...chain)
    expect(its.value("cell-19999")).toBe(3)
    its.write("cell-0", "number n0\n  is 3, 4")
    await its.rested()
    expect(its.ran()).toEqual(["n0"])
    its.write("cell-0", "number n0\n  is 5")
    await its.rested()
    expect(its.value("cell-19999")).toBe(5)
  }, 120_000)

  it("says nothing of a cell that ends up as it was", async () => {
    const its = await settledBook("number a\n  is 3", "sum s\n  of a")
    const from = its.events.length
    its.write("a", "number a\n  is 3  # three")
    await its.rested()
    expect(its.events.slice(from).map(({ type }) => type)).toEqual(["notebook", "rest", "settled"])
  })
})

describe("a fault", () => {
  it("stops only the cell and its readers, who name the nearest cell at fault", async () => {
    const its = await settledBook(
      "number a\n  is 50",
      "sum big\n  of a",
      "sum next\n  of big",
      "sum far\n  of next, a",
      "sum ok\n  of b",
      "number b\n  is 1",
    )
    expect(its.state("big")).toMatchObject({ status: "fault", notices: [{ code: "toy/large" }], shown: { summary: { value: 50 } } })
    expect(its.state("next")).toMatchObject({ status: "waiting", for: its.id("big") })
    expect(its.state("far")).toMatchObject({ status: "waiting", for: its.id("big") })
    expect(its.state("ok").status).toBe("ready")
    its.write("far", "sum far\n  of next, wrong")
    its.change({ type: "insert", at: 0, cell: { id: "w", text: "number wrong\n  wrong" } })
    await its.rested()
    expect(its.state("far")).toMatchObject({ status: "waiting", for: "w" })
  })

  it("of the statement is there at once, without evaluating, beside all its other notices", async () => {
    const evaluator = slow()
    const its = book(["sum s\n  of a, misspelt\n  wrong", "number a"], evaluator)
    expect(its.engine.notices(its.id("s")).map(({ code }) => code)).toEqual(["toy/wrong", "cell/missing-cell"])
    await turn()
    expect(its.state("s").status).toBe("fault")
    expect(its.ran()).toEqual(["a"])
  })

  it("leaves the last good finding to be seen, out of date", async () => {
    const its = await settledBook("number a\n  is 3")
    its.write("a", "number a\n  wrong")
    await its.rested()
    expect(its.state("a")).toMatchObject({ status: "fault", shown: null, last: { summary: { value: 3 } } })
    its.write("a", "numbr a")
    await its.rested()
    expect(its.state("a")).toMatchObject({ status: "fault", last: { summary: { value: 3 } } })
    its.write("a", "table a\n  wrong")
    await its.rested()
    expect(its.state("a")).toMatchObject({ status: "fault", last: null })
  })

  it("in an input settles a reader at once, though another input is slow", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 1", "number bad\n  wrong", "sum s\n  of a, bad", "sum t\n  of s"], evaluator)
    await turn()
    expect(its.state("a").status).toBe("working")
    expect(its.state("s")).toMatchObject({ status: "waiting", for: its.id("bad") })
    expect(its.state("t")).toMatchObject({ status: "waiting", for: its.id("bad") })
    await all(evaluator)
    expect(its.state("s")).toMatchObject({ status: "waiting", for: its.id("bad") })
  })

  it("is found at its place in a file that is not enclosed", async () => {
    const its = await settledBook('file f\n  from "none"')
    expect(its.state("f")).toMatchObject({ status: "fault", notices: [{ code: "cell/missing-file", at: { clause: 0, from: 1, to: 2 } }] })
  })
})

describe("a crash", () => {
  it("is told apart from a fault, holds its readers, and is tried again next time", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 70", "sum s\n  of a", "sum t\n  of s"], evaluator)
    await all(evaluator)
    const state = its.state("s")
    expect(state).toMatchObject({ status: "crash", text: "RangeError: s is more than 60" })
    expect(state.status === "crash" && state.stack).toContain("kinds.ts")
    expect(its.state("t")).toMatchObject({ status: "waiting", for: its.id("s") })
    its.ran()
    its.write("s", "sum s\n  of a # again")
    await all(evaluator)
    expect(its.ran()).toEqual(["s"])
  })

  it("of a kind that throws while reading is the cell's own, and its neighbours go on", async () => {
    const broken: AnyWords = {
      word: "broken",
      name: "optional",
      clauses: {},
      says: "",
      example: "broken",
      parse: () => {
        throw new Error("no idea")
      },
      names: () => ({ defines: null, uses: [], files: [] }),
    }
    const engine = createEngine({
      words: [...words, broken],
      notebook: notebook("broken b", "sum s\n  of b", "number a"),
      evaluator: calm(),
    })
    await engine.settled()
    expect(engine.state("cell-0")).toMatchObject({ status: "crash", text: "Error: no idea" })
    expect(engine.state("cell-1")).toMatchObject({ status: "waiting", for: "cell-0" })
    expect(engine.state("cell-2").status).toBe("ready")
  })
})

describe("cells that are not evaluated", () => {
  it("are the empty, those of comments only, and those switched off, whose readers wait for them", async () => {
    const its = await settledBook("", "# only this", "off number a\n  is 3", "sum s\n  of a")
    expect(["cell-0", "cell-1", "cell-2"].map((id) => its.state(id).status)).toEqual(["off", "off", "off"])
    expect(its.state("s")).toMatchObject({ status: "waiting", for: "cell-2" })
    its.write("cell-2", "number a\n  is 3")
    await its.rested()
    expect(its.value("s")).toBe(3)
  })

  it("leave their name to another cell", async () => {
    const its = await settledBook("off number a\n  is 3", "number a\n  is 4", "sum s\n  of a")
    expect(its.value("s")).toBe(4)
  })
})

describe("order", () => {
  it("puts what is on the screen first, with what it needs, and does the rest in the end", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 1", "sum b\n  of a", "number c\n  is 3", "sum d\n  of c"], evaluator, { atOnce: 1 })
    its.engine.look(new Set([its.id("d")]))
    await all(evaluator)
    expect(its.ran()).toEqual(["c", "d", "a", "b"])
  })

  it("never gives a cell one old and one new input, however unlike the ways to it", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 1", "sum b\n  of a", "sum c\n  of b", "sum d\n  of c, a"], evaluator, { atOnce: 4 })
    await all(evaluator)
    its.ran()
    its.write("a", "number a\n  is 2")
    await steps(evaluator, 2)
    expect(its.state("d").status).toBe("due")
    await all(evaluator)
    expect(its.ran()).toEqual(["a", "b", "c", "d"])
    expect(its.value("d")).toBe(4)
    expect(glitches).toEqual([])
  })

  it("gives up work that nobody wants any more, and keeps what is found of it all the same", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 1"], evaluator)
    await steps(evaluator, 1)
    its.write("a", "number a\n  is 2")
    await all(evaluator)
    expect(its.value("a")).toBe(2)
    expect(its.ran()).toEqual(["a", "a"])
    expect(evaluator.cancelled).toEqual([1])
    its.write("a", "number a\n  is 1")
    await all(evaluator)
    expect(its.value("a")).toBe(1)
    expect(its.ran()).toEqual([])
  })

  it("gives up work on a cell whose input is being found anew", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 1", "sum s\n  of a", "number b\n  is 1"], evaluator, { atOnce: 1 })
    its.engine.look(new Set([its.id("s")]))
    await steps(evaluator, 2)
    expect(its.state("s").status).toBe("working")
    its.write("a", "number a\n  is 2")
    await turn()
    expect(evaluator.cancelled).toEqual([2])
    await all(evaluator)
    expect(its.ran()).toEqual(["a", "s", "a", "s", "b"])
  })
})

describe("parts", () => {
  const table = "table t\n  column x 1, 2 early\n  column y 3"

  it("let their readers go on once they are published, before the rest is there", async () => {
    const evaluator = slow()
    const its = book([table, "mean m\n  column x in t", "mean n\n  column y in t"], evaluator, { atOnce: 3 })
    await steps(evaluator, 2)
    expect(its.ran()).toEqual(["t", "m"])
    expect([its.state("t").status, its.state("m").status, its.state("n").status]).toEqual(["working", "working", "due"])
    await all(evaluator)
    expect([its.value("m"), its.value("n")]).toEqual([3, 3])
  })

  it("that were published do not save a reader from the fault of their maker: neither at work nor done", async () => {
    for (const done of [false, true]) {
      const order: number[] = []
      const evaluator = troubledEvaluator((below) => Math.min(order.shift() ?? 0, below - 1))
      const its = book([`${table}\n  spoilt`, "mean m\n  column x in t", "sum s\n  of m"], evaluator, { atOnce: 3 })
      await steps(evaluator, 2)
      expect(its.state("m").status).toBe("working")
      if (done) {
        // The reader's queue is the second: it begins and ends before its maker does.
        order.push(1, 0, 0, 1, 0, 0)
        for (let i = 0; i < 2; i++) await evaluator.step()
      }
      while (await evaluator.step()) order.length = 0
      expect(its.state("m")).toMatchObject({ status: "waiting", for: its.id("t") })
      expect(its.state("s")).toMatchObject({ status: "waiting", for: its.id("t") })
    }
  })

  it("that come late are shown when they come, after rest, and leave the finding so far to be seen until then", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 4", "tardy t\n  of a", "sum s\n  of t"], evaluator)
    await all(evaluator)
    expect(its.state("t").status).toBe("ready")
    its.write("a", "number a\n  is 5")
    await all(evaluator)
    expect(its.state("t")).toMatchObject({ status: "ready", late: true, hash: null, shown: { summary: { value: 5 } } })
    expect(its.state("s").status).toBe("due")
    await its.engine.settled()
    its.engine.rest()
    await all(evaluator)
    await its.engine.settled()
    expect(its.state("t")).toMatchObject({ status: "ready", late: false })
    expect(its.value("s")).toBe(5)
  })

  it("that are late go on while another cell is edited", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 4", "tardy t\n  of a", "number b\n  is 1"], evaluator)
    its.engine.rest()
    await steps(evaluator, 4)
    its.write("b", "number b\n  is 2")
    its.engine.rest()
    await all(evaluator)
    expect(its.ran().filter((name) => name === "t")).toEqual(["t"])
    expect(its.state("t")).toMatchObject({ status: "ready", late: false })
  })
})

describe("a gesture", () => {
  const drag = (is: number): string => `number dial\n  is ${is}`

  it("keeps one evaluation in flight and the newest text waiting", async () => {
    const evaluator = slow()
    const its = book([drag(0), "tardy t\n  of dial"], evaluator)
    its.engine.rest()
    await all(evaluator)
    its.ran()
    for (let i = 1; i <= 20; i++) its.write("dial", drag(i), "g")
    expect(its.text("dial")).toBe(drag(20))
    await all(evaluator)
    // The first text was in flight, the twentieth waited, all between were replaced.
    expect(its.ran()).toEqual(["dial", "t", "dial", "t"])
    expect(its.value("dial")).toBe(20)
  })

  it("may start warm, and is found again cold at rest, so that what stays does not depend on the path", async () => {
    const evaluator = slow()
    const its = book([drag(0), "tardy t\n  of dial"], evaluator)
    its.engine.rest()
    await all(evaluator)
    for (const is of [7, 8]) {
      its.write("dial", drag(is), "g")
      await all(evaluator)
    }
    expect(its.value("t")).toBe(8.007)
    expect(its.state("t")).toMatchObject({ status: "ready", late: true, hash: null })
    its.ran()
    its.engine.rest()
    expect(its.state("t")).toMatchObject({ status: "ready", late: true })
    await all(evaluator)
    expect(its.ran()).toEqual(["dial", "t"])
    expect(its.value("t")).toBe(8)
    its.write("dial", drag(7))
    its.engine.rest()
    await all(evaluator)
    expect(its.ran()).toEqual(["dial", "t"])
    expect(its.value("t")).toBe(7)
  })

  it("is one undo, and so is a run of keystrokes", async () => {
    const its = await settledBook(drag(0))
    for (const is of [1, 2, 3]) its.write("dial", drag(is), "g")
    its.engine.rest()
    for (const is of [4, 45]) its.write("dial", drag(is))
    its.engine.rest()
    expect(its.engine.undo()).toBe(true)
    expect(its.text("dial")).toBe(drag(3))
    expect(its.engine.undo()).toBe(true)
    expect(its.text("dial")).toBe(drag(0))
    expect([its.engine.canUndo, its.engine.undo(), its.engine.canRedo]).toEqual([false, false, true])
    its.engine.redo()
    its.engine.redo()
    await its.rested()
    expect(its.value("dial")).toBe(45)
  })

  it("leaves what is not on the screen until rest", async () => {
    const evaluator = slow()
    const its = book([drag(0), "sum near\n  of dial", "sum far\n  of dial"], evaluator)
    its.engine.look(new Set([its.id("near")]))
    await all(evaluator)
    its.ran()
    its.write("dial", drag(1), "g")
    await all(evaluator)
    expect(its.ran()).toEqual(["dial", "near"])
    expect(its.state("far").status).toBe("due")
    its.engine.rest()
    await all(evaluator)
    expect(its.ran().toSorted()).toEqual(["dial", "far", "near"])
  })

  it("shows while it goes on, however fast the hand is", async () => {
    const evaluator = slow()
    const its = book([drag(0), "sum s\n  of dial"], evaluator)
    await all(evaluator)
    const shown: unknown[] = []
    its.engine.subscribe((event) => {
      if (event.type === "state" && event.id === its.id("s") && event.state.status === "ready") shown.push(its.value("s"))
    })
    for (let i = 1; i <= 12; i++) {
      its.write("dial", drag(i), "g")
      await steps(evaluator, 1)
    }
    expect(shown.length).toBeGreaterThan(1)
  })
})

describe("an evaluator in trouble", () => {
  it("that has lost what a cell reads has its maker run again, and the maker's other readers left alone", async () => {
    const evaluator = slow()
    const its = book(["number a\n  is 1", "sum s\n  of a", "sum t\n  of a"], evaluator)
    await all(evaluator)
    its.ran()
    evaluator.loseAll()
    its.write("s", "sum s\n  of a, a\n  again")
    await all(evaluator)
    expect(its.ran()).toEqual(["s", "a", "s"])
    expect(its.state("s").status).toBe("ready")
  })

  it("that does not answer can be replaced, and the work is done", async () => {
    const evaluator = slow()
    evaluator.trouble.silence = 1
    const its = book(["number a\n  is 1", "sum s\n  of a"], evaluator)
    await all(evaluator)
    expect(its.state("a").status).toBe("working")
    evaluator.trouble.silence = 0
    evaluator.replace()
    await all(evaluator)
    await its.engine.settled()
    expect(its.value("s")).toBe(1)
  })

  it("that never keeps anything ends in a crash that says so, and not in a round without end", async () => {
    const evaluator = slow()
    evaluator.trouble.lose = 1
    const its = book(["number a\n  is 1", "sum s\n  of a"], evaluator)
    await all(evaluator)
    await its.engine.settled()
    expect(its.state("s")).toMatchObject({ status: "crash", text: expect.stringContaining("again and again") })
  })
})

describe("a question", () => {
  it("is answered from the finding that is shown, though the evaluator has lost it", async () => {
    const evaluator = calm()
    const its = book(["number a\n  is 3", "sum s\n  of a"], evaluator)
    await its.rested()
    expect(await its.engine.ask(its.id("s"), "which rows")).toEqual({ asked: "which rows", value: 3 })
    evaluator.keep(new Set())
    evaluator.keep(new Set())
    expect(await its.engine.ask(its.id("s"), 7)).toEqual({ asked: 7, value: 3 })
  })

  it("to a cell that shows nothing has no answer", async () => {
    const its = await settledBook("number a\n  wrong", "")
    expect(await its.engine.ask(its.id("a"), 1)).toBeNull()
    expect(await its.engine.ask("nobody", 1)).toBeNull()
  })
})

describe("events", () => {
  it("tell of the notebook, of every state once, and of the end", async () => {
    const engine = createEngine({ words, notebook: notebook("number a\n  is 3", "sum s\n  of a"), evaluator: calm() })
    const events: EngineEvent[] = []
    const stop = engine.subscribe((event) => events.push(event))
    await engine.settled()
    const told = events.map((event) => (event.type === "state" ? `${event.id} ${event.state.status}` : event.type))
    expect(told.filter((each) => each.startsWith("cell-0"))).toEqual(["cell-0 working", "cell-0 ready"])
    expect(told.filter((each) => each.startsWith("cell-1"))).toEqual(["cell-1 due", "cell-1 working", "cell-1 ready"])
    expect(told.at(-1)).toBe("settled")
    stop()
    engine.dispatch({ changes: [{ type: "title", title: "Silence" }] })
    expect(events).toHaveLength(told.length)
  })

  it("leave nothing to tell for a change that does not fit", () => {
    const its = book(["number a"])
    const from = its.events.length
    expect(its.engine.dispatch({ changes: [{ type: "remove", id: "nobody" }] }).ok).toBe(false)
    expect(its.events).toHaveLength(from)
    expect(its.engine.canUndo).toBe(false)
  })

  it("name every file that the notebook, undo or redo could still need", async () => {
    const its = await settledBook()
    const file = (digit: string) => ({ name: "f", media: "", size: 2, sha256: digit.repeat(64) })
    its.change({ type: "enclose", file: file("1") })
    its.change({ type: "enclose", file: file("2") })
    its.change({ type: "release", name: "f" })
    expect([...its.engine.reached].map((sha256) => sha256[0]).toSorted()).toEqual(["1", "2"])
    while (its.engine.undo());
    expect(its.engine.reached.size).toBe(2)
  })
})
