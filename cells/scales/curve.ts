// Curves: means and linear predictors along x with their bands, held or averaged over the rows. The band is h(η ± c·se), pointwise; where it
// leaves the η that give a mean it is cut at the end of the range.

import type { ScalesCurve } from "../block.ts"
import type { ModelFinding } from "../model-finding.ts"
import type { Fit } from "../statistics/fit.ts"
import { designAt, predicted } from "../statistics/index.ts"
import type { Link, Range } from "../statistics/link.ts"
import type { Variable } from "../statistics/problem.ts"
import { heldVariables, offsetAt, rowWeight, type Setting, variablesOf } from "./setting.ts"

export type Line = { readonly eta: Float64Array; readonly error: Float64Array }

/** η and its standard error along `x` with the other columns held; offset included, exposure 1. */
export function heldLine(model: ModelFinding, fit: Fit, setting: Setting, x: Float64Array, level: number | null): Line {
  const variables = heldVariables(model, setting, x, level)
  const { eta, error } = predicted(fit, variables, x.length)
  const offset = offsetAt(model, variables, x.length)
  for (let i = 0; i < eta.length; i++) eta[i] = (eta[i] as number) + (offset[i] as number)
  return { eta, error }
}

/**
 * g of the mean averaged over the rows used, with x set to each value in turn, and its standard error by the delta method:
 * the gradient of the average in β is Σ v·h'(η)·x / Σ v, divided by h'(g(average)) to be on the scale of η.
 */
export async function averagedLine(
  model: ModelFinding,
  fit: Fit,
  link: Link,
  setting: Setting,
  x: Float64Array,
  level: number | null,
  pause: () => Promise<void>,
): Promise<Line> {
  const { problem } = model
  const rows = problem.rows
  const weights = new Float64Array(rows)
  let total = 0
  for (let i = 0; i < rows; i++) {
    const exposure = link.name === "log" ? (problem.exposure?.[i] ?? 1) : 1
    weights[i] = rowWeight(model, i) * exposure
    total += weights[i] as number
  }
  const own = variablesOf(model)
  const eta = new Float64Array(x.length)
  const error = new Float64Array(x.length)
  const slopes = new Float64Array(rows)
  for (let k = 0; k < x.length; k++) {
    await pause()
    const variables: Record<string, Variable> = { ...own, ...single(own, setting.across, x[k] as number, rows) }
    if (setting.split !== null) Object.assign(variables, single(own, setting.split, level ?? 0, rows))
    for (const [name, at] of setting.held) Object.assign(variables, single(own, name, at, rows))
    const line = predicted(fit, variables, rows)
    const offset = offsetAt(model, variables, rows)
    let mean = 0
    for (let i = 0; i < rows; i++) {
      const at = (line.eta[i] as number) + (offset[i] as number)
      mean += (weights[i] as number) * link.mean(at)
      slopes[i] = (weights[i] as number) * link.slope(at)
    }
    mean /= total
    const gradient = designAt(fit, variables, rows).map((column) => dot(column, slopes) / total)
    eta[k] = link.eta(mean)
    error[k] = Math.sqrt(quadratic(fit.covariance, gradient)) / Math.abs(link.slope(eta[k] as number))
  }
  return { eta, error }
}

const single = (own: Readonly<Record<string, Variable>>, name: string, at: number, rows: number): Record<string, Variable> => {
  const like = own[name]
  if (like === undefined) return {}
  return {
    [name]:
      like.type === "number"
        ? { type: "number", values: new Float64Array(rows).fill(at) }
        : { ...like, codes: new Int32Array(rows).fill(at) },
  }
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0
  for (let i = 0; i < a.length; i++) sum += (a[i] as number) * (b[i] as number)
  return sum
}

/** g'Vg for a packed lower triangle V; coefficients left out (NaN) take no part. */
function quadratic(covariance: Float64Array, gradient: readonly number[]): number {
  let sum = 0
  for (let i = 0; i < gradient.length; i++) {
    for (let j = 0; j <= i; j++) {
      const entry = covariance[(i * (i + 1)) / 2 + j] as number
      if (Number.isNaN(entry)) continue
      sum += (i === j ? 1 : 2) * entry * (gradient[i] as number) * (gradient[j] as number)
    }
  }
  return sum
}

/** Both scales along `x` from a line and the width `c` of its band in standard errors, or no band; a mean outside `possible` is a gap. */
export function curveOf(
  link: Link,
  possible: Range,
  line: Line,
  c: number | null,
  x: Float64Array,
  level: string | null,
  inside: Uint8Array,
): ScalesCurve {
  const n = x.length
  const banded = c === null ? 0 : n
  const curve = {
    level,
    x,
    eta: new Float64Array(n),
    etaLow: new Float64Array(banded),
    etaHigh: new Float64Array(banded),
    mu: new Float64Array(n),
    muLow: new Float64Array(banded),
    muHigh: new Float64Array(banded),
    inside,
  }
  for (let i = 0; i < n; i++) {
    const eta = line.eta[i] as number
    const mean = meanWithin(link, possible, eta)
    const gives = mean > possible.low && mean < possible.high && eta > link.reach.low && eta < link.reach.high
    curve.eta[i] = eta
    curve.mu[i] = gives ? mean : Number.NaN
    if (c === null) continue
    const half = c * (line.error[i] as number)
    curve.etaLow[i] = eta - half
    curve.etaHigh[i] = eta + half
    // Written out without arrays: this runs for every candidate at every step of a drag.
    const below = gives ? meanWithin(link, possible, eta - half) : Number.NaN
    const above = gives ? meanWithin(link, possible, eta + half) : Number.NaN
    curve.muLow[i] = Math.min(below, above)
    curve.muHigh[i] = Math.max(below, above)
  }
  return curve
}

/** The mean at η, or the end of the possible means that η has gone past. */
export function meanWithin(link: Link, possible: Range, eta: number): number {
  const { reach, range } = link
  if (Number.isNaN(eta)) return Number.NaN
  if (eta > reach.low && eta < reach.high) return Math.min(possible.high, Math.max(possible.low, link.mean(eta)))
  const rising = link.slope(middleOf(reach)) > 0
  return eta <= reach.low === rising ? Math.max(range.low, possible.low) : Math.min(range.high, possible.high)
}

function middleOf({ low, high }: Range): number {
  if (low === -Infinity) return high === Infinity ? 0 : high - 1
  return high === Infinity ? low + 1 : (low + high) / 2
}
