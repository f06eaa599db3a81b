// What each row contributes at a linear predictor: mean, score, weight, deviance. The scalar functions are those of link and family; the
// pairs fitted most have loops of their own, which share one exponential a row, and a test holds them to the scalar functions.

import { exp, expm1, log, log1p } from "./elementary.ts"
import { familyOf } from "./families.ts"
import type { Family } from "./family.ts"
import { isCanonical } from "./legal-pairs.ts"
import type { Link } from "./link.ts"
import { linkOf } from "./links.ts"
import type { Problem } from "./problem.ts"
import { devianceTerm, normalDensity, normalTailBy } from "./special.ts"

/** Which weights: the expected W, or the observed J. */
export type Information = "expected" | "observed"

/** A model without its predictor: everything that turns η into means, scores and weights. */
export type Responses = {
  readonly rows: number
  readonly family: Family
  readonly link: Link
  /** True where W and J are the same. */
  readonly canonical: boolean
  readonly y: Float64Array
  /** a = R·w·m; a row with 0 takes no part. */
  readonly a: Float64Array
  /** Added to η: the offset, and log E under log and cloglog. */
  readonly offset: Float64Array | null
  /** E where the mean is E·h(η); null where it went into the offset or there is none. */
  readonly scale: Float64Array | null
  /** The loop that goes over the rows. */
  readonly loop: Loop
  /** What all rows weigh, where that is the same. */
  readonly weight: number | null
  /** Whether all shares are 0 or 1: ℓ is then −D/2. */
  readonly extremes: boolean
  /** log y, under the log link of counts and amounts. */
  readonly logY: Float64Array | null
  /** Open interval of η on which every row has a possible mean. */
  readonly low: number
  readonly high: number
  /** What Σ a·residual² is by rounding alone: a search that gains less has met a perfect fit. */
  readonly rounding: number
}

/** Rows at one point of the parameters; every array is as long as the data. */
export type RowState = {
  readonly eta: Float64Array
  readonly mu: Float64Array
  /** a(y − μ)d/V. */
  readonly score: Float64Array
  /** a·d²/V, or J. */
  readonly weight: Float64Array
  /** What η has lost in its last digit, where it is summed with 32 digits; under the identity residuals are taken from both parts. */
  readonly etaLow: Float64Array | null
}

export const rowState = (rows: number, wide = false): RowState => ({
  eta: new Float64Array(rows),
  mu: new Float64Array(rows),
  score: new Float64Array(rows),
  weight: new Float64Array(rows),
  etaLow: wide ? new Float64Array(rows) : null,
})

/** @throws RangeError where the exposure cannot be had under this family and link: what a statement says is checked before */
export function responsesOf(problem: Problem): Responses {
  const { rows, y, trials, repeat, precision, exposure } = problem
  const family = familyOf(problem.family)
  const a = new Float64Array(rows)
  let weight: number | null = null
  let extremes = family.name === "binomial"
  for (let i = 0; i < rows; i++) {
    const own = (repeat ? (repeat[i] as number) : 1) * (precision ? (precision[i] as number) : 1) * (trials ? (trials[i] as number) : 1)
    a[i] = own
    if (i === 0) weight = own
    else if (own !== weight) weight = null
    if (extremes && y[i] !== 0 && y[i] !== 1) extremes = false
  }
  const negative = problem.family.name === "normal" && problem.link.name === "reciprocal" && weightedSum(a, y) < 0
  const link = linkOf(problem.link, negative ? -1 : 1)
  let offset = problem.offset
  let scale: Float64Array | null = null
  if (exposure) {
    if (problem.link.name === "log" || link.name === "power(0)" || problem.link.name === "cloglog") {
      offset = exposure.map((e, i) => log(e) + (problem.offset ? (problem.offset[i] as number) : 0))
    } else if (family.name === "binomial") throw new RangeError(`an exposure means nothing under the link ${link.name}`)
    else scale = exposure
  }
  const ends = etaEnds(link, family)
  const loop = loopOf(problem)
  return {
    rows,
    family,
    link,
    canonical: isCanonical(problem.family, problem.link),
    y,
    a,
    offset,
    scale,
    loop,
    weight,
    extremes,
    logY: loop === "counts" || loop === "amounts" ? y.map(log) : null,
    ...ends,
    rounding: roundingOf(family, y, a),
  }
}

