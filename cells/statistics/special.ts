// Special functions: the normal, chi-square, t and F laws, the gamma family, and the pieces from which densities of counts are built
// without loss. Each is good to 13 significant digits in both tails (a test holds it); an upper tail is always computed as such, never as
// one minus the lower. The hard kernels come from @stdlib's single packages, which are plain arithmetic; what surrounds them is ours.

import betainc from "@stdlib/math-base-special-betainc"
import digammaKernel from "@stdlib/math-base-special-digamma"
import erfcx from "@stdlib/math-base-special-erfcx"
import gammainc from "@stdlib/math-base-special-gammainc"
import gammaincinv from "@stdlib/math-base-special-gammaincinv"
import gammaln from "@stdlib/math-base-special-gammaln"
import kernelBetaincinv from "@stdlib/math-base-special-kernel-betaincinv"
import trigammaKernel from "@stdlib/math-base-special-trigamma"
import normalQuantileKernel from "@stdlib/stats-base-dists-normal-quantile"
import { exp, log, log1p } from "./elementary.ts"

/**
 * Density of the standard normal law, exp(−x²/2)/√(2π).
 *
 * x² is split in two, one part exact: rounded whole, its error times ½x² would be all that is seen in the tail.
 */
export const normalDensity = (x: number): number => {
  if (!(x > -39 && x < 39)) return Number.isNaN(x) ? NaN : 0
  const near = Math.round(x * 16) / 16
  return inverseRootTwoPi * exp(-0.5 * near * near) * exp(-0.5 * (x - near) * (x + near))
}

/** Φ(x), full precision in the lower tail; written with exp(x²)·erfc(x), which does not underflow. */
export const normalCdf = (x: number): number => {
  if (x > 0) return 1 - normalCdf(-x)
  if (x < -39) return 0
  return 0.5 * erfcx(-x * inverseRootTwo) * normalDensity(x) * rootTwoPi
}

/** 1 − Φ(x), full precision in the upper tail. */
export const normalUpperTail = (x: number): number => normalCdf(-x)

/** log Φ(x), finite for every finite x. */
export const normalLogCdf = (x: number): number => {
  if (x > -1) return log1p(-normalUpperTail(x))
  return log(0.5 * erfcx(-x * inverseRootTwo)) - 0.5 * x * x
}

/** Φ⁻¹(p): −Infinity at 0, Infinity at 1, NaN outside; for the upper tail use −normalQuantile of the tail. */
export const normalQuantile = (p: number): number => {
  if (!(p > 0 && p < 1)) return p === 0 ? -Infinity : p === 1 ? Infinity : NaN
  const x = normalQuantileKernel(p, 0, 1)
  if (p > 1e-8) return x
  // One Newton step on the log scale; the rational approximation of the far tail is not made for probabilities this small.
  const mills = 0.5 * erfcx(-x * inverseRootTwo) * rootTwoPi
  return x - (normalLogCdf(x) - log(p)) * mills
}

export const logGamma = (x: number): number => gammaln(x)
/** ψ, the derivative of log Γ. */
export const digamma = (x: number): number => digammaKernel(x)
/** ψ', the second derivative of log Γ. */
export const trigamma = (x: number): number => trigammaKernel(x)

/** P(χ² > x) on `df` degrees of freedom. */
export const chiSquareUpperTail = (x: number, df: number): number => (x <= 0 ? 1 : gammainc(x / 2, df / 2, true, true))

/** The x with P(χ² > x) = p. */
export const chiSquareUpperQuantile = (p: number, df: number): number => 2 * gammaincinv(p, df / 2, true)

/** P(T > x) for Student's t on `df` degrees of freedom. */
export const tUpperTail = (x: number, df: number): number => {
  if (x < 0) return 1 - tUpperTail(-x, df)
  const square = x * x
  // Of the two forms of one value, that whose argument is the smaller: the other has rounded it away.
  return (
    0.5 * (square < df ? betainc(square / (df + square), 0.5, df / 2, true, true) : betainc(df / (df + square), df / 2, 0.5, true, false))
  )
}

/** P(F > x) for the F law on (df1, df2) degrees of freedom. */
export const fUpperTail = (x: number, df1: number, df2: number): number => {
  if (x <= 0) return 1
  const first = df1 * x
  return first < df2
    ? betainc(first / (first + df2), df1 / 2, df2 / 2, true, true)
    : betainc(df2 / (first + df2), df2 / 2, df1 / 2, true, false)
}

