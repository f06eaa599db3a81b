// Proofs about a link written as an expression: that it is defined and finite, strictly monotone and differentiable at every mean of an open range,
// and which η it reaches. The range is cut into stretches until interval arithmetic decides each (bounds.ts); what it cannot decide
// stays undecided, with the interval left. Nothing is concluded from a grid of points, but a point may refute.

import type { Name } from "../../runtime/value.ts"
import { Bounding, type Bounds, type End, type Ranges } from "./bounds.ts"
import { derivative } from "./derivative.ts"
import * as exact from "./exact.ts"
import type { Expression, Trouble } from "./expression.ts"
import { Formula, type Given, variableSymbol } from "./formula.ts"
import { type Interval, interval, isNegative, isNotNegative, isNotPositive, isPositive, point } from "./interval.ts"
import { type Join, type Piece, piecesOf } from "./pieces.ts"

/** Proved; refuted, with a point that refutes it; or undecided, with the smallest interval left. */
export type Verdict =
  | { readonly verdict: "proved"; readonly witness: null }
  | { readonly verdict: "refuted"; readonly witness: number }
  | { readonly verdict: "undecided"; readonly witness: readonly [number, number] }

export type Proof = {
  readonly defined: Verdict
  readonly monotone: Verdict
  readonly differentiable: Verdict
  /** Whether η rises with μ; null where it is not known to do either. */
  readonly rising: boolean | null
  /** The limits of η at the lower and the upper end of the range; null where they are not known. */
  readonly ends: readonly [Interval | null, Interval | null]
  /** Pieces between their joins, each with its own derivative. */
  readonly pieces: readonly ProvedPiece[]
  /** Where the derivative is 0, though the link is strictly monotone. */
  readonly level: readonly number[]
  /** The families for which η is the natural parameter, up to a linear change. */
  readonly canonical: string | null
}

export type ProvedPiece = {
  readonly expression: Expression
  readonly slope: Expression
  /** The doubles between which it holds. */
  readonly from: number
  readonly to: number
}

export type Claim = {
  readonly eta: Expression
  readonly variable: Name
  readonly from: End
  readonly to: End
  readonly givens: ReadonlyMap<Name, Given>
  /** Constants that are not known yet: the claim is for every value between. */
  readonly ranges: Ranges
}

export type Proven = { readonly ok: true; readonly proof: Proof } | { readonly ok: false; readonly trouble: Trouble }

/** Stretches looked at in each piece before it is given up: some hundred milliseconds. */
const mostStretches = 4_000
/** A stretch this narrow, as a share of its place, is no further cut. */
const narrowest = 3e-14
/** Points kept to be looked at again for other constants. */
const mostLooked = 300
/** Stretches between two pauses. */
const pace = 25

/** @param pause  awaited every few milliseconds */
export async function proofOf(claim: Claim, pause: () => Promise<void>): Promise<Proven> {
  const { eta, variable, givens, from, to } = claim
  const cut = piecesOf(eta, variable, givens, from, to)
  if (!cut.ok) return cut
  const parts: Part[] = []
  for (const piece of cut.pieces) {
    const part = partOf(piece, claim)
    if (part === null)
      return {
        ok: false,
        trouble: {
          at: eta.at,
          code: "no-derivative",
          text: "It has no derivative that can be derived.",
          hint: "Write it by functions that are smooth.",
        },
      }
    parts.push(part)
  }
  for (const part of parts) await part.work(pause)
  return { ok: true, proof: concluded(parts, cut.joins, claim) }
}

function partOf(piece: Piece, claim: Claim): Part | null {
  const slope = derivative(piece.expression, claim.variable)
  return slope === null ? null : new Part(piece, slope, claim)
}

/** A stretch to be decided, for constants between these ends. */
type Stretch = {
  readonly from: End
  readonly to: End
  readonly at: Bounding
  readonly ranges: Ranges
  readonly cuts: number
  readonly slices: number
}

