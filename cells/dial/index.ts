// `dial`: a number or a text that a hand turns. Its finding is the number or the text itself, so that whoever uses it runs again only when
// that changes.

import type { Kind } from "../../runtime/kind.ts"
import { shown } from "./show.ts"
import { type DialSaid, dialWords } from "./words.ts"

export const dial: Kind<DialSaid, number | string> = {
  words: dialWords,
  version: 1,
  evaluate: (said) =>
    Promise.resolve(said.dial === null ? { ok: false, found: null, notices: [] } : { ok: true, found: said.dial.value, notices: [] }),
  show: shown,
  summary: (value) => ({ value }),
  tried: () => [],
}
