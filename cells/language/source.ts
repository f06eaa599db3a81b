// The tokens of a piece of a clause as a text that a grammar can read, with the way back from its places to tokens. Comments and line
// feeds between the tokens become blanks, so that a grammar sees what the statement saw.

import type { Place } from "../../runtime/notice.ts"
import type { Token } from "../../runtime/statement.ts"

export interface Source {
  /** Of equal length with what stands in the cell, so that every token keeps its distance from the first. */
  readonly text: string
  readonly tokens: readonly Token[]
  /** The clause the tokens are of, as in a Place, and the number of the first of them there. */
  readonly clause: number
  readonly first: number
}

export function sourceOf(tokens: readonly Token[], clause: number, first: number): Source {
  let text = ""
  let at = tokens[0]?.from ?? 0
  for (const token of tokens) {
    text += " ".repeat(Math.max(0, token.from - at)) + token.text
    at = token.to
  }
  return { text, tokens, clause, first }
}

/** The tokens from one place of the text to another; an empty range stands before the next token. */
export function placeIn(source: Source, from: number, to: number): Place {
  const start = tokenFrom(source, from)
  const end = Math.max(start, tokenFrom(source, to))
  return { clause: source.clause, from: source.first + start, to: source.first + end }
}

/** Which of the tokens is the first that ends after this place of the text; their number when none does. */
export function tokenFrom(source: Source, at: number): number {
  let low = 0
  let high = source.tokens.length
  while (low < high) {
    const middle = (low + high) >> 1
    if ((source.tokens[middle]?.to ?? 0) - origin(source) <= at) low = middle + 1
    else high = middle
  }
  return low
}

/** The place of one token, counted among the tokens of this source. */
export const placeAt = (source: Source, index: number): Place => ({
  clause: source.clause,
  from: source.first + index,
  to: source.first + Math.min(index + 1, source.tokens.length),
})

const origin = (source: Source): number => source.tokens[0]?.from ?? 0
