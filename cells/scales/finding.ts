// What `scales` finds: for each candidate link the curves on both scales, the points, and the bridge. Plain data.

import type { Name } from "../../runtime/value.ts"
import type { ScalesCurve, ScalesPoints } from "../block.ts"
import type { Fit } from "../statistics/fit.ts"

export type CandidateFound = {
  /** As a `link` clause says it. */
  readonly link: string
  readonly formula: string
  /** True for the model's own link. */
  readonly own: boolean
  readonly aic: number | null
  readonly deviance: number | null
  readonly df: number | null
  /** Why there is no fit, or no trustworthy one, in words. */
  readonly trouble: string | null
  readonly fitted: boolean
  readonly curves: readonly ScalesCurve[]
  readonly points: readonly ScalesPoints[]
  readonly bridge: { readonly mu: Float64Array; readonly eta: Float64Array }
  /** What `aligned` needs: μ₀ is the same for all; g(μ₀) and g'(μ₀) are this link's. */
  readonly middle: { readonly eta: number; readonly slope: number }
  /** Kept for few rows, so that a gesture can draw the candidate on another plot; null for many rows and for the own link. */
  readonly fit: Fit | null
}

export type ScalesFinding = {
  readonly model: Name
  /** Numbers of the fit that was drawn, to tell in a drag whether it is still the same. */
  readonly mark: Float64Array
  readonly family: string
  readonly predictor: string
  readonly n: number
  readonly across: { readonly name: Name; readonly label: string; readonly unit: string | null; readonly levels: readonly string[] | null }
  readonly response: { readonly label: string; readonly unit: string | null }
  readonly split: { readonly name: Name; readonly levels: readonly string[] } | null
  readonly possible: readonly [number, number]
  readonly range: readonly [number, number]
  readonly data: readonly [number, number]
  /** What the other predictors are held at, by name; numbers or levels. */
  readonly held: { readonly [name: Name]: number | string }
  /** The same in words, as it stands on the plot; null where nothing is held. */
  readonly heldSays: string | null
  readonly averaged: boolean
  readonly aligned: boolean
  readonly confidence: number
  /** The model's own link first. */
  readonly candidates: readonly CandidateFound[]
  /** True when the candidates beside the own link have been fitted. */
  readonly complete: boolean
}
