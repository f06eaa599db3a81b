// Special functions: the normal, chi-square, t and F laws, the gamma family, and the pieces from which densities of counts are built
// without loss. Each is good to 13 significant digits in both tails (a test holds it); an upper tail is always computed as such, never as
// one minus the lower. The hard kernels come from @stdlib's single packages, which are plain arithmetic; what surrounds them is ours.

import digammaKernel from "@stdlib/math-base-special-digamma"
import erfcx from "@stdlib/math-base-special-erfcx"
import gammaln from "@stdlib/math-base-special-gammaln"
import trigammaKernel from "@stdlib/math-base-special-trigamma"
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
  return normalTailBy(-x, normalDensity(x))
}

/** 1 − Φ(x) for x ≥ 0 from the density there. */
export const normalTailBy = (x: number, density: number): number => 0.5 * erfcx(x * inverseRootTwo) * density * rootTwoPi

/** 1 − Φ(x), full precision in the upper tail. */
export const normalUpperTail = (x: number): number => normalCdf(-x)

/** log Φ(x), finite for every finite x. */
export const normalLogCdf = (x: number): number => {
  if (x > -1) return log1p(-normalUpperTail(x))
  return log(0.5 * erfcx(-x * inverseRootTwo)) - 0.5 * x * x
}

/**
 * Φ⁻¹(p): −Infinity at 0, Infinity at 1, NaN outside; for the upper tail use −normalQuantile of the tail.
 *
 * Wichura, M. J. (1988). Algorithm AS 241: the percentage points of the normal distribution. Applied Statistics 37, 477-484.
 */
export const normalQuantile = (p: number): number => {
  if (!(p > 0 && p < 1)) return p === 0 ? -Infinity : p === 1 ? Infinity : NaN
  const q = p - 0.5
  if (q >= -0.425 && q <= 0.425) {
    const r = 0.180625 - q * q
    return q * (polynomial(middleAbove, r) / polynomial(middleBelow, r))
  }
  const r = Math.sqrt(-log(q < 0 ? p : 1 - p))
  const size =
    r <= 5 ? polynomial(flankAbove, r - 1.6) / polynomial(flankBelow, r - 1.6) : polynomial(tailAbove, r - 5) / polynomial(tailBelow, r - 5)
  return q < 0 ? -size : size
}

export const logGamma = (x: number): number => gammaln(x)
/** ψ, the derivative of log Γ. */
export const digamma = (x: number): number => digammaKernel(x)
/** ψ', the second derivative of log Γ. */
export const trigamma = (x: number): number => trigammaKernel(x)

/** P(χ² > x) on `df` degrees of freedom. */
export const chiSquareUpperTail = (x: number, df: number): number => (x > 0 ? upperGamma(df / 2, x / 2) : Number.isNaN(x) ? NaN : 1)

/** The x with P(χ² > x) = p, 0 < p < 1. Started where Wilson & Hilferty (1931) put it. */
export const chiSquareUpperQuantile = (p: number, df: number): number => {
  const spread = 2 / (9 * df)
  const root = 1 - spread - normalQuantile(p) * Math.sqrt(spread)
  return quantile(
    df * (root > 0.1 ? root * root * root : 0.001),
    p,
    (x) => chiSquareUpperTail(x, df),
    (x) => (df / 2 - 1) * log(x / 2) - x / 2 - gammaln(df / 2) - Math.LN2,
  )
}

/** Both tails of the gamma law of shape a > 0 at x ≥ 0, lower and upper: the smaller is computed as such, the other is one minus it. */
export const gammaTails = (a: number, x: number): readonly [number, number] => {
  if (x === 0) return [0, 1]
  if (x < a + 1) {
    const lower = gammaFactor(a, x) * gammaSeries(a, x)
    return [lower, 1 - lower]
  }
  const upper = upperGamma(a, x)
  return [1 - upper, upper]
}

/** I_x(a, b), the share of the beta law below x, where x + y = 1: full precision however small it is. */
export const betaCdf = (a: number, b: number, x: number, y: number): number => lowerBeta(a, b, x, y)

