// The engine: the one place that changes. It holds the notebook, marks what an edit touches, and lets work be done when it is wanted
// and ready. It never touches a value, has no clock and no randomness; who the evaluator is and when it is at rest is said from outside.

import type { Applied, CellId, Notebook, Transaction } from "./document.ts"
import { apply } from "./document.ts"
import type { Evaluator, Found, Result, Shown, Task, TaskInput } from "./evaluator.ts"
import type { Graph } from "./graph.ts"
import { graph, listsAlike } from "./graph.ts"
import type { History } from "./history.ts"
import { atRest, enclosuresOf, noHistory, recorded, redone, undone } from "./history.ts"
import { key } from "./key.ts"
import type { AnyWords } from "./kind.ts"
import { membershipFaults, missingUses } from "./membership.ts"
import type { WentIn } from "./memo.ts"
import { createMemo } from "./memo.ts"
import type { Notice } from "./notice.ts"
import { createQueue } from "./queue.ts"
import type { Reading } from "./reading.ts"
import { crashOf, createReader } from "./reading.ts"
import type { Hash, Json, Key, Name } from "./value.ts"

export type GestureId = string

export type State =
  | { readonly status: "off" }
  | { readonly status: "due" | "working"; readonly last: Shown | null }
  | { readonly status: "waiting"; readonly for: CellId; readonly last: Shown | null }
  | { readonly status: "fault"; readonly notices: readonly Notice[]; readonly shown: Shown | null; readonly last: Shown | null }
  | { readonly status: "crash"; readonly text: string; readonly stack: string; readonly last: Shown | null }
  /** `late` is true while late parts are still to come; `shown` then is the finding so far. `hash` is null while late. */
  | { readonly status: "ready"; readonly shown: Shown; readonly key: Key; readonly hash: Hash | null; readonly late: boolean }

export type EngineEvent =
  | { readonly type: "notebook"; readonly notebook: Notebook; readonly transaction: Transaction; readonly gesture: GestureId | null }
  | { readonly type: "state"; readonly id: CellId; readonly state: State }
  /** Work was sent to the evaluator: the account that tests write out. */
  | { readonly type: "ran"; readonly id: CellId }
  | { readonly type: "rest" }
  | { readonly type: "settled" }

export interface Engine {
  readonly notebook: Notebook
  state(id: CellId): State
  /** All notices of a cell: of its statement (at once, also while working) and of its finding. */
  notices(id: CellId): readonly Notice[]
  dispatch(transaction: Transaction, how?: { readonly gesture: GestureId }): Applied
  undo(): boolean
  redo(): boolean
  readonly canUndo: boolean
  readonly canRedo: boolean
  /** A gesture ended, focus left, or a second of quiet: said by ui, the engine has no clock. */
  rest(): void
  /** What is on the screen: decides the order, never a result. */
  look(visible: ReadonlySet<CellId>): void
  ask(id: CellId, question: Json): Promise<Json>
  settled(): Promise<void>
  subscribe(listen: (event: EngineEvent) => void): () => void
  /** The SHA-256 of every enclosure that the notebook, undo or redo names: the shelf sweeps the bytes of all others. */
  readonly reached: ReadonlySet<string>
}

export interface EngineOptions {
  readonly words: readonly AnyWords[]
  readonly notebook: Notebook
  readonly evaluator: Evaluator
  /** How many bytes of findings are remembered; 256 MB unless said otherwise. */
  readonly memoBytes?: number
  /** How many cells on the screen are worked on at once; the rest go one by one. Decides the order, never a result. */
  readonly atOnce?: number
}

/**
 * An engine at rest over a notebook; it begins by itself. `settled()` is reached when nothing runs and nothing could run until more is
 * said: late parts wait for `rest()`, so whoever needs them (a report, a decision, the terminal) calls `rest()` first.
 */
