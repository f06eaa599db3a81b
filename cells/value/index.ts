// `value`: a number with a name, for other cells and notes to use.

import type { Kind } from "../../runtime/kind.ts"
import { found, type ValueFinding } from "./find.ts"
import { shown } from "./show.ts"
import { type ValueSaid, valueWords } from "./words.ts"

export const value: Kind<ValueSaid, ValueFinding> = {
  words: valueWords,
  version: 1,
  evaluate: (said, inputs) => Promise.resolve(found(said, inputs)),
  show: shown,
  summary: (worth) => ({ value: worth }),
  tried: () => [],
}
