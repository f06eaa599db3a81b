import { describe, expect, it } from "vitest"

import { createEvaluator } from "../../runtime/evaluate.ts"
import type { Evaluator, Found, Result, Task, TaskEvents, TaskInput } from "../../runtime/evaluator.ts"
import { hash } from "../../runtime/hash.ts"
import type { AnyKind, Kind, Work } from "../../runtime/kind.ts"
import type { Hash, Key, Value } from "../../runtime/value.ts"
import { calm, turn } from "./troubled-evaluator.ts"

let ids = 0
const task = (text: string, more: Partial<Task> = {}): Task => ({
  id: ++ids,
  cell: "c",
  text,
  inputs: [],
  files: [],
  gesture: false,
  near: null,
  ...more,
})

const silent: TaskEvents = { published: () => {}, soFar: () => {} }

const input = (name: string, found: Found, parts: readonly string[] | null = null): TaskInput => ({
  name,
  key: "" as Key,
  whole: found.whole,
  parts: parts?.map((part) => ({ part, hash: found.parts[part] as Hash })) ?? null,
  offers: null,
})

const foundOf = (result: Result): Found => {
  if (result.type !== "found") throw new Error(JSON.stringify(result))
  return result.found
}

const evaluated = async (evaluator: Evaluator, text: string, more: Partial<Task> = {}): Promise<Found> =>
  foundOf(await evaluator.evaluate(task(text, more), silent))

/** A kind called `k` that does what it is told. */
const told = (evaluate: Kind<null, Value>["evaluate"], more: Partial<AnyKind> = {}): AnyKind => ({
  words: {
    word: "k",
    name: "optional",
    clauses: {},
    says: "",
    example: "k",
    parse: () => ({ said: null, notices: [] }),
    names: () => ({ defines: null, uses: [], files: [] }),
  },
  version: 7,
  evaluate,
  show: () => [],
  summary: () => null,
  tried: () => [],
  ...more,
})

const evaluatorOf = (kind: AnyKind, pause: () => Promise<void> = async () => {}): Evaluator =>
  createEvaluator({
    kinds: [kind],
    bytes: async function* () {
      yield new Uint8Array([1, 2, 3])
    },
    pause,
  })

const ok = (found: Value): { ok: true; found: Value; notices: [] } => ({ ok: true, found, notices: [] })

