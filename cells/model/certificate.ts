// A certificate in words: what kind of end the search for a fit came to, what that rests on, what anyone can recheck, and why standard errors
// or the test of the link are missing where they are.

import { written, writtenCount } from "../figure/number.ts"
import type { ModelFinding } from "../model-finding.ts"
import { combinationSays, scaledParts } from "./combination.ts"
import { list } from "./notices.ts"

type Evidence = NonNullable<ModelFinding["fit"]["certificate"]["evidence"]>

/** At most so many rows, terms or maxima are named one by one. */
const mostNamed = 4

/** The class first, then all that applies beside it. */
export function certificateSentences(finding: ModelFinding): readonly string[] {
  const { certificate, parameters } = finding.fit
  const { evidence } = certificate
  const sentences = [classSays(finding)]
  if (evidence === null) return sentences
  if (evidence.dependent.length > 0) sentences.push(dependentSays(evidence.dependent))
  if (evidence.directions.length > 0) sentences.push(directionSays(evidence.directions))
  if (evidence.edge.length > 0) sentences.push(edgeSays(evidence.edge, finding))
  if (evidence.maxima.length > 0) sentences.push(maximaSay(evidence.maxima, finding))
  if (evidence.stopped !== null) sentences.push(stoppedSays(evidence.stopped, certificate.scaledScore))
  if (parameters.some(({ end }) => end !== 0) && certificate.class !== "boundary")
    sentences.push("A parameter ended where it can go no farther.")
  return sentences
}

function classSays({ problem, fit: { certificate, parameters } }: ModelFinding): string {
  const steps = `${writtenCount(certificate.iterations)} ${certificate.iterations === 1 ? "step" : "steps"}`
  if (problem.estimate === "bias_reduced" && certificate.class !== "gave_up")
    return `The maximum of the likelihood penalised by ½ ln |X'WX|, reached in ${steps}; deviance and log-likelihood are the plain ones there.`
  const edge = certificate.evidence?.edge.length ?? 0
  switch (certificate.class) {
    case "interior":
      return certificate.global
        ? `The maximum of the likelihood, reached in ${steps}; there is no other, since the log-likelihood is concave in η under this family and link.`
        : `A maximum of the likelihood, reached in ${steps}; with this family and link there may be others.`
    case "unidentified":
      return `The maximum of the likelihood, reached in ${steps}; not every coefficient can be told apart.`
    case "boundary":
      return parameters.some(({ end }) => end !== 0) && edge === 0
        ? `The best fit with a parameter at the end of what it can be, reached in ${steps}.`
        : `The best fit at the edge of the possible means, reached in ${steps}.`
    case "infinite":
      return `The likelihood grows without end; what is shown is its limit, after ${steps}.`
    case "several_maxima":
      return `The highest of several maxima, reached in ${steps}.`
    case "gave_up":
      return `No maximum: given up after ${steps}.`
  }
}

function dependentSays(dependent: Evidence["dependent"]): string {
  const says = dependent
    .slice(0, mostNamed)
    .map(({ column, on }) => (on.length === 0 ? `${column} is 0` : `${column} = ${combinationSays(on)}`))
  const more = dependent.length - says.length
  return `In all rows used ${list(more > 0 ? [...says, `${writtenCount(more)} more such`] : says)}.`
}

/** The promise of a direction is for every row and every step along it, so that it can be rechecked with a few products. */
function directionSays(directions: Evidence["directions"]): string {
  const says = directions.slice(0, mostNamed).map((direction) => {
    const along = combinationSays(scaledParts(direction))
    return direction.length === 1 && !along.startsWith("−") ? `t × ${along}` : `t × (${along})`
  })
  return says.length === 1
    ? `Adding ${says[0]} to the linear predictor, t ≥ 0, lowers the likelihood of no row.`
    : `Adding ${says[0]} to the linear predictor, t ≥ 0, lowers the likelihood of no row; nor, in the rows that it leaves where they are, does ${list(says.slice(1), "or")}.`
}

