// A model finding as blocks: what it comes to in a sentence, the equation, the coefficients, the fit in numbers, and quietly what rows it
// stands on and what is certified about it.

import type { Block, TableBlock, TableEntry } from "../block.ts"
import { absent, written, writtenCount, writtenProbability, writtenShare } from "../figure/number.ts"
import type { IntervalsFound, ModelFinding, ModelFound } from "../model-finding.ts"
import type { Coefficient } from "../statistics/fit.ts"
import type { IntervalEnd } from "../statistics/profile.ts"
import { certificateSentences, errorsSay, linkTestSays } from "./certificate.ts"
import { effectSentences } from "./effect.ts"
import { coefficientName, equation } from "./equation.ts"
import { list, rows } from "./notices.ts"

export function shown(whole: ModelFound): readonly Block[] {
  const found = whole.parts.fit
  // What is no maximum has no effects to tell.
  const effects = found.fit.certificate.class === "gave_up" ? [] : effectSentences(whole)
  const blocks: Block[] = []
  if (effects.length > 0) blocks.push({ type: "sentence", text: effects.join(" "), tone: "lead" })
  return [
    ...blocks,
    { type: "formula", ...equation(found) },
    coefficients(found, whole.intervals),
    ...(found.fit.parameters.length === 0 ? [] : [parameters(found, whole.intervals)]),
    { type: "sentence", text: fitSays(found), tone: "plain" },
    {
      type: "sentence",
      text: `${meanSays(found)} ${rowsSay(found)} ${[...certificateSentences(found), errorsSay(found)].join(" ")}`,
      tone: "quiet",
    },
  ]
}

/** Digits of a standard error, and most digits of an estimate. */
const errorDigits = 3
const mostDigits = 8

function coefficients(found: ModelFinding, intervals: IntervalsFound): TableBlock {
  const first = found.fit.coefficients[0]?.of === "intercept" ? 0 : 1
  const share = writtenShare(found.problem.confidence, Number.isInteger(found.problem.confidence * 100) ? 0 : 1)
  const law = found.fit.lawDf === null ? "the normal law" : `the t law on ${writtenCount(found.fit.lawDf)} degrees of freedom`
  return {
    type: "table",
    caption: null,
    columns: [
      { head: "", says: "The coefficient and the column it belongs to", align: "text" },
      { head: "estimate", says: null, align: "number" },
      { head: "standard error", says: null, align: "number" },
      { head: `${share} interval`, says: intervalSays(found, intervals, law), align: "number" },
      { head: "ratio", says: "The estimate over its standard error", align: "number" },
      { head: "p", says: `Two-sided, by ${law}`, align: "number" },
    ],
    rows: found.fit.coefficients.map((of, j) => coefficientRow(of, j + first, intervals.ends?.[j] ?? null)),
    folded: false,
  }
}

/** What was estimated beside the coefficients; beside k stands 1/k, in which it is nearly normal and has a Poisson end. */
function parameters({ fit, problem }: ModelFinding, intervals: IntervalsFound): TableBlock {
  const share = writtenShare(problem.confidence, Number.isInteger(problem.confidence * 100) ? 0 : 1)
  const rise = "Where the likelihood, at its greatest over all else, has fallen as far as the χ² law allows (profile)"
  return {
    type: "table",
    caption: null,
    columns: [
      { head: "", says: "What was estimated beside the coefficients", align: "text" },
      { head: "estimate", says: null, align: "number" },
      { head: "standard error", says: null, align: "number" },
      { head: `${share} interval`, says: intervals.parameters === null ? `${rise}; still to come` : rise, align: "number" },
    ],
    rows: fit.parameters.flatMap((of, j) => {
      const interval = intervals.parameters?.[j] ?? null
      const own = parameterRow(parameterSays(of.of, problem), of.value, of.standardError, interval)
      if (of.of !== "k") return [own]
      const { value, standardError: error } = of
      const inverse = value === null ? 0 : 1 / value
      const turned = interval === null ? null : { low: reciprocal(interval.high), high: reciprocal(interval.low) }
      return [own, parameterRow("1/k", inverse, value === null || error === null ? null : error / value / value, turned)]
    }),
    folded: false,
  }
}

const reciprocal = (end: IntervalEnd): IntervalEnd => (typeof end === "number" ? 1 / end : end === "infinity" ? 0 : end)

const parameterSays = (of: string, { family, link }: ModelFinding["problem"]): string =>
  of === "k" || of === "p" ? `${of} of ${family.name}` : of.endsWith("limit") ? of : `${of} of ${link.name}`

function parameterRow(head: string, value: number | null, error: number | null, interval: Interval): readonly TableEntry[] {
  const digits = value === null ? errorDigits : estimateDigits(value, error)
  return [
    head,
    value === null ? "∞" : { value, digits },
    error === null ? null : { value: error, digits: errorDigits },
    intervalEntry(interval, digits),
  ]
}

function intervalSays({ fit }: ModelFinding, { by, ends }: IntervalsFound, law: string): string {
  if (by === "wald") return `The estimate and so many standard errors to both sides, by ${law} (Wald)`
  const rise = fit.dispersion.estimated ? `the F law on 1 and ${writtenCount(fit.df)} degrees of freedom` : "the χ² law"
  const says = `Where the deviance, at its least over all other coefficients, has risen as far as ${rise} allows (profile)`
  return ends === null ? `${says}; still to come` : says
}