type Doubt = { readonly low: number; readonly high: number }

/** One piece of the link, and what has been found out about it. */
class Part {
  readonly piece: Piece
  readonly slope: Expression
  readonly formula: Formula
  readonly steps: readonly [number, number]
  readonly whole: Bounding
  /** A point at which it is not defined. */
  undefinedAt: number | null = null
  /** A point at which it is defined and has no slope. */
  kink: number | null = null
  /** Points at which the slope is certainly above and below 0. */
  rises: number | null = null
  falls: number | null = null
  /** A point within a stretch on which it is constant. */
  constantAt: number | null = null
  /** A point at which both signs of the slope meet. */
  turn: number | null = null
  readonly level: number[] = []
  readonly doubts: { readonly defined: Doubt[]; readonly monotone: Doubt[]; readonly differentiable: Doubt[] } = {
    defined: [],
    monotone: [],
    differentiable: [],
  }
  private readonly ranges: Ranges
  private readonly weak: Stretch[] = []
  private readonly looked: number[] = []

  constructor(piece: Piece, slope: Expression, { variable, givens, ranges }: Claim) {
    this.piece = piece
    this.slope = slope
    this.ranges = ranges
    this.formula = new Formula(variable, givens)
    const eta = this.formula.add(piece.expression)
    this.steps = [eta, this.formula.add(slope)]
    this.whole = new Bounding(this.formula, ranges)
  }

  /** Cuts until every stretch is decided, or may not be cut further. */
  async work(pause: () => Promise<void>): Promise<void> {
    const { from, to } = this.piece
    let queue: Stretch[] = [{ from, to, at: this.whole, ranges: this.ranges, cuts: 0, slices: 0 }]
    let looked = 0
    while (queue.length > 0) {
      const next: Stretch[] = []
      for (const stretch of queue) {
        if (looked++ % pace === 0) await pause()
        const open = this.decided(stretch)
        if (open === null) continue
        const halves = looked > mostStretches ? null : this.halves(stretch)
        if (halves === null) this.leave(stretch, open)
        else next.push(...halves)
      }
      queue = next
    }
    if (this.ranges.size > 0) this.turn = this.turnAtFixed()
    else {
      await this.findLevel(pause)
      if (this.rises !== null && this.falls !== null) this.turn = this.between(this.rises, this.falls, this.whole)
    }
  }

  /** With constants that are not known, rising for one value and falling for another refutes nothing; both for one value does. */
  private turnAtFixed(): number | null {
    if (this.rises === null || this.falls === null) return null
    for (const share of [0.5, 0, 1, 0.25, 0.75]) {
      const fixed = new Map([...this.ranges].map(([name, { lo, hi }]) => [name, point(lo + share * (hi - lo))] as const))
      const at = new Bounding(this.formula, fixed)
      let [up, down]: [number | null, number | null] = [null, null]
      for (const x of this.looked) {
        const [eta, slope] = at.at(x, this.steps) as [Bounds, Bounds]
        if (eta.defined !== 2 || slope.defined !== 2) continue
        if (isPositive(slope.values)) up = x
        if (isNegative(slope.values)) down = x
        if (up !== null && down !== null) return this.between(up, down, at)
      }
    }
    return null
  }

