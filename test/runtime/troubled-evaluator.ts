// An evaluator in virtual time, for tests: nothing happens until the test lets it, tasks answer out of order, and on demand it loses values,
// crashes, or never answers and is replaced. The work itself is done by the real evaluator, on the toy kinds.

import { createEvaluator } from "../../runtime/evaluate.ts"
import type { Evaluator, Result, Task, TaskEvents } from "../../runtime/evaluator.ts"
import type { Hash } from "../../runtime/value.ts"
import { kinds } from "./kinds.ts"

/** Random whole numbers below a bound: mulberry32, seeded. */
export type Random = (below: number) => number

export function random(seed: number): Random {
  let state = seed | 0
  return (below) => {
    state = (state + 0x6d2b79f5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return Math.floor((((t ^ (t >>> 14)) >>> 0) / 4294967296) * below)
  }
}

/** Lets everything that is ready by now happen. */
export const turn = (): Promise<void> => new Promise((done) => setImmediate(done))

export const calm = (): Evaluator => createEvaluator({ kinds, bytes, pause: async () => {} })

/** The bytes of an enclosure are the first characters of its SHA-256. */
async function* bytes(sha256: string): AsyncIterable<Uint8Array> {
  yield new Uint8Array([sha256.charCodeAt(0), sha256.charCodeAt(1)])
}

export interface TroubledEvaluator extends Evaluator {
  /** Lets one thing happen, and what follows from it. False when there was nothing. */
  step(): Promise<boolean>
  /** Chances in a hundred. */
  trouble: { crash: number; lose: number; silence: number }
  /** Every value is lost. */
  loseAll(): void
  /** Another worker: what is under way is lost, and so is all that was held. */
  replace(): void
  readonly silent: number
  /** Ids of the tasks that were cancelled. */
  readonly cancelled: readonly number[]
}

export function troubledEvaluator(next: Random): TroubledEvaluator {
  let inner = calm()
  let generation = 0
  let silenced = 0
  const cancelled: number[] = []
  const queues = new Map<number, (() => void)[]>()
  const open = new Map<number, (result: Result) => void>()
  const trouble = { crash: 0, lose: 0, silence: 0 }
  const chance = (percent: number): boolean => next(100) < percent

  const later = (id: number, act: () => void): void => {
    const queue = queues.get(id)
    if (queue === undefined) queues.set(id, [act])
    else queue.push(act)
  }

  const done = (id: number, result: Result): void => {
    const answer = open.get(id)
    open.delete(id)
    answer?.(result)
  }

  const begin = (task: Task, events: TaskEvents): void => {
    const born = generation
    const says = (act: () => void): void => {
      if (born === generation) later(task.id, act)
    }
    if (chance(trouble.silence)) {
      silenced++
      return
    }
    if (chance(trouble.crash)) {
      says(() => done(task.id, { type: "crash", text: "trouble", stack: "" }))
      return
    }
    if (chance(trouble.lose)) loseAll()
    const told: TaskEvents = {
      published: (part, hash, version) => says(() => events.published(part, hash, version)),
      soFar: (found) => says(() => events.soFar(found)),
    }
    void inner.evaluate(task, told).then((result) => says(() => done(task.id, result)))
  }

  const loseAll = (): void => {
    // A value survives the first call after it came up.
    inner.keep(new Set())
    inner.keep(new Set())
  }

  return {
    trouble,
    loseAll,
    get silent() {
      return silenced
    },
    evaluate: (task, events) =>
      new Promise((answer) => {
        open.set(task.id, answer)
        later(task.id, () => begin(task, events))
      }),
    cancelled,
    cancel: (id) => {
      cancelled.push(id)
      inner.cancel(id)
    },
    rest: (id, wanted) => later(id, () => inner.rest(id, wanted)),
    ask: (kind, whole: Hash, text, question) => inner.ask(kind, whole, text, question),
    keep: (hashes) => inner.keep(hashes),
    replace: () => {
      generation++
      silenced = 0
      inner = calm()
      queues.clear()
      for (const id of [...open.keys()]) done(id, { type: "lost", hashes: [] })
    },
    step: async () => {
      const waiting = [...queues.entries()]
      const chosen = waiting[next(waiting.length)]
      if (chosen === undefined) return false
      const [id, queue] = chosen
      const act = queue.shift()
      if (queue.length === 0) queues.delete(id)
      act?.()
      await turn()
      return true
    },
  }
}
