// A problem: everything a fit needs, as numbers. All columns have the same length and hold the rows used, no missing value among them.
// Symbols are those of the README: y response, m trials, R repeat, w precision, o offset, E exposure.

import type { OwnLink, Program } from "./own-link.ts"

/**
 * Families and links by name, with their parameters in order. Of a parameter that is estimated the number here is where its search starts, and in
 * the problem of a finding where it ended; which those are stands beside, by their places.
 */
export type FamilySpec = {
  readonly name: string
  readonly parameters: readonly number[]
  readonly estimated?: readonly number[]
  /** Of quasi_likelihood. */
  readonly variance?: Variance
}
/** V(μ) and V'(μ) as a program, and the means for which V is above 0. */
export type Variance = { readonly says: string; readonly program: Program; readonly range: readonly [number, number] }
/** A link of the user's own carries itself, and has no parameters. */
export type LinkSpec = {
  readonly name: string
  readonly parameters: readonly number[]
  readonly estimated?: readonly number[]
  readonly own?: OwnLink
  /** μ = low + (high − low)·F(η) for shares; those named are estimated. */
  readonly limits?: Limits
}
export type Limits = { readonly low: number; readonly high: number; readonly estimated: readonly ("low" | "high")[] }

export type Variable =
  | { readonly type: "number"; readonly values: Float64Array }
  | { readonly type: "factor"; readonly codes: Int32Array; readonly levels: readonly string[]; readonly coding: "corner" | "sum_to_zero" }

export type Piece = {
  readonly variable: string
  readonly as: "itself" | "log" | "square_root" | "power" | "polynomial" | "natural_spline" | "periodic" | "category"
  readonly setting: number | null
}
export type Term = { readonly pieces: readonly Piece[]; readonly says: string }

export type Dispersion = "one" | "pearson" | "deviance" | "likelihood" | number

export type Problem = {
  readonly family: FamilySpec
  readonly link: LinkSpec
  readonly intercept: boolean
  readonly terms: readonly Term[]
  readonly variables: { readonly [name: string]: Variable }
  /** Rows used. */
  readonly rows: number
  /** Binomial: the proportion K/N. */
  readonly y: Float64Array
  readonly trials: Float64Array | null
  readonly repeat: Float64Array | null
  readonly precision: Float64Array | null
  readonly offset: Float64Array | null
  readonly exposure: Float64Array | null
  /** Cluster codes for `sandwich by C`. */
  readonly cluster: Int32Array | null
  /** Rows of no dose, beside the rows above: their mean is the lower limit, whatever the predictor. */
  readonly control?: Control | null
  readonly dispersion: Dispersion
  readonly standardErrors: "expected" | "observed" | "sandwich"
  /** Left out: by maximum likelihood. */
  readonly estimate?: "bias_reduced"
  /** True where `precision` holds sampling weights, of mean one: they weight the estimate, and there is no likelihood. */
  readonly sampling?: boolean
  /** Level of the intervals, such as 0.95. */
  readonly confidence: number
}

export type Control = {
  readonly y: Float64Array
  readonly trials: Float64Array | null
  readonly repeat: Float64Array | null
  readonly precision: Float64Array | null
}
