// The negative binomial family with variance μ + μ²/k, and the slopes of its log-likelihood in α = 1/k, which run on through α = 0, where the
// law is Poisson's. Everything is written so that no digit is lost as k grows.

import { log, log1p } from "./elementary.ts"
import type { Family } from "./family.ts"
import { devianceTermBy, halfLogTwoPi, stirlingError } from "./special.ts"

export const negativeBinomial = (k: number): Family => {
  // What a count adds whatever its mean is, once for each small count.
  const small = new Float64Array(256).fill(Number.NaN)
  const constant = (y: number): number =>
    stirlingError(y + k) - stirlingError(k) - stirlingError(y) - halfLogTwoPi - 0.5 * log1p(y / k) - 0.5 * log(y)
  const known = (y: number): number => {
    if (!(y < small.length)) return constant(y)
    const value = small[y] as number
    if (!Number.isNaN(value)) return value
    small[y] = constant(y)
    return small[y] as number
  }
  return {
    name: `negative_binomial(${k})`,
    range: { low: 0, high: Infinity },
    discrete: true,
    dispersion: "one",
    variance: (mu) => mu * (1 + mu / k),
    varianceSlope: (mu) => 1 + (2 * mu) / k,
    unitDeviance: (y, mu) => 2 * halfDeviance(y, mu, k),
    // Loader's form: a binomial law of y + k trials, times k/(y + k).
    logDensity: (y, mu) => (y === 0 ? -k * log1p(mu / k) : known(y) - halfDeviance(y, mu, k)),
  }
}

/** y·log(y/μ) − (y + k)·log((y + k)/(μ + k)) as two terms that are never negative. */
function halfDeviance(y: number, mu: number, k: number): number {
  const share = (y - mu) / (k + mu)
  const [n, middle] = [y + k, k + mu]
  return devianceTermBy(y, (n / middle) * mu, k * share) + devianceTermBy(k, (n / middle) * k, -k * share)
}

/** Slopes of one row's log density in α = 1/k: once, twice, and ∂²/∂α∂μ. */
export type AlphaSlopes = { first: number; second: number; withMean: number }

export function alphaSlopes(y: number, mu: number, alpha: number, out: AlphaSlopes): AlphaSlopes {
  const u = alpha * mu
  const [once, twice] = risingSums(y, alpha)
  // log f = Σ log(1 + αj) − (y + 1/α)·log(1 + αμ) + …; the second part by functions that have a limit at α = 0.
  out.first = once + mu * mu * lessRatio(u) - (mu * y) / (1 + u)
  out.second = -twice + mu * mu * mu * lessRatioSlope(u) + ((mu * y) / (1 + u)) * (mu / (1 + u))
  out.withMean = -(y - mu) / ((1 + u) * (1 + u))
  return out
}

/** ω(u) = (log(1 + u) − u/(1 + u))/u², ½ at 0. */
const lessRatio = (u: number): number => (u < 0.2 ? alternating(u, 0) : (log1p(u) - u / (1 + u)) / (u * u))

/** ω'(u) = (1/(1 + u)² − 2ω)/u. */
const lessRatioSlope = (u: number): number => (u < 0.2 ? alternating(u, 1) : (1 / ((1 + u) * (1 + u)) - 2 * lessRatio(u)) / u)

/** Σ (−u)^m·(m + 1)/(m + 2), or its derivative. */
function alternating(u: number, order: 0 | 1): number {
  let [sum, power] = [0, 1]
  for (let m = order as number; m < 60; m++) {
    const next = sum + ((m % 2 === 0 ? 1 : -1) * (order === 0 ? 1 : m) * power * (m + 1)) / (m + 2)
    if (next === sum) break
    sum = next
    power *= u
  }
  return sum
}

/** Terms summed one by one; the rest of a large count by the formula of Euler and Maclaurin. */
const oneByOne = 48

/** Σ j/(1 + αj) and Σ (j/(1 + αj))² over j from 0 to y − 1. */
function risingSums(y: number, alpha: number): readonly [number, number] {
  const last = y <= 2 * oneByOne ? y : oneByOne
  let [once, twice] = [0, 0]
  for (let j = 1; j < last; j++) {
    const term = j / (1 + alpha * j)
    once += term
    twice += term * term
  }
  if (last === y) return [once, twice]
  const [from, to] = [last, y]
  const f = (x: number): number => x / (1 + alpha * x)
  const [a, b] = [1 / (1 + alpha * from), 1 / (1 + alpha * to)]
  // ∫f = x²·τ(αx), τ(u) = (u − log(1 + u))/u².
  const integral = to * to * tau(alpha * to) - from * from * tau(alpha * from)
  once += integral - (f(to) - f(from)) / 2 + (b * b - a * a) / 12 - (6 * alpha * alpha * (b * b * b * b - a * a * a * a)) / 720
  // ∫f² = x³·σ(αx), σ(u) = (u − 2·log(1 + u) + u/(1 + u))/u³; (f²)' = 2x/(1 + αx)³.
  const square = to * to * to * sigma(alpha * to) - from * from * from * sigma(alpha * from)
  const slope = (x: number, s: number): number => 2 * x * s * s * s
  const third = (x: number, s: number): number => -12 * alpha * (1 - alpha * x) * s * s * s * s * s
  twice += square - (f(to) * f(to) - f(from) * f(from)) / 2 + (slope(to, b) - slope(from, a)) / 12 - (third(to, b) - third(from, a)) / 720
  return [once, twice]
}

const tau = (u: number): number => {
  if (u > 0.2) return (u - log1p(u)) / (u * u)
  let [sum, power] = [0, 1]
  for (let n = 2; n < 60; n++) {
    const next = sum + ((n % 2 === 0 ? 1 : -1) * power) / n
    if (next === sum) break
    sum = next
    power *= u
  }
  return sum
}

const sigma = (u: number): number => {
  if (u > 0.3) return (u - 2 * log1p(u) + u / (1 + u)) / (u * u * u)
  // Σ over n ≥ 3 of (−1)^(n+1)·u^(n−3)·(1 − 2/n).
  let [sum, power] = [0, 1]
  for (let n = 3; n < 80; n++) {
    const next = sum + (n % 2 === 1 ? 1 : -1) * power * (1 - 2 / n)
    if (next === sum) break
    sum = next
    power *= u
  }
  return sum
}
