// Fits: the whole of iteratively reweighted least squares, and what a fit is. See conventions for every definition.

import type { Problem, Variable } from "./problem.ts"

export type Coefficient = {
  /** Its term, such as `night`, `lot is b`, `lot is b . night`, `polynomial(night) 2`, `intercept`. */
  readonly of: string
  /** Which term of the problem it belongs to; −1 for the constant. */
  readonly term: number
  readonly beta: number | null
  readonly toward: "infinity" | "-infinity" | null
  readonly standardError: number | null
  readonly ratio: number | null
  readonly p: number | null
  readonly low: number | null
  readonly high: number | null
}

export type Certificate = {
  readonly class: "interior" | "boundary" | "infinite" | "unidentified" | "several_maxima" | "gave_up"
  readonly global: boolean
  readonly iterations: number
  readonly scaledScore: number
  readonly condition: number
  /** In words or numbers, what anyone can recheck; null where there is nothing to show. */
  readonly evidence: DependentTerms | null
}
/** Columns left out because earlier ones already say what they say: each with the columns and factors that make it. */
export type DependentTerms = { readonly dependent: readonly { readonly column: string; readonly on: readonly { readonly column: string; readonly times: number }[] }[] }

/** How to make the columns of the design for other rows: plain data, learned from the rows used (knots, orthogonal polynomials). */
export type Recipe = { readonly [member: string]: import("./recipe.ts").RecipeValue }

export type Fit = {
  readonly n: number
  readonly rows: number
  readonly rank: number
  readonly df: number
  readonly parametersCounted: number
  readonly coefficients: readonly Coefficient[]
  /** Lower triangle by rows over all coefficients; NaN for those left out. */
  readonly covariance: Float64Array
  readonly deviance: number | null
  readonly logLikelihood: number | null
  readonly interceptOnly: { readonly deviance: number | null; readonly df: number } | null
  readonly aic: number | null
  readonly bic: number | null
  readonly pearson: number
  readonly fitTest: readonly { readonly by: "deviance" | "pearson"; readonly df: number; readonly p: number }[]
  readonly dispersion: { readonly value: number | null; readonly by: Problem["dispersion"]; readonly estimated: boolean }
  readonly certificate: Certificate
  readonly goodnessOfLink: { readonly statistic: number; readonly df: number; readonly p: number } | null
  readonly meanRange: { readonly possible: readonly [number, number]; readonly fitted: readonly [number, number] }
  readonly eta: Float64Array
  readonly mu: Float64Array
  readonly recipe: Recipe
}

/** A fit in the way of the world: to be told apart from a fit. */
export type Fitted = { readonly ok: true; readonly fit: Fit } | { readonly ok: false; readonly why: "no_rows" | "no_start" | "gave_up"; readonly detail: string }

/** `pause` is awaited at least every 50 ms of work; `near` is a fit of the same design to start from (gestures only). */
export declare function fit(problem: Problem, pause: () => Promise<void>, near?: Fit | null): Promise<Fitted>

/** η without offset and its standard error at other rows; variables as the recipe wants them. */
export declare function predicted(fit: Fit, variables: Readonly<Record<string, Variable>>, rows: number): { readonly eta: Float64Array; readonly error: Float64Array }
