// The bridge: an alignment chart between the edge that is the μ axis and the edge that is the η axis. Lines join means to their g(μ); some
// are labelled at both ends, so that it can be read which μ meets which η. Labels are round means, chosen so that no two labels touch on
// either edge, and every line starts and ends at exactly the place its two labels name.

import type { ScalesCandidate } from "../../../cells/block.ts"
import type { Scale } from "../axis.ts"
import { decimalsForExtent, decimalsOf, writtenFixed } from "../number.ts"
import { tenth, textWidth } from "../scene.ts"
import { TICK_SIZE } from "./layout.ts"

type Pairs = ScalesCandidate["bridge"]

export interface BridgeLine {
  readonly mu: number
  readonly eta: number
  /** Places along the edge of μ and along the edge of η. */
  readonly from: number
  readonly to: number
}

export interface LabelledLine extends BridgeLine {
  readonly muText: string
  readonly etaText: string
}

export interface BridgeEdges {
  readonly mu: Scale
  readonly eta: Scale
  /** Whether places run down the page (labels are kept apart by their height) or across it (by their width). */
  readonly runs: "down" | "across"
}

/** Whether larger means meet smaller η: then the lines cross. */
export function falls(pairs: Pairs): boolean {
  const last = pairs.mu.length - 1
  return last > 0 && (pairs.eta[last] ?? 0) < (pairs.eta[0] ?? 0)
}

/**
 * g at one mean, looked up between the pairs: by the cubic through the four nearest, since pairs are few and links bend. NaN outside.
 */
export function etaAt(pairs: Pairs, mu: number): number {
  const low = pairBelow(pairs, mu)
  if (low === null) return Number.NaN
  for (const i of [low, low + 1]) if (pairs.mu[i] === mu) return pairs.eta[i] as number
  return throughPairs(pairs, mu, low - 1)
}

/** How far a look-up from one pair fewer would differ: where that is more than is shown, the pairs are too few to say. */
function doubtAt(pairs: Pairs, mu: number): number {
  const low = pairBelow(pairs, mu)
  if (low === null) return Number.POSITIVE_INFINITY
  if (pairs.mu[low] === mu || pairs.mu[low + 1] === mu) return 0
  const whole = throughPairs(pairs, mu, low - 1)
  return Math.max(Math.abs(whole - throughPairs(pairs, mu, low, 3)), Math.abs(whole - throughPairs(pairs, mu, low - 1, 3))) / 2
}

/** The index of the last pair that is not above a mean, with one more pair after it; null outside. */
function pairBelow({ mu: means }: Pairs, mu: number): number | null {
  const n = means.length
  if (n < 2 || !(mu >= (means[0] as number) && mu <= (means[n - 1] as number))) return null
  let low = 0
  let high = n - 1
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if ((means[middle] as number) <= mu) low = middle
    else high = middle
  }
  return low
}

/** The polynomial through so many pairs in a row, at a mean. */
function throughPairs({ mu: means, eta: etas }: Pairs, mu: number, from: number, count = 4): number {
  const n = means.length
  const first = Math.max(0, Math.min(n - count, from))
  const last = Math.min(n - 1, first + count - 1)
  const along = evened(means)
  const at = along(mu)
  let sum = 0
  for (let i = first; i <= last; i += 1) {
    let weight = 1
    const here = along(means[i] as number)
    for (let j = first; j <= last; j += 1) {
      if (j === i) continue
      const there = along(means[j] as number)
      weight *= (at - there) / (here - there)
    }
    sum += weight * (etas[i] as number)
  }
  return sum
}

/** What the look-up runs along: the log of the odds where shares lie close together towards their ends, else the mean itself. */
function evened(means: Float64Array): (mu: number) => number {
  const n = means.length
  const gap = (i: number): number => (means[i + 1] as number) - (means[i] as number)
  const isDenser = n > 4 && gap(0) < gap(n >> 1) / 2
  return isDenser && (means[0] as number) > 0 && (means[n - 1] as number) < 1 ? (mu) => Math.log(mu / (1 - mu)) : (mu) => mu
}