function coefficientRow(of: Coefficient, index: number, interval: Interval): readonly TableEntry[] {
  const head = `${coefficientName(index)} ${of.of}`
  if (of.beta === null) {
    const why = of.toward === null ? "not told apart" : of.toward === "infinity" ? "∞" : "−∞"
    return [head, why, null, intervalEntry(interval, errorDigits), null, null]
  }
  const digits = estimateDigits(of.beta, of.standardError)
  return [
    head,
    { value: of.beta, digits },
    of.standardError === null ? null : { value: of.standardError, digits: errorDigits },
    intervalEntry(interval, digits),
    of.ratio === null ? null : { value: of.ratio, digits: 3 },
    of.p === null ? null : writtenProbability(of.p),
  ]
}

type Interval = NonNullable<IntervalsFound["ends"]>[number]

/** An interval whose ends are numbers is written by them; else each end has its word. */
function intervalEntry(interval: Interval, digits: number): TableEntry {
  if (interval === null || (interval.low === null && interval.high === null)) return null
  const { low, high } = interval
  if (typeof low === "number" && typeof high === "number") return { from: low, to: high, digits }
  return `${endSays(low, digits)} to ${endSays(high, digits)}`
}

const endSays = (end: IntervalEnd, digits: number): string =>
  end === null ? absent : end === "edge" ? "the edge" : end === "infinity" ? "∞" : end === "-infinity" ? "−∞" : written(end, digits)

/** An estimate is written to where its standard error has its second digit. */
function estimateDigits(beta: number, error: number | null): number {
  if (error === null || !(error > 0) || beta === 0) return 4
  return Math.max(3, Math.min(mostDigits, 2 + exponentOf(beta) - exponentOf(error)))
}

const exponentOf = (value: number): number => Number(value.toExponential().split("e")[1])

/** A deviance below this, for each row, is rounding: the fit meets every response. */
const leastDeviance = 1e-13

function fitSays(found: ModelFinding): string {
  const { fit, problem } = found
  const parts: string[] = []
  const deviance = fit.deviance !== null && fit.deviance < leastDeviance * fit.n && fit.dispersion.by === "one" ? 0 : fit.deviance
  if (deviance !== null) parts.push(`Deviance ${written(deviance, 4)} on ${writtenCount(fit.df)} degrees of freedom`)
  if (fit.dispersion.by !== "one" && fit.dispersion.value !== null) {
    const by = { pearson: "by Pearson's X²", deviance: "by the deviance", likelihood: "by maximum likelihood", one: "" }
    parts.push(
      `dispersion ${written(fit.dispersion.value, 4)} ${typeof fit.dispersion.by === "number" ? "as stated" : by[fit.dispersion.by]}`,
    )
  }
  if (fit.logLikelihood !== null) parts.push(`log-likelihood ${written(fit.logLikelihood, 5)}`)
  if (fit.aic !== null) parts.push(`AIC ${written(fit.aic, 5)}`)
  const sentences = [`${parts.join("; ")}.`]
  const test = fit.fitTest.find(({ by }) => by === "deviance")
  if (test !== undefined && problem.trials !== null)
    sentences.push(`Such a deviance or more would come by chance with p ${pSays(test.p)}, were the model right.`)
  if (fit.goodnessOfLink !== null)
    sentences.push(
      `Beside the predictors, η² has a score of ${written(fit.goodnessOfLink.statistic, 3)} (p ${pSays(fit.goodnessOfLink.p)}): ${linkVerdict(fit.goodnessOfLink.p)}.`,
    )
  const linkTest = linkTestSays(found)
  if (linkTest !== null) sentences.push(linkTest)
  return sentences.join(" ")
}

const pSays = (p: number): string => {
  const says = writtenProbability(p)
  return /^[a-z]/.test(says) ? says : `= ${says}`
}

/** Where the data begin to speak against the link. */
const doubtful = 0.05

const linkVerdict = (p: number): string =>
  p < doubtful ? "these data speak against the link, or for curvature" : "no sign against the link"

/** What μ is the mean of: above all, which of two outcomes counts as success. */
function meanSays({ response: { label, measured, unit } }: ModelFinding): string {
  switch (measured) {
    case "truth":
      return / is /.test(label) ? `μ is the chance that ${label}.` : `μ is the chance of ${label}: true, or 1, counts as success.`
    case "share":
      return `μ is the expected share, ${label}.`
    default:
      return `μ is the mean of ${label}${unit === null ? "" : `, in ${unit}`}.`
  }
}

function rowsSay({ fit, unused, problem }: ModelFinding): string {
  const counted = problem.repeat === null ? "" : `, standing for n = ${writtenCount(fit.n)}`
  const weighted = problem.sampling ? ", weighted by sampling weights of mean one" : ""
  const used = `${rows(fit.rows)} used${counted}${weighted}`
  if (unused.length === 0) return `${used}.`
  return `${used}; not used: ${list(unused.map(({ by, rows: count }) => `${rows(count)} where ${by}`))}.`
}
