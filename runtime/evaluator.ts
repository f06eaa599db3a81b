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
  /** Null while the maker is still at work and only parts of it are read. */
  readonly whole: Hash | null
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
  /** The version of the kind that found it: goes into the key. */
  readonly version: number
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
  /** A part was published before the end; `version` is that of the kind. */
  published(part: string, hash: Hash, version: number): void
  /** The finding so far: shown now; late parts follow when the engine says `rest`. */
  soFar(found: Found): void
}

/** What a figure asked later gets. Lost: the value is no longer held, and its maker has to be evaluated again. */
export type Answer =
  | { readonly type: "answer"; readonly answer: Json }
  | { readonly type: "lost" }
  | { readonly type: "crash"; readonly text: string; readonly stack: string }

/** Holds values by hash and does evaluate, hashing, show and summary. */
export interface Evaluator {
  evaluate(task: Task, events: TaskEvents): Promise<Result>
  cancel(id: number): void
  /** Late parts of this task may start (true) or are not wanted (false). */
  rest(id: number, wanted: boolean): void
  ask(kind: string, whole: Hash, text: string, question: Json): Promise<Answer>
  /** Everything else may be dropped. A value that has come up since the last call survives this one, as its message may still be under way. */
  keep(hashes: ReadonlySet<Hash>): void
}