/** Lines that show how the link spreads the means: the pairs, thinned until neighbours stand apart on at least one edge. */
export function bridgeHairs(pairs: Pairs, edges: BridgeEdges, apart: number): readonly BridgeLine[] {
  const kept: BridgeLine[] = []
  for (let i = 0; i < pairs.mu.length; i += 1) {
    const line = lineAt(pairs.mu[i] as number, pairs.eta[i] as number, edges)
    const last = kept.at(-1)
    if (line === null) continue
    if (last === undefined || Math.max(Math.abs(line.from - last.from), Math.abs(line.to - last.to)) >= apart) kept.push(line)
  }
  return kept
}

/** Room beyond this many pixels counts no more. */
const ROOMY = 72
/** Pixels of room that the roundest number is worth over one that is not. */
const UNROUND = 26
/** In pixels of clear room, less what an unround number costs. */
const LEAST_WORTH = -10

/** The labelled lines, at most `most`, in order of μ. */
export function labelledLines(pairs: Pairs, edges: BridgeEdges, most: number): readonly LabelledLine[] {
  const etaDecimals = decimalsForExtent(edges.eta.to - edges.eta.from)
  const offered = roundMeans(Math.max(edges.mu.from, pairs.mu[0] ?? 0), Math.min(edges.mu.to, pairs.mu.at(-1) ?? 0)).flatMap((mean) => {
    const line = lineAt(mean.mu, etaAt(pairs, mean.mu), edges)
    const sure = doubtAt(pairs, mean.mu) < 0.25 * Number(`1e-${etaDecimals}`)
    return line === null || !sure ? [] : [{ ...line, cost: mean.cost, muText: mean.text, etaText: writtenFixed(line.eta, etaDecimals) }]
  })
  const roomy = offered.filter(
    (line) => withinEdge(line.from, line.muText, edges.mu, edges.runs) && withinEdge(line.to, line.etaText, edges.eta, edges.runs),
  )
  const kept: LabelledLine[] = []
  const left = new Set(roomy)
  // The line farthest from those that stand is taken next, less round means being asked to stand farther off.
  while (kept.length < most && left.size > 0) {
    let best: (typeof roomy)[number] | null = null
    let bestWorth = Number.NEGATIVE_INFINITY
    for (const line of left) {
      const near = Math.min(ROOMY, ...kept.map((other) => clearance(line.from, line.muText, other.from, other.muText, edges.runs)))
      const far = Math.min(ROOMY, ...kept.map((other) => clearance(line.to, line.etaText, other.to, other.etaText, edges.runs)))
      if (near < 0 || far < 0) {
        left.delete(line)
        continue
      }
      // Room counts on both edges: a tail that is a hair's breadth of μ can be half of η.
      const worth = (near + far) / 2 - line.cost * UNROUND
      if (worth > bestWorth) {
        bestWorth = worth
        best = line
      }
    }
    // Rather fewer numbers than odd ones squeezed in.
    if (best === null || (bestWorth < LEAST_WORTH && kept.length >= 3)) break
    left.delete(best)
    const { cost: _, ...line } = best
    kept.push(line)
  }
  const inOrder = kept.toSorted((a, b) => a.mu - b.mu)
  // Decimals that are noughts for every line say nothing; under the identity there are none.
  const needed = Math.max(0, ...inOrder.map((line) => decimalsOf(Number(line.eta.toFixed(etaDecimals)))))
  return needed >= etaDecimals ? inOrder : inOrder.map((line) => ({ ...line, etaText: writtenFixed(line.eta, needed) }))
}

const lineAt = (mu: number, eta: number, edges: BridgeEdges): BridgeLine | null =>
  Number.isFinite(eta) && mu >= edges.mu.from && mu <= edges.mu.to && eta >= edges.eta.from && eta <= edges.eta.to
    ? { mu, eta, from: edges.mu.place(mu), to: edges.eta.place(eta) }
    : null

/** Half of what a label takes up along its edge, with room around it. */
const halfSize = (text: string, runs: BridgeEdges["runs"]): number =>
  runs === "down" ? TICK_SIZE * 0.62 : textWidth(text, TICK_SIZE) / 2 + 3

const clearance = (a: number, aText: string, b: number, bText: string, runs: BridgeEdges["runs"]): number =>
  Math.abs(a - b) - halfSize(aText, runs) - halfSize(bText, runs)

