// The links with parameters beside the plain power, each in a form that loses no digit where the parameter passes through the value at which
// its formula is a limit. Each also says how its mean moves with its parameters, as their estimation needs it.

import { exp, expm1, log, log1p, tanh } from "./elementary.ts"
import type { Link, Range } from "./link.ts"

/** A parameter nearer to 0 than this is 0: products with it might be too small for a double. */
const asZero = 1e-100

const everywhere: Range = { low: -Infinity, high: Infinity }
const unit: Range = { low: 0, high: 1 }

/**
 * η = (μ^a − 1)/a, and ln μ at a = 0. Box & Cox (1964), Journal of the Royal Statistical Society B 26, 211-252.
 *
 * ln μ = ln(1 + aη)/a is taken as η·λ(aη), λ(u) = ln(1 + u)/u, of which the slopes in a follow.
 */
export const boxCox = (a: number): Link => {
  const logMean = (eta: number): number => logOver(a, eta)
  return {
    name: `box_cox(${a})`,
    range: { low: 0, high: Infinity },
    reach: a > 0 ? { low: -1 / a, high: Infinity } : a < 0 ? { low: -Infinity, high: -1 / a } : everywhere,
    eta: (mu) => (mu === 0 ? (a > 0 ? -1 / a : -Infinity) : mu === Infinity ? (a < 0 ? -1 / a : Infinity) : expOver(a, log(mu))),
    mean: (eta) => exp(logMean(eta)),
    complement: null,
    slope: (eta) => exp(logMean(eta)) / (1 + a * eta),
    curvature: (eta) => (exp(logMean(eta)) / (1 + a * eta)) * ((1 - a) / (1 + a * eta)),
    bend: (eta, out) => {
      const mu = exp(logMean(eta))
      const u = a * eta
      const slope = 1 / (1 + u)
      const first = eta * eta * logRatioSlope(u)
      out[0] = mu * first
      out[1] = mu * slope * (first - eta * slope)
      out[2] = mu * (first * first + eta * eta * eta * logRatioCurvature(u))
    },
  }
}

/**
 * η = ln(((1 − μ)^−a − 1)/a), a ≥ −1: log at −1, cloglog at 0, logit at 1. Aranda-Ordaz (1981), Biometrika 68, 357-363, the asymmetric
 * family. μ = 1 − e^−T with T = ln(1 + a·e^η)/a; below 0 the mean ends at η = −ln(−a).
 */
export const arandaOrdaz = (a: number): Link => {
  const T = (eta: number): number => {
    if (a > asZero && eta > 30) return (eta + log(a + exp(-eta))) / a
    return logOver(a, exp(eta))
  }
  /** t/(1 + at), t = e^η. */
  const slopeOfT = (eta: number): number => (eta > 0 ? 1 / (a + exp(-eta)) : exp(eta) / (1 + a * exp(eta)))
  const slope = (eta: number): number => {
    const rest = exp(-T(eta))
    return rest === 0 ? 0 : rest * slopeOfT(eta)
  }
  return {
    name: `aranda_ordaz(${a})`,
    range: unit,
    reach: a < 0 ? { low: -Infinity, high: -log(-a) } : everywhere,
    eta: (mu) => {
      if (mu === 1) return a < 0 ? -log(-a) : Infinity
      const x = -log1p(-mu)
      return a * x > 30 ? a * x + log(-expm1(-a * x) / a) : log(expOver(a, x))
    },
    mean: (eta) => -expm1(-T(eta)),
    complement: (eta) => exp(-T(eta)),
    slope,
    curvature: (eta) => {
      const s = slope(eta)
      if (s === 0) return 0
      return eta > 0 ? s * ((exp(-eta) - 1) / (exp(-eta) + a)) : s * ((1 - exp(eta)) / (1 + a * exp(eta)))
    },
    bend: (eta, out) => {
      const t = T(eta)
      const rest = exp(-t)
      if (rest === 0) {
        out.fill(0, 0, 3)
        return
      }
      const e = exp(eta)
      const u = a * e
      const r = slopeOfT(eta)
      const near = u < 0.4 && u > -0.4
      const first = near ? e * e * logRatioSlope(u) : (r - t) / a
      const second = near ? e * e * e * logRatioCurvature(u) : (-r * r - 2 * first) / a
      out[0] = rest * first
      out[1] = rest * (-r * r - r * first)
      out[2] = rest * (second - first * first)
    },
  }
}

/**
 * η = (2/a)·tanh(a·logit(μ)/2), |η| < 2/a: logit at 0, linear at 1. Aranda-Ordaz (1981), the symmetric family. a and −a are one link, so
 * all that concerns its estimation is in a².
 */