/** The x with P(T > x) = p, 0 < p < 1. */
export const tUpperQuantile = (p: number, df: number): number => {
  if (p > 0.5) return -tUpperQuantile(1 - p, df)
  if (p === 0.5) return 0
  const [part, rest] = kernelBetaincinv(df / 2, 0.5, 2 * p, 1 - 2 * p) as [number, number]
  let x = Math.sqrt((df * rest) / part)
  for (let i = 0; i < 2; i++) x = improved(x, tUpperTail(x, df), p, tLogDensity(x, df))
  return x
}

/** The x with P(F > x) = p, 0 < p < 1. */
export const fUpperQuantile = (p: number, df1: number, df2: number): number => {
  const [part, rest] = kernelBetaincinv(df1 / 2, df2 / 2, 1 - p, p) as [number, number]
  let x = (df2 * part) / (df1 * rest)
  for (let i = 0; i < 2; i++) x = improved(x, fUpperTail(x, df1, df2), p, fLogDensity(x, df1, df2))
  return x
}

/**
 * The error of Stirling's formula, log Γ(x + 1) − [(x + ½)log x − x + ½log 2π], for x > 0.
 *
 * Sums of log-gammas of large numbers cancel to nothing; sums of these do not. Series from 10 on (Abramowitz & Stegun 1964, 6.1.41), a
 * table at the whole numbers below (computed at 40 digits), and the recurrence in between.
 */
export const stirlingError = (x: number): number => {
  if (x < 10) {
    const known = stirlingErrors[x]
    if (known !== undefined) return known
    return stirlingError(x + 1) + (x + 0.5) * log1p(1 / x) - 1
  }
  const r = 1 / x
  const t = r * r
  return (
    r *
    (1 / 12 - t * (1 / 360 - t * (1 / 1260 - t * (1 / 1680 - t * (1 / 1188 - t * (691 / 360360 - t * (1 / 156 - t * (3617 / 122400))))))))
  )
}

/**
 * x·log(x/m) + m − x for x ≥ 0, m > 0: never negative, 0 at x = m, and without cancellation near there.
 *
 * Loader, C. (2000). Fast and accurate computation of binomial probabilities.
 */
export const devianceTerm = (x: number, m: number): number => {
  if (x === 0) return m
  const difference = x - m
  const sum = x + m
  if (difference < 0.1 * sum && -difference < 0.1 * sum) {
    const v = difference / sum
    const square = v * v
    let total = difference * v
    let power = 2 * x * v
    for (let j = 3; j < 60; j += 2) {
      power *= square
      const next = total + power / j
      if (next === total) break
      total = next
    }
    return total
  }
  const ratio = x / m
  const logRatio = ratio > 0 && ratio < Infinity ? log(ratio) : log(x) - log(m)
  return x * logRatio - difference
}

/** log(n!/(k!(n − k)!)) for whole 0 ≤ k ≤ n, without cancellation. */
export const logBinomialCoefficient = (n: number, k: number): number => {
  if (k === 0 || k === n) return 0
  const rest = n - k
  return (
    k * log(n / k) +
    rest * log(n / rest) -
    0.5 * log((k / n) * rest) -
    halfLogTwoPi +
    (stirlingError(n) - stirlingError(k) - stirlingError(rest))
  )
}

/** log n! for whole n ≥ 0. */
export const logFactorial = (n: number): number => gammaln(n + 1)

/** ½·log 2π. */
export const halfLogTwoPi = 0.9189385332046728

const inverseRootTwo = Math.SQRT1_2
const inverseRootTwoPi = 0.3989422804014327
const rootTwoPi = 2.5066282746310002

const stirlingErrors: readonly number[] = [
  Infinity,
  0.08106146679532726,
  0.0413406959554093,
  0.02767792568499834,
  0.020790672103765093,
  0.016644691189821193,
  0.013876128823070748,
  0.01189670994589177,
  0.010411265261972096,
  0.009255462182712733,
]

/** A Newton step on log P(X > x), on which tails are nearly straight. */
const improved = (x: number, tail: number, wanted: number, logDensity: number): number => {
  const step = (log(tail) - log(wanted)) * exp(log(tail) - logDensity)
  return step > -0.5 * x && step < x ? x + step : x
}

const tLogDensity = (x: number, df: number): number =>
  gammaln((df + 1) / 2) - gammaln(df / 2) - 0.5 * log(df * Math.PI) - ((df + 1) / 2) * log1p((x * x) / df)

const fLogDensity = (x: number, df1: number, df2: number): number =>
  gammaln((df1 + df2) / 2) -
  gammaln(df1 / 2) -
  gammaln(df2 / 2) +
  (df1 / 2) * log(df1 / df2) +
  (df1 / 2 - 1) * log(x) -
  ((df1 + df2) / 2) * log1p((df1 * x) / df2)