  /** Notes what is certain of a stretch; gives what is not, or null. */
  private decided(stretch: Stretch): Readonly<Record<"defined" | "monotone" | "differentiable", boolean>> | null {
    const [eta, slope] = stretch.at.over(stretch.from, stretch.to, this.steps) as [Bounds, Bounds]
    if (eta.defined === 0) this.undefinedAt ??= this.pointOf(stretch, 0)
    const hasSlope = eta.defined === 2 && slope.defined === 2
    const { values } = slope
    const middle = this.middle(stretch)
    if (hasSlope && values.lo === 0 && values.hi === 0) this.constantAt ??= middle
    if (hasSlope && isPositive(values)) this.rises ??= middle
    if (hasSlope && isNegative(values)) this.falls ??= middle
    const strict = hasSlope && (isPositive(values) || isNegative(values))
    // Where the slope may be 0 it is so at single points only, if there is a power series and the link is not constant.
    const signed = strict || (hasSlope && slope.analytic && (isNotNegative(values) || isNotPositive(values)))
    if (signed && !strict) {
      this.weak.push(stretch)
      this.lookAround(stretch)
    }
    const open = {
      defined: eta.defined === 1 && this.undefinedAt === null,
      monotone: !signed && !(this.rises !== null && this.falls !== null) && eta.defined !== 0,
      differentiable: !hasSlope && this.kink === null && eta.defined !== 0,
    }
    return open.defined || open.monotone || open.differentiable ? open : null
  }

  /** Both halves, and what the point between them tells; null where the stretch is too narrow to be cut. */
  private halves(stretch: Stretch): readonly Stretch[] | null {
    const { from, to, ranges, cuts, slices } = stretch
    if (ranges.size > 0 && 2 * slices <= cuts) {
      const halves = slicesOf(ranges)
      if (halves !== null)
        return halves.map((half) => ({ from, to, ranges: half, at: new Bounding(this.formula, half), cuts, slices: slices + 1 }))
    }
    const middle = this.middle(stretch)
    const x = stretch.at.stretch(from, to)
    if (
      middle === null ||
      (x.hi - x.lo <= narrowest * Math.max(Math.abs(x.lo), Math.abs(x.hi)) && from.type === "inside" && to.type === "inside")
    )
      return null
    this.look(stretch.at, middle)
    const cut: End = { type: "inside", at: middle }
    return [
      { ...stretch, to: cut, cuts: cuts + 1 },
      { ...stretch, from: cut, cuts: cuts + 1 },
    ]
  }

  /** A stretch decided at once has been looked at nowhere: at least some point has to show that it is not constant. */
  private lookAround(stretch: Stretch): void {
    const middle = this.middle(stretch)
    if (middle === null) return
    const cut: End = { type: "inside", at: middle }
    for (const x of [middle, this.middle({ ...stretch, to: cut }), this.middle({ ...stretch, from: cut })])
      if (x !== null) this.look(stretch.at, x)
  }

  /** What one point tells for certain. */
  private look(bounding: Bounding, x: number): void {
    if (this.looked.length < mostLooked) this.looked.push(x)
    const [eta, slope] = bounding.at(x, this.steps) as [Bounds, Bounds]
    if (eta.defined === 0) this.undefinedAt ??= x
    if (eta.defined === 2 && slope.defined === 0 && this.kink === null && this.isKink(bounding, x)) this.kink = x
    if (eta.defined === 2 && slope.defined === 2) {
      if (isPositive(slope.values)) this.rises ??= x
      if (isNegative(slope.values)) this.falls ??= x
    }
  }

  /** Whether the slopes on both sides of a point stay apart: by the mean value theorem there is then none at the point. */
  private isKink(bounding: Bounding, x: number): boolean {
    const place = exact.double(x)
    if (place === null) return false
    const reach = Math.max(1e-6, Math.abs(x) * 1e-6)
    const at: End = { type: "limit", place }
    const [left] = bounding.over({ type: "inside", at: x - reach }, at, [this.steps[1]])
    const [right] = bounding.over(at, { type: "inside", at: x + reach }, [this.steps[1]])
    if (left === undefined || right === undefined || left.defined !== 2 || right.defined !== 2) return false
    return left.values.hi < right.values.lo || right.values.hi < left.values.lo
  }

  private leave(stretch: Stretch, open: Readonly<Record<"defined" | "monotone" | "differentiable", boolean>>): void {
    const { lo, hi } = stretch.at.stretch(stretch.from, stretch.to)
    for (const property of ["defined", "monotone", "differentiable"] as const)
      if (open[property]) this.doubts[property].push({ low: lo, high: hi })
  }