/** Multipliers are by row: the score of its linear predictor, taken outwards. */
function edgeSays(edge: Evidence["edge"], { records }: ModelFinding): string {
  const named = [...edge].sort((a, b) => (records[a.row] ?? 0) - (records[b.row] ?? 0)).slice(0, mostNamed)
  const [first] = edge
  const alike = first !== undefined && edge.length > 1 && edge.every(({ multiplier }) => multiplier === first.multiplier)
  const says = named.map(({ row, multiplier }) => {
    const number = writtenCount((records[row] ?? 0) + 1)
    return alike ? number : `${number} (multiplier ${multiplierSays(multiplier)})`
  })
  const more = edge.length - named.length
  const rows = `${list(more > 0 ? [...says, `${writtenCount(more)} more`] : says)}${alike ? ` (multiplier ${multiplierSays(first.multiplier)} each)` : ""}`
  return `The mean of ${edge.length === 1 ? "row" : "rows"} ${rows} is held at the end of its range: since no multiplier is below 0, no step inwards raises the likelihood.`
}

const multiplierSays = (multiplier: number): string => (multiplier === Number.POSITIVE_INFINITY ? "∞" : written(multiplier, 3))

function maximaSay(maxima: Evidence["maxima"], { fit }: ModelFinding): string {
  const others = [...maxima].sort((a, b) => a - b)
  const says = others.slice(0, mostNamed).map((deviance) => written(deviance, 5))
  return `Other starts led to ${others.length === 1 ? "a maximum" : `${writtenCount(others.length)} maxima`} of deviance ${list(says)}${
    others.length > says.length ? " and more" : ""
  }, this one has ${fit.deviance === null ? "the least" : written(fit.deviance, 5)}.`
}

function stoppedSays({ because, deviance, decrement }: NonNullable<Evidence["stopped"]>, score: number): string {
  const why = {
    stuck: "no step was found that keeps every mean possible and lowers the deviance",
    singular: "the information could not be inverted",
    slow: "the steps gained too little",
  }[because]
  const numbers = [
    ...(Number.isFinite(deviance) ? [`the deviance was ${written(deviance, 5)}`] : []),
    ...(Number.isFinite(score) ? [`the scaled score ${written(score, 2)}`] : []),
    ...(Number.isFinite(decrement) ? [`the next step promised a fall of ${written(decrement, 2)}`] : []),
  ]
  return `There ${why}; ${list(numbers)}.`
}

/** What the standard errors rest on, or why there are none. */
export function errorsSay({ problem, fit }: ModelFinding): string {
  const { certificate } = fit
  const none = fit.coefficients.every(({ standardError }) => standardError === null)
  if (none) {
    if (certificate.class === "gave_up") return "No standard errors: these are not the numbers of a maximum."
    if (certificate.class === "boundary" || (certificate.evidence?.edge.length ?? 0) > 0)
      return "No standard errors: at an edge the likelihood is not round, and what is usual elsewhere does not hold."
    if ((certificate.evidence?.directions.length ?? 0) > 0) return "No standard errors: no coefficient stays finite."
    if (fit.dispersion.value === null) return "No standard errors: nothing is left from which the dispersion could be judged."
    return "No standard errors could be had."
  }
  const given = (certificate.evidence?.directions.length ?? 0) > 0 ? ", from the rows whose means stay within their range" : ""
  if (fit.dispersion.value === 0) return "The fit is perfect, so the standard errors are 0 and there is nothing to test."
  switch (problem.standardErrors) {
    case "expected":
      return `Standard errors from the expected information${given}.`
    case "observed":
      return `Standard errors from the observed information${given}.`
    case "sandwich":
      return fit.clusters === null
        ? `Sandwich standard errors by row${given}.`
        : `Sandwich standard errors by ${writtenCount(fit.clusters)} clusters${given}.`
  }
}

/** What a score of η² can mean, or why there is none; null where nothing need be said. */
export function linkTestSays(finding: ModelFinding): string | null {
  const { fit } = finding
  if (fit.goodnessOfLink !== null)
    return isCurveOfOne(finding) ? "With one predictor that is a number, this test cannot tell the link from curvature." : null
  if (fit.certificate.class !== "interior" || fit.coefficients.length < 2) return null
  if (fit.dispersion.value === 0) return null
  if (fit.df === 0) return "The model has a coefficient for every row, so it fits under any link: there is no test of the link."
  return fit.parameters.length > 0 ? null : "The terms can make η² themselves, so there is no test of the link."
}

/** Whether η is a function of one number alone: a curve through its values is all that a link could change. */
function isCurveOfOne({ problem }: ModelFinding): boolean {
  const pieces = problem.terms.flatMap((term) => term.pieces)
  const names = new Set(pieces.map(({ variable }) => variable))
  const [name] = names
  if (name === undefined || names.size !== 1 || problem.offset !== null || problem.exposure !== null) return false
  return problem.variables[name]?.type === "number" && pieces.every(({ as }) => as !== "category")
}
