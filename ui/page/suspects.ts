// Which work keeps the evaluator's worker from answering. When a worker is replaced, all that was under way is lost and asked for again; work
// that was there each time is at fault, not the worker, and is given up as a crash, so that one cell costs the others a moment and no more.

import type { Evaluator, Result, Task } from "../../runtime/evaluator.ts"

export interface Suspects extends Evaluator {
  /** The worker does not answer and is about to be replaced; `says` is what is shown of work that is given up. */
  silent(says: string): void
}

/** An evaluator that remembers what was under way when its worker fell silent. `under` is told of work sent and come back. */
export function withSuspects(evaluator: Evaluator, under: { began(): void; ended(): void; cancelled(): void }): Suspects {
  /** Work under way that could hold the worker up: not what waits for rest. */
  const running = new Map<number, string>()
  const resting = new Map<number, string>()
  /** What was under way at a silence: from then on one at a time, so that the next silence tells which it is. */
  const suspected = new Set<string>()
  const givenUp = new Map<string, string>()
  /** Every task that is not through, and whether it was taken back. */
  const unwanted = new Map<number, boolean>()
  let line: Promise<unknown> = Promise.resolve()

  const sent = async (task: Task, events: Parameters<Evaluator["evaluate"]>[1]): Promise<Result> => {
    const work = workOf(task)
    if (unwanted.get(task.id)) return { type: "cancelled" }
    running.set(task.id, work)
    under.began()
    try {
      const result = await evaluator.evaluate(task, {
        published: events.published,
        soFar: (found) => {
          running.delete(task.id)
          resting.set(task.id, work)
          events.soFar(found)
        },
      })
      const why = givenUp.get(work)
      if (result.type !== "lost") suspected.delete(work)
      else if (why !== undefined) {
        givenUp.delete(work)
        suspected.delete(work)
        return { type: "crash", text: why, stack: "" }
      }
      return result
    } finally {
      running.delete(task.id)
      resting.delete(task.id)
      under.ended()
    }
  }

  return {
    ask: evaluator.ask,
    keep: evaluator.keep,
    async evaluate(task, events) {
      unwanted.set(task.id, false)
      try {
        if (!suspected.has(workOf(task))) return await sent(task, events)
        const turn = line.then(() => sent(task, events))
        line = turn.catch(() => {})
        return await turn
      } finally {
        unwanted.delete(task.id)
      }
    },
    cancel(id) {
      if (unwanted.has(id)) unwanted.set(id, true)
      if (running.has(id)) under.cancelled()
      evaluator.cancel(id)
    },
    rest(id, wanted) {
      const work = resting.get(id)
      if (wanted && work !== undefined) {
        resting.delete(id)
        running.set(id, work)
      }
      evaluator.rest(id, wanted)
    },
    silent(says) {
      for (const [id, work] of running) {
        if (suspected.has(work) && unwanted.get(id) === false) givenUp.set(work, says)
        else suspected.add(work)
      }
    },
  }
}

const workOf = ({ cell, text }: Task): string => `${cell}\n${text}`