  /** A point in a stretch that holds one at which the formula is not defined. */
  private pointOf(stretch: Stretch, defined: 0): number {
    let [from, to] = [stretch.from, stretch.to]
    for (let k = 0; k < 200; k++) {
      const middle = this.middle({ from, to, at: stretch.at })
      if (middle === null) break
      const cut: End = { type: "inside", at: middle }
      if (stretch.at.at(middle, [this.steps[0]])[0]?.defined === defined) return middle
      if (stretch.at.over(from, cut, [this.steps[0]])[0]?.defined === defined) to = cut
      else if (stretch.at.over(cut, to, [this.steps[0]])[0]?.defined === defined) from = cut
      else break
    }
    const { lo, hi } = stretch.at.stretch(from, to)
    return lo === -Infinity ? hi : hi === Infinity ? lo : lo + (hi - lo) / 2
  }

  /** Where between two points the slope turns its sign. */
  private between(a: number, b: number, bounding: Bounding): number {
    const sign = (x: number): number => {
      const slope = bounding.at(x, [this.steps[1]])[0]
      return slope === undefined || slope.defined !== 2 ? 0 : isPositive(slope.values) ? 1 : isNegative(slope.values) ? -1 : 0
    }
    let [low, high] = a < b ? [a, b] : [b, a]
    const atLow = sign(low)
    for (let k = 0; k < 2_000; k++) {
      const middle = middleOf(low, high)
      if (middle === null) break
      const at = sign(middle)
      if (at === 0) return middle
      if (at === atLow) low = middle
      else high = middle
    }
    return low
  }

  /** Follows the stretches on which the slope may be 0 without turning its sign, down to a point. */
  private async findLevel(pause: () => Promise<void>): Promise<void> {
    let looked = 0
    for (const start of this.weak.slice(0, 20)) {
      let queue = [start]
      for (let k = 0; k < 120 && queue.length > 0 && queue.length < 8; k++) {
        const next: Stretch[] = []
        for (const stretch of queue) {
          if (looked++ % pace === 0) await pause()
          const middle = this.middle(stretch)
          const { lo, hi } = stretch.at.stretch(stretch.from, stretch.to)
          if (middle === null || hi - lo < 1e-12 * Math.max(1e-300, Math.abs(lo), Math.abs(hi))) {
            const place = Math.abs(lo) < Math.abs(hi) ? lo : hi
            if (!this.level.some((other) => Math.abs(other - place) <= 1e-9 * Math.max(1e-300, Math.abs(place)))) this.level.push(place)
            continue
          }
          const at0 = stretch.at.at(middle, [this.steps[1]])[0]
          if (at0?.defined === 2 && at0.values.lo === 0 && at0.values.hi === 0) {
            if (!this.level.includes(middle)) this.level.push(middle)
            continue
          }
          const cut: End = { type: "inside", at: middle }
          for (const half of [
            { ...stretch, to: cut },
            { ...stretch, from: cut },
          ]) {
            const slope = half.at.over(half.from, half.to, [this.steps[1]])[0]
            // An open end at 0 is not taken; nor is 0 there.
            if (slope !== undefined && !isPositive(slope.values) && !isNegative(slope.values)) next.push(half)
            else if (this.rises === null && slope !== undefined && isPositive(slope.values)) this.rises = this.middle(half)
            else if (this.falls === null && slope !== undefined && isNegative(slope.values)) this.falls = this.middle(half)
          }
        }
        queue = next
      }
    }
    // Ends of stretches may be points at which the slope is exactly 0.
    for (const { from, to, at } of this.weak) {
      for (const end of [from, to]) {
        if (end.type !== "inside") continue
        const slope = at.at(end.at, [this.steps[1]])[0]
        if (slope?.defined === 2 && slope.values.lo === 0 && slope.values.hi === 0 && !this.level.includes(end.at)) this.level.push(end.at)
      }
    }
    this.level.sort((a, b) => a - b)
  }

