// An evaluator in a worker: the messages between the page's side and the worker's. Neither side knows what a worker is: whoever starts
// one hands in a port. Blocks own fresh arrays, which are transferred; the arrays of values never leave the evaluator.

import type { Answer, Evaluator, Found, Result, Task, TaskEvents } from "./evaluator.ts"
import { crashOf } from "./reading.ts"
import type { Hash, Json } from "./value.ts"

/** One end of a connection. `listen` is called once; messages that are not of this protocol may pass on the same connection. */
export interface Port {
  post(message: unknown, transfer: readonly ArrayBuffer[]): void
  listen(hear: (message: unknown) => void): void
}

export interface RemoteEvaluator extends Evaluator {
  /** Takes another worker in place of one that does not answer: what was under way is lost, and the engine asks for it again. */
  replace(port: Port): void
}

type Request =
  | { readonly type: "evaluate"; readonly task: Task }
  | { readonly type: "cancel"; readonly id: number }
  | { readonly type: "rest"; readonly id: number; readonly wanted: boolean }
  | {
      readonly type: "ask"
      readonly ask: number
      readonly kind: string
      readonly whole: Hash
      readonly text: string
      readonly question: Json
    }
  | { readonly type: "keep"; readonly hashes: readonly Hash[] }

type Reply =
  | { readonly type: "published"; readonly id: number; readonly part: string; readonly hash: Hash; readonly version: number }
  | { readonly type: "soFar"; readonly id: number; readonly found: Found }
  | { readonly type: "result"; readonly id: number; readonly result: Result }
  | { readonly type: "answered"; readonly ask: number; readonly answer: Answer }

/** The page's side. */
export function remoteEvaluator(first: Port): RemoteEvaluator {
  const tasks = new Map<number, { readonly events: TaskEvents; readonly done: (result: Result) => void }>()
  const asked = new Map<number, (answer: Answer) => void>()
  let asks = 0
  let port = first

  const listen = (to: Port): void => {
    to.listen((message) => {
      // A worker that was replaced may still speak; nobody listens any more.
      if (to === port && isMessage(message)) hear(message as Reply)
    })
  }

  const hear = (reply: Reply): void => {
    switch (reply.type) {
      case "published":
        tasks.get(reply.id)?.events.published(reply.part, reply.hash, reply.version)
        break
      case "soFar":
        tasks.get(reply.id)?.events.soFar(reply.found)
        break
      case "result": {
        const task = tasks.get(reply.id)
        tasks.delete(reply.id)
        task?.done(reply.result)
        break
      }
      case "answered": {
        const answered = asked.get(reply.ask)
        asked.delete(reply.ask)
        answered?.(reply.answer)
        break
      }
      default:
        reply satisfies never
    }
  }

  const send = (request: Request): void => port.post(request, [])
  listen(first)

  return {
    evaluate: (task, events) =>
      new Promise((done) => {
        tasks.set(task.id, { events, done })
        send({ type: "evaluate", task })
      }),
    cancel: (id) => send({ type: "cancel", id }),
    rest: (id, wanted) => send({ type: "rest", id, wanted }),
    ask: (kind, whole, text, question) =>
      new Promise((done) => {
        const ask = asks++
        asked.set(ask, done)
        send({ type: "ask", ask, kind, whole, text, question })
      }),
    keep: (hashes) => send({ type: "keep", hashes: [...hashes] }),
    replace: (next) => {
      port = next
      listen(next)
      const lostTasks = [...tasks.values()]
      const lostAsks = [...asked.values()]
      tasks.clear()
      asked.clear()
      for (const { done } of lostTasks) done({ type: "lost", hashes: [] })
      for (const done of lostAsks) done({ type: "lost" })
    },
  }
}

/** The worker's side. */
export function serveEvaluator(port: Port, evaluator: Evaluator): void {
  const reply = (message: Reply, found: Found | null): void => port.post(message, found === null ? [] : buffersOf(found.shown.blocks))

  port.listen((message) => {
    if (!isMessage(message)) return
    const request = message as Request
    switch (request.type) {
      case "evaluate": {
        const { id } = request.task
        const events: TaskEvents = {
          published: (part, hash, version) => reply({ type: "published", id, part, hash, version }, null),
          soFar: (found) => reply({ type: "soFar", id, found }, found),
        }
        const answered = evaluator.evaluate(request.task, events)
        answered
          .then((result) => reply({ type: "result", id, result }, result.type === "found" ? result.found : null))
          // What cannot be sent (a function in a block) is our mistake, and is shown as one instead of an answer that never comes.
          .catch((error: unknown) => reply({ type: "result", id, result: { type: "crash", ...crashOf(error) } }, null))
        break
      }
      case "cancel":
        evaluator.cancel(request.id)
        break
      case "rest":
        evaluator.rest(request.id, request.wanted)
        break
      case "ask": {
        const answered = evaluator.ask(request.kind, request.whole, request.text, request.question)
        answered
          .then((answer) => reply({ type: "answered", ask: request.ask, answer }, null))
          .catch((error: unknown) => reply({ type: "answered", ask: request.ask, answer: { type: "crash", ...crashOf(error) } }, null))
        break
      }
      case "keep":
        evaluator.keep(new Set(request.hashes))
        break
      default:
        request satisfies never
    }
  })
}

/** What is ours on a connection that may carry other messages too. */
const isMessage = (message: unknown): boolean =>
  typeof message === "object" && message !== null && "type" in message && typeof message.type === "string" && types.has(message.type)

const types: ReadonlySet<string> = new Set<(Request | Reply)["type"]>([
  "evaluate",
  "cancel",
  "rest",
  "ask",
  "keep",
  "published",
  "soFar",
  "result",
  "answered",
])

/** The buffers of all arrays in these blocks, each once; shared memory cannot be given away and is not among them. */
function buffersOf(blocks: unknown): readonly ArrayBuffer[] {
  const buffers = new Set<ArrayBuffer>()
  const left: unknown[] = [blocks]
  while (left.length > 0) {
    const item = left.pop()
    if (ArrayBuffer.isView(item)) {
      if (item.buffer instanceof ArrayBuffer) buffers.add(item.buffer)
    } else if (typeof item === "object" && item !== null) left.push(...Object.values(item))
  }
  return [...buffers]
}
