// The Tweedie family, 1 < p < 2: a Poisson number of gamma amounts, so that exact zeros and positive amounts have one law. Its density is a sum over
// that number, Σ_j Poisson(j; λ)·Gamma(y; jα), taken here in Loader's form so that nothing cancels however many terms matter. Dunn & Smyth
// (2005), Statistics and Computing 15, 267-280.
//
// Where the bump of terms is wide, every h-th term is taken, times h: the trapezoidal rule on a smooth bump errs by the share its Fourier
// transform has at 1/h, below e^−54 for the h taken here. So no row costs more than about 110 terms, and no other method is needed.

import { logLessDigamma } from "./dispersion.ts"
import { exp, expm1, log, pow } from "./elementary.ts"
import type { Family } from "./family.ts"
import { devianceTerm, halfLogTwoPi, stirlingError } from "./special.ts"

export const tweedie = (p: number): Family => ({
  name: `tweedie(${p})`,
  range: { low: 0, high: Infinity },
  discrete: false,
  dispersion: "pearson",
  variance: (mu) => pow(mu, p),
  varianceSlope: (mu) => p * pow(mu, p - 1),
  unitDeviance: (y, mu) => tweedieDeviance(y, mu, p),
  logDensity: (y, mu, _rest, _trials, phi) => tweedieRow(y, mu, p, phi, scratch).logDensity,
})

/** One row's log density with its slopes: in log φ, twice in log φ, and in p at fixed μ and φ. */
export type TweedieRow = { logDensity: number; byLogPhi: number; byLogPhiTwice: number; byPower: number }

const scratch: TweedieRow = { logDensity: 0, byLogPhi: 0, byLogPhiTwice: 0, byPower: 0 }

export const tweedieRowOf = (): TweedieRow => ({ ...scratch })

/**
 * u = 2∫ (y − t)·t^(−p) dt from μ to y. With r = y/μ it is 2μ^(2−p)·g(r), g a power series near r = 1 and without cancellation elsewhere.
 */
export function tweedieDeviance(y: number, mu: number, p: number): number {
  const size = 2 * pow(mu, 2 - p)
  if (y === 0) return size / (2 - p)
  const x = (y - mu) / mu
  if (x < 0.3 && x > -0.3) {
    // Σ binom(−p, k)·x^(k+2)/((k + 1)(k + 2)).
    let sum = 0
    let term = 1
    for (let k = 0; k < 200; k++) {
      const next = sum + term / ((k + 1) * (k + 2))
      if (next === sum) break
      sum = next
      term *= (-x * (p + k)) / (k + 1)
    }
    return size * x * x * sum
  }
  const r = y / mu
  const l = log(y) - log(mu)
  return size * ((r * expm1((1 - p) * l)) / (1 - p) - expm1((2 - p) * l) / (2 - p))
}

/** Terms of the bump on each side of its middle, in widths: beyond, e^(−½·9²) is below a double's last digit. */
const widths = 9
/** A bump wider than this, in terms, is summed by strides of half its width. */
const wide = 6

/** Fills `out` with the log density of one row and its slopes. */
export function tweedieRow(y: number, mu: number, p: number, phi: number, out: TweedieRow, withPower = true): TweedieRow {
  const logMu = log(mu)
  const lambda = exp((2 - p) * logMu) / (phi * (2 - p))
  const byP = 1 / (2 - p) - logMu
  if (y === 0) {
    out.logDensity = -lambda
    out.byLogPhi = lambda
    out.byLogPhiTwice = -lambda
    out.byPower = -lambda * byP
    return out
  }
  const alpha = (2 - p) / (p - 1)
  const alphaSlope = -1 / ((p - 1) * (p - 1))
  const logY = log(y)
  // y over the scale of the gamma amounts.
  const z = exp(logY - (p - 1) * logMu) / (phi * (p - 1))
  const zByP = -1 / (p - 1) - logMu
  const middle = exp((2 - p) * logY) / (phi * (2 - p))
  const width = Math.sqrt(middle * (p - 1))
  const stride = width > wide ? Math.floor(width / 2) : 1
  const start = Math.max(1, Math.round(middle))
  const term = (j: number): number => -devianceTerm(j, lambda) - devianceTerm(j * alpha, z) - stirlingError(j) - stirlingError(j * alpha)
  const top = term(start)
  let [total, first, second, power] = [0, 0, 0, 0]
  // Sums about the middle, so that a variance does not cancel.
  const add = (j: number): number => {
    const logWeight = term(j) - top
    const weight = exp(logWeight)
    const off = j - start
    const s = j * alpha
    total += weight
    first += weight * off
    second += weight * off * off
    if (withPower)
      power +=
        weight *
        ((j - lambda) * byP + (s - z) * zByP - j * alphaSlope * (log(s / z) + 0.5 / s - logLessDigamma(s)) + (0.5 * alphaSlope) / alpha)
    return logWeight
  }
  add(start)
  const enough = -0.5 * widths * widths
  for (let j = start + stride; add(j) > enough; j += stride);
  for (let j = start - stride; j >= 1; j -= stride) if (add(j) < enough) break
  const mean = first / total
  const variance = second / total - mean * mean
  out.logDensity = top + log(total * stride) - 2 * halfLogTwoPi + 0.5 * log(alpha) - logY
  out.byLogPhi = lambda - start + (z - start * alpha) - (1 + alpha) * mean
  out.byLogPhiTwice = -(lambda + z) + (1 + alpha) * (1 + alpha) * variance
  out.byPower = power / total
  return out
}
