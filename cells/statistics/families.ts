// The families, each a record of scalar functions. Unit deviances do not cancel near y = μ and log densities have every constant; both
// are built from the deviance term and the error of Stirling's formula (Loader 2000), so that large counts lose no digits either.

import { log, log1p } from "./elementary.ts"
import type { Family } from "./family.ts"
import { negativeBinomial } from "./negative-binomial.ts"
import type { FamilySpec } from "./problem.ts"
import { quasiLikelihood } from "./quasi-likelihood.ts"
import { devianceTerm, halfLogTwoPi, stirlingError } from "./special.ts"
import { tweedie } from "./tweedie.ts"

/** Names of all families, in the order in which they are offered. */
export const familyNames = [
  "normal",
  "binomial",
  "poisson",
  "gamma",
  "inverse_gaussian",
  "negative_binomial",
  "tweedie",
  "quasi_likelihood",
] as const
export type FamilyName = (typeof familyNames)[number]

export const isFamilyName = (name: string): name is FamilyName => (familyNames as readonly string[]).includes(name)

/** How many parameters a family has. */
export const familyParameters: Readonly<Record<FamilyName, number>> = {
  normal: 0,
  binomial: 0,
  poisson: 0,
  gamma: 0,
  inverse_gaussian: 0,
  negative_binomial: 1,
  tweedie: 1,
  quasi_likelihood: 0,
}

/** @throws RangeError for a name that is none: what a statement says is checked before */
export const familyOf = (spec: FamilySpec): Family => {
  const { name, parameters } = spec
  if (!isFamilyName(name) || parameters.length !== familyParameters[name])
    throw new RangeError(`There is no family ${name} with ${parameters.length} parameters.`)
  // With k at infinity it is Poisson's law.
  if (name === "negative_binomial")
    return parameters[0] === Infinity ? { ...poisson, name: "negative_binomial(∞)" } : negativeBinomial(parameters[0] as number)
  if (name === "quasi_likelihood") {
    if (!spec.variance) throw new RangeError("Quasi-likelihood needs a variance.")
    return quasiLikelihood(spec.variance)
  }
  if (name === "tweedie") return tweedie(parameters[0] as number)
  return families[name]
}

/** V = 1, u = (y − μ)². */
const normal: Family = {
  name: "normal",
  range: { low: -Infinity, high: Infinity },
  discrete: false,
  dispersion: "pearson",
  variance: () => 1,
  varianceSlope: () => 0,
  unitDeviance: (y, mu) => (y - mu) * (y - mu),
  logDensity: (y, mu, _rest, _trials, phi) => -halfLogTwoPi - 0.5 * log(phi) - ((y - mu) / phi) * (0.5 * (y - mu)),
}

/** V = μ(1 − μ), y the share of successes, u = 2[y ln(y/μ) + (1 − y) ln((1 − y)/(1 − μ))]. McCullagh & Nelder (1989), §4.4. */
const binomial: Family = {
  name: "binomial",
  range: { low: 0, high: 1 },
  discrete: true,
  dispersion: "one",
  variance: (mu, rest) => mu * rest,
  varianceSlope: (mu, rest) => rest - mu,
  unitDeviance: (y, mu, rest) => 2 * (devianceTerm(y, mu) + devianceTerm(1 - y, rest)),
  logDensity: (y, mu, rest, trials) => {
    // The share was a quotient: times the trials it is a whole number again.
    const successes = Math.round(y * trials)
    const failures = trials - successes
    if (successes === 0) return trials * (rest < 0.5 ? log(rest) : log1p(-mu))
    if (failures === 0) return trials * (mu < 0.5 ? log(mu) : log1p(-rest))
    return (
      stirlingError(trials) -
      stirlingError(successes) -
      stirlingError(failures) -
      devianceTerm(successes, trials * mu) -
      devianceTerm(failures, trials * rest) -
      halfLogTwoPi -
      0.5 * log(successes * (failures / trials))
    )
  },
}

/** V = μ, u = 2[y ln(y/μ) − (y − μ)]. McCullagh & Nelder (1989), §6.2. */
const poisson: Family = {
  name: "poisson",
  range: { low: 0, high: Infinity },
  discrete: true,
  dispersion: "one",
  variance: (mu) => mu,
  varianceSlope: () => 1,
  unitDeviance: (y, mu) => 2 * devianceTerm(y, mu),
  logDensity: (y, mu) => (y === 0 ? -mu : -stirlingError(y) - devianceTerm(y, mu) - halfLogTwoPi - 0.5 * log(y)),
}

/**
 * V = μ², u = 2[(y − μ)/μ − ln(y/μ)]. McCullagh & Nelder (1989), §8.3.
 *
 * With ν = 1/φ the log density is ν ln(νy/μ) − νy/μ − ln y − ln Γ(ν); its large terms cancel against Stirling's formula for Γ.
 */
const gamma: Family = {
  name: "gamma",
  range: { low: 0, high: Infinity },
  discrete: false,
  dispersion: "pearson",
  variance: (mu) => mu * mu,
  varianceSlope: (mu) => 2 * mu,
  unitDeviance: (y, mu) => (2 * devianceTerm(mu, y)) / mu,
  logDensity: (y, mu, _rest, _trials, phi) =>
    -devianceTerm(mu, y) / mu / phi - halfLogTwoPi - 0.5 * log(phi) - log(y) - stirlingError(1 / phi),
}

/** V = μ³, u = (y − μ)²/(μ²y). McCullagh & Nelder (1989), §2.2. */
const inverseGaussian: Family = {
  name: "inverse_gaussian",
  range: { low: 0, high: Infinity },
  discrete: false,
  dispersion: "pearson",
  variance: (mu) => mu * mu * mu,
  varianceSlope: (mu) => 3 * mu * mu,
  unitDeviance: (y, mu) => (mu === Infinity ? 1 : ((y - mu) / mu) * ((y - mu) / mu)) / y,
  logDensity: (y, mu, _rest, _trials, phi) =>
    -halfLogTwoPi - 0.5 * log(phi) - 1.5 * log(y) - inverseGaussian.unitDeviance(y, mu, 0) / (2 * phi),
}

const families: Readonly<Record<Exclude<FamilyName, "negative_binomial" | "tweedie" | "quasi_likelihood">, Family>> = {
  normal,
  binomial,
  poisson,
  gamma,
  inverse_gaussian: inverseGaussian,
}