export const symmetricPower = (parameter: number): Link => {
  const a = Math.abs(parameter)
  const end = a > asZero ? 2 / a : Infinity
  const square = a > asZero ? a * a : 0
  const bent: Bend = (eta) => {
    if (square === 0) return { value: eta, slope: 1, curvature: 0 }
    const u = (a / 2) * eta
    const v = square * (eta / 2) * (eta / 2)
    const s = 1 / (1 - v)
    const value = u > 0.3 || u < -0.3 ? (log1p(u) - log1p(-u)) / a : eta * arcRatio(v)
    return { value, slope: s, curvature: ((square * eta) / 2) * s * s }
  }
  return {
    ...throughLogit(bent, (logit) => (a > asZero ? end * tanh((a / 2) * logit) : logit)),
    name: `symmetric_power(${parameter})`,
    reach: { low: -end, high: end },
    bend: (eta, out) => {
      const h = bent(eta)
      const v = square * (eta / 2) * (eta / 2)
      const quarter = (eta / 2) * (eta / 2)
      const s = 1 / (1 - v)
      const arc = arcRatio(v)
      const near = v < 0.2
      const arcSlope = near ? arcSeries(v, 1) : (s - arc) / (2 * v)
      const arcCurvature = near ? arcSeries(v, 2) : (s * s - 3 * arcSlope) / (2 * v)
      logisticBend(h, out, [eta * quarter * arcSlope], [quarter * s * s], [eta * quarter * quarter * arcCurvature])
    },
  }
}

/**
 * logit μ = H(η): for η ≥ 0 (e^(aη) − 1)/a, η or −ln(1 − aη)/a for a above, at and below 0; for η < 0 minus the same of −η with b. Stukel
 * (1988), Journal of the American Statistical Association 83, 426-431.
 */
export const stukel = (a: number, b: number): Link => {
  const half = (c: number, size: number): ReturnType<Bend> => {
    if (c > asZero) return { value: expOver(c, size), slope: exp(c * size), curvature: c * exp(c * size) }
    const s = 1 / (1 - c * size)
    return { value: logOver(-c, size), slope: s, curvature: c * s * s }
  }
  const bent: Bend = (eta) => {
    if (eta >= 0) return half(a, eta)
    const { value, slope, curvature } = half(b, -eta)
    return { value: -value, slope, curvature: -curvature }
  }
  const back = (c: number, size: number): number => (c > asZero ? logOver(c, size) : expOver(-c, size))
  return {
    ...throughLogit(bent, (logit) => (logit >= 0 ? back(a, logit) : -back(b, -logit))),
    name: `stukel(${a}, ${b})`,
    reach: everywhere,
    bend: (eta, out) => {
      const h = bent(eta)
      const up = eta >= 0
      const size = up ? eta : -eta
      const c = up ? a : b
      const u = c * size
      // Below 0 the half is L(−c, x), so a slope in c is minus one in its own parameter.
      const above = c > asZero
      const first = above ? size * size * expRatioSlope(u) : -size * size * logRatioSlope(-u)
      const second = above ? size * size * size * expRatioCurvature(u) : size * size * size * logRatioCurvature(-u)
      const cross = above ? size * exp(u) : size / ((1 - u) * (1 - u))
      if (up) logisticBend(h, out, [first, 0], [cross, 0], [second, 0, 0])
      else logisticBend(h, out, [0, -first], [0, cross], [0, 0, -second])
    },
  }
}

/** The power's own slopes in its parameter, a ≠ 0: ln μ = ln η/a. */
export const powerBend =
  (a: number): NonNullable<Link["bend"]> =>
  (eta, out) => {
    const logMean = log(eta) / a
    const mu = exp(logMean)
    const first = -logMean / a
    out[0] = mu * first
    out[1] = (mu / (a * eta)) * (first - 1 / a)
    out[2] = mu * (first * first + (2 * logMean) / (a * a))
  }

// The logit of the mean as a function of η ------------------------------------------------------------------------------------------------

/** logit μ with its slopes in η. */
type Bend = (eta: number) => { readonly value: number; readonly slope: number; readonly curvature: number }

const lower = (logit: number): number => {
  if (logit >= 0) return 1 / (1 + exp(-logit))
  const e = exp(logit)
  return e / (1 + e)
}

const logitOf = (mu: number): number => (mu > 0.25 && mu < 0.75 ? log1p((2 * mu - 1) / (1 - mu)) : log(mu / (1 - mu)))