export function createEngine(options: EngineOptions): Engine {
  const { evaluator } = options
  const atOnce = Math.max(1, options.atOnce ?? 2)
  const readerOf = createReader(options.words)
  const memo = createMemo(options.memoBytes ?? defaultMemoBytes)

  // The notebook as it is, and as it is being evaluated: in a gesture the second lags behind while one evaluation is in flight.
  let notebook = options.notebook
  let base: Notebook = { ...options.notebook, cells: [], enclosures: [] }
  let history = noHistory
  let gesture: GestureId | null = null
  let resting = true

  let arrows: Graph = graph(new Map(), null, null)
  const readings = new Map<CellId, Reading>()
  const entries = new Map<CellId, Entry>()
  const marked = new Set<Entry>()
  let visible: ReadonlySet<CellId> | null = null

  const urgent = (a: Entry, b: Entry): boolean => (a.wanted !== b.wanted ? a.wanted : a.rank !== b.rank ? a.rank < b.rank : a.id < b.id)
  const due = createQueue<Entry>(urgent)
  const ready = createQueue<Entry>(urgent)

  const busy = new Set<Running>()
  const parked = new Set<Running>()
  let late: Running | null = null
  let tasks = 0

  const listeners = new Set<(event: EngineEvent) => void>()
  const touched = new Set<Entry>()
  let waiters: (() => void)[] = []
  let scheduled = false
  let holdsNew = false

  advance()
  schedule()

  return {
    get notebook() {
      return notebook
    },
    state: (id) =>
      entries.get(id)?.state ?? (notebook.cells.some((cell) => cell.id === id) ? { status: "due", last: null } : { status: "off" }),
    notices,
    dispatch,
    undo: () => travel(undone(history)),
    redo: () => travel(redone(history)),
    get canUndo() {
      return undone(history) !== null
    },
    get canRedo() {
      return redone(history) !== null
    },
    rest: () => {
      history = atRest(history)
      resting = true
      endGesture()
      tell({ type: "rest" })
      schedule()
    },
    look: (ids) => {
      visible = new Set(ids)
      rank()
      schedule()
    },
    ask,
    settled: () => (isSettled() ? Promise.resolve() : new Promise((resolve) => waiters.push(resolve))),
    subscribe: (listen) => {
      listeners.add(listen)
      return () => {
        listeners.delete(listen)
      }
    },
    get reached() {
      return new Set([...enclosuresOf(history), ...notebook.enclosures.map(({ sha256 }) => sha256)])
    },
  }

  // Changes of the notebook.

  function dispatch(transaction: Transaction, how?: { readonly gesture: GestureId }): Applied {
    const applied = apply(notebook, transaction)
    if (!applied.ok || applied.notebook === notebook) return applied
    const inGesture = how?.gesture ?? null
    history = recorded(history, transaction, applied.inverse, inGesture)
    become(applied.notebook, transaction, inGesture)
    return applied
  }

  function travel(step: { readonly transaction: Transaction; readonly history: History } | null): boolean {
    if (step === null) return false
    const applied = apply(notebook, step.transaction)
    if (!applied.ok) return false
    history = step.history
    become(applied.notebook, step.transaction, null)
    return true
  }

  function become(next: Notebook, transaction: Transaction, inGesture: GestureId | null): void {
    notebook = next
    resting = false
    tell({ type: "notebook", notebook, transaction, gesture: inGesture })
    if (inGesture === null) {
      if (gesture === null) advance()
      else endGesture()
    } else {
      // The first text of a gesture is taken up at once, and each later one by the pull, when nothing of the one before is in flight;
      // until then the newest waits in place of any before it. So a hand is never answered by a queue of what it did a while ago, and
      // what is in flight is never given up for what comes next.
      const first = gesture === null
      gesture = inGesture
      if (first) advance()
    }
    schedule()
  }

  /** What a gesture found is found again, cold, so that what stays never depends on the path. */
  function endGesture(): void {
    const ended = gesture !== null
    gesture = null
    if (base !== notebook) advance()
    if (!ended) return
    const warm: Entry[] = []
    for (const entry of entries.values()) {
      if (entry.task?.warm === true) {
        cancel(entry)
        entry.working = false
        warm.push(entry)
      } else if (entry.settled?.type === "found" && entry.settled.warm) warm.push(entry)
    }
    mark(warm, "again")
  }

  /** Takes the notebook as it is now for the one to evaluate, and marks what that changes. */
  function advance(): void {
    const before = base
    base = notebook
    const changed: { before: Reading; now: Reading }[] = []
    const fresh: Entry[] = []
    let gone = 0
    if (before.cells !== base.cells) {
      const left = new Set(entries.keys())
      for (const cell of base.cells) {
        left.delete(cell.id)
        const entry = entries.get(cell.id)
        if (entry?.reading.cell === cell) continue
        const reading = readerOf(cell)
        readings.set(cell.id, reading)
        if (entry === undefined) {
          const made = newEntry(cell.id, reading)
          entries.set(cell.id, made)
          fresh.push(made)
        } else {
          changed.push({ before: entry.reading, now: reading })
          entry.reading = reading
        }
      }
      for (const id of left) remove(id)
      gone = left.size
    }
    const former = arrows
    arrows = graph(readings, former, fresh.length + gone > 0 ? null : changed)
    const seeds = new Set<Entry>(fresh)
    for (const { now } of changed) seeds.add(entries.get(now.cell.id) as Entry)
    if (arrows !== former) for (const entry of entries.values()) if (!standsAsBefore(entry.reading, former, arrows)) seeds.add(entry)
    if (before.enclosures !== base.enclosures) {
      for (const entry of entries.values())
        if (entry.reading.files.some((name) => fileOf(before, name) !== fileOf(base, name))) seeds.add(entry)
    }
    if (arrows !== former) rank()
    mark(seeds, "changed")
  }

  function remove(id: CellId): void {
    const entry = entries.get(id)
    if (entry === undefined) return
    cancel(entry)
    settleAs(entry, null)
    marked.delete(entry)
    entry.marked = false
    entries.delete(id)
    readings.delete(id)
  }

  /** Ranks from the graph, and who is wanted: what is on the screen, and all that it needs. */
  function rank(): void {
    for (const entry of entries.values()) {
      entry.rank = arrows.rank.get(entry.id) ?? 0
      entry.wanted = visible === null
    }
    const stack = visible === null ? [] : [...visible]
    for (let id = stack.pop(); id !== undefined; id = stack.pop()) {
      const entry = entries.get(id)
      if (entry === undefined || entry.wanted) continue
      entry.wanted = true
      stack.push(...(arrows.inputs.get(id) ?? []))
    }
    due.reorder()
    ready.reorder()
  }

  // Marks.

  /**
   * Marks cells, and all that read them however distantly. `changed`: they may find something else. `again`: they will be found again, cold,
   * and what is shown stays until then. `lost`: only the value is gone; the same work gives the same value, so readers stand as they are.
   */
  function mark(seeds: Iterable<Entry>, how: "changed" | "again" | "lost"): void {
    const stack = [...seeds]
    if (stack.length === 0) return
    const seen = new Set<Entry>()
    for (let entry = stack.pop(); entry !== undefined; entry = stack.pop()) {
      if (seen.has(entry)) continue
      seen.add(entry)
      if (how === "changed" || !entry.marked) entry.quiet = how !== "changed"
      entry.marked = true
      entry.working = false
      entry.prepared = null
      marked.add(entry)
      if (!entry.quiet) setState(entry, { status: "due", last: lastOf(entry) })
      if (how !== "lost") for (const id of arrows.readers.get(entry.id) ?? []) stack.push(entries.get(id) as Entry)
    }
    for (const entry of marked) block(entry)
  }

  /** What a marked cell has to wait for: those of its inputs that are marked themselves, but for published parts. */
  function block(entry: Entry): void {
    if (entry.working) return
    entry.blockers.clear()
    if (hindranceOf(entry) === null) {
      for (const id of arrows.inputs.get(entry.id) ?? []) {
        const maker = entries.get(id) as Entry
        if (maker.marked && !offersEarly(maker, entry)) entry.blockers.add(maker)
      }
    }
    if (entry.blockers.size === 0) enqueue(entry)
  }

  function enqueue(entry: Entry): void {
    if (entry.queued) return
    entry.queued = true
    due.add(entry)
  }

  /** Whether all that the reader reads of a cell at work is published. */
  function offersEarly(maker: Entry, reader: Entry): boolean {
    const published = maker.working ? maker.task?.published : undefined
    if (published === undefined || published.size === 0) return false
    const reads = reader.reading.reads.get(maker.reading.defines ?? "")
    return reads !== undefined && reads !== "all" && reads.every((part) => published.has(part))
  }

  // The pull: what is ready is decided, and what cannot be decided here is sent to the evaluator.

  function schedule(): void {
    if (scheduled) return
    scheduled = true
    void Promise.resolve().then(pull)
  }

  function pull(): void {
    scheduled = false
    for (;;) {
      for (let entry = due.take(); entry !== undefined; entry = due.take()) {
        entry.queued = false
        if (entry.marked && !entry.working && entry.prepared === null) decide(entry)
      }
      cancelUnsure()
      sendReady()
      if (gesture === null || base === notebook || isAtWork()) break
      // What was in flight is shown before the next begins: else a fast hand would see nothing until it stops.
      flush()
      letDrop()
      advance()
    }
    if (!isAtWork() && resting) resumeLate()
    flush()
    if (!isSettled()) return
    letDrop()
    tell({ type: "settled" })
    const waited = waiters
    waiters = []
    for (const resolve of waited) resolve()
  }

  /** Settles a marked cell without evaluating it where that is possible; else prepares its work. */
  function decide(entry: Entry): void {
    // An input that is known to be at fault is enough, whatever the others come to.
    if (entry.blockers.size > 0) {
      const wait = entry.quiet ? null : nearestWait(entry)
      if (wait !== null) settle(entry, wait)
      return
    }
    const hindrance = hindranceOf(entry) ?? nearestWait(entry)
    if (hindrance !== null) {
      settle(entry, hindrance)
      return
    }
    const prepared = prepare(entry)
    const known = entry.mustRun ? null : knownFinding(entry, prepared.wentIn)
    const { task } = entry
    if (known !== null) settle(entry, known)
    else if (task !== null && task.wentIn === prepared.wentIn && !(task.warm && gesture === null)) goOn(entry, task)
    else {
      cancel(entry)
      entry.prepared = prepared
      ready.add(entry)
    }
  }

  /** Why a cell is not evaluated, for a reason of its own. */
  function hindranceOf(entry: Entry): Settled | null {
    const { crash, idle } = entry.reading
    if (idle) return { type: "off" }
    if (isFaulty(entry)) return { type: "fault" }
    return crash === null ? null : { type: "crash", wentIn: null, ...crash }
  }

  /** The finding of what went in, where it was found before: by this cell last time, or at any time. */
  function knownFinding(entry: Entry, wentIn: WentIn): Settled | null {
    const { settled } = entry
    if (settled?.type === "found" && settled.wentIn === wentIn && !(settled.warm && gesture === null)) {
      return { ...settled, key: keyOf(entry, settled.found.version) }
    }
    const found = memo.get(wentIn)
    return found === null ? null : { type: "found", wentIn, found, key: keyOf(entry, found.version), warm: false }
  }

  /** Working already on the same: left to work. */
  function goOn(entry: Entry, task: Running): void {
    entry.working = true
    if (task.soFar !== null) setState(entry, readyState(entry, task.soFar, keyOf(entry, task.soFar.version), true))
    else if (!entry.quiet) setState(entry, { status: "working", last: lastOf(entry) })
    letReadersIn(entry)
  }

  function letReadersIn(maker: Entry): void {
    for (const id of arrows.readers.get(maker.id) ?? []) {
      const reader = entries.get(id) as Entry
      if (reader.marked && offersEarly(maker, reader) && reader.blockers.delete(maker) && reader.blockers.size === 0) enqueue(reader)
    }
  }

  /** Work on a cell that waits for another evaluation is very likely for nothing; were it not, it is only done again. */
  function cancelUnsure(): void {
    for (const task of busy) {
      const entry = entries.get(task.cell)
      if (entry?.task === task && entry.marked && !entry.working && entry.prepared === null) cancel(entry)
    }
  }

  function sendReady(): void {
    for (let entry = ready.peek(); entry !== undefined; entry = ready.peek()) {
      if (entry.prepared === null || !entry.marked) {
        ready.take()
        continue
      }
      if (gesture !== null && !entry.wanted) return
      const others = gesture === null ? busy.size : [...busy].filter(({ warm }) => warm).length
      if (others >= (entry.wanted ? atOnce : 1)) return
      ready.take()
      send(entry, entry.prepared)
    }
  }

  function send(entry: Entry, { wentIn, inputs, files }: Prepared): void {
    const warm = gesture !== null
    const task: Running = { id: ++tasks, cell: entry.id, wentIn, inputs, warm, published: new Map(), version: null, soFar: null }
    entry.prepared = null
    entry.working = true
    entry.task = task
    busy.add(task)
    if (!entry.quiet) setState(entry, { status: "working", last: lastOf(entry) })
    tell({ type: "ran", id: entry.id })
    const near = warm && entry.settled?.type === "found" ? entry.settled.found.whole : null
    evaluator
      .evaluate(
        { id: task.id, cell: entry.id, text: entry.reading.statement.text, inputs, files, gesture: warm, near },
        {
          published: (part, hash, version) => {
            if (entry.task !== task) return
            task.published.set(part, hash)
            task.version = version
            holdsNew = true
            if (entry.working) letReadersIn(entry)
            schedule()
          },
          soFar: (found) => {
            if (entry.task !== task) return
            task.soFar = found
            busy.delete(task)
            if (late === task) late = null
            parked.add(task)
            holdsNew = true
            if (entry.working) setState(entry, readyState(entry, found, keyOf(entry, found.version), true))
            schedule()
          },
        },
      )
      .then(
        (result) => received(entry, task, result),
        (error: unknown) => received(entry, task, { type: "crash", ...crashOf(error) }),
      )
  }

  function received(entry: Entry, task: Running, result: Result): void {
    letGo(task)
    schedule()
    if (result.type === "found") {
      holdsNew = true
      if (!task.warm) memo.put(task.wentIn, result.found)
    }
    if (entry.task !== task) return
    entry.task = null
    // Marked anew since: what was found, if anything, is in the memo, and is taken from there if it is still what is asked for.
    if (!entry.marked || !entry.working) return
    entry.working = false
    const { wentIn, warm } = task
    switch (result.type) {
      case "found":
        entry.mustRun = false
        entry.losses = 0
        settle(entry, { type: "found", wentIn, found: result.found, key: keyOf(entry, result.found.version), warm })
        break
      case "crash":
        settle(entry, { type: "crash", wentIn, text: result.text, stack: result.stack })
        break
      case "lost":
        retry(entry, task, result.hashes)
        break
      case "cancelled":
        retry(entry, task, [])
        break
      default:
        result satisfies never
    }
  }

  /** The evaluator has lost inputs, or the work itself: the makers of what is lost run again, then this. */
  function retry(entry: Entry, task: Running, lost: readonly Hash[]): void {
    entry.losses++
    if (entry.losses > mostLosses) {
      const text = "The evaluator did not answer, or lost what this cell reads, again and again."
      settle(entry, { type: "crash", wentIn: task.wentIn, text, stack: "" })
      return
    }
    memo.forget(lost)
    const gone = new Set(lost)
    const makers = task.inputs.flatMap(({ name, whole, parts }) => {
      const isLost = parts === null ? whole !== null && gone.has(whole) : parts.some(({ hash }) => gone.has(hash))
      const maker = isLost ? makerOf(name) : null
      return maker === null || maker.marked ? [] : [maker]
    })
    for (const maker of makers) maker.mustRun = true
    mark(makers, "lost")
    block(entry)
  }

  function resumeLate(): void {
    if (late !== null || parked.size === 0) return
    const first = [...parked].reduce((a, b) => (urgent(entries.get(b.cell) as Entry, entries.get(a.cell) as Entry) ? b : a))
    parked.delete(first)
    late = first
    evaluator.rest(first.id, true)
  }

  /** Takes the cell's work away, if it has any. */
  function cancel(entry: Entry): void {
    const { task } = entry
    if (task === null) return
    entry.task = null
    letGo(task)
    evaluator.cancel(task.id)
  }

  function letGo(task: Running): void {
    busy.delete(task)
    parked.delete(task)
    if (late === task) late = null
  }

  // Settling.

  function settle(entry: Entry, settled: Settled): void {
    cancel(entry)
    entry.marked = false
    entry.quiet = false
    entry.working = false
    entry.prepared = null
    entry.blockers.clear()
    marked.delete(entry)
    if (settled.type !== "found") entry.mustRun = false
    settleAs(entry, settled)
    setState(entry, stateOf(entry, settled))

    const isBad = settled.type !== "found" || !settled.found.ok
    const differ: Entry[] = []
    for (const id of arrows.readers.get(entry.id) ?? []) {
      const reader = entries.get(id) as Entry
      if (!reader.marked || reader.working) {
        if (!standsStill(reader)) differ.push(reader)
      } else {
        reader.blockers.delete(entry)
        // It may have been made ready on published parts, which is to be decided anew now that more is known.
        reader.prepared = null
        if (reader.blockers.size === 0 || isBad) enqueue(reader)
      }
    }
    mark(differ, "changed")
  }

  function settleAs(entry: Entry, settled: Settled | null): void {
    const { settled: former } = entry
    if (settled?.type === "found") memo.pin(settled.wentIn)
    if (former?.type === "found") memo.unpin(former.wentIn)
    entry.settled = settled
  }

  /** Whether a reader that went on before its input was settled (on published parts, or waiting for another) still stands. */
  function standsStill(reader: Entry): boolean {
    const { settled, task, working } = reader
    if (hindranceOf(reader) !== null) return true
    // While another input is marked nothing can be said; when that is settled the question comes again.
    if ((arrows.inputs.get(reader.id) ?? []).some((id) => entries.get(id)?.marked)) return true
    const wait = nearestWait(reader)
    if (working) return wait === null && prepare(reader).wentIn === task?.wentIn
    if (wait !== null) return settled?.type === "waiting" && settled.for === wait.for && settled.distance === wait.distance
    if (settled?.type !== "found" && settled?.type !== "crash") return false
    if (prepare(reader).wentIn !== settled.wentIn) return false
    return settled.type === "crash" || settled.key === keyOf(reader, settled.found.version)
  }

  /** The nearest cell that this one cannot go on without: at fault, crashed, switched off, or missing an input of its own. */
  function nearestWait(entry: Entry): Extract<Settled, { type: "waiting" }> | null {
    let nearest: Extract<Settled, { type: "waiting" }> | null = null
    const consider = (id: CellId, distance: number): void => {
      if (nearest === null || distance < nearest.distance) nearest = { type: "waiting", for: id, distance }
    }
    for (const { name, either } of entry.reading.uses) {
      const makers = arrows.makers.get(name)
      if (makers === undefined) {
        const sleeper = arrows.asleep.get(name)
        if (!either && sleeper !== undefined) consider(sleeper, 1)
        continue
      }
      for (const id of makers) {
        const maker = entries.get(id) as Entry
        if (maker === entry || maker.marked) continue
        if (maker.settled?.type === "waiting") consider(maker.settled.for, maker.settled.distance + 1)
        else if (maker.settled?.type !== "found" || !maker.settled.found.ok) consider(id, 1)
      }
    }
    return nearest
  }

  /** The cell that a name stands for in the statement of another; null where there is none, or several. */
  function makerOf(name: Name): Entry | null {
    const makers = arrows.makers.get(name)
    return makers?.length === 1 ? (entries.get(makers[0] as CellId) ?? null) : null
  }

  /** Names what goes in. Called when every input is settled, or has published what is read of it. */
  function prepare(entry: Entry): Prepared {
    const { reading } = entry
    const inputs: TaskInput[] = []
    const names: string[] = [reading.hash]
    for (const [name, reads] of [...reading.reads].sort(([a], [b]) => (a < b ? -1 : 1))) {
      const maker = makerOf(name)
      if (maker === null || maker === entry) continue
      const input = inputOf(maker, name, reads)
      inputs.push(input)
      const { parts, whole, offers } = input
      const read = parts === null ? whole : parts.map(({ part, hash }) => `${JSON.stringify(part)}=${hash}`).join()
      names.push(`${name}:${read}${offers === null ? "" : `/${JSON.stringify(offers)}`}`)
    }
    const files = reading.files.map((name) => ({ name, sha256: fileOf(base, name) }))
    for (const { name, sha256 } of files) names.push(`${JSON.stringify(name)}=${sha256}`)
    return { wentIn: names.join("\n"), inputs, files }
  }

  function inputOf(maker: Entry, name: Name, reads: readonly string[] | "all"): TaskInput {
    const { settled, task } = maker
    if (maker.marked && task !== null) {
      const parts = reads === "all" ? [] : reads.map((part) => ({ part, hash: task.published.get(part) as Hash }))
      return { name, key: keyOf(maker, task.version ?? 0), whole: null, parts, offers: null }
    }
    if (settled?.type !== "found" || settled.found.whole === null) throw new Error(`The cell ${maker.id} has no finding to read`)
    const { found } = settled
    const key = keyOf(maker, found.version)
    if (reads === "all") return { name, key, whole: found.whole, parts: null, offers: null }
    const there = reads.filter((part) => Object.hasOwn(found.parts, part))
    const parts = there.map((part) => ({ part, hash: found.parts[part] as Hash }))
    return { name, key, whole: found.whole, parts, offers: there.length < reads.length ? Object.keys(found.parts).sort() : null }
  }

  /** The key of a cell's work, whose inputs have keys by now. Remembered, since a key is SHA-256 and an edit may ask for thousands. */
  function keyOf(entry: Entry, version: number): Key {
    const { reading } = entry
    const uses: Record<Name, Key> = {}
    let from = `${version}\n${reading.hash}`
    for (const name of reading.reads.keys()) {
      const maker = makerOf(name)
      if (maker === null || maker === entry || maker.keyed === null) continue
      uses[name] = maker.keyed.key
      from += `\n${name}=${maker.keyed.key}`
    }
    const files = Object.fromEntries(reading.files.map((name) => [name, fileOf(base, name)]))
    if (reading.files.length > 0) from += `\n${JSON.stringify(files)}`
    if (entry.keyed?.from !== from) {
      entry.keyed = { from, key: key({ kind: reading.statement.kind ?? "", version, statement: reading.canonical, uses, files }) }
    }
    return entry.keyed.key
  }

  // What is shown.

  function ownNotices(entry: Entry): readonly Notice[] {
    if (entry.own?.reading !== entry.reading || entry.own.graph !== arrows) {
      const faults = entry.reading.idle ? [] : membershipFaults(entry.reading, arrows)
      const all = faults.length === 0 ? entry.reading.notices : [...entry.reading.notices, ...faults]
      entry.own = { reading: entry.reading, graph: arrows, notices: all, faulty: entry.reading.faulty || faults.length > 0 }
    }
    return entry.own.notices
  }

  function isFaulty(entry: Entry): boolean {
    ownNotices(entry)
    return entry.own?.faulty === true
  }

  function notices(id: CellId): readonly Notice[] {
    const entry = entries.get(id)
    const cell = base === notebook ? undefined : notebook.cells.find((each) => each.id === id)
    if (cell !== undefined && cell !== entry?.reading.cell) return readerOf(cell).notices
    if (entry === undefined) return []
    const { state } = entry
    if (state.status === "ready") return [...ownNotices(entry), ...state.shown.notices]
    return state.status === "fault" ? state.notices : ownNotices(entry)
  }

  function stateOf(entry: Entry, settled: Settled): State {
    switch (settled.type) {
      case "off":
        return { status: "off" }
      case "fault":
        return { status: "fault", notices: ownNotices(entry), shown: null, last: lastOf(entry) }
      case "waiting":
        return { status: "waiting", for: settled.for, last: lastOf(entry) }
      case "crash":
        return { status: "crash", text: settled.text, stack: settled.stack, last: lastOf(entry) }
      case "found": {
        const { found } = settled
        if (found.ok) return readyState(entry, found, settled.key, settled.warm)
        const all = [...ownNotices(entry), ...found.shown.notices]
        return { status: "fault", notices: all, shown: found.whole === null ? null : found.shown, last: lastOf(entry) }
      }
      default:
        return settled satisfies never
    }
  }

  /** What a gesture found is as unfinished as what still lacks its late parts: the same work comes to rest later. */
  function readyState(entry: Entry, found: Found, itsKey: Key, unfinished: boolean): State {
    if (!found.ok)
      return { status: "fault", notices: [...ownNotices(entry), ...found.shown.notices], shown: found.shown, last: lastOf(entry) }
    entry.last = { kind: entry.reading.statement.kind, shown: found.shown }
    return { status: "ready", shown: found.shown, key: itsKey, hash: unfinished ? null : found.whole, late: unfinished }
  }

  /** The last good finding, unless the cell has become another kind since. While the kind is misspelt it stays. */
  function lastOf({ last, reading }: Entry): Shown | null {
    const { kind } = reading.statement
    const known = kind !== null && options.words.some(({ word }) => word === kind)
    return last === null || kind === null || (known && kind !== last.kind) ? null : last.shown
  }

  function setState(entry: Entry, state: State): void {
    const same = entry.told !== null && alike(entry.told, state) ? entry.told : state
    entry.state = same
    touched.add(entry)
  }

  /** Listeners hear of a cell once for each pull, and not at all where it ends up as it was. */
  function flush(): void {
    const changed = [...touched]
    touched.clear()
    for (const entry of changed) {
      if (entry.state === entry.told || entries.get(entry.id) !== entry) continue
      entry.told = entry.state
      tell({ type: "state", id: entry.id, state: entry.state })
    }
  }

  function tell(event: EngineEvent): void {
    for (const listen of [...listeners]) {
      try {
        listen(event)
      } catch (error) {
        // A listener's mistake is its own: it is thrown where nothing of the engine can be left half done.
        void Promise.reject(error)
      }
    }
  }

  async function ask(id: CellId, question: Json): Promise<Json> {
    for (let tries = 0; tries <= mostLosses; tries++) {
      const entry = entries.get(id)
      if (entry === undefined || entry.state.status !== "ready") return null
      const found = entry.task?.soFar ?? (entry.settled?.type === "found" ? entry.settled.found : null)
      if (found === null || found.whole === null) return null
      const { kind, text } = entry.reading.statement
      const answer = await evaluator.ask(kind ?? "", found.whole, text, question)
      if (answer.type === "answer") return answer.answer
      if (answer.type === "crash") throw new Error(answer.text)
      memo.forget([found.whole])
      if (!entry.marked && entries.get(id) === entry) {
        entry.mustRun = true
        mark([entry], "lost")
        schedule()
      }
      await new Promise<void>((resolve) => {
        waiters.push(resolve)
        schedule()
      })
    }
    return null
  }

  // Whether anything is left to do.

  /** Whether anything is under way or ready to be; in a gesture only what is wanted counts, and late parts never do. */
  function isAtWork(): boolean {
    if (due.peek() !== undefined) return true
    for (let first = ready.peek(); first !== undefined; first = ready.peek()) {
      if (first.prepared !== null && first.marked) {
        if (gesture === null || first.wanted) return true
        break
      }
      ready.take()
    }
    if (gesture === null) return busy.size > 0
    for (const { cell } of busy) if (entries.get(cell)?.wanted) return true
    return false
  }

  function isSettled(): boolean {
    return !scheduled && !isAtWork() && base === notebook && (!resting || (late === null && parked.size === 0))
  }

  /** Tells the evaluator what to keep. Not in the middle of work, when what is to be kept may not have been heard of yet. */
  function letDrop(): void {
    if (holdsNew) evaluator.keep(holdings())
    holdsNew = false
  }

  /** All that may still be asked for by its hash. */
  function holdings(): ReadonlySet<Hash> {
    const hashes = new Set(memo.hashes())
    const add = (found: Found): void => {
      for (const hash of Object.keys(found.bytes)) hashes.add(hash as Hash)
    }
    for (const { settled, task } of entries.values()) {
      if (settled?.type === "found") add(settled.found)
      if (task === null) continue
      if (task.soFar !== null) add(task.soFar)
      for (const hash of task.published.values()) hashes.add(hash)
    }
    return hashes
  }
}

