// Links: how the mean is tied to the linear predictor, both ways, with the slope. Every link here is strictly monotone and differentiable
// on `range`, and `mean(eta(mu))` gives mu back to 1e-12 relative, in both tails too. A link knows nothing of a family: which pairs are
// legal is said in legal-pairs.ts.

/** Ends of an open interval; ±Infinity allowed. */
export type Range = { readonly low: number; readonly high: number }

export interface Link {
  readonly name: string
  /** Open range of μ on which it is defined. */
  readonly range: Range
  /** The η reached from there; less than all of ℝ means some η give no mean. */
  readonly reach: Range
  eta(mu: number): number
  mean(eta: number): number
  /** 1 − mean for links onto (0, 1), to full precision in the upper tail; null for the others. */
  readonly complement: ((eta: number) => number) | null
  /** dμ/dη. */
  slope(eta: number): number
  /** d²μ/dη². */
  curvature(eta: number): number
  /**
   * How the mean moves with the q parameters of the link at a fixed η: ∂μ/∂θ, then ∂²μ/∂η∂θ, then ∂²μ/∂θ∂θ' as a lower triangle by rows.
   * The parameter of symmetric_power is there a². Left out by links without parameters.
   */
  bend?(eta: number, out: Float64Array): void
}
