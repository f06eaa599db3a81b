// History: what was done and how to take it back, the only undo there is. It is a value; the engine holds the latest. A gesture is one
// entry, and so is a run of writes to one cell between two rests: one undo takes back what a person did, not what a key did.

import type { CellId, Change, Transaction } from "./document.ts"

interface Entry {
  readonly forward: Transaction
  readonly back: Transaction
  /** While more may be joined to it: the gesture, or the cell that is written to. */
  readonly run: string | null
}

interface Stack {
  readonly top: Entry
  readonly below: Stack | null
}

export interface History {
  readonly done: Stack | null
  readonly undone: Stack | null
}

export const noHistory: History = { done: null, undone: null }

/** After one more transaction: joined to the last entry where they are one run, an entry of its own otherwise. */
export function recorded(history: History, forward: Transaction, back: Transaction, gesture: string | null): History {
  const run = gesture === null ? runOfWrites(forward) : `gesture ${gesture}`
  const last = history.done?.top
  if (run !== null && last?.run === run) {
    const joined = { forward: joinedForward(last.forward, forward), back: joinedBack(last.back, back), run }
    return { done: { top: joined, below: history.done?.below ?? null }, undone: null }
  }
  const ended = atRest(history)
  return { done: { top: { forward, back, run }, below: ended.done }, undone: null }
}

/** At rest: what comes next is an entry of its own. A run that ended where it began leaves none. */
export function atRest(history: History): History {
  const { done } = history
  if (done === null || done.top.run === null) return history
  if (isReturn(done.top)) return { ...history, done: done.below }
  return { ...history, done: { top: { ...done.top, run: null }, below: done.below } }
}

/** What an undo would apply, and the history after it; null where there is nothing to undo. */
export function undone(history: History): { readonly transaction: Transaction; readonly history: History } | null {
  const { done, undone } = atRest(history)
  if (done === null) return null
  return { transaction: done.top.back, history: { done: done.below, undone: { top: done.top, below: undone } } }
}

export function redone(history: History): { readonly transaction: Transaction; readonly history: History } | null {
  const { done, undone } = history
  if (undone === null) return null
  return { transaction: undone.top.forward, history: { done: { top: undone.top, below: done }, undone: undone.below } }
}

/** The SHA-256 of every enclosure that an undo or a redo could bring back. */
export function enclosuresOf(history: History): ReadonlySet<string> {
  const found = new Set<string>()
  for (const stack of [history.done, history.undone]) {
    for (let at = stack; at !== null; at = at.below) {
      for (const change of [...at.top.forward.changes, ...at.top.back.changes]) {
        if (change.type === "enclose") found.add(change.file.sha256)
      }
    }
  }
  return found
}

/** The cell of a transaction that only writes to one cell. */
function runOfWrites({ changes }: Transaction): string | null {
  const [first] = changes
  if (first?.type !== "write" || !changes.every((change) => change.type === "write" && change.id === first.id)) return null
  return `write ${first.id}`
}

type Write = Extract<Change, { readonly type: "write" }>

const onlyWrites = (changes: readonly Change[]): changes is readonly Write[] => changes.every(({ type }) => type === "write")

function joinedForward(first: Transaction, second: Transaction): Transaction {
  const changes = [...first.changes, ...second.changes]
  const because = second.because ?? first.because
  return { changes: onlyWrites(changes) ? lastOfEach(changes) : changes, ...(because === undefined ? {} : { because }) }
}

function joinedBack(first: Transaction, second: Transaction): Transaction {
  const changes = [...second.changes, ...first.changes]
  return { changes: onlyWrites(changes) ? lastOfEach(changes) : changes }
}

/** A drag writes to one cell hundreds of times: only the last write counts. */
function lastOfEach(writes: readonly Write[]): readonly Write[] {
  const last = new Map<CellId, Write>()
  for (const write of writes) last.set(write.id, write)
  return [...last.values()]
}

function isReturn({ forward, back }: Entry): boolean {
  if (!onlyWrites(forward.changes) || !onlyWrites(back.changes)) return false
  const before = new Map(back.changes.map(({ id, text }) => [id, text]))
  return forward.changes.every(({ id, text }) => before.get(id) === text)
}
