// The kinds, whole: what the evaluator loads. One line a kind.

import type { AnyKind } from "../runtime/kind.ts"
import { data } from "./data/index.ts"
import { dial } from "./dial/index.ts"
import { link } from "./link/index.ts"
import { model } from "./model/index.ts"
import { note } from "./note/index.ts"
import { scales } from "./scales/index.ts"
import { terms } from "./terms/index.ts"
import { value } from "./value/index.ts"

export const kinds: readonly AnyKind[] = [data, model, link, scales, terms, dial, value, note]
