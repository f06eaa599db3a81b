// The kinds, whole: what the evaluator loads. One line a kind.

import type { AnyKind } from "../runtime/kind.ts"
import { data } from "./data/index.ts"

export const kinds: readonly AnyKind[] = [data]