/** P(T > x) for Student's t on `df` degrees of freedom. */
export const tUpperTail = (x: number, df: number): number => {
  if (x < 0) return 1 - tUpperTail(-x, df)
  if (x === Infinity) return 0
  // Both parts of one are quotients of their own, since their difference from one would have lost the smaller.
  const sum = df + x * x
  return sum === Infinity ? 0 : 0.5 * lowerBeta(df / 2, 0.5, df / sum, (x * x) / sum)
}

/** P(F > x) for the F law on (df1, df2) degrees of freedom. */
export const fUpperTail = (x: number, df1: number, df2: number): number => {
  if (!(x > 0)) return Number.isNaN(x) ? NaN : 1
  const first = df1 * x
  const sum = first + df2
  return sum === Infinity ? 0 : lowerBeta(df2 / 2, df1 / 2, df2 / sum, first / sum)
}

/** The x with P(T > x) = p, 0 < p < 1. */
export const tUpperQuantile = (p: number, df: number): number => {
  if (p > 0.5) return -tUpperQuantile(1 - p, df)
  if (p === 0.5) return 0
  const constant = gammaln((df + 1) / 2) - gammaln(df / 2) - 0.5 * log(df * Math.PI)
  return quantile(
    -normalQuantile(p),
    p,
    (x) => tUpperTail(x, df),
    (x) => constant - ((df + 1) / 2) * log1p((x * x) / df),
  )
}

