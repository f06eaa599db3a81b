// `note`: text for the reader, with live values in it.

import type { Kind } from "../../runtime/kind.ts"
import { found, type NoteFinding } from "./find.ts"
import { shown } from "./show.ts"
import { type NoteSaid, noteWords } from "./words.ts"

export const note: Kind<NoteSaid, NoteFinding> = {
  words: noteWords,
  version: 1,
  evaluate: (said, inputs) => Promise.resolve(found(said, inputs)),
  show: shown,
  summary: ({ values }) => ({ values }),
  tried: () => [],
}
