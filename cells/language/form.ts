// Forms: the pattern of each clause, as data, and the one function that reads a clause by them. A form is words and slots, such as
// `NAME:successes out of NAME:trials`; a slot is `TYPE:label`. Forms are tried in order and the whole clause must fit; a fault
// stands at the farthest token reached. They are also the source of completion and help.
//
//     NAME a column · CELL another cell · ID a new name · TEXT · NUMBER signed number or percent · BOUND signed number, ±infinity, a cell's
//     name or `estimate` · CHOICE a text, a truth or BOUND · CALL a word with or without (…) · EXPR to the end of the clause · TERMS to the
//     end of the clause · ( )? optional · { }, a comma list

import type { Notice, Place } from "../../runtime/notice.ts"
import type { AnyWords, ClauseWords } from "../../runtime/kind.ts"
import type { Clause, Statement } from "../../runtime/statement.ts"
import type { Name } from "../../runtime/value.ts"
import type { Expression } from "./expression.ts"
import type { Terms } from "./predictor.ts"

export type Bound =
  | { readonly type: "number"; readonly value: number; readonly text: string }
  | { readonly type: "infinity"; readonly sign: 1 | -1 }
  | { readonly type: "cell"; readonly name: Name; readonly at: Place }
  | { readonly type: "estimate" }

export type Choice = Bound | { readonly type: "text"; readonly text: string } | { readonly type: "truth"; readonly value: boolean }

/** A word with or without arguments: `power(a)`, `stukel(0, dial)`; `quasi_likelihood(EXPR)` keeps its argument as an expression. */
export type Call = { readonly name: string; readonly bounds: readonly Bound[] | null; readonly expression: Expression | null }

/** What stands in one slot. */
export type Filled = { readonly at: Place } & (
  | { readonly type: "NAME" | "CELL" | "ID"; readonly name: Name }
  | { readonly type: "TEXT"; readonly text: string }
  | { readonly type: "NUMBER"; readonly value: number; readonly text: string }
  | { readonly type: "BOUND"; readonly bound: Bound }
  | { readonly type: "CHOICE"; readonly choice: Choice }
  | { readonly type: "CALL"; readonly call: Call }
  | { readonly type: "EXPR"; readonly expression: Expression }
  | { readonly type: "TERMS"; readonly terms: Terms }
)

/** One clause as read: which form fitted, and what stands in its slots, by label (a list where the slot is in `{ },`). */
export interface Matched {
  readonly keyword: string
  /** Which clause of the statement, for places. */
  readonly clause: number
  readonly form: number
  readonly slots: Readonly<Record<string, readonly Filled[]>>
  /** The words of the form that were there, for optional parts such as `( as csv )?`. */
  readonly words: readonly string[]
}

/** Reads one clause by its forms. */
export declare function match(clause: Clause, index: number, words: ClauseWords): { readonly matched: Matched | null; readonly notices: readonly Notice[] }

/**
 * Reads all clauses of a statement by the words of its kind. Gives the faults every kind shares: an unknown clause (with the nearest
 * keyword and a mend), a clause said twice, a clause not available yet, tokens after the name in the heading, a missing name.
 */
export declare function readClauses(statement: Statement, words: AnyWords): { readonly clauses: readonly Matched[]; readonly notices: readonly Notice[] }
