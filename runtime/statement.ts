// Statements: the text of a cell read into heading, clauses and tokens. Reading is total: it never throws and never loses a clause. It
// knows no kind but `note` and no clause keyword; what clauses mean is said by the kinds.

import type { ClauseEdit } from "./notice.ts"

export type TokenType = "word" | "number" | "percent" | "text" | "symbol" | "open-text" | "stray"

/** One token; `from` and `to` are UTF-16 places in the cell's text. */
export interface Token {
  readonly type: TokenType
  readonly text: string
  readonly from: number
  readonly to: number
}

/** One clause: `tokens` are those after the keyword (so token k of a Place is the keyword for 0, `tokens[k - 1]` otherwise). */
export interface Clause {
  readonly keyword: string
  readonly from: number
  readonly to: number
  readonly tokens: readonly Token[]
}

export interface Statement {
  readonly text: string
  readonly off: boolean
  readonly kind: string | null
  readonly name: string | null
  /** Tokens of the heading: `off`, the kind, the name and the rest, as they stand. */
  readonly heading: readonly Token[]
  /** Tokens of the heading after the name. */
  readonly rest: readonly Token[]
  readonly clauses: readonly Clause[]
  /** The body of a note. */
  readonly prose: { readonly from: number; readonly to: number } | null
}

export declare function read(text: string): Statement
export declare function canonical(statement: Statement): string
export declare function rewritten(text: string, edit: ClauseEdit): string