describe("the evaluator", () => {
  it("names what was found by hashes, for the whole and for each part, and tells the kind's version", async () => {
    const value = { rows: 2, parts: { x: { values: new Float64Array([1, 2]) }, y: 3 } }
    const found = await evaluated(evaluatorOf(told(async () => ok(value))), "k")
    expect(found).toMatchObject({ ok: true, version: 7, whole: hash(value), parts: { x: hash(value.parts.x), y: hash(3) } })
  })

  it("holds a large column once, and counts it once, however many findings hold it", async () => {
    const column = (): Float64Array => new Float64Array(10_000).fill(2)
    const held: Value[] = []
    const kind = told(async (_, inputs) => {
      for (const each of inputs.values()) held.push(each.value)
      return ok({ rows: held.length, parts: { x: { values: column() } } })
    })
    const evaluator = evaluatorOf(kind)
    const first = await evaluated(evaluator, "k")
    const second = await evaluated(evaluator, "k", { inputs: [input("a", first, ["x"])] })
    await evaluated(evaluator, "k", { inputs: [input("a", first, ["x"]), input("b", second)] })
    const arrays = [held[0], held[1]].map((each) => (each as { x: { values: Float64Array } }).x.values)
    const whole = (held[2] as { parts: { x: { values: Float64Array } } }).parts.x.values
    expect(arrays[1]).toBe(arrays[0])
    expect(whole).toBe(arrays[0])
    const its = hash(column())
    expect(first.bytes[its]).toBe(80_000)
    const others = Object.entries(second.bytes).filter(([each]) => each !== its)
    expect(others.reduce((sum, [, bytes]) => sum + bytes, 0)).toBeLessThan(1000)
  })

  it("gives a kind the parts it asked for, or the whole", async () => {
    const seen: Value[] = []
    const kind = told(async (_, inputs) => {
      seen.push(Object.fromEntries([...inputs].map(([name, { value }]) => [name, value])))
      return ok({ rows: 1, parts: { x: 1, y: 2 } })
    })
    const evaluator = evaluatorOf(kind)
    const found = await evaluated(evaluator, "k")
    await evaluated(evaluator, "k", { inputs: [input("a", found, ["y"]), input("b", found)] })
    expect(seen[1]).toEqual({ a: { y: 2 }, b: { rows: 1, parts: { x: 1, y: 2 } } })
  })

  it("says which inputs it has lost, without beginning", async () => {
    const evaluator = calm()
    const found = await evaluated(evaluator, "number a\n  is 3")
    evaluator.keep(new Set())
    expect(foundOf(await evaluator.evaluate(task("sum s\n  of a", { inputs: [input("a", found)] }), silent)).ok).toBe(true)
    // Once more, as the sum of one number is the same value again and came up just now.
    evaluator.keep(new Set())
    evaluator.keep(new Set())
    const result = await evaluator.evaluate(task("sum s\n  of a", { inputs: [input("a", found)] }), silent)
    expect(result).toEqual({ type: "lost", hashes: [found.whole] })
  })

  it("keeps what it is told to keep", async () => {
    const evaluator = calm()
    const found = await evaluated(evaluator, "number a\n  is 3")
    const kept = new Set(Object.keys(found.bytes) as Hash[])
    for (let i = 0; i < 3; i++) evaluator.keep(kept)
    expect(await evaluator.ask("number", found.whole as Hash, "", "now")).toEqual({ type: "answer", answer: { asked: "now", value: 3 } })
    expect(await evaluator.ask("number", "0".repeat(32) as Hash, "", "now")).toEqual({ type: "lost" })
  })

  it("tells a fault with no finding, one that shows why, and a crash apart", async () => {
    const notice = {
      level: "fault",
      code: "k/no",
      text: "No.",
      hint: null,
      clause: null,
      at: { clause: -1, from: 0, to: 0 },
      mend: null,
    } as const
    const nothing = await evaluated(evaluatorOf(told(async () => ({ ok: false, found: null, notices: [notice] }))), "k")
    expect(nothing).toMatchObject({ ok: false, whole: null, bytes: {}, shown: { notices: [notice] } })
    const why = await evaluated(evaluatorOf(told(async () => ({ ok: false, found: 3, notices: [notice] }))), "k")
    expect(why).toMatchObject({ ok: false, whole: hash(3), tried: [] })
    const thrown = await evaluatorOf(
      told(async () => {
        throw new RangeError("far")
      }),
    ).evaluate(task("k"), silent)
    expect(thrown).toMatchObject({ type: "crash", text: "RangeError: far", stack: expect.stringContaining("evaluate.test.ts") })
    const shown = told(async () => ok(1), {
      show: () => {
        throw new Error("not drawn")
      },
    })
    expect(await evaluatorOf(shown).evaluate(task("k"), silent)).toMatchObject({ type: "crash", text: "Error: not drawn" })
  })

  it("copies the arrays of a value that a block shows, since blocks are given away", async () => {
    const values = new Float64Array([1, 2, 3])
    const fresh = new Float64Array([4])
    const kind = told(async () => ok({ values }), {
      show: (found: { values: Float64Array }) => [{ type: "sentence", own: found.values, fresh } as { type: string }],
    })
    const found = await evaluated(evaluatorOf(kind), "k")
    const block = found.shown.blocks[0] as unknown as { own: Float64Array; fresh: Float64Array }
    expect(block.own).toEqual(values)
    expect(block.own).not.toBe(values)
    expect(block.fresh).toBe(fresh)
  })

  it("reads the bytes of an enclosure, and crashes for none but a file it was not given", async () => {
    const kind = told(async (_, __, work) => {
      const bytes: number[] = []
      for await (const piece of work.file("one")) bytes.push(...piece)
      return ok([...bytes, work.fileHash("one") ?? ""])
    })
    const files = [{ name: "one", sha256: "a".repeat(64) }]
    expect((await evaluated(evaluatorOf(kind), "k", { files })).whole).toBe(hash([1, 2, 3, "a".repeat(64)]))
    const missing = await evaluated(evaluatorOf(kind), 'k\n  other 1\n  from "one"')
    expect(missing).toMatchObject({ ok: false, shown: { notices: [{ code: "cell/missing-file", at: { clause: 1, from: 1, to: 2 } }] } })
  })
})

