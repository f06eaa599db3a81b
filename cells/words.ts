// The kinds by their words: what the page loads. One line a kind.

import type { AnyWords } from "../runtime/kind.ts"
import { dataWords } from "./data/words.ts"

export const words: readonly AnyWords[] = [dataWords]
