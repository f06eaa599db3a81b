// The kinds by their words: what the page loads. One line a kind.

import type { AnyWords } from "../runtime/kind.ts"
import { dataWords } from "./data/words.ts"
import { dialWords } from "./dial/words.ts"
import { linkWords } from "./link/words.ts"
import { modelWords } from "./model/words.ts"
import { noteWords } from "./note/words.ts"
import { scalesWords } from "./scales/words.ts"
import { termsWords } from "./terms/words.ts"
import { valueWords } from "./value/words.ts"

export const words: readonly AnyWords[] = [dataWords, modelWords, linkWords, scalesWords, termsWords, dialWords, valueWords, noteWords]
