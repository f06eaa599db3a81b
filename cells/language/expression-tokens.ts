// The outside token of expression.grammar: words of any script.

import { words as wordToken } from "../../runtime/tokens.ts"
import { Word } from "./expression-parser.terms.ts"

export const words = wordToken(Word)