describe("work under way", () => {
  it("ends at its next checkpoint when it is cancelled", async () => {
    let rounds = 0
    const evaluator = evaluatorOf(
      told(async (_, __, work) => {
        for (;;) {
          rounds++
          await work.checkpoint()
        }
      }),
      turn,
    )
    const its = task("k")
    const result = evaluator.evaluate(its, silent)
    await turn()
    evaluator.cancel(its.id)
    expect(await result).toEqual({ type: "cancelled" })
    const before = rounds
    await turn()
    expect(rounds).toBe(before)
  })

  it("pauses only as often as its time asks for", async () => {
    let [time, pauses] = [0, 0]
    const kind = told(async (_, __, work) => {
      for (let i = 0; i < 100; i++) {
        time += 1
        await work.checkpoint()
      }
      return ok(1)
    })
    const pause = async (): Promise<void> => {
      pauses++
    }
    const evaluator = createEvaluator({ kinds: [kind], bytes: () => evaluatorOf(kind) as never, pause, now: () => time })
    await evaluated(evaluator, "k")
    expect(pauses).toBeGreaterThan(5)
    expect(pauses).toBeLessThan(25)
  })

  it("publishes a part once, and may not find it otherwise in the end", async () => {
    const published: string[] = []
    const events: TaskEvents = {
      published: (part, its, version) => published.push(`${part} ${its === hash(1)} ${version}`),
      soFar: () => {},
    }
    const kind = (late: number): AnyKind =>
      told(async (_, __, work) => {
        work.publish("x", 1)
        return ok({ parts: { x: late } })
      })
    expect((await evaluatorOf(kind(1)).evaluate(task("k"), events)).type).toBe("found")
    expect(await evaluatorOf(kind(2)).evaluate(task("k"), events)).toMatchObject({
      type: "crash",
      text: expect.stringContaining("published"),
    })
    expect(published).toEqual(["x true 7", "x true 7"])
  })

  const tardy = (log: string[]): AnyKind =>
    told(async (_, __, work: Work) => {
      const first = ok({ tail: 0 })
      if (!(await work.late(first))) return first
      for (let i = 0; i < 3; i++) {
        log.push("late")
        await work.checkpoint()
      }
      return ok({ tail: 1 })
    })

  it("shows what it has and waits for rest before its late parts", async () => {
    const evaluator = evaluatorOf(tardy([]))
    const its = task("k")
    const shown: (Hash | null)[] = []
    const result = evaluator.evaluate(its, { ...silent, soFar: ({ whole }) => shown.push(whole) })
    await turn()
    expect(shown).toEqual([hash({ tail: 0 })])
    evaluator.rest(its.id, true)
    expect(foundOf(await result).whole).toBe(hash({ tail: 1 }))
  })

  it("leaves its late parts out in a gesture, or where they are not wanted", async () => {
    expect((await evaluated(evaluatorOf(tardy([])), "k", { gesture: true })).whole).toBe(hash({ tail: 0 }))
    const evaluator = evaluatorOf(tardy([]))
    const its = task("k")
    const result = evaluator.evaluate(its, silent)
    await turn()
    evaluator.rest(its.id, false)
    expect(foundOf(await result).whole).toBe(hash({ tail: 0 }))
  })

  it("ends though it waits for rest when it is cancelled", async () => {
    const evaluator = evaluatorOf(tardy([]))
    const its = task("k")
    const result = evaluator.evaluate(its, silent)
    await turn()
    evaluator.cancel(its.id)
    expect(await result).toEqual({ type: "cancelled" })
  })

  it("ends though it stands back for other work when it is cancelled", async () => {
    let release: (() => void) | null = null
    const held = told(async () => {
      await new Promise<void>((done) => {
        release = done
      })
      return ok(2)
    })
    const late = tardy([])
    const evaluator = createEvaluator({
      kinds: [late, { ...held, words: { ...held.words, word: "held" } }],
      bytes: () => evaluatorOf(late) as never,
      pause: turn,
    })
    const its = task("k")
    const result = evaluator.evaluate(its, silent)
    await turn()
    const other = evaluator.evaluate(task("held"), silent)
    evaluator.rest(its.id, true)
    await turn()
    await turn()
    evaluator.cancel(its.id)
    expect(await result).toEqual({ type: "cancelled" })
    ;(release as (() => void) | null)?.()
    expect((await other).type).toBe("found")
  })

  it("stands back in its late parts while anything else is under way, and everything does for a gesture", async () => {
    const log: string[] = []
    const late = tardy(log)
    const plain: AnyKind = {
      ...told(async (_, __, work) => {
        for (let i = 0; i < 3; i++) {
          log.push(work.near === null ? "plain" : "gesture")
          await work.checkpoint()
        }
        return ok(2)
      }),
    }
    const evaluator = createEvaluator({
      kinds: [late, { ...plain, words: { ...plain.words, word: "p" } }],
      bytes: () => evaluatorOf(late) as never,
      pause: turn,
    })
    const first = task("k")
    const results = [evaluator.evaluate(first, silent)]
    await turn()
    evaluator.rest(first.id, true)
    results.push(evaluator.evaluate(task("p"), silent))
    await turn()
    const near = foundOf(await evaluator.evaluate(task("p", { gesture: true, near: hash({ tail: 0 }) }), silent))
    expect(near.ok).toBe(true)
    await Promise.all(results)
    const order = log.filter((each, i) => each !== log[i - 1])
    expect(order.lastIndexOf("late")).toBeGreaterThan(order.lastIndexOf("plain"))
    expect(log.slice(log.indexOf("gesture"), log.lastIndexOf("gesture") + 1).filter((each) => each === "late")).toEqual([])
    expect(log.filter((each) => each === "plain")).toHaveLength(3)
  })
})