function throughLogit(bent: Bend, back: (logit: number) => number): Omit<Link, "name" | "reach"> {
  return {
    range: unit,
    eta: (mu) => back(logitOf(mu)),
    mean: (eta) => lower(bent(eta).value),
    complement: (eta) => lower(-bent(eta).value),
    slope: (eta) => {
      const { value, slope } = bent(eta)
      const v = lower(value) * lower(-value)
      return v === 0 ? 0 : v * slope
    },
    curvature: (eta) => {
      const { value, slope, curvature } = bent(eta)
      const mu = lower(value)
      const rest = lower(-value)
      const v = mu * rest
      return v === 0 ? 0 : v * slope * ((rest - mu) * slope) + v * curvature
    },
  }
}

/** Slopes of the mean from those of its logit: first in each parameter, mixed with η, and second (lower triangle by rows). */
function logisticBend(
  { value, slope }: ReturnType<Bend>,
  out: Float64Array,
  first: readonly number[],
  mixed: readonly number[],
  second: readonly number[],
): void {
  const mu = lower(value)
  const rest = lower(-value)
  const v = mu * rest
  const q = first.length
  if (v === 0) {
    out.fill(0, 0, 2 * q + second.length)
    return
  }
  let at = 2 * q
  for (let j = 0; j < q; j++) {
    const own = first[j] as number
    out[j] = v * own
    out[q + j] = v * ((rest - mu) * slope * own + (mixed[j] as number))
    for (let k = 0; k <= j; k++, at++) out[at] = v * ((rest - mu) * own * (first[k] as number) + (second[at - 2 * q] as number))
  }
}

// Functions with a limit ------------------------------------------------------------------------------------------------------------------

/** (e^(ax) − 1)/a, x at a = 0. */
const expOver = (a: number, x: number): number => (a > asZero || a < -asZero ? expm1(a * x) / a : x)

/** ln(1 + ax)/a, x at a = 0; −∞ or ∞ from where it ends. */
const logOver = (a: number, x: number): number => {
  if (a > asZero || a < -asZero) return a * x > -1 ? log1p(a * x) / a : a > 0 ? -Infinity : Infinity
  return x
}

/** λ'(u), λ(u) = ln(1 + u)/u. */
const logRatioSlope = (u: number): number => (u < 0.4 && u > -0.4 ? logSeries(u, 1) : (1 / (1 + u) - log1p(u) / u) / u)

/** λ''(u). */
const logRatioCurvature = (u: number): number =>
  u < 0.4 && u > -0.4 ? logSeries(u, 2) : (-1 / ((1 + u) * (1 + u)) - 2 * logRatioSlope(u)) / u

/** The first or second derivative of Σ (−u)^n/(n + 1). */
function logSeries(u: number, order: 1 | 2): number {
  let [sum, power] = [0, 1]
  for (let n = order as number; n < 90; n++) {
    const times = order === 1 ? n : n * (n - 1)
    const next = sum + ((n % 2 === 0 ? 1 : -1) * times * power) / (n + 1)
    if (next === sum) break
    sum = next
    power *= u
  }
  return sum
}

/** φ'(u), φ(u) = (e^u − 1)/u. */
const expRatioSlope = (u: number): number => (u < 1 && u > -1 ? expSeries(u, 1) : (exp(u) - expm1(u) / u) / u)

/** φ''(u). */
const expRatioCurvature = (u: number): number => (u < 1 && u > -1 ? expSeries(u, 2) : (exp(u) - 2 * expRatioSlope(u)) / u)

/** The first or second derivative of Σ u^n/(n + 1)!. */
function expSeries(u: number, order: 1 | 2): number {
  let sum = 0
  let power = order === 1 ? 1 / 2 : 1 / 6
  for (let n = order as number; n < 60; n++) {
    const next = sum + (order === 1 ? n : n * (n - 1)) * power
    if (next === sum) break
    sum = next
    power *= u / (n + 2)
  }
  return sum
}

/** artanh(√v)/√v for 0 ≤ v < 1. */
const arcRatio = (v: number): number => {
  if (v < 0.2) return arcSeries(v, 0)
  const root = Math.sqrt(v)
  return (log1p(root) - log1p(-root)) / (2 * root)
}

/** Σ v^k/(2k + 1), or its first or second derivative. */
function arcSeries(v: number, order: 0 | 1 | 2): number {
  let [sum, power] = [0, 1]
  for (let k = order as number; k < 60; k++) {
    const times = order === 0 ? 1 : order === 1 ? k : k * (k - 1)
    const next = sum + (times * power) / (2 * k + 1)
    if (next === sum) break
    sum = next
    power *= v
  }
  return sum
}
