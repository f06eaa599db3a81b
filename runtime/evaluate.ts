// The evaluator itself: holds values by hash, each column once, and does evaluate, hashing, show and summary. It runs in a worker, in the
// terminal's own process or in a test, and knows none of them: bytes, pauses and the time come from outside.

import type { Answer, Evaluator, Found, Result, Shown, Task, TaskEvents } from "./evaluator.ts"
import type { Digests, TypedArray } from "./hash.ts"
import { hash, isRecord, isTypedArray, largeBytes, partHashes, partsOf } from "./hash.ts"
import type { AnyKind, BlockLike, Input, Outcome, Work } from "./kind.ts"
import type { Place } from "./notice.ts"
import { missingFile } from "./notices.ts"
import { crashOf } from "./reading.ts"
import type { Statement } from "./statement.ts"
import { read } from "./statement.ts"
import type { Hash, Name, Value } from "./value.ts"

export interface EvaluatorOptions {
  readonly kinds: readonly AnyKind[]
  /** The bytes of an enclosure, from the start at each call. */
  bytes(sha256: string): AsyncIterable<Uint8Array>
  /** Gives the event loop a turn, so that a message to cancel can come in. */
  pause(): Promise<void>
  /** Milliseconds from anywhere, only to pause less often; left out: every checkpoint pauses. */
  now?(): number
}

export function createEvaluator(options: EvaluatorOptions): Evaluator {
  const kinds = new Map(options.kinds.map((kind) => [kind.words.word, kind]))
  const store = createStore()
  const runs = new Map<number, Run>()
  const turns = createTurns(options)

  return {
    evaluate: async (task, events) => {
      const run: Run = { cancelled: false, gesture: task.gesture, stage: "first", wake: null }
      runs.set(task.id, run)
      turns.enter(run)
      try {
        return await evaluated(task, events, run)
      } catch (error) {
        return run.cancelled || isCalled(error, "Cancelled") ? { type: "cancelled" } : { type: "crash", ...crashOf(error) }
      } finally {
        runs.delete(task.id)
        turns.leave(run)
      }
    },
    cancel: (id) => {
      const run = runs.get(id)
      if (run === undefined) return
      run.cancelled = true
      run.wake?.(false)
      turns.wakeAll()
    },
    rest: (id, wanted) => runs.get(id)?.wake?.(wanted),
    ask: async (word, whole, _text, question): Promise<Answer> => {
      const found = store.get(whole)
      if (found === undefined) return { type: "lost" }
      try {
        return { type: "answer", answer: kinds.get(word)?.answer?.(found, question) ?? null }
      } catch (error) {
        return { type: "crash", ...crashOf(error) }
      }
    },
    keep: store.keep,
  }

  async function evaluated(task: Task, events: TaskEvents, run: Run): Promise<Result> {
    const statement = read(task.text)
    const kind = kinds.get(statement.kind ?? "")
    if (kind === undefined) throw new Error(`The evaluator has no kind called ${statement.kind}`)
    const { said } = kind.words.parse(statement)
    const { inputs, lost } = inputsOf(task)
    if (lost.length > 0) return { type: "lost", hashes: lost }
    const published = new Map<string, Hash>()

    const work: Work = {
      get cancelled() {
        return run.cancelled
      },
      checkpoint: () => turns.checkpoint(run),
      publish: (part, value) => {
        if (published.has(part)) throw new Error(`The part ${part} was published twice`)
        const its = store.putPart(value)
        published.set(part, its)
        if (!run.cancelled) events.published(part, its, kind.version)
      },
      file: (name) => {
        const sha256 = task.files.find((file) => file.name === name)?.sha256 ?? null
        if (sha256 === null) throw new NoFile(name)
        return options.bytes(sha256)
      },
      fileHash: (name) => task.files.find((file) => file.name === name)?.sha256 ?? null,
      near: task.gesture && task.near !== null ? (store.get(task.near) ?? null) : null,
      late: async (soFar) => {
        if (task.gesture) return false
        if (run.cancelled) throw new Cancelled()
        const shown = found(kind, soFar, said)
        const parked = turns.park(run)
        events.soFar(shown)
        const wanted = await parked
        if (run.cancelled) throw new Cancelled()
        return wanted
      },
    }

    let outcome: Outcome<Value>
    try {
      outcome = await kind.evaluate(said, inputs, work)
    } catch (error) {
      if (!(error instanceof NoFile) || run.cancelled) throw error
      outcome = { ok: false, found: null, notices: [missingFile(error.file, placeOfText(statement, error.file))] }
    }
    if (run.cancelled) return { type: "cancelled" }
    const result = found(kind, outcome, said)
    for (const [part, its] of published) {
      if (result.ok && result.parts[part] !== its) throw new Error(`The part ${part} was published otherwise than it was found`)
    }
    return { type: "found", found: result }
  }

  function inputsOf(task: Task): { readonly inputs: ReadonlyMap<Name, Input>; readonly lost: readonly Hash[] } {
    const inputs = new Map<Name, Input>()
    const lost: Hash[] = []
    const held = (its: Hash): Value => {
      const value = store.get(its)
      if (value === undefined) lost.push(its)
      return value ?? null
    }
    for (const { name, key, whole, parts, offers } of task.inputs) {
      if (parts !== null) {
        inputs.set(name, { value: Object.fromEntries(parts.map(({ part, hash: its }) => [part, held(its)])), key, offers })
      } else if (whole !== null) inputs.set(name, { value: held(whole), key, offers })
    }
    return { inputs, lost }
  }

  /** Holds what was found and makes what is shown of it. Blocks are copied where they hold an array of a value, since they are given away. */
  function found(kind: AnyKind, outcome: Outcome<Value>, said: unknown): Found {
    const { ok, notices, version } = { ...outcome, version: kind.version }
    if (outcome.found === null && !ok) {
      return { ok, version, whole: null, parts: {}, bytes: {}, shown: { blocks: [], notices, summary: null }, tried: [] }
    }
    const { value, whole, parts, bytes } = store.putFinding(outcome.found)
    const blocks = store.fresh(kind.show(value, said) as unknown as Value) as unknown as readonly BlockLike[]
    const shown: Shown = { blocks, notices, summary: kind.summary(value) }
    const size = bytesOf(shown as unknown as Value)
    return {
      ok,
      version,
      whole,
      parts,
      bytes: { ...bytes, [whole]: (bytes[whole] ?? 0) + size },
      shown,
      tried: ok ? kind.tried(value) : [],
    }
  }
}

