// What a kind of cell is: its words (forms, parsing, the names it uses), which the page loads, and its work (evaluate, show,
// summary), which runs in the evaluator. The runtime knows kinds by this contract only.

import type { Notice, Place } from "./notice.ts"
import type { Statement } from "./statement.ts"
import type { Json, Key, Name, Value } from "./value.ts"

/** One cell or column that a statement reads. */
export interface Use {
  readonly name: Name
  /** The parts of the finding that are read (columns of a table), or all of it. A part that is not there is the kind's to report. */
  readonly parts: readonly string[] | "all"
  /** True where the bare name may be a column as well as a cell: then a missing cell is no fault of the graph's. */
  readonly either: boolean
  readonly at: Place
}

export interface Names {
  readonly defines: Name | null
  readonly uses: readonly Use[]
  /** Names of enclosures that are read. */
  readonly files: readonly string[]
}

/** What one clause may say. `forms` are patterns as in cells/language/form.ts; the source of reading, completion and help. */
export interface ClauseWords {
  readonly forms: readonly string[]
  /** One line of help, in the user's words. */
  readonly says: string
  /** May stand more than once. */
  readonly again?: true
  /** In the language, but not in this version yet: gives the notice `not-available-yet`, never a fault of syntax. */
  readonly later?: true
}

/** The part of a kind that the page loads too. It imports no statistics. */
export interface Words<Said> {
  readonly word: string
  /** Whether the heading needs a name ("needed"), may have one, or defines nothing. */
  readonly name: "needed" | "optional"
  readonly clauses: Readonly<Record<string, ClauseWords>>
  /** What may follow the name in the heading, as in `value NAME = EXPR`; left out: nothing. */
  readonly heading?: ClauseWords
  /** One line on what the kind is for. */
  readonly says: string
  /** A statement that can be inserted as a start. */
  readonly example: string
  parse(statement: Statement): { readonly said: Said; readonly notices: readonly Notice[] }
  names(said: Said): Names
}

/** What `evaluate` is given for one name it uses. */
export interface Input {
  /** The whole finding; or, where parts were asked for, a record of those parts that are there. */
  readonly value: Value
  readonly key: Key
  /** Names of all parts on offer; null unless one that was asked for is missing (so that a new column reruns only who misses one). */
  readonly offers: readonly string[] | null
}

/** What `evaluate` may do besides computing. */
export interface Work {
  readonly cancelled: boolean
  /** To be awaited at least every 50 ms; rejects with `Cancelled` when the work is no longer wanted. */
  checkpoint(): Promise<void>
  /** Hands out one part of the finding, once and final; readers of that part may go on. */
  publish(part: string, value: Value): void
  /** The bytes of an enclosure, from the start at each call; throws an Error called `NoFile` where the notebook has none of that name. */
  file(name: string): AsyncIterable<Uint8Array>
  /** The SHA-256 of that enclosure, lower-case hex; null where the notebook has none of that name. */
  fileHash(name: string): string | null
  /** The last finding of this cell, in a gesture only (for warm starts); else null. */
  readonly near: Value | null
  /**
   * Hands out the finding so far, to be shown now. True once the notebook is at rest: what follows is a late part. False when
   * late parts are not wanted (a gesture): then `evaluate` returns what it handed out.
   */
  late(soFar: Outcome<Value>): Promise<boolean>
}

/** A fault in a statement gives `ok: false`; `found` may still show why (a refuted link). */
export type Outcome<Found> =
  | { readonly ok: true; readonly found: Found; readonly notices: readonly Notice[] }
  | { readonly ok: false; readonly found: Found | null; readonly notices: readonly Notice[] }

/** The runtime sees of a block only that it is plain data with a type; the closed union is in cells/block.ts. */
export interface BlockLike {
  readonly type: string
}

/** A kind of cell. A finding may have a member `parts`, a record whose entries readers can ask for one by one. */
export interface Kind<Said, Found extends Value> {
  readonly words: Words<Said>
  /** Raised when the same statement would find something else. */
  readonly version: number
  /** Pure: the same statement and inputs give the same finding. Whatever is thrown is a crash, never a fault. */
  evaluate(said: Said, inputs: ReadonlyMap<Name, Input>, work: Work): Promise<Outcome<Found>>
  show(found: Found, said: Said): readonly BlockLike[]
  /** What the file and `--json` hold: the members of the format, no more. */
  summary(found: Found): Json
  /** One entry a fit that was shown, for the trail. */
  tried(found: Found): readonly Json[]
  /** What a figure asks later: the rows under a bin, a denser curve. */
  answer?(found: Found, question: Json): Json
}

// biome-ignore lint/suspicious/noExplicitAny: a list of kinds holds each with its own Said and Found; only `any` is both in and out.
export type AnyKind = Kind<any, any>
// biome-ignore lint/suspicious/noExplicitAny: as above.
export type AnyWords = Words<any>
