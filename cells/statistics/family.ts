// Families: how the variance follows the mean, and the density. A family knows nothing of a link. Means near an end of the range are
// passed with their complement, so that no digit is lost in the tails.

import type { Range } from "./link.ts"

export interface Family {
  readonly name: string
  /** Open range of possible means. */
  readonly range: Range
  /** True where the response is a count or a share of trials: the log-likelihood is then a log-probability. */
  readonly discrete: boolean
  /** φ where nothing else is said: one, or estimated. */
  readonly dispersion: "one" | "pearson"
  /** V(μ); `rest` is 1 − μ to full precision (binomial only, else ignored). */
  variance(mu: number, rest: number): number
  /** V'(μ). */
  varianceSlope(mu: number, rest: number): number
  /** u(y, μ), 0 at y = μ, Infinity where the density is 0. Binomial: y the proportion. */
  unitDeviance(y: number, mu: number, rest: number): number
  /** log f(y; μ, φ/w) with every constant; `trials` is m. */
  logDensity(y: number, mu: number, rest: number, trials: number, phi: number): number
  /** Quasi-likelihood: whether the deviance of this response is infinite whatever the mean, so that only differences of it mean something. */
  isEndless?(y: number): boolean
}