const defaultMemoBytes = 256 * 1024 * 1024

/** So often in a row may one cell lose its work before that is shown as our mistake. */
const mostLosses = 12

/** What the engine knows of one cell. */
interface Entry {
  readonly id: CellId
  reading: Reading
  state: State
  /** The state that listeners heard of last. */
  told: State | null
  /** Not known to be up to date. */
  marked: boolean
  /** Marked, but what is shown still holds. */
  quiet: boolean
  /** Marked, and its work for the notebook as evaluated is under way. */
  working: boolean
  /** Its value is lost: neither the last finding nor the memo will do. */
  mustRun: boolean
  /** The marked inputs that it has to wait for. */
  readonly blockers: Set<Entry>
  queued: boolean
  prepared: Prepared | null
  /** What it came to last; kept while marked, to compare with. */
  settled: Settled | null
  task: Running | null
  keyed: { readonly from: string; readonly key: Key } | null
  own: { readonly reading: Reading; readonly graph: Graph; readonly notices: readonly Notice[]; readonly faulty: boolean } | null
  last: { readonly kind: string | null; readonly shown: Shown } | null
  losses: number
  rank: number
  wanted: boolean
}

type Settled =
  | { readonly type: "off" | "fault" }
  | { readonly type: "waiting"; readonly for: CellId; readonly distance: number }
  | { readonly type: "crash"; readonly wentIn: WentIn | null; readonly text: string; readonly stack: string }
  /** `warm`: found in a gesture, perhaps from a warm start. */
  | { readonly type: "found"; readonly wentIn: WentIn; readonly found: Found; readonly key: Key; readonly warm: boolean }

