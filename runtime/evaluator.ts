// The contract between the engine, which never touches a value, and the evaluator, which holds values by hash. Everything that
// crosses is plain data, so that the evaluator may be a worker, the same process (terminal) or a fake (tests).

import type { CellId } from "./document.ts"
import type { BlockLike } from "./kind.ts"
import type { Notice } from "./notice.ts"
import type { Hash, Json, Key, Name } from "./value.ts"

/** What a person is shown of a finding. */
export interface Shown {
  readonly blocks: readonly BlockLike[]
  readonly notices: readonly Notice[]
  readonly summary: Json
}

/** One input of a task, by hash. `parts` null: the whole finding. */
export interface TaskInput {
  readonly name: Name
  readonly key: Key
  readonly whole: Hash
  readonly parts: readonly { readonly part: string; readonly hash: Hash }[] | null
  readonly offers: readonly string[] | null
}

export interface Task {
  readonly id: number
  readonly cell: CellId
  readonly text: string
  readonly inputs: readonly TaskInput[]
  /** Enclosures the statement reads: by name, with the SHA-256 of their bytes; null where the notebook has none of that name. */
  readonly files: readonly { readonly name: string; readonly sha256: string | null }[]
  /** True inside a gesture: warm starts allowed, no late part. */
  readonly gesture: boolean
  /** The whole of the cell's last finding, offered for a warm start in a gesture. */
  readonly near: Hash | null
}

/** A finding as the engine knows it: hashes and what to show. `parts` is empty for a finding that has none. */
export interface Found {
  readonly ok: boolean
  /** Null when there is no finding, only notices. */
  readonly whole: Hash | null
  readonly parts: Readonly<Record<string, Hash>>
  /** Bytes per hash of what this finding holds, each column counted under its own hash, once. */
  readonly bytes: Readonly<Record<Hash, number>>
  readonly shown: Shown
  readonly tried: readonly Json[]
}

export type Result =
  | { readonly type: "found"; readonly found: Found }
  | { readonly type: "crash"; readonly text: string; readonly stack: string }
  | { readonly type: "cancelled" }
  /** An input is no longer held: the engine evaluates its maker again. */
  | { readonly type: "lost"; readonly hashes: readonly Hash[] }

export interface TaskEvents {
  /** A part was published before the end. */
  published(part: string, hash: Hash): void
  /** The finding so far: shown now; late parts follow when the engine says `rest`. */
  soFar(found: Found): void
}

/** Holds values by hash and does evaluate, hashing, show and summary. */
export interface Evaluator {
  evaluate(task: Task, events: TaskEvents): Promise<Result>
  cancel(id: number): void
  /** Late parts of this task may start (true) or are not wanted (false). */
  rest(id: number, wanted: boolean): void
  ask(kind: string, whole: Hash, text: string, question: Json): Promise<Json>
  /** Everything else may be dropped. */
  keep(hashes: ReadonlySet<Hash>): void
}