/** The open interval of η whose means lie in the range of the family and of the link. */
export function etaEnds(link: Link, family: Family): { readonly low: number; readonly high: number } {
  const at = (mu: number, fallback: number): number => {
    const eta = link.eta(mu)
    return Number.isNaN(eta) ? fallback : eta
  }
  const lowest = at(Math.max(link.range.low, family.range.low), link.reach.low)
  const highest = at(Math.min(link.range.high, family.range.high), link.reach.high)
  return {
    low: Math.max(Math.min(lowest, highest), link.reach.low),
    high: Math.min(Math.max(lowest, highest), link.reach.high),
  }
}

/**
 * Fills mean, score and weight of the rows from … to at their η.
 * @param sums  deviance and Pearson's X² of these rows are added to its first two numbers
 * @returns     false at the first row whose η has no possible mean or whose deviance is not finite
 */
export function fillRows(of: Responses, information: Information, from: number, to: number, state: RowState, sums: Float64Array): boolean {
  const { eta } = state
  const { low, high } = of
  if (low > Number.NEGATIVE_INFINITY || high < Number.POSITIVE_INFINITY) {
    for (let i = from; i < to; i++) {
      const e = eta[i] as number
      if (!(e > low && e < high) && (of.a[i] as number) > 0) return false
    }
  }
  switch (of.loop) {
    case "logit":
      return logitRows(of, from, to, state, sums)
    case "cloglog":
      return cloglogRows(of, information, false, from, to, state, sums)
    case "loglog":
      return cloglogRows(of, information, true, from, to, state, sums)
    case "probit":
      return probitRows(of, information, from, to, state, sums)
    case "counts":
      return logRows(of, from, to, state, sums)
    case "amounts":
      return gammaLogRows(of, information, from, to, state, sums)
    case "identity":
      return identityRows(of, from, to, state, sums)
    case "any":
      return anyRows(of, information, from, to, state, sums)
  }
}

/** Loops of their own: for shares under four links, for counts and amounts under log, and for the normal law. */
type Loop = "logit" | "cloglog" | "loglog" | "probit" | "counts" | "amounts" | "identity" | "any"

/** A link of the user's own may be called what it likes, and limits make another link of one that is known. */
function loopOf({ family, link }: Problem): Loop {
  if (link.own !== undefined || link.limits) return "any"
  const { name } = link
  if (family.name === "binomial" && (name === "logit" || name === "cloglog" || name === "loglog" || name === "probit")) return name
  if (name === "log" && family.name === "poisson") return "counts"
  if (name === "log" && family.name === "gamma") return "amounts"
  return name === "identity" && family.name === "normal" ? "identity" : "any"
}

/** Rows by the scalar functions, for every family and link. */
export function anyRows(of: Responses, information: Information, from: number, to: number, state: RowState, sums: Float64Array): boolean {
  const { family, link, y, a, scale } = of
  const observed = information === "observed" && !of.canonical
  const { eta, mu, score, weight } = state
  const binomial = family.name === "binomial"
  let deviance = 0
  let pearson = 0
  for (let i = from; i < to; i++) {
    const own = a[i] as number
    const e = eta[i] as number
    const times = scale === null ? 1 : (scale[i] as number)
    const m = times * link.mean(e)
    mu[i] = m
    if (own === 0) {
      score[i] = 0
      weight[i] = 0
      continue
    }
    const response = y[i] as number
    // Below a half the difference is exact enough; above it has lost what the tail needs.
    const rest = link.complement === null || m < 0.5 ? 1 - m : link.complement(e)
    const d = times * link.slope(e)
    const v = family.variance(m, rest)
    // For a share near 1 the difference is taken between the failures, which have not lost their digits.
    const residual = binomial && response > 0.5 ? rest - (1 - response) : response - m
    deviance += own * (binomial ? shareDeviance(response, m, rest) : family.unitDeviance(response, m, rest))
    if (v > 0) {
      const standard = residual / v
      const ratio = d / v
      let w = ratio * d
      if (observed) w -= standard * (times * link.curvature(e)) - standard * ratio * (d * family.varianceSlope(m, rest))
      score[i] = own * residual * ratio
      weight[i] = own * w
      pearson += own * residual * standard
    } else {
      // The mean is at the end of its range as far as doubles go: a row that agrees adds nothing, any other has no finite deviance.
      score[i] = 0
      weight[i] = 0
    }
  }
  sums[0] = (sums[0] as number) + deviance
  sums[1] = (sums[1] as number) + pearson
  return Number.isFinite(deviance)
}