  private middle({ from, to, at }: Pick<Stretch, "from" | "to" | "at">): number | null {
    const low = at.doubles(from)
    const high = at.doubles(to)
    // A limit lies between two doubles; the cut stays clear of both, and of every place a constant not yet known may put it.
    return middleOf(low.hi, high.lo)
  }
}

/** A double between two others, on the scale on which they are far apart; null where there is none. */
export function middleOf(low: number, high: number): number | null {
  const middle = unchecked(low, high)
  return middle > low && middle < high ? middle : null
}

function unchecked(low: number, high: number): number {
  if (low < 0 && high > 0) return 0
  if (high <= 0) return -unchecked(-high, -low)
  if (high === Infinity) return low < 1 ? 1 : low * 16
  if (low === 0) return high / 4
  return high > 16 * low ? Math.sqrt(low) * Math.sqrt(high) : low + (high - low) / 2
}

/** The ranges with the widest of them halved; null where all are narrow. */
function slicesOf(ranges: Ranges): readonly Ranges[] | null {
  let widest: readonly [string, Interval] | null = null
  let most = 1e-9
  for (const [name, range] of ranges) {
    const width = (range.hi - range.lo) / Math.max(Math.abs(range.lo), Math.abs(range.hi))
    if (width > most) [widest, most] = [[name, range], width]
  }
  if (widest === null) return null
  const [name, { lo, hi }] = widest
  const middle = lo + (hi - lo) / 2
  return [new Map([...ranges, [name, interval(lo, middle)]]), new Map([...ranges, [name, interval(middle, hi)]])]
}

const proved: Verdict = { verdict: "proved", witness: null }
const refuted = (witness: number): Verdict => ({ verdict: "refuted", witness })

/** The narrowest of the intervals left, neighbours taken together. */
function undecided(doubts: readonly Doubt[]): Verdict {
  const sorted = [...doubts].sort((a, b) => a.low - b.low)
  const joined: { low: number; high: number }[] = []
  for (const { low, high } of sorted) {
    const last = joined.at(-1)
    if (last !== undefined && low <= last.high) last.high = Math.max(last.high, high)
    else joined.push({ low, high })
  }
  let best = joined[0] as Doubt
  for (const each of joined) if (each.high - each.low < best.high - best.low) best = each
  return { verdict: "undecided", witness: [best.low, best.high] }
}

function concluded(parts: readonly Part[], joins: readonly Join[], claim: Claim): Proof {
  const met = joins.map((join, k) => meeting(parts[k] as Part, parts[k + 1] as Part, join))
  const all = (property: "defined" | "monotone" | "differentiable"): Doubt[] => parts.flatMap(({ doubts }) => doubts[property])
  const firstOf = (values: readonly (number | null)[]): number | null => values.find((value) => value !== null) ?? null

  const undefinedAt = firstOf([...parts.map((part) => part.undefinedAt), ...met.map(({ at, defined }) => (defined === "no" ? at : null))])
  const definedDoubts = [...all("defined"), ...met.flatMap(({ at, defined }) => (defined === "unknown" ? [{ low: at, high: at }] : []))]
  const defined = undefinedAt !== null ? refuted(undefinedAt) : definedDoubts.length > 0 ? undecided(definedDoubts) : proved

  const kink = firstOf([...parts.map((part) => part.kink), ...met.map(({ at, smooth }) => (smooth === "no" ? at : null))])
  const smoothDoubts = [...all("differentiable"), ...met.flatMap(({ at, smooth }) => (smooth === "unknown" ? [{ low: at, high: at }] : []))]
  const notThere = defined.verdict === "refuted" ? defined.witness : null
  const differentiable =
    kink !== null ? refuted(kink) : notThere !== null ? refuted(notThere) : smoothDoubts.length > 0 ? undecided(smoothDoubts) : proved

  const rises = parts.some((part) => part.rises !== null)
  const falls = parts.some((part) => part.falls !== null)
  const monotone = monotoneVerdict(parts, met, defined, rises, falls)
  const rising = monotone.verdict === "refuted" || rises === falls ? null : rises
  return {
    defined,
    monotone,
    differentiable,
    rising,
    ends: [endOf(parts[0] as Part, "low"), endOf(parts.at(-1) as Part, "high")],
    pieces: parts.map(({ piece, slope, whole }) => ({
      expression: piece.expression,
      slope,
      from: whole.doubles(piece.from).hi,
      to: whole.doubles(piece.to).lo,
    })),
    level: monotone.verdict === "proved" ? parts.flatMap((part) => part.level) : [],
    canonical: parts.length === 1 && claim.ranges.size === 0 ? canonicalFamily(parts[0] as Part) : null,
  }
}

