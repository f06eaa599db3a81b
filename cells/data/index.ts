// `data`: a file read into a table, and what is made, kept and totalled of it.

import type { Kind } from "../../runtime/kind.ts"
import { found } from "./find.ts"
import type { DataFinding } from "./finding.ts"
import { shown, summary } from "./show.ts"
import { type DataSaid, dataWords } from "./words.ts"

export const data: Kind<DataSaid, DataFinding> = {
  words: dataWords,
  version: 1,
  evaluate: found,
  show: shown,
  summary,
  tried: () => [],
}