/** The x with P(F > x) = p, 0 < p < 1. */
export const fUpperQuantile = (p: number, df1: number, df2: number): number => {
  const constant = gammaln((df1 + df2) / 2) - gammaln(df1 / 2) - gammaln(df2 / 2) + (df1 / 2) * log(df1 / df2)
  return quantile(
    1,
    p,
    (x) => fUpperTail(x, df1, df2),
    (x) => constant + (df1 / 2 - 1) * log(x) - ((df1 + df2) / 2) * log1p((df1 * x) / df2),
  )
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
export const devianceTerm = (x: number, m: number): number => devianceTermBy(x, m, x - m)

/** The same where x − m is known better than the difference of the two. */
export const devianceTermBy = (x: number, m: number, difference: number): number => {
  if (x === 0) return m
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

/**
 * Q(a, x) = Γ(a, x)/Γ(a), the upper incomplete gamma function in its regular form, a > 0, x > 0.
 *
 * A series of positive terms for x < a + 1 and a continued fraction beyond (Abramowitz & Stegun 1964, 6.5.29 and 6.5.31), both with the
 * factor x^a e^−x/Γ(a + 1) taken in Loader's form, in which nothing cancels for large a. About 10·√a steps where x is near a.
 */
const upperGamma = (a: number, x: number): number => {
  if (x === Infinity) return 0
  const factor = gammaFactor(a, x)
  if (x < a + 1) return 1 - factor * gammaSeries(a, x)
  let b = x + 1 - a
  let c = Infinity
  let d = 1 / b
  let fraction = d
  for (let k = 1; k < longestFraction; k++) {
    const numerator = -k * (k - a)
    b += 2
    d = 1 / (b + numerator * d)
    c = b + numerator / c
    fraction *= c * d
    if (arrived(c * d)) break
  }
  return factor * a * fraction
}

/** e^(−x)·x^a/Γ(a + 1). */
const gammaFactor = (a: number, x: number): number => exp(-devianceTerm(a, x) - stirlingError(a) - halfLogTwoPi - 0.5 * log(a))

/** Σ x^k/((a + 1)…(a + k)). */
const gammaSeries = (a: number, x: number): number => {
  let term = 1
  let sum = 1
  for (let k = 1; term > sum * 1e-17; k++) {
    term *= x / (a + k)
    sum += term
  }
  return sum
}

/**
 * I_x(a, b), the regular incomplete beta function, with y = 1 − x given to full precision.
 *
 * The continued fraction of DiDonato & Morris (1992), ACM Transactions on Mathematical Software 18, 360-373, equation 9, on the side of
 * the mean where it converges fast (about √max(a, b) steps at worst), with the factor x^a y^b/B(a, b) in Loader's form. The better known
 * fraction 26.5.8 of Abramowitz & Stegun loses a digit for every tenfold of a where x is near 1, just where t on many degrees of freedom is.
 */
const lowerBeta = (a: number, b: number, x: number, y: number): number => {
  if (x === 0) return 0
  if (y === 0) return 1
  return x * (a + b + 2) < a + 1 ? betaFraction(a, b, x, y) : 1 - betaFraction(b, a, y, x)
}

const betaFraction = (a: number, b: number, x: number, y: number): number => {
  const n = a + b
  const factor = exp(
    stirlingError(n) -
      stirlingError(a) -
      stirlingError(b) -
      devianceTerm(a, n * x) -
      devianceTerm(b, n * y) -
      halfLogTwoPi +
      0.5 * log((b / n) * a),
  )
  const lead = a * y - b * x + 1
  let fraction = (a * lead) / (a + 1)
  let c = fraction
  let d = 0
  for (let m = 1; m < longestFraction; m++) {
    const middle = a + 2 * m - 1
    const above = ((m * (a + m - 1)) / middle) * ((n + m - 1) / middle) * (b - m) * x * x
    const below = m + (m * (b - m) * x) / middle + ((a + m) * (lead + m * (2 - x))) / (middle + 2)
    d = 1 / (below + above * d)
    c = below + above / c
    fraction *= c * d
    if (arrived(c * d)) break
  }
  return factor / fraction
}

/** Enough for a, b up to about 10^10; a bound against rounding that would take turns. */
const longestFraction = 1_000_000
const arrived = (ratio: number): boolean => ratio > 1 - 2e-16 && ratio < 1 + 3e-16

// Numerators and denominators of AS 241, from the constant upwards: |p − ½| ≤ 0.425, then r = √(−ln p) up to 5 and beyond.
const middleAbove = [
  3.3871328727963665, 133.14166789178438, 1971.5909503065513, 13731.69376550946, 45921.95393154987, 67265.7709270087, 33430.57558358813,
  2509.0809287301227,
]
const middleBelow = [
  1, 42.31333070160091, 687.1870074920579, 5394.196021424751, 21213.794301586597, 39307.89580009271, 28729.085735721943, 5226.495278852854,
]
const flankAbove = [
  1.4234371107496835, 4.630337846156546, 5.769497221460691, 3.6478483247632045, 1.2704582524523684, 0.2417807251774506,
  0.022723844989269184, 0.0007745450142783414,
]
const flankBelow = [
  1, 2.053191626637759, 1.6763848301838038, 0.6897673349851, 0.14810397642748008, 0.015198666563616457, 0.0005475938084995345,
  1.0507500716444169e-9,
]
const tailAbove = [
  6.657904643501103, 5.463784911164114, 1.7848265399172913, 0.29656057182850487, 0.026532189526576124, 0.0012426609473880784,
  0.000027115555687434876, 2.0103343992922881e-7,
]
const tailBelow = [
  1, 0.599832206555888, 0.1369298809227358, 0.014875361290850615, 0.0007868691311456133, 0.000018463183175100548, 1.421511758316446e-7,
  2.0442631033899397e-15,
]

/** The polynomial with these eight coefficients, by Horner's rule. */
const polynomial = (c: readonly number[], x: number): number => {
  let value = 0
  for (let i = 7; i >= 0; i--) value = value * x + (c[i] as number)
  return value
}

/**
 * The positive x at which a falling tail is p: Newton's method for log P(X > x) as a function of log x, on which the tails of all three
 * laws are straight or bend downwards, so that it arrives from the right without overshooting. The density steers only.
 */
const quantile = (start: number, p: number, tail: (x: number) => number, logDensity: (x: number) => number): number => {
  const wanted = log(p)
  let x = start
  for (let i = 0; i < mostSteps; i++) {
    const logTail = log(tail(x))
    const step = logTail === -Infinity ? -1 : (logTail - wanted) * exp(logTail - logDensity(x) - log(x))
    const bounded = Math.max(-longestStep, Math.min(longestStep, step))
    x *= exp(bounded)
    if (bounded < 1e-15 && bounded > -1e-15) break
  }
  return x
}
/** Far more than ever needed (about ten): a bound, since two neighbouring doubles may take turns. */
const mostSteps = 100
const longestStep = 5