const withinEdge = (place: number, text: string, scale: Scale, runs: BridgeEdges["runs"]): boolean => {
  const half = halfSize(text, runs) - (runs === "down" ? 2 : 6)
  return place - half >= Math.min(scale.start, scale.end) && place + half <= Math.max(scale.start, scale.end)
}

interface RoundMean {
  readonly mu: number
  readonly text: string
  /** 0 for the roundest. */
  readonly cost: number
}

/**
 * Round means within a range: 1, 2, 5 and their like at every power of ten, and their distances from one where means are shares.
 * Two digits cost more than one, so that they appear only where there is room.
 */
function roundMeans(low: number, high: number): readonly RoundMean[] {
  const found = new Map<number, RoundMean>()
  const offer = (mu: number, decimals: number, cost: number): void => {
    if (mu < low || mu > high) return
    const round = Number(mu.toFixed(decimals))
    const known = found.get(round)
    if (known === undefined || known.cost > cost) found.set(round, { mu: round, text: writtenFixed(round, decimalsOf(round)), cost })
  }
  const largest = Math.max(Math.abs(low), Math.abs(high))
  const extent = high - low
  for (let power = -4; power <= 11; power += 1) {
    const unit = Number(`1e${power}`)
    if (unit > largest * 1.0001 || unit < extent * 1e-4) continue
    const decimals = Math.max(0, -power)
    for (let k = 1; k <= 9; k += 1) {
      // Far out in a tail a mean is read less often than in the middle.
      const tail = power <= -4 ? 0.9 : power === -3 ? 0.5 : 0
      const cost = tail * (high <= 1 ? 1 : 0) + (k === 1 || k === 5 ? 0 : k === 2 ? 0.2 : 0.6)
      for (const sign of [1, -1]) offer(sign * k * unit, decimals, cost)
      if (unit < 0.2 && high <= 1) offer(1 - k * unit, decimals, cost + (power < -1 && k !== 1 && k !== 5 ? 0.5 : 0))
    }
    // Two digits, where the range is narrow beside its distance from nought.
    const first = Math.ceil(low / unit)
    const last = Math.floor(high / unit)
    if (last - first <= 60) {
      for (let k = first; k <= last; k += 1) {
        offer(k * unit, decimals, k % 10 === 0 ? 0.1 : k % 5 === 0 ? 0.8 : k % 2 === 0 ? 1.2 : 1.6)
      }
    }
  }
  if (low <= 0 && high >= 0) offer(0, 0, 0)
  return [...found.values()]
}

/** The path of a joining line between two places on lines that face each other; it leaves and arrives at right angles to them. */
export function joinPath(runs: BridgeEdges["runs"], start: number, end: number, from: number, to: number): string {
  const middle = (start + end) / 2
  return runs === "down"
    ? `M${tenth(start)} ${tenth(from)}C${tenth(middle)} ${tenth(from)} ${tenth(middle)} ${tenth(to)} ${tenth(end)} ${tenth(to)}`
    : `M${tenth(from)} ${tenth(start)}C${tenth(from)} ${tenth(middle)} ${tenth(to)} ${tenth(middle)} ${tenth(to)} ${tenth(end)}`
}

/** The area between two joining lines, from edge to edge. */
export function joinArea(
  ways: { readonly runs: BridgeEdges["runs"]; readonly near: number; readonly far: number; readonly start: number; readonly end: number },
  from: readonly [number, number],
  to: readonly [number, number],
): string {
  const { runs, near, far, start, end } = ways
  const straight = (across: number, along: number): string =>
    runs === "down" ? `L${tenth(across)} ${tenth(along)}` : `L${tenth(along)} ${tenth(across)}`
  const bend = (a: number, b: number, atA: number, atB: number): string => joinPath(runs, a, b, atA, atB).replace(/^M[^C]*/, "")
  return `${straight(near, from[0]).replace("L", "M")}${straight(start, from[0])}${bend(start, end, from[0], to[0])}${straight(far, to[0])}${straight(far, to[1])}${straight(end, to[1])}${bend(end, start, to[1], from[1])}${straight(near, from[1])}Z`
}
