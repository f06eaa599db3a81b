// The bridge: pairs (μ, g(μ)) along the link, over the means on the plot. Round means are always among them, so that a face finds the η of a
// number it writes without computing one.

import type { Link, Range } from "../statistics/link.ts"

export type Bridge = { readonly mu: Float64Array; readonly eta: Float64Array }

/** Pairs between the round ones: enough for a smooth bundle of lines. */
const steps = 96
/** Shares people read by, and the tails that links differ in. */
const roundShares = [1e-6, 1e-5, 1e-4, 1e-3, 0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.3, 0.4, 0.5]
/** Two tens of powers of ten cover every response that can be drawn. */
const powers = 24

/** @param span  the least and the greatest mean on the plot, where the possible means have an open end */
export function bridgeOf(link: Link, possible: Range, span: readonly [number, number]): Bridge {
  const means = possible.low === 0 && possible.high === 1 ? shares() : between(possible, span)
  const kept = Float64Array.from(means.filter((mu) => mu > link.range.low && mu < link.range.high))
  kept.sort()
  const mu = kept.filter((at, i) => i === 0 || at !== kept[i - 1])
  return { mu, eta: mu.map((at) => link.eta(at)) }
}

/** Over (0, 1), closer together at both ends, where links differ. */
function shares(): number[] {
  const means = roundShares.flatMap((share) => [share, 1 - share])
  for (let i = 0; i < steps; i++) {
    const t = (i + 1) / (steps + 1)
    means.push(t * t * (3 - 2 * t))
  }
  return means
}

/** Equal steps over the span, and the round numbers in it: 1, 2 and 5 times powers of ten, with the multiples of the largest step of 1, 2 or 5. */
function between(possible: Range, [low, high]: readonly [number, number]): number[] {
  const least = possible.low === 0 ? Math.max(low, high / 500) : low
  const means: number[] = []
  for (let i = 0; i < steps; i++) means.push(least + ((high - least) * i) / (steps - 1))
  // Means that are all one, or beyond each other's reach, have no round numbers between them.
  const quarter = high / 4 - least / 4
  if (!(quarter > 0 && quarter < Infinity)) return means.filter(Number.isFinite)
  let step = 1
  while (step > quarter) step /= 10
  while (step * 10 <= quarter) step *= 10
  if (!(step > 0)) return means
  for (let k = Math.ceil(least / step); k * step <= high && means.length < 2 * steps; k++) means.push(Number((k * step).toPrecision(12)))
  for (let power = 0, size = 1; power < powers; power++, size *= 10) {
    for (const digit of [1, 2, 5]) {
      for (const mean of [digit * size, digit / size, -digit * size, -digit / size]) if (mean >= least && mean <= high) means.push(mean)
    }
  }
  return means
}
