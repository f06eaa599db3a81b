// The engine: the one place that changes. It holds the notebook, marks what an edit touches, and lets work be done when it is wanted
// and ready. It never touches a value, has no clock and no randomness; who the evaluator is and when it is at rest is said from outside.

import type { Applied, CellId, Notebook, Transaction } from "./document.ts"
import type { Evaluator, Shown } from "./evaluator.ts"
import type { AnyWords } from "./kind.ts"
import type { Notice } from "./notice.ts"
import type { Hash, Json, Key } from "./value.ts"

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
export declare function createEngine(options: EngineOptions): Engine
