// The kinds by their words: what the page loads. One line a kind.

import type { AnyWords } from "../runtime/kind.ts"

export const words: readonly AnyWords[] = []
