// A model finding as the file and `--json` hold it: the members of the format, no more. Numbers in full; null is "not available", and an
// infinity is a word, since JSON has no number for it.

import type { Json } from "../../runtime/value.ts"
import type { IntervalsFound, ModelFinding, ModelFound } from "../model-finding.ts"
import type { Coefficient, Fit } from "../statistics/fit.ts"
import type { Problem } from "../statistics/problem.ts"
import type { IntervalEnd, ProfileInterval } from "../statistics/profile.ts"
import { certificateSentences } from "./certificate.ts"
import { separationSays } from "./separation.ts"

/** Covariances of more coefficients than this would be most of the file. */
const mostCovariances = 100
/** Arrays in a summary are no longer than this. */
const mostRows = 2000

export function summary({ parts: { fit: found }, intervals }: ModelFound): Json {
  const { fit, problem } = found
  return {
    rows: fit.rows,
    n: fit.n,
    rank: fit.rank,
    parameters_counted: fit.parametersCounted,
    family: familySays(problem),
    link: found.link,
    parameters: fit.parameters.map(({ of, value, standardError }, j) => ({
      of,
      value: number(value),
      standard_error: number(standardError),
      interval: endsOf(intervals.parameters?.[j] ?? null),
    })),
    coefficients: fit.coefficients.map((of, j) => coefficient(of, intervals, j)),
    covariance: covariance(fit),
    fit: { deviance: number(fit.deviance), df: fit.df, log_likelihood: number(fit.logLikelihood) },
    intercept_only: fit.interceptOnly === null ? null : { deviance: number(fit.interceptOnly.deviance), df: fit.interceptOnly.df },
    criteria: { aic: number(fit.aic), bic: number(fit.bic) },
    pearson: number(fit.pearson),
    fit_test: fit.fitTest.map(({ by, df, p }) => ({ by, df, p: number(p) })),
    dispersion: { value: number(fit.dispersion.value), by: typeof fit.dispersion.by === "number" ? "number" : fit.dispersion.by },
    certificate: {
      class: fit.certificate.class,
      global: fit.certificate.global,
      iterations: fit.certificate.iterations,
      scaled_score: number(fit.certificate.scaledScore),
      condition: number(fit.certificate.condition),
      evidence: evidence(found),
    },
    standard_errors: { by: problem.standardErrors, clusters: fit.clusters },
    goodness_of_link:
      fit.goodnessOfLink === null
        ? null
        : {
            by: "score of eta squared",
            statistic: number(fit.goodnessOfLink.statistic),
            df: fit.goodnessOfLink.df,
            p: number(fit.goodnessOfLink.p),
          },
    mean_range: { possible: fit.meanRange.possible.map(number), fitted: fit.meanRange.fitted.map(number), leaves_at: [] },
  }
}

/** The family as a clause would say it: `negative_binomial(2)`, and without a number where that is estimated. */
const familySays = ({ family }: Problem): string =>
  family.variance !== undefined
    ? `${family.name}(${family.variance.says})`
    : family.parameters.length === 0 || (family.estimated?.length ?? 0) > 0
      ? family.name
      : `${family.name}(${family.parameters.join(", ")})`

/** What the trail notes of a fit that was shown. */
export function tried({ parts: { fit: found } }: ModelFound): readonly Json[] {
  const { fit, problem } = found
  return [
    {
      family: familySays(problem),
      link: found.link,
      predictor: predictorSays(found),
      n: fit.n,
      deviance: number(fit.deviance),
      df: fit.df,
      aic: number(fit.aic),
    },
  ]
}

/** The predictor as its clause would say it, terms written out. */
export const predictorSays = ({ problem }: ModelFinding): string => {
  const terms = problem.terms.map(({ says }) => says).join(" + ")
  return terms === "" ? "intercept" : problem.intercept ? terms : `${terms} - intercept`
}

/** Rows at the edge by their number in the file, the first being 1, as every notice counts them. */
function evidence(found: ModelFinding): Json {
  const { fit, records } = found
  const shown = fit.certificate.evidence
  if (shown === null) return null
  const part = ({ column, times }: { readonly column: string; readonly times: number }): Json => ({ column, times: number(times) })
  const { stopped } = shown
  return {
    says: certificateSentences(found).slice(1),
    separated: separationSays(found),
    dependent: shown.dependent.map(({ column, on }) => ({ column, on: on.map(part) })),
    directions: shown.directions.map((direction) => direction.map(part)),
    edge: shown.edge.slice(0, mostRows).map(({ row, multiplier }) => ({ row: (records[row] ?? 0) + 1, multiplier: number(multiplier) })),
    maxima: shown.maxima.map(number),
    stopped:
      stopped === null
        ? null
        : {
            because: stopped.because,
            steps: stopped.steps,
            deviance: number(stopped.deviance),
            decrement: number(stopped.decrement),
          },
  }
}

const endsOf = (interval: ProfileInterval | null): Json => (interval === null ? null : [end(interval.low), end(interval.high)])

function coefficient(of: Coefficient, { by, ends }: IntervalsFound, index: number): Json {
  const interval = ends?.[index] ?? null
  return {
    of: of.of,
    beta: number(of.beta),
    toward: of.toward,
    standard_error: number(of.standardError),
    wald: { ratio: number(of.ratio), p: number(of.p) },
    interval: endsOf(interval),
    interval_by: by,
  }
}

/** The lower triangle by rows; null where there are too many coefficients, and where there are no errors at all. */
function covariance({ covariance: lower, coefficients }: Fit): Json {
  if (coefficients.length > mostCovariances || lower.every(Number.isNaN)) return null
  return coefficients.map((_, row) =>
    Array.from({ length: row + 1 }, (_, column) => number(lower[(row * (row + 1)) / 2 + column] as number)),
  )
}

const end = (value: IntervalEnd): Json => (typeof value === "number" ? number(value) : value)

const number = (value: number | null): Json =>
  value === null || Number.isNaN(value) ? null : value === Infinity ? "infinity" : value === -Infinity ? "-infinity" : value
