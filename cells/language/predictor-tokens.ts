// The outside token of predictor.grammar: words of any script.

import { words as wordToken } from "../../runtime/tokens.ts"
import { Word } from "./predictor-parser.terms.ts"

export const words = wordToken(Word)