function monotoneVerdict(parts: readonly Part[], met: readonly Meeting[], defined: Verdict, rises: boolean, falls: boolean): Verdict {
  for (const { turn, constantAt } of parts) {
    if (turn !== null) return refuted(turn)
    if (constantAt !== null) return refuted(constantAt)
  }
  if (rises && falls) {
    // Each piece goes its own way, so the turn is where two meet.
    const at = met.find((_, k) => (parts[k]?.rises !== null) !== (parts[k + 1]?.rises !== null))?.at
    if (at !== undefined) return refuted(at)
  }
  const jump = met.find(({ step }) => step === (rises ? "down" : "up") && rises !== falls)
  if (jump !== undefined) return refuted(jump.at)
  const [first, last] = [parts[0] as Part, parts.at(-1) as Part]
  const [low, high] = [first.whole.doubles(first.piece.from), last.whole.doubles(last.piece.to)]
  if (defined.verdict === "refuted") {
    // Beside a point at which it is not defined it may rise to infinity and begin anew below.
    const { witness } = defined
    return comesBack(parts, witness, rises) ? refuted(witness) : { verdict: "undecided", witness: [witness, witness] }
  }
  const doubts = [
    ...parts.flatMap((part) => part.doubts.monotone),
    ...parts.flatMap((part) => part.doubts.defined),
    ...met.flatMap(({ at, step }) => (step === "unknown" ? [{ low: at, high: at }] : [])),
  ]
  if (doubts.length > 0) return undecided(doubts)
  // A formula of these functions is analytic on each piece: a slope that is somewhere not 0 is 0 at single points only.
  if (parts.every((part) => part.rises !== null || part.falls !== null) && rises !== falls) return proved
  return { verdict: "undecided", witness: [low.lo, high.hi] }
}

/** Whether values on both sides of a point contradict the direction of the slope. */
function comesBack(parts: readonly Part[], at: number, rises: boolean): boolean {
  const value = (x: number): Interval | null => {
    const part = parts.find(({ piece, whole }) => x > whole.doubles(piece.from).lo && x < whole.doubles(piece.to).hi)
    const bounds = part?.whole.at(x, [part.steps[0]])[0]
    return bounds?.defined === 2 ? bounds.values : null
  }
  for (const share of [1e-9, 1e-6, 1e-3, 0.05]) {
    const reach = Math.max(share, share * Math.abs(at))
    const [before, after] = [value(at - reach), value(at + reach)]
    if (before === null || after === null) continue
    if (rises ? before.lo > after.hi : before.hi < after.lo) return true
  }
  return false
}

type Meeting = {
  readonly at: number
  readonly defined: "yes" | "no" | "unknown"
  readonly smooth: "yes" | "no" | "unknown"
  /** What η does there: stays, steps up or down, or it is not known. */
  readonly step: "none" | "up" | "down" | "unknown"
}

