// The links, each a record of scalar functions written for the tails. `linkOf` gives the record of a link by its name and parameters; to
// add a link is to add it here and to say in legal-pairs.ts for which families it is legal.

import { atan, exp, expm1, log, log1p, pow, tan } from "./elementary.ts"
import { limitedLink } from "./limited-link.ts"
import type { Link, Range } from "./link.ts"
import { ownLink } from "./own-link.ts"
import { arandaOrdaz, boxCox, powerBend, stukel, symmetricPower } from "./parametric-links.ts"
import type { LinkSpec } from "./problem.ts"
import { normalCdf, normalDensity, normalQuantile, normalUpperTail } from "./special.ts"

/** Names of all links, in the order in which they are offered, with the names of their parameters. */
export const linkNames = {
  identity: [],
  log: [],
  reciprocal: [],
  reciprocal_square: [],
  square_root: [],
  power: ["a"],
  box_cox: ["a"],
  logit: [],
  probit: [],
  cauchit: [],
  cloglog: [],
  loglog: [],
  log_complement: [],
  aranda_ordaz: ["a"],
  symmetric_power: ["a"],
  stukel: ["a", "b"],
} as const satisfies Readonly<Record<string, readonly string[]>>

export type LinkName = keyof typeof linkNames

export const isLinkName = (name: string): name is LinkName => Object.hasOwn(linkNames, name)

/**
 * The link with this name and these parameters.
 *
 * @param side  −1 gives the reciprocal of negative means, which only the normal family can have; the formulas are the same
 * @throws RangeError for a name or parameters that are none: what a statement says is checked before
 */
export const linkOf = (spec: LinkSpec, side: 1 | -1 = 1): Link => {
  const link = unlimited(spec, side)
  return spec.limits ? limitedLink(link, spec.limits.low, spec.limits.high) : link
}

const unlimited = (spec: LinkSpec, side: 1 | -1): Link => {
  if (spec.own !== undefined) return ownLink(spec.own, spec.name)
  if (!isLinkName(spec.name) || spec.parameters.length !== linkNames[spec.name].length)
    throw new RangeError(`There is no link ${spec.name} with ${spec.parameters.length} parameters.`)
  switch (spec.name) {
    case "identity":
      return identity
    case "log":
      return logarithm
    case "reciprocal":
      return side === 1 ? reciprocal : reciprocalBelow
    case "reciprocal_square":
      return reciprocalSquare
    case "square_root":
      return squareRoot
    case "power":
      return powerLink(spec.parameters[0] as number)
    case "box_cox":
      return boxCox(spec.parameters[0] as number)
    case "logit":
      return logit
    case "probit":
      return probit
    case "cauchit":
      return cauchit
    case "cloglog":
      return cloglog
    case "loglog":
      return loglog
    case "log_complement":
      return logComplement
    case "aranda_ordaz":
      return arandaOrdaz(spec.parameters[0] as number)
    case "symmetric_power":
      return symmetricPower(spec.parameters[0] as number)
    case "stukel":
      return stukel(spec.parameters[0] as number, spec.parameters[1] as number)
  }
}

const everywhere: Range = { low: -Infinity, high: Infinity }
const positive: Range = { low: 0, high: Infinity }
const negative: Range = { low: -Infinity, high: 0 }
const unit: Range = { low: 0, high: 1 }

/** η = μ. */
const identity: Link = {
  name: "identity",
  range: everywhere,
  reach: everywhere,
  eta: (mu) => mu,
  mean: (eta) => eta,
  complement: null,
  slope: () => 1,
  curvature: () => 0,
}

/** η = ln μ. McCullagh & Nelder (1989), Generalized Linear Models, 2nd ed., §2.2.4. */
const logarithm: Link = {
  name: "log",
  range: positive,
  reach: everywhere,
  eta: log,
  mean: exp,
  complement: null,
  slope: exp,
  curvature: exp,
}

/** η = 1/μ, decreasing. McCullagh & Nelder (1989), §8.4.1. */
const reciprocal: Link = {
  name: "reciprocal",
  range: positive,
  reach: positive,
  eta: (mu) => 1 / mu,
  mean: (eta) => 1 / eta,
  complement: null,
  slope: (eta) => -1 / (eta * eta),
  curvature: (eta) => 2 / (eta * eta * eta),
}

/** The same for negative means: towards 0 from below, η goes to −∞. */
const reciprocalBelow: Link = {
  ...reciprocal,
  range: negative,
  reach: negative,
  eta: (mu) => (mu === 0 ? -Infinity : 1 / mu),
}

/** η = 1/μ², decreasing. McCullagh & Nelder (1989), §2.2.4: canonical for the inverse Gaussian. */
const reciprocalSquare: Link = {
  name: "reciprocal_square",
  range: positive,
  reach: positive,
  eta: (mu) => 1 / mu / mu,
  mean: (eta) => 1 / Math.sqrt(eta),
  complement: null,
  slope: (eta) => -0.5 / (eta * Math.sqrt(eta)),
  curvature: (eta) => 0.75 / (eta * eta * Math.sqrt(eta)),
}

/** η = √μ. */
const squareRoot: Link = {
  name: "square_root",
  range: positive,
  reach: positive,
  eta: (mu) => Math.sqrt(mu),
  mean: (eta) => eta * eta,
  complement: null,
  slope: (eta) => 2 * eta,
  curvature: () => 2,
}

