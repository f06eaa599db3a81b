// Places: from a place counted in clauses and tokens to a range of the text, and on to line and column. Page and terminal both come
// here, so that a fault is underlined where it is printed. A place that no longer fits the text gives the nearest range there is.

import type { Place } from "./notice.ts"
import type { Statement } from "./statement.ts"

/** UTF-16 places in the cell's text; `to` is past the end. */
export interface TextRange {
  readonly from: number
  readonly to: number
}

/**
 * The range of a place. `from === to` in the place gives an empty range just before that token, or just after the last one. In the body
 * of a note, which has no tokens, `clause` is 0 and `from` and `to` count UTF-16 units from the start of the body.
 */
export function textRange(statement: Statement, place: Place): TextRange {
  const { prose } = statement
  if (prose !== null && place.clause >= 0) {
    const from = Math.min(prose.from + place.from, prose.to)
    return { from, to: Math.max(from, Math.min(prose.from + place.to, prose.to)) }
  }
  const tokens = tokensAt(statement, place.clause)
  const last = tokens.at(-1)
  if (last === undefined) return { from: 0, to: 0 }
  const first = tokens[place.from]
  if (first === undefined) return { from: last.to, to: last.to }
  if (place.to <= place.from) return { from: first.from, to: first.from }
  return { from: first.from, to: (tokens[place.to - 1] ?? last).to }
}

/** Line and column of a UTF-16 place in a text, both from 1; the column counts characters. */
export function lineAndColumn(text: string, at: number): { readonly line: number; readonly column: number } {
  const before = text.slice(0, at)
  const lineStart = before.lastIndexOf("\n") + 1
  let column = 1
  for (const _ of before.slice(lineStart)) column++
  let line = 1
  for (let feed = before.indexOf("\n"); feed >= 0; feed = before.indexOf("\n", feed + 1)) line++
  return { line, column }
}

/** The tokens a place counts: of the heading for −1, else of a clause, whose keyword is token 0. */
function tokensAt(statement: Statement, clause: number): readonly TextRange[] {
  const found = clause < 0 ? undefined : statement.clauses[clause]
  if (found === undefined) return statement.heading
  return [{ from: found.from, to: keywordEnd(statement.text, found.from) }, ...found.tokens]
}

const keywordEnd = (text: string, from: number): number => {
  const word = /^[\p{L}_][\p{L}\p{M}\p{Nd}_]*/u.exec(text.slice(from, from + 1_000))
  return from + (word === null ? 0 : word[0].length)
}
