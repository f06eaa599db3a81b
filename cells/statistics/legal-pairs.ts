// Which link goes with which family: a link is legal where it is defined for every mean the family can have; the normal family takes all,
// and its means are then those of the link. A legal link may still reach impossible means, which is the fit's business.

import { powerOf } from "./concavity.ts"
import { familyNames, isFamilyName } from "./families.ts"
import { isLinkName, type LinkName, linkNames } from "./links.ts"
import type { FamilySpec, LinkSpec } from "./problem.ts"

/** Whether the link is defined for every mean the family can have. Conventions: README.md, links. */
export const isLegal = (family: FamilySpec, link: LinkSpec): boolean => {
  if (!isFamilyName(family.name)) return false
  if (family.variance !== undefined) return isDefinedOn(family.variance.range, link)
  if (link.own !== undefined) return isLegalOn(family.name, link.own.range)
  if (!isLinkName(link.name)) return false
  return anyLink.has(family.name) || !ontoShares.has(link.name)
}

/** Families that take every link; quasi-likelihood takes those defined wherever its variance is above 0, which no one knows of the name alone. */
const anyLink: ReadonlySet<string> = new Set(["normal", "binomial", "quasi_likelihood"])

const isDefinedOn = ([low, high]: readonly [number, number], link: LinkSpec): boolean => {
  if (link.own !== undefined) return link.own.range[0] <= low && link.own.range[1] >= high
  const from = link.name === "identity" ? Number.NEGATIVE_INFINITY : 0
  const to = ontoShares.has(link.name) ? 1 : Number.POSITIVE_INFINITY
  return isLinkName(link.name) && from <= low && to >= high
}

/** A link of one's own: for shares and for normal means it may leave some out, which the fit then cannot have; elsewhere it takes all. */
export const isLegalOn = (family: string, [low, high]: readonly [number, number]): boolean =>
  family === "normal" || (family === "binomial" ? low < 1 && high > 0 : low <= 0 && high === Infinity)

/** The names of the legal links, the canonical one first. */
export const legalLinks = (family: FamilySpec): readonly LinkName[] => {
  const canonical = isFamilyName(family.name) ? canonicalLinks[family.name] : null
  const names = (Object.keys(linkNames) as LinkName[]).filter((name) => isLegal(family, { name, parameters: [] }))
  return canonical === null ? names : [canonical, ...names.filter((name) => name !== canonical)]
}

/** The names of the families for which the link is legal. */
export const legalFamilies = (link: LinkSpec): readonly string[] => familyNames.filter((name) => isLegal({ name, parameters: [] }, link))

/**
 * The link a family takes where none is said: the canonical one, under which Xβ is the natural parameter (McCullagh & Nelder 1989, §2.2.4), and log
 * for negative binomial and Tweedie.
 */
export const canonicalLink = (family: FamilySpec): LinkSpec => {
  if (!isFamilyName(family.name)) throw new RangeError(`There is no family ${family.name}.`)
  return { name: canonicalLinks[family.name], parameters: [] }
}

/** Whether the link is canonical, up to a linear change: `power(−1)` is the reciprocal, and so is `box_cox(−1)`. */
export const isCanonical = (family: FamilySpec, link: LinkSpec): boolean => {
  if (link.own !== undefined) return link.own.canonical === family.name
  if (
    family.name === "negative_binomial" ||
    family.name === "quasi_likelihood" ||
    (link.limits && (link.limits.low !== 0 || link.limits.high !== 1))
  )
    return false
  if (family.name === "tweedie") return powerOf(link) === 1 - (family.parameters[0] ?? Number.NaN)
  return canonicalLink(family).name === plainLink(link).name
}

/** A power that has a name of its own, by that name. */
const plainLink = (link: LinkSpec): LinkSpec => {
  if (link.name !== "power" && link.name !== "box_cox") return link
  const name = { "-2": "reciprocal_square", "-1": "reciprocal", "0": "log", "0.5": "square_root", "1": "identity" }[
    String(link.parameters[0])
  ]
  return name === undefined ? link : { name, parameters: [] }
}

const canonicalLinks: Readonly<Record<(typeof familyNames)[number], LinkName>> = {
  normal: "identity",
  binomial: "logit",
  poisson: "log",
  gamma: "reciprocal",
  inverse_gaussian: "reciprocal_square",
  negative_binomial: "log",
  tweedie: "log",
  quasi_likelihood: "identity",
}

/** Links from the open interval (0, 1): counts and amounts can have means above 1. */
const ontoShares: ReadonlySet<string> = new Set([
  "logit",
  "probit",
  "cauchit",
  "cloglog",
  "loglog",
  "log_complement",
  "aranda_ordaz",
  "symmetric_power",
  "stukel",
])