/**
 * η = μ^a, and ln μ at a = 0; decreasing for a < 0. McCullagh & Nelder (1989), §2.2.4 and §11.3.
 *
 * dμ/dη is taken as μ/(aη), which has one power where the formula has two. For a near 0 all means share nearly one η, and η itself
 * rounded costs the mean |1/a| units in its last place: nothing that a formula could mend.
 */
const powerLink = (a: number): Link => {
  const name = `power(${a})`
  if (a === 0) return { ...logarithm, name }
  const inverse = 1 / a
  const mean = (eta: number): number => pow(eta, inverse)
  const slope = (eta: number): number => (pow(eta, inverse) / eta) * inverse
  return {
    name,
    range: positive,
    reach: positive,
    eta: (mu) => pow(mu, a),
    mean,
    complement: null,
    slope,
    curvature: (eta) => (slope(eta) / eta) * (inverse - 1),
    bend: powerBend(a),
  }
}

/**
 * η = ln(μ/(1 − μ)). McCullagh & Nelder (1989), §4.3.1.
 *
 * Everything is written in e^−|η|, which cannot overflow; the difference 1 − 2μ of the curvature is −tanh(η/2).
 */
const logit: Link = {
  name: "logit",
  range: unit,
  reach: everywhere,
  // Towards ½ the logarithm of a ratio near 1 would keep its absolute error only; 2μ − 1 is exact there.
  eta: (mu) => (mu > 0.25 && mu < 0.75 ? log1p((2 * mu - 1) / (1 - mu)) : log(mu / (1 - mu))),
  mean: (eta) => {
    if (eta >= 0) return 1 / (1 + exp(-eta))
    const e = exp(eta)
    return e / (1 + e)
  },
  complement: (eta) => {
    if (eta <= 0) return 1 / (1 + exp(eta))
    const e = exp(-eta)
    return e / (1 + e)
  },
  slope: (eta) => {
    const e = exp(eta < 0 ? eta : -eta)
    return e / ((1 + e) * (1 + e))
  },
  curvature: (eta) => {
    const low = eta < 0 ? eta : -eta
    const e = exp(low)
    const size = (-expm1(low) * e) / ((1 + e) * (1 + e) * (1 + e))
    return eta < 0 ? size : -size
  },
}

/** η = Φ⁻¹(μ). Finney (1971), Probit Analysis, 3rd ed. */
const probit: Link = {
  name: "probit",
  range: unit,
  reach: everywhere,
  eta: normalQuantile,
  mean: normalCdf,
  complement: normalUpperTail,
  slope: normalDensity,
  curvature: (eta) => (eta > -39 && eta < 39 ? -eta * normalDensity(eta) : 0),
}

/** atan η/π + ½, the law of Cauchy, for η below −1 as atan(−1/η)/π, where the sum has lost its digits. */
const cauchyCdf = (eta: number): number => (eta < -1 ? inversePi * atan(-1 / eta) : 0.5 + inversePi * atan(eta))
const pi = Math.PI
const inversePi = 0.3183098861837907

/** η = tan(π(μ − ½)). McCullagh & Nelder (1989), §4.3.1 names it among the inverses of distribution functions. */
const cauchit: Link = {
  name: "cauchit",
  range: unit,
  reach: everywhere,
  eta: (mu) => (mu < 0.25 ? -1 / tan(pi * mu) : mu > 0.75 ? 1 / tan(pi * (1 - mu)) : tan(pi * (mu - 0.5))),
  mean: cauchyCdf,
  complement: (eta) => cauchyCdf(-eta),
  slope: (eta) => inversePi / (1 + eta * eta),
  curvature: (eta) => (inversePi / (1 + eta * eta)) * -2 * (eta / (1 + eta * eta)),
}

/** e^(η − e^η), 0 above 7, where the second factor has ended and the first might overflow. */
const gumbelDensity = (eta: number): number => (eta > 7 ? 0 : exp(eta) * exp(-exp(eta)))

/**
 * η = ln(−ln(1 − μ)), μ = 1 − exp(−e^η). McCullagh & Nelder (1989), §4.3.1.
 *
 * With expm1, because 1 − exp(…) has lost every digit at η = −37, just where rare events are.
 */
const cloglog: Link = {
  name: "cloglog",
  range: unit,
  reach: everywhere,
  eta: (mu) => log(-log1p(-mu)),
  mean: (eta) => -expm1(-exp(eta)),
  complement: (eta) => exp(-exp(eta)),
  slope: gumbelDensity,
  curvature: (eta) => (eta > 7 ? 0 : -gumbelDensity(eta) * expm1(eta)),
}

/** η = −ln(−ln μ), μ = exp(−e^−η), increasing: the complementary log-log turned about. McCullagh & Nelder (1989), §4.3.1. */
const loglog: Link = {
  name: "loglog",
  range: unit,
  reach: everywhere,
  eta: (mu) => -log(-log(mu)),
  mean: (eta) => exp(-exp(-eta)),
  complement: (eta) => -expm1(-exp(-eta)),
  slope: (eta) => gumbelDensity(-eta),
  curvature: (eta) => -cloglog.curvature(-eta),
}

/** η = ln(1 − μ), decreasing, η < 0: effects multiply the chance of none. Wacholder (1986), American Journal of Epidemiology 123, 174-184. */
const logComplement: Link = {
  name: "log_complement",
  range: unit,
  reach: negative,
  eta: (mu) => log1p(-mu),
  mean: (eta) => -expm1(eta),
  complement: exp,
  slope: (eta) => -exp(eta),
  curvature: (eta) => -exp(eta),
}