interface Prepared {
  readonly wentIn: WentIn
  readonly inputs: readonly TaskInput[]
  readonly files: Task["files"]
}

interface Running {
  readonly id: number
  readonly cell: CellId
  readonly wentIn: WentIn
  readonly inputs: readonly TaskInput[]
  readonly warm: boolean
  readonly published: Map<string, Hash>
  version: number | null
  soFar: Found | null
}

const newEntry = (id: CellId, reading: Reading): Entry => ({
  id,
  reading,
  state: { status: "due", last: null },
  told: null,
  marked: false,
  quiet: false,
  working: false,
  mustRun: false,
  blockers: new Set(),
  queued: false,
  prepared: null,
  settled: null,
  task: null,
  keyed: null,
  own: null,
  last: null,
  losses: 0,
  rank: 0,
  wanted: true,
})

const fileOf = ({ enclosures }: Notebook, wanted: string): string | null => enclosures.find(({ name }) => name === wanted)?.sha256 ?? null

/** Whether nothing in the graph has changed that this cell could tell. A name that is missing can tell every other name, by the nearest. */
function standsAsBefore(reading: Reading, before: Graph, now: Graph): boolean {
  const { id } = reading.cell
  const alikeIn = (field: "makers" | "inputs", of: string): boolean => listsAlike(before[field].get(of), now[field].get(of))
  const [roundBefore, roundNow] = [before.cycles.get(id), now.cycles.get(id)]
  return (
    alikeIn("inputs", id) &&
    roundBefore?.cells === roundNow?.cells &&
    listsAlike(roundBefore?.names, roundNow?.names) &&
    (reading.defines === null || alikeIn("makers", reading.defines)) &&
    reading.uses.every(({ name }) => alikeIn("makers", name) && before.asleep.get(name) === now.asleep.get(name)) &&
    missingUses(reading, now).length === 0
  )
}

/** Whether two states are the same to whoever draws them. */
function alike(a: State, b: State): boolean {
  const [left, right] = [Object.entries(a), Object.entries(b)]
  const other = new Map<string, unknown>(right)
  return left.length === right.length && left.every(([member, value]) => sameItem(value, other.get(member)))
}

const sameItem = (a: unknown, b: unknown): boolean =>
  a === b || (Array.isArray(a) && Array.isArray(b) && a.length === b.length && a.every((item, i) => item === b[i]))