/** The deviance where all rows have one mean: what differs between them is the response alone. */
export function devianceAtOneMean(of: Responses, mean: number, eta: number): number {
  const { family, link, y, a, rows, logY } = of
  const rest = link.complement === null || mean < 0.5 ? 1 - mean : link.complement(eta)
  const counts = of.loop === "counts"
  const [none, all] = [family.unitDeviance(0, mean, rest), family.unitDeviance(1, mean, rest)]
  let deviance = 0
  for (let from = 0; from < rows; from += onePart) {
    let part = 0
    for (let i = from; i < Math.min(rows, from + onePart); i++) {
      const own = a[i] as number
      if (own === 0) continue
      const response = y[i] as number
      if (response === 0) part += own * none
      else if (response === 1) part += own * all
      else if (logY === null) part += own * family.unitDeviance(response, mean, rest)
      else if (counts) part += own * 2 * halfDeviance(response, response - mean, response + mean, (logY[i] as number) - eta)
      else part += (own * 2 * halfDeviance(mean, mean - response, response + mean, eta - (logY[i] as number))) / mean
    }
    deviance += part
  }
  return deviance
}

/** Rows that are added up before they are added to the whole, so that little is lost. */
const onePart = 128

/** The binomial unit deviance; where all trials went one way it is a single logarithm. */
function shareDeviance(y: number, mu: number, rest: number): number {
  if (y === 1) return -2 * (mu < 0.5 ? log(mu) : log1p(-rest))
  if (y === 0) return -2 * (rest < 0.5 ? log(rest) : log1p(-mu))
  return 2 * (devianceTerm(y, mu) + devianceTerm(1 - y, rest))
}

// Loops of their own ---------------------------------------------------------------------------------------------------------------------

// A search looks at the deviance at every step, and a logarithm a row would be the dearest part of it. So a block of single trials has one
// logarithm, that of a product, and counts and amounts have theirs of the response, which never change. What is lost is about 1e-16 a row of
// terms not smaller than 1e-3; smaller ones are summed as series.

/** Below this, log(1 ± t) is taken as its series: five terms are exact to the last digit. */
const smallTerm = 0.0009765625

/** log(1 + t) for 0 ≤ t < 2^−10. */
const smallLog = (t: number): number => t * (1 - t * (0.5 - t * (0.3333333333333333 - t * (0.25 - t * 0.2))))

/** A product is put away before it can leave the range of a double. */
const mostProduct = 1e200
const leastProduct = 1e-200

function logitRows(of: Responses, from: number, to: number, state: RowState, sums: Float64Array): boolean {
  const { y, a } = of
  const { eta, mu, score, weight } = state
  let deviance = 0
  let pearson = 0
  let half = 0
  let product = 1
  for (let i = from; i < to; i++) {
    const own = a[i] as number
    const e = eta[i] as number
    const size = e < 0 ? -e : e
    const t = exp(-size)
    const whole = 1 + t
    const near = 1 / whole
    const far = t * near
    const m = e < 0 ? far : near
    const rest = e < 0 ? near : far
    mu[i] = m
    const response = y[i] as number
    const residual = response > 0.5 ? rest - (1 - response) : response - m
    const v = near * far
    score[i] = own * residual
    weight[i] = own * v
    if (own === 1 && t > 0 && (response === 0 || response === 1)) {
      // −log of the share of what was seen: log(1 + t), and |η| more against the odds.
      if (t < smallTerm) half += smallLog(t)
      else {
        product *= whole
        // What 1 + t lost by rounding, as a share of it.
        half += (t - (whole - 1)) * near
        if (product > mostProduct) {
          half += log(product)
          product = 1
        }
      }
      if (e < 0 === (response === 1)) {
        half += size
        pearson += 1 / t
      } else pearson += t
    } else if (own !== 0) {
      deviance += own * shareDeviance(response, m, rest)
      if (v > 0) pearson += own * residual * (residual / v)
    }
  }
  deviance += 2 * (half + log(product))
  sums[0] = (sums[0] as number) + deviance
  sums[1] = (sums[1] as number) + pearson
  return Number.isFinite(deviance)
}

