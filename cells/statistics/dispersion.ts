// Dispersion: φ by each rule, and φ in the log-likelihood, which is always its maximum-likelihood value where it is not given.

import { exp, log, log1p } from "./elementary.ts"
import type { Problem } from "./problem.ts"
import { digamma, trigamma } from "./special.ts"

type DispersionRule = { readonly estimated: boolean; readonly given: number | null }

/** `estimated` says whether tests use t and F. */
export const dispersionRule = (problem: Problem): DispersionRule => {
  const { dispersion } = problem
  if (typeof dispersion === "number") return { estimated: false, given: dispersion }
  if (dispersion === "one") return { estimated: false, given: 1 }
  return { estimated: dispersion !== "likelihood", given: null }
}

/**
 * The maximum-likelihood φ at given means: D/n for the normal and the inverse Gaussian; for the gamma the root ν = 1/φ of
 *     Σ R·w·[log(νw) + 1 + log(y/μ) − y/μ − ψ(νw)] = 0,   that is   Σ R·w·[log(νw) − ψ(νw)] = D/2.
 * By Newton's method in log ν; McCullagh & Nelder (1989), §8.3.6. 0 for a perfect fit; 1 for families whose φ is one.
 */
export function dispersionByLikelihood(problem: Problem, deviance: number, n: number): number {
  if (problem.family.name === "normal" || problem.family.name === "inverse_gaussian") return deviance / n
  if (problem.family.name !== "gamma") return 1
  if (!(deviance > 0)) return 0
  const { precision, repeat, rows } = problem
  let total = 0
  const R = (i: number): number => (repeat ? (repeat[i] as number) : 1)
  const w = (i: number): number => (precision ? (precision[i] as number) : 1)
  for (let i = 0; i < rows; i++) total += R(i)
  // log ν − ψ(ν) is about 1/(2ν) for large ν.
  let logNu = log(total / deviance)
  const gap = (nu: number): number => {
    if (!precision) return total * logLessDigamma(nu)
    let sum = 0
    for (let i = 0; i < rows; i++) sum += R(i) * w(i) * logLessDigamma(nu * w(i))
    return sum
  }
  const slope = (nu: number): number => {
    if (!precision) return total * logLessDigammaSlope(nu)
    let sum = 0
    for (let i = 0; i < rows; i++) sum += R(i) * w(i) * logLessDigammaSlope(nu * w(i))
    return sum
  }
  let nu = total / deviance
  for (let k = 0; k < 100; k++) {
    const f = gap(nu)
    // In log f against log ν the curve is nearly straight, so that steps do not overshoot.
    const step = (log(f / (deviance / 2)) * f) / -slope(nu)
    logNu += Math.max(-3, Math.min(3, step))
    const next = exp(logNu)
    if (Math.abs(step) < 1e-15) break
    if (next === nu) break
    nu = next
  }
  return 1 / nu
}

/** log ν − ψ(ν) without the cancellation of two large logarithms: the asymptotic series from 16 on, the recurrence below. */
export function logLessDigamma(nu: number): number {
  if (nu < 16) return nu < 4 ? log(nu) - digamma(nu) : logLessDigamma(nu + 1) + 1 / nu + log1p(-1 / (nu + 1))
  const t = 1 / (nu * nu)
  return 1 / (2 * nu) + t * (1 / 12 - t * (1 / 120 - t * (1 / 252 - t * (1 / 240 - t * (1 / 132 - (t * 691) / 32760)))))
}

/** Its slope in log ν, 1 − ν·ψ'(ν). */
const logLessDigammaSlope = (nu: number): number => {
  if (nu < 16) return 1 - nu * trigamma(nu)
  const t = 1 / (nu * nu)
  return -1 / (2 * nu) - t * (1 / 6 - t * (1 / 30 - t / 42))
}
