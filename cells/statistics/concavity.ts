// Where the log-likelihood is known to be concave in the linear predictor, so that a maximum found is the maximum. The table is that of the
// conventions, checked there to 60 digits; a pair that is not in it may still be concave, but nobody has shown it here.

import type { FamilySpec, LinkSpec } from "./problem.ts"

export function isConcave(family: FamilySpec, link: LinkSpec): boolean {
  const a = powerOf(link)
  switch (family.name) {
    case "binomial":
      return ["logit", "probit", "cloglog", "loglog"].includes(link.name) || (a !== null && a >= 0 && a <= 1)
    case "poisson":
      return a !== null && a >= 0 && a <= 1
    case "gamma":
      return a !== null && a >= -1 && a <= 0
    case "normal":
      return link.name === "identity" || (link.name === "power" && a === 1)
    default:
      return false
  }
}

/** The power a link is, 0 for the log; null for the others. */
const powerOf = (link: LinkSpec): number | null => {
  switch (link.name) {
    case "identity":
      return 1
    case "square_root":
      return 0.5
    case "log":
      return 0
    case "reciprocal":
      return -1
    case "power":
      return link.parameters[0] ?? null
    default:
      return null
  }
}