/** Whether two pieces meet in value and in slope. */
function meeting(before: Part, after: Part, { place, expression }: Join): Meeting {
  const around = before.whole.enclosure(place)
  const at = around === null ? Number.NaN : around.lo + (around.hi - around.lo) / 2
  const values = compared(before, after, place, 0)
  const slopes = compared(before, after, place, 1)
  // What holds at the join is one of the two pieces, with its value or without one.
  const owner = expression === after.piece.expression || sameShape(expression, after.piece.expression) ? after : before
  const value = owner.whole.exactAt(owner.steps[0], place)
  const limit = owner === before ? endOf(before, "high") : endOf(after, "low")
  const defined = value !== null && owner.whole.enclosure(value) !== null ? "yes" : limit !== null && isInfinite(limit) ? "no" : "unknown"
  const smooth =
    values === "equal" && slopes === "equal"
      ? "yes"
      : values === "up" || values === "down" || slopes === "up" || slopes === "down"
        ? "no"
        : "unknown"
  return { at, defined, smooth, step: values === "equal" ? "none" : values }
}

const sameShape = (a: Expression, b: Expression): boolean => JSON.stringify(a) === JSON.stringify(b)
const isInfinite = ({ lo, hi }: Interval): boolean => lo === hi && (lo === Infinity || lo === -Infinity)

/** Whether the limits of both pieces at their join are equal, exactly; or certainly apart; or neither is known. */
function compared(before: Part, after: Part, place: exact.Fraction, step: 0 | 1): "equal" | "up" | "down" | "unknown" {
  const [a, b] = [before.whole.exactAt(before.steps[step], place), after.whole.exactAt(after.steps[step], place)]
  if (a !== null && b !== null && exact.areEqual(a, b)) return "equal"
  const left = endOf(before, "high", step)
  const right = endOf(after, "low", step)
  if (left === null || right === null) return "unknown"
  if (left.hi < right.lo) return "up"
  if (left.lo > right.hi) return "down"
  // Both infinite: there is no slope, and no value.
  return isInfinite(left) && isInfinite(right) ? (left.lo < 0 ? "down" : "up") : "unknown"
}

/** The limit of η, or of its slope, at an end of a piece: as the end of shorter and shorter stretches, until it is known. */
function endOf({ piece, whole, steps }: Part, side: "low" | "high", step: 0 | 1 = 0): Interval | null {
  const { from, to } = piece
  let other: End = side === "low" ? to : from
  for (let k = 0; k < 60; k++) {
    const [bounds] = side === "low" ? whole.over(from, other, [steps[step]]) : whole.over(other, to, [steps[step]])
    const limit = bounds?.[side] ?? null
    if (limit !== null) return limit
    const [low, high] = side === "low" ? [from, other] : [other, to]
    const middle = middleOf(whole.doubles(low).hi, whole.doubles(high).lo)
    if (middle === null) return null
    other = { type: "inside", at: middle }
  }
  return null
}

/** V(μ) of the families whose canonical link has no parameter. */
const variances: readonly (readonly [string, exact.Fraction | null])[] = [
  ["normal", exact.one],
  ["binomial", exact.less(exact.symbol(variableSymbol), exact.power(exact.symbol(variableSymbol), 2) ?? exact.zero)],
  ["poisson", exact.symbol(variableSymbol)],
  ["gamma", exact.power(exact.symbol(variableSymbol), 2)],
  ["inverse_gaussian", exact.power(exact.symbol(variableSymbol), 3)],
]

/** The canonical link has g'(μ)·V(μ) constant. McCullagh & Nelder (1989), §2.2.4. */
function canonicalFamily({ formula, steps }: Part): string | null {
  const slope = formula.steps[steps[1]]?.fraction ?? null
  if (slope === null) return null
  const found = variances.find(([, variance]) => {
    const product = variance === null ? null : exact.times(slope, variance)
    return product !== null && !exact.isZero(product) && exact.isFreeOf(product, variableSymbol)
  })
  return found?.[0] ?? null
}
