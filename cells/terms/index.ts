// `terms`: what each term of a model leaves behind when it is taken out.

import type { Kind } from "../../runtime/kind.ts"
import type { Json } from "../../runtime/value.ts"
import { found, type TermsFinding } from "./find.ts"
import { shown } from "./show.ts"
import { type TermsSaid, termsWords } from "./words.ts"

export const terms: Kind<TermsSaid, TermsFinding> = {
  words: termsWords,
  version: 1,
  evaluate: found,
  show: shown,
  summary,
  tried,
}

function summary({ rows }: TermsFinding): Json {
  return {
    rows: rows.map(({ without, deviance, df, test }) => ({
      without,
      deviance,
      df,
      test: test?.by ?? null,
      statistic: test?.statistic ?? null,
      p: test?.p ?? null,
    })),
  }
}

/** Each smaller fit is one that was shown. */
function tried({ rows, family, link, n }: TermsFinding): readonly Json[] {
  return rows.flatMap(({ left, deviance, df, aic }) => (df === null ? [] : [{ family, link, predictor: left, n, deviance, df, aic }]))
}
