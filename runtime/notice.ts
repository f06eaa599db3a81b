// Notices: one type for faults, warnings and remarks, and the intents by which a click mends or changes a statement. A notice is a value:
// it is built by a function in some `notices.ts`, has a stable code, names the user's own words and says what would be right.

import type { Name } from "./value.ts"

export type Level = "fault" | "warning" | "remark"

/**
 * A place in a statement, counted in clauses and tokens so that a remembered notice survives spacing. `clause` is −1 for the
 * heading and otherwise counts clauses from 0; tokens are counted from 0 in the clause, its keyword being token 0 (in the heading:
 * `off`, the kind, the name, the rest). `to` is past the last token; `from === to` points just before token `from`.
 */
export type Place = {
  readonly clause: number
  readonly from: number
  readonly to: number
}

/** One clause said otherwise. `says` is what stands after the keyword; null takes the clause away. */
export interface ClauseEdit {
  /** The cell whose statement is edited; null: the one that carries the intent. */
  readonly cell: Name | null
  /** The keyword; "" for the heading, of which `says` is the whole. */
  readonly clause: string
  /** Which of the clauses with this keyword, counted from 0; one past the last adds a clause. */
  readonly nth: number
  readonly says: string | null
  /** Another keyword to stand in place of `clause`: mends one that is misspelt, where it stands. */
  readonly keyword?: string
}

/** What a click would do to the text. `rewritten` in statement.ts turns it into writes. */
export interface Intent {
  readonly label: string
  readonly edits: readonly ClauseEdit[]
}

export interface Notice {
  readonly level: Level
  /** Stable: `place/what`, such as `model/dependent-term`. */
  readonly code: string
  /** One sentence: what is wrong, in the user's own words. */
  readonly text: string
  /** One sentence: what would be right; null where nothing useful can be said. */
  readonly hint: string | null
  /** The keyword of the clause it is about, null for the cell as a whole. */
  readonly clause: string | null
  readonly at: Place
  readonly mend: Intent | null
}

/** The heading as a place: for notices about the cell as a whole. */
export const heading: Place = { clause: -1, from: 0, to: 0 }