/** Half the deviance of a count y > 0 or an amount from log(y/m): x·log(x/m) − (x − m), as a series where the two are near. */
function halfDeviance(x: number, difference: number, sum: number, logRatio: number): number {
  if (difference >= 0.1 * sum || -difference >= 0.1 * sum) return x * logRatio - difference
  const v = difference / sum
  const s = v * v
  return (
    difference * v +
    2 * x * v * (s * (1 / 3 + s * (1 / 5 + s * (1 / 7 + s * (1 / 9 + s * (1 / 11 + s * (1 / 13 + s * (1 / 15 + s / 17))))))))
  )
}

function logRows(of: Responses, from: number, to: number, state: RowState, sums: Float64Array): boolean {
  const { y, a } = of
  const logY = of.logY as Float64Array
  const { eta, mu, score, weight } = state
  let deviance = 0
  let pearson = 0
  for (let i = from; i < to; i++) {
    const own = a[i] as number
    const e = eta[i] as number
    const m = exp(e)
    mu[i] = m
    const response = y[i] as number
    const residual = response - m
    score[i] = own * residual
    weight[i] = own * m
    if (own === 0) continue
    if (m > 0) {
      deviance += own * 2 * (response === 0 ? m : halfDeviance(response, residual, response + m, (logY[i] as number) - e))
      pearson += own * residual * (residual / m)
    } else deviance += own * 2 * devianceTerm(response, m)
  }
  sums[0] = (sums[0] as number) + deviance
  sums[1] = (sums[1] as number) + pearson
  return Number.isFinite(deviance)
}

function gammaLogRows(of: Responses, information: Information, from: number, to: number, state: RowState, sums: Float64Array): boolean {
  const { y, a } = of
  const logY = of.logY as Float64Array
  const { eta, mu, score, weight } = state
  const observed = information === "observed"
  let deviance = 0
  let pearson = 0
  for (let i = from; i < to; i++) {
    const own = a[i] as number
    const e = eta[i] as number
    const m = exp(e)
    mu[i] = m
    const response = y[i] as number
    const residual = (response - m) / m
    score[i] = own * residual
    weight[i] = observed ? own * (response / m) : own
    if (own === 0) continue
    deviance += (own * 2 * (m > 0 ? halfDeviance(m, m - response, m + response, e - (logY[i] as number)) : devianceTerm(m, response))) / m
    pearson += own * residual * residual
  }
  sums[0] = (sums[0] as number) + deviance
  sums[1] = (sums[1] as number) + pearson
  return Number.isFinite(deviance)
}

/** cloglog, and loglog as cloglog turned about: η for −η and failures for successes. */
function cloglogRows(
  of: Responses,
  information: Information,
  turned: boolean,
  from: number,
  to: number,
  state: RowState,
  sums: Float64Array,
): boolean {
  const { y, a } = of
  const { eta, mu, score, weight } = state
  const observed = information === "observed"
  let deviance = 0
  let pearson = 0
  let half = 0
  let product = 1
  for (let i = from; i < to; i++) {
    const own = a[i] as number
    const t = exp(turned ? -(eta[i] as number) : (eta[i] as number))
    let m: number
    let rest: number
    if (t < 0.5) {
      m = -expm1(-t)
      rest = 1 - m
    } else {
      rest = exp(-t)
      m = 1 - rest
    }
    mu[i] = turned ? rest : m
    const response = y[i] as number
    const hit = turned ? 1 - response : response
    const miss = turned ? response : 1 - response
    const residual = hit > 0.5 ? rest - miss : hit - m
    // d = t·e^(−t) and V = μ·e^(−t), so d/V = t/μ, which tends to 1 on the left.
    const ratio = m > 0 ? t / m : 1
    if (rest === 0) {
      // All but certain: only a row of successes can be here, and it adds nothing.
      score[i] = 0
      weight[i] = 0
      if (own > 0) deviance += own * (turned ? shareDeviance(response, rest, m) : shareDeviance(response, m, rest))
      continue
    }
    const d = t * rest
    let w = ratio * d
    const v = m * rest
    if (observed) {
      // ℓ = y·log μ − (1 − y)·t, where log μ has the slope r = t·e^(−t)/μ and r the slope r(1 − t − r).
      const r = ratio * rest
      w = miss * t + hit * r * (t + r - 1)
    }
    score[i] = own * (turned ? -residual : residual) * ratio
    weight[i] = own * w
    if (own === 1 && miss === 1) {
      // −log of the share is t itself.
      half += t
      if (v > 0) pearson += m / rest
    } else if (own === 1 && hit === 1 && m > 1e-100) {
      if (rest < smallTerm) half -= smallLog(-rest)
      else {
        product *= m
        half += (m - 1 + rest) * (1 + rest)
        if (product < leastProduct) {
          half -= log(product)
          product = 1
        }
      }
      pearson += rest / m
    } else if (own !== 0) {
      deviance += own * (turned ? shareDeviance(response, rest, m) : shareDeviance(response, m, rest))
      if (v > 0) pearson += own * residual * (residual / v)
    }
  }
  deviance += 2 * (half - log(product))
  sums[0] = (sums[0] as number) + deviance
  sums[1] = (sums[1] as number) + pearson
  return Number.isFinite(deviance)
}