/** One evaluation under way. Its stages: before a late part, waiting for rest, in late parts. */
interface Run {
  cancelled: boolean
  readonly gesture: boolean
  stage: "first" | "parked" | "late"
  wake: ((wanted: boolean) => void) | null
}

class Cancelled extends Error {
  override readonly name = "Cancelled"
}

class NoFile extends Error {
  override readonly name = "NoFile"
  readonly file: string

  constructor(file: string) {
    super(`The notebook encloses no file called ${file}`)
    this.file = file
  }
}

const isCalled = (error: unknown, name: string): boolean => error instanceof Error && error.name === name

/** Where the statement names a file: the first text that says so. */
function placeOfText({ clauses }: Statement, says: string): Place {
  for (const [clause, { tokens }] of clauses.entries()) {
    const at = tokens.findIndex(({ type, text }) => type === "text" && text.slice(1, -1).replace(/\\(["\\])/g, "$1") === says)
    if (at >= 0) return { clause, from: at + 1, to: at + 2 }
  }
  return { clause: -1, from: 0, to: 0 }
}

interface Turns {
  enter(run: Run): void
  leave(run: Run): void
  checkpoint(run: Run): Promise<void>
  park(run: Run): Promise<boolean>
  wakeAll(): void
}

/** So long may pass between two turns of the event loop: short enough for a hand on a dial, long enough to cost nothing. */
const turnMilliseconds = 6

/** Who may go on: a gesture before everything else, late parts after everything else, so that no hand waits for what is not looked at. */
function createTurns({ pause, now }: EvaluatorOptions): Turns {
  const first = new Set<Run>()
  let gestures = 0
  let lastPause = now?.() ?? 0
  let standing: (() => void)[] = []

  const wakeAll = (): void => {
    const woken = standing
    standing = []
    for (const wake of woken) wake()
  }

  const leave = (run: Run): void => {
    if (!first.delete(run)) return
    if (run.gesture) gestures--
    if (gestures === 0) wakeAll()
  }

  const standsBack = (run: Run): boolean => !run.cancelled && ((gestures > 0 && !run.gesture) || (run.stage === "late" && first.size > 0))

  return {
    enter: (run) => {
      first.add(run)
      if (run.gesture) gestures++
    },
    leave,
    wakeAll,
    checkpoint: async (run) => {
      if (now === undefined || now() - lastPause >= turnMilliseconds) {
        await pause()
        lastPause = now?.() ?? 0
      }
      while (standsBack(run)) await new Promise<void>((wake) => standing.push(wake))
      if (run.cancelled) throw new Cancelled()
    },
    park: async (run) => {
      leave(run)
      run.stage = "parked"
      const wanted = await new Promise<boolean>((wake) => {
        run.wake = wake
      })
      run.wake = null
      run.stage = "late"
      return wanted
    },
  }
}

interface Finding {
  readonly value: Value
  readonly whole: Hash
  readonly parts: Readonly<Record<string, Hash>>
  readonly bytes: Readonly<Record<Hash, number>>
}

interface Store {
  get(whole: Hash): Value | undefined
  putFinding(value: Value): Finding
  putPart(value: Value): Hash
  keep(hashes: ReadonlySet<Hash>): void
  /** The same value, with a copy of every array that belongs to a value held here. */
  fresh(value: Value): Value
}

/** Values by hash. A large array is held once, however many findings hold it, and counted under its own hash. */
function createStore(): Store {
  const values = new Map<Hash, Value>()
  const arrays = new Map<Hash, TypedArray>()
  const buffers = new WeakSet<ArrayBufferLike>()
  const known: Digests = new WeakMap()
  let recent = new Set<Hash>()

  /** The value with each large array replaced by the one that is held already; the same object where nothing was replaced. */
  const interned = (value: Value, bytes: Record<Hash, number>): Value =>
    mapped(value, (array) => {
      // A view would keep the whole buffer it looks into.
      const own = array.byteLength === array.buffer.byteLength ? array : array.slice()
      buffers.add(own.buffer)
      if (own.byteLength < largeBytes) return own
      const its = hash(own, known)
      const held = arrays.get(its) ?? own
      arrays.set(its, held)
      recent.add(its)
      bytes[its] = held.byteLength
      return held
    })

  const put = (its: Hash, value: Value): void => {
    if (!values.has(its)) values.set(its, value)
    recent.add(its)
  }

  return {
    get: (whole) => values.get(whole),
    putFinding: (found) => {
      const bytes: Record<Hash, number> = {}
      const value = interned(found, bytes)
      const parts = partHashes(value, known)
      let ofParts = 0
      for (const [part, its] of Object.entries(parts)) {
        const partValue = partsOf(value)[part] as Value
        put(its, partValue)
        bytes[its] = bytesOf(partValue)
        ofParts += bytes[its]
      }
      const whole = hash(value, known)
      put(whole, value)
      bytes[whole] = Math.max(0, bytesOf(value) - ofParts) + (bytes[whole] ?? 0)
      return { value: values.get(whole) as Value, whole, parts, bytes }
    },
    putPart: (part) => {
      const value = interned(part, {})
      const its = hash(value, known)
      put(its, value)
      return its
    },
    keep: (hashes) => {
      for (const held of [values, arrays]) {
        for (const its of held.keys()) if (!hashes.has(its) && !recent.has(its)) held.delete(its)
      }
      recent = new Set()
    },
    fresh: (value) => mapped(value, (array) => (buffers.has(array.buffer) ? array.slice() : array)),
  }
}

/** The value with each array replaced; containers in which nothing was replaced stay the same objects. */
function mapped(value: Value, replaced: (array: TypedArray) => TypedArray): Value {
  if (typeof value !== "object" || value === null) return value
  if (isTypedArray(value)) return replaced(value)
  if (!isRecord(value)) {
    const items = value as readonly Value[]
    const next = items.map((item) => mapped(item, replaced))
    return next.every((item, i) => Object.is(item, items[i])) ? value : next
  }
  const members = Object.entries(value)
  const next = members.map(([member, inner]) => [member, mapped(inner, replaced)] as const)
  return next.every(([, inner], i) => Object.is(inner, members[i]?.[1])) ? value : Object.fromEntries(next)
}

/** About how many bytes a value takes, large arrays left out: they are counted under their own hash. */
function bytesOf(value: Value): number {
  if (typeof value === "string") return 16 + 2 * value.length
  if (typeof value !== "object" || value === null) return 8
  if (isTypedArray(value)) return value.byteLength < largeBytes ? 32 + value.byteLength : 16
  let bytes = 16
  for (const inner of isRecord(value) ? Object.values(value) : (value as readonly Value[])) bytes += 8 + bytesOf(inner)
  return bytes
}
