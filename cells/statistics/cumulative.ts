// How much of a response's law lies below and above what was observed, by family. Both tails are given, the smaller one to full precision
// where the law allows, so that a residual far out is not cut off at eight standard deviations.

import { exp, log, pow } from "./elementary.ts"
import type { FamilySpec } from "./problem.ts"
import { betaCdf, gammaTails, logGamma, normalCdf, normalLogCdf } from "./special.ts"

/** P(Y < y), P(Y ≤ y) from below, and P(Y ≥ y), P(Y > y) from above. */
export type Tails = { readonly below: number; readonly upTo: number; readonly from: number; readonly above: number }

/**
 * @param y     the response; of the binomial the share of successes
 * @param rest  1 − μ to full precision, of the binomial only
 * @param phi   φ over the precision of the row; not used where the family has none
 */
export function tails(family: FamilySpec, y: number, mu: number, rest: number, trials: number, phi: number): Tails {
  const [parameter = Number.NaN] = family.parameters
  switch (family.name) {
    case "normal": {
      const z = (y - mu) / Math.sqrt(phi)
      return smooth(normalCdf(z), normalCdf(-z))
    }
    case "gamma":
      return smooth(...gammaTails(1 / phi, y / (mu * phi)))
    case "inverse_gaussian":
      return smooth(...inverseGaussianTails(y, mu, phi))
    case "binomial":
      return steps(Math.round(y * trials), (k) => binomialTails(k, trials, mu, rest))
    case "negative_binomial":
      return steps(y, (k) => (parameter === Number.POSITIVE_INFINITY ? poissonTails(k, mu) : negativeBinomialTails(k, mu, parameter)))
    case "tweedie":
      return tweedieTails(y, mu, parameter, phi)
    default:
      return steps(y, (k) => poissonTails(k, mu))
  }
}

const smooth = (lower: number, upper: number): Tails => ({ below: lower, upTo: lower, from: upper, above: upper })

/** @param at  P(Y ≤ k) and P(Y > k) */
function steps(y: number, at: (k: number) => readonly [number, number]): Tails {
  const [upTo, above] = at(y)
  const [below, from] = y > 0 ? at(y - 1) : [0, 1]
  return { below, upTo, from, above }
}

function poissonTails(k: number, mu: number): readonly [number, number] {
  const [lower, upper] = gammaTails(k + 1, mu)
  return [upper, lower]
}

const binomialTails = (k: number, n: number, mu: number, rest: number): readonly [number, number] =>
  k >= n ? [1, 0] : [betaCdf(n - k, k + 1, rest, mu), betaCdf(k + 1, n - k, mu, rest)]

function negativeBinomialTails(y: number, mu: number, k: number): readonly [number, number] {
  const share = k / (k + mu)
  const rest = mu / (k + mu)
  return [betaCdf(k, y + 1, share, rest), betaCdf(y + 1, k, rest, share)]
}

/** Φ(√(λ/y)(y/μ − 1)) ± e^(2λ/μ)Φ(−√(λ/y)(y/μ + 1)), λ = 1/φ; the upper tail loses digits where it is far smaller than the second part. */
function inverseGaussianTails(y: number, mu: number, phi: number): readonly [number, number] {
  const root = Math.sqrt(1 / (phi * y))
  const first = root * (y / mu - 1)
  const second = exp(2 / (phi * mu) + normalLogCdf(-root * (y / mu + 1)))
  return [normalCdf(first) + second, Math.max(0, normalCdf(-first) - second)]
}

/** Σ_j Poisson(j; λ) times the tails of the gamma law of shape jα, around the middle of the sum. */
function tweedieTails(y: number, mu: number, p: number, phi: number): Tails {
  const lambda = pow(mu, 2 - p) / (phi * (2 - p))
  const none = exp(-lambda)
  if (y === 0) return { below: 0, upTo: none, from: 1, above: 1 - none }
  const shape = (2 - p) / (p - 1)
  const x = y / (phi * (p - 1) * pow(mu, p - 1))
  const width = 10 + 10 * Math.sqrt(lambda)
  let [lower, upper] = [none, 0]
  for (let j = Math.max(1, Math.floor(lambda - width)); j <= lambda + width; j++) {
    const share = exp(j * log(lambda) - lambda - logGamma(j + 1))
    const [below, above] = gammaTails(j * shape, x)
    lower += share * below
    upper += share * above
  }
  return smooth(lower, upper)
}