function probitRows(of: Responses, information: Information, from: number, to: number, state: RowState, sums: Float64Array): boolean {
  const { y, a } = of
  const { eta, mu, score, weight } = state
  const observed = information === "observed"
  let deviance = 0
  let pearson = 0
  let half = 0
  let product = 1
  for (let i = from; i < to; i++) {
    const own = a[i] as number
    const e = eta[i] as number
    const d = normalDensity(e)
    const tail = normalTailBy(e < 0 ? -e : e, d)
    const m = e < 0 ? tail : 1 - tail
    const rest = e < 0 ? 1 - tail : tail
    mu[i] = m
    const response = y[i] as number
    const residual = response > 0.5 ? rest - (1 - response) : response - m
    const v = m * rest
    if (!(v > 0)) {
      // As far as doubles go the mean is at the end of its range: a row that agrees adds nothing.
      score[i] = 0
      weight[i] = 0
      if (own !== 0) deviance += own * shareDeviance(response, m, rest)
      continue
    }
    const ratio = d / v
    const standard = residual / v
    let w = ratio * d
    if (observed) w -= standard * (-e * d) - standard * ratio * (d * (rest - m))
    score[i] = own * residual * ratio
    weight[i] = own * w
    if (own === 0) continue
    pearson += own * residual * standard
    const seen = response === 1 ? m : rest
    const unseen = response === 1 ? rest : m
    if (own === 1 && (response === 1 || response === 0) && seen > 1e-100) {
      if (unseen < smallTerm) half -= smallLog(-unseen)
      else {
        product *= seen
        half += (seen - 1 + unseen) * (1 + unseen)
        if (product < leastProduct) {
          half -= log(product)
          product = 1
        }
      }
    } else deviance += own * shareDeviance(response, m, rest)
  }
  deviance += 2 * (half - log(product))
  sums[0] = (sums[0] as number) + deviance
  sums[1] = (sums[1] as number) + pearson
  return Number.isFinite(deviance)
}

function identityRows(of: Responses, from: number, to: number, state: RowState, sums: Float64Array): boolean {
  const { y, a } = of
  const { eta, mu, score, weight, etaLow } = state
  let deviance = 0
  for (let i = from; i < to; i++) {
    const own = a[i] as number
    const m = eta[i] as number
    mu[i] = m
    const residual = (y[i] as number) - m - (etaLow === null ? 0 : (etaLow[i] as number))
    score[i] = own * residual
    weight[i] = own
    deviance += own * residual * residual
  }
  sums[0] = (sums[0] as number) + deviance
  sums[1] = (sums[1] as number) + deviance
  return Number.isFinite(deviance)
}

/** About 1e-13 of each response, squared and summed; counts have none, since their dispersion is not estimated to stop by. */
const roundingOf = (family: Family, y: Float64Array, a: Float64Array): number => {
  if (family.discrete) return 0
  const size =
    family.name === "normal"
      ? a.reduce((sum, own, i) => sum + own * (y[i] as number) * (y[i] as number), 0)
      : a.reduce((sum, own) => sum + own, 0)
  return 1e-26 * size
}

const weightedSum = (a: Float64Array, y: Float64Array): number => a.reduce((sum, own, i) => sum + own * (y[i] as number), 0)
