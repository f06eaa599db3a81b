// What is wrong with the fit of a candidate, in a few words for its place on the strip; null where nothing is.

import type { Fitted } from "../statistics/fit.ts"

export function troubleOf(fitted: Fitted): string | null {
  if (!fitted.ok) return "no fit: no start keeps every mean possible"
  switch (fitted.fit.certificate.class) {
    case "interior":
    case "unidentified":
      return null
    case "boundary":
      return "at the edge of the possible means"
    case "infinite":
      return "a coefficient runs to infinity"
    case "several_maxima":
      return "more than one maximum"
    case "gave_up":
      return "the fit did not arrive"
  }
}
