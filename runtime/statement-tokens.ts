// The outside tokens of statement.grammar: words, the line feeds that part clauses, the body of a note, and strays.

import { Break, Continue, Prose, Stray, Word } from "./statement-parser.terms.ts"
import { breaks as breakTokens, prose as proseToken, strays as strayToken, words as wordToken } from "./tokens.ts"

export const words = wordToken(Word)
export const breaks = breakTokens(Break, Continue)
export const prose = proseToken(Prose)
export const strays = strayToken(Stray)
