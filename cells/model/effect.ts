// What coefficients come to, in the terms of the link: odds, means or hazards multiplied, means added to. Only where a coefficient speaks by
// itself: its column enters in one way only, and in no interaction.

import { written, writtenRange, writtenShare } from "../figure/number.ts"
import type { IntervalsFound, ModelFinding, ModelFound } from "../model-finding.ts"
import type { Coefficient } from "../statistics/fit.ts"
import { exp } from "../statistics/index.ts"
import type { Term } from "../statistics/problem.ts"
import type { IntervalEnd } from "../statistics/profile.ts"

/** Sentences for at most so many coefficients. */
const mostSentences = 3

/** One sentence an effect, in the order of the predictor. */
export function effectSentences({ parts: { fit: found }, intervals }: ModelFound): readonly string[] {
  const { terms } = found.problem
  const sentences: string[] = []
  terms.forEach((term, t) => {
    const piece = term.pieces[0]
    if (piece === undefined || term.pieces.length !== 1 || !speaksAlone(terms, piece.variable, t)) return
    for (const [j, coefficient] of found.fit.coefficients.entries()) {
      if (coefficient.term !== t || coefficient.beta === null || sentences.length === mostSentences) continue
      const sentence = effectSentence(found, piece.variable, piece.as, coefficient, intervals.ends?.[j] ?? null)
      if (sentence !== null) sentences.push(sentence)
    }
  })
  return sentences
}

const speaksAlone = (terms: readonly Term[], variable: string, own: number): boolean =>
  terms.every((term, t) => t === own || term.pieces.every((piece) => piece.variable !== variable))

type Interval = NonNullable<IntervalsFound["ends"]>[number]

function effectSentence(found: ModelFinding, variable: string, as: string, coefficient: Coefficient, interval: Interval): string | null {
  const of = found.problem.variables[variable]
  const label = found.labels[variable]
  if (of === undefined || coefficient.beta === null) return null
  const called = label?.label ?? variable
  const verb = verbOf(found)
  if (of.type === "factor") {
    const corner = of.coding === "corner" && found.problem.intercept
    if (as !== "itself" || !corner || !coefficient.of.startsWith(`${variable} is `)) return null
    const level = coefficient.of.slice(variable.length + 4)
    return `${called} ${level} against ${of.levels[0]} ${changed(found, verb, coefficient.beta, interval, 1)}.`
  }
  if (as !== "itself") return null
  const step = stepOf(of.values, coefficient.beta, verb.multiplies)
  const unit = label?.unit === null || label?.unit === undefined ? "" : ` ${label.unit}`
  return `Each ${written(step, 1)}${unit} more of ${called} ${changed(found, verb, coefficient.beta, interval, step)}.`
}

type Verb = { readonly says: string; readonly what: string; readonly multiplies: boolean; readonly sign: 1 | -1 }

/** How a step in the predictor moves the mean, in the terms of the link. */
function verbOf({ problem }: ModelFinding): Verb {
  const { name, parameters } = problem.link
  const multiplies = (what: string, sign: 1 | -1 = 1): Verb => ({ says: "multiplies", what: `${what} by`, multiplies: true, sign })
  const adds = (what: string): Verb => ({ says: "adds", what: `to ${what}`, multiplies: false, sign: 1 })
  // Between limits it is not the mean that a coefficient multiplies or adds to.
  if (problem.link.limits !== undefined) return adds("the linear predictor")
  switch (name) {
    case "log":
      return multiplies(problem.exposure === null ? "the mean" : "the mean per unit of exposure")
    case "logit":
      return multiplies("the odds")
    case "cloglog":
      return multiplies("the cumulative hazard −ln(1 − μ)")
    case "loglog":
      return multiplies("−ln μ", -1)
    case "identity":
      return adds(problem.exposure === null ? "the mean" : "the mean per unit of exposure")
    case "reciprocal":
      return adds("one over the mean")
    case "reciprocal_square":
      return adds("one over the squared mean")
    case "log_complement":
      return multiplies("the chance of none, 1 − μ,")
    case "square_root":
      return adds("the square root of the mean")
    case "power":
      return parameters[0] === 0 ? multiplies("the mean") : adds(`the mean to the power ${written(parameters[0] ?? 1, 3)}`)
    case "probit":
      return adds("the normal quantile of the mean")
    default:
      return adds("the linear predictor")
  }
}

function changed(found: ModelFinding, verb: Verb, beta: number, between: Interval, step: number): string {
  const scaled = (value: number): number => (verb.multiplies ? exp(verb.sign * step * value) : step * value)
  const value = scaled(beta)
  const [low, high] = [placed(between?.low), placed(between?.high)]
  const ends = low === null || high === null ? null : [scaled(low), scaled(high)].sort((a, b) => a - b)
  const interval =
    ends === null ? "" : ` (${writtenShare(found.problem.confidence)} interval ${writtenRange(ends[0] as number, ends[1] as number, 3)})`
  return verb.multiplies ? `multiplies ${verb.what} ${written(value, 3)}${interval}` : `adds ${written(value, 3)} ${verb.what}${interval}`
}

/** An end as a number; null where there is none, or where it is not known beyond the edge. */
const placed = (end: IntervalEnd | undefined): number | null =>
  end === "infinity" ? Infinity : end === "-infinity" ? -Infinity : typeof end === "number" ? end : null

/** The logarithm of a factor beyond these is no longer something one can picture. */
const largestLogFactor = 4
const leastLogFactor = 0.05

/**
 * A step along a column in which its effect can be pictured: one where that is a step within the data and neither huge nor tiny in effect,
 * else the power of ten that is.
 */
function stepOf(values: Float64Array, beta: number, multiplies: boolean): number {
  let [low, high] = [Infinity, -Infinity]
  for (const value of values) {
    if (value < low) low = value
    if (value > high) high = value
  }
  const range = high - low
  const size = Math.abs(beta)
  const fits = (step: number): boolean => step <= range && (!multiplies || step * size <= largestLogFactor)
  let step = 1
  if (!(range > 0)) return step
  for (let k = 0; k < 300 && !fits(step); k++) step = powerOfTen(-1 - k)
  for (let k = 0; k < 300 && multiplies && step * size < leastLogFactor && fits(powerOfTen(k + 1)) && step >= 1; k++)
    step = powerOfTen(k + 1)
  return step
}

/** Read from decimal digits, so that 0.1 is the 0.1 that is written. */
const powerOfTen = (k: number): number => Number(`1e${k}`)
