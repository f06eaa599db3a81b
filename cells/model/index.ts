// `model`: a generalized linear model of a table, fitted, with errors, tests and a certificate.

import type { Kind } from "../../runtime/kind.ts"
import type { ModelFound } from "../model-finding.ts"
import { found } from "./find.ts"
import { shown } from "./show.ts"
import { summary, tried } from "./summary.ts"
import { type ModelSaid, modelWords } from "./words.ts"

export const model: Kind<ModelSaid, ModelFound> = {
  words: modelWords,
  version: 2,
  evaluate: found,
  show: shown,
  summary,
  tried,
}
