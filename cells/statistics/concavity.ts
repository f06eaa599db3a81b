// Where the log-likelihood is known to be concave in the linear predictor, so that a maximum found is the maximum. The table is that of the
// conventions, checked there to 60 digits; a pair that is not in it may still be concave, but nobody has shown it here.

import type { FamilySpec, LinkSpec } from "./problem.ts"

export function isConcave(family: FamilySpec, link: LinkSpec): boolean {
  // Of a link of one's own no more is known than whether it is the canonical one.
  if (link.own !== undefined) return link.own.canonical === family.name
  if ((family.estimated?.length ?? 0) + (link.estimated?.length ?? 0) > 0 || link.limits) return false
  const a = powerOf(link)
  switch (family.name) {
    case "binomial":
      return ontoSharesConcave(link) || (a !== null && a >= 0 && a <= 1)
    case "normal":
      return a === 1
    case "negative_binomial":
      return a === 0
    default: {
      // V = μ^p: every power from 1 − p to 2 − p.
      const p = variancePower(family)
      return p !== null && a !== null && a >= 1 - p && a <= 2 - p
    }
  }
}

function ontoSharesConcave({ name, parameters }: LinkSpec): boolean {
  const [a = Number.NaN, b = Number.NaN] = parameters
  if (name === "aranda_ordaz") return a >= -1
  if (name === "symmetric_power") return Math.abs(a) <= 1
  if (name === "stukel") return a >= 0 && a <= 0.5 && b >= 0 && b <= 0.5
  return ["logit", "probit", "cloglog", "loglog", "log_complement"].includes(name)
}

const variancePower = ({ name, parameters }: FamilySpec): number | null =>
  name === "tweedie" ? (parameters[0] ?? null) : name === "poisson" ? 1 : name === "gamma" ? 2 : name === "inverse_gaussian" ? 3 : null

/** The power a link is, up to a linear change, 0 for the log; null for the others. */
export const powerOf = (link: LinkSpec): number | null => {
  switch (link.name) {
    case "identity":
      return 1
    case "square_root":
      return 0.5
    case "log":
      return 0
    case "reciprocal":
      return -1
    case "reciprocal_square":
      return -2
    case "power":
    case "box_cox":
      return link.parameters[0] ?? null
    default:
      return null
  }
}
