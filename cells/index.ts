// The kinds, whole: what the evaluator loads. One line a kind.

import type { AnyKind } from "../runtime/kind.ts"

export const kinds: readonly AnyKind[] = []
