// Bounds of a formula and of its slope over a stretch of the variable, as intervals that are certain to hold every value. Each step is bounded by
// interval arithmetic from the steps it is made of, and made narrower by its own slope: a step that only rises lies between its values at the
// ends, and any other no farther from them than its slope allows. At the open ends of a range the values are limits.

import type { Operation } from "../statistics/own-link.ts"
import * as exact from "./exact.ts"
import { type Formula, type Step, variableSymbol } from "./formula.ts"
import * as of from "./interval.ts"
import { everything, type Interval, interval, isNegative, isNotNegative, isNotPositive, isPositive, point } from "./interval.ts"

/** One end of a stretch: a double inside the range; or an end of a piece, exactly, which belongs to no stretch. */
export type End =
  | { readonly type: "inside"; readonly at: number }
  | { readonly type: "limit"; readonly place: exact.Fraction }
  | { readonly type: "infinity"; readonly sign: 1 | -1 }

/** Everything known of one step over one stretch. */
export type Bounds = {
  /** Whether it is defined: at every point (2), it cannot be told (1), not at every point (0). */
  readonly defined: 0 | 1 | 2
  readonly values: Interval
  /** True where it is known to have a power series at every point: then it is constant on no part of a stretch, or on all of it. */
  readonly analytic: boolean
  /** Its slope; null where it cannot be bounded. */
  readonly slope: Interval | null
  /** Its values or limits at the two ends; null where they are not known. */
  readonly low: Interval | null
  readonly high: Interval | null
}

/** Between which doubles the constants lie that are not yet known, by symbol. */
export type Ranges = ReadonlyMap<string, Interval>

type Certain = 0 | 1 | 2

/** Bounds of all steps of one formula. Values at points are kept, as neighbouring stretches share them. */
export class Bounding {
  private readonly steps: readonly Step[]
  private readonly symbols = new Symbols()
  private readonly points = new Map<number, readonly (Interval | null)[]>()
  private readonly exactly = new Map<string, readonly (exact.Fraction | null)[]>()

  constructor(formula: Formula, ranges: Ranges) {
    this.steps = formula.steps
    this.symbols.ranges = ranges
  }

  /** Bounds of the steps with these numbers between two ends. */
  over(from: End, to: End, asked: readonly number[]): readonly Bounds[] {
    const count = Math.max(...asked) + 1
    const all: Bounds[] = []
    const low = this.atEnd(from, count)
    const high = this.atEnd(to, count)
    const x = this.stretch(from, to)
    for (let k = 0; k < count; k++) {
      const step = this.steps[k] as Step
      const bounds = this.bounds(step, x, all)
      const limits = [this.limit(k, from, 1, low, all), this.limit(k, to, -1, high, all)] as const
      all.push(narrowed(bounds, limits[0], limits[1], x))
    }
    return asked.map((k) => this.asFraction(all[k] as Bounds, this.steps[k] as Step, x))
  }

  /** A rational function is bounded a second time as one quotient, in which much has cancelled. */
  private asFraction(bounds: Bounds, { fraction, free }: Step, x: Interval): Bounds {
    if (bounds.defined !== 2 || fraction === null || free) return bounds
    const values = this.symbols.enclosure(fraction, x)
    return values === null ? bounds : { ...bounds, values: of.common(bounds.values, values) }
  }

  /** Values of the steps at one double, each null where it is not defined there, and whether that is certain. */
  at(x: number, asked: readonly number[]): readonly Bounds[] {
    const end: End = { type: "inside", at: x }
    return this.over(end, end, asked)
  }

  /** The value of a step at an end of a piece, exactly, and as an interval. */
  exactAt(k: number, place: exact.Fraction): exact.Fraction | null {
    return this.exactValues(place, k + 1)[k] ?? null
  }

  enclosure(fraction: exact.Fraction): Interval | null {
    return this.symbols.enclosure(fraction)
  }

  /** The doubles around the stretch. */
  stretch(from: End, to: End): Interval {
    const lower = this.doubles(from)
    const upper = this.doubles(to)
    return interval(lower.lo, upper.hi, from.type !== "inside", to.type !== "inside")
  }

  doubles(end: End): Interval {
    if (end.type === "inside") return point(end.at)
    if (end.type === "infinity") return infinite(end.sign)
    return this.symbols.enclosure(end.place) ?? everything
  }

  /** Values at a double inside, by interval arithmetic on points; null entries at other ends, which have limits. */
  private atEnd(end: End, count: number): readonly (Interval | null)[] | null {
    if (end.type !== "inside") return null
    const known = this.points.get(end.at)
    if (known !== undefined && known.length >= count) return known
    const all: Bounds[] = []
    const x = point(end.at)
    for (let k = 0; k < count; k++) all.push(this.bounds(this.steps[k] as Step, x, all))
    const values = all.map(({ values: v, defined }) => (defined === 2 ? v : null))
    this.points.set(end.at, values)
    return values
  }

  /** One step from those it is made of, with its slope. */
  private bounds(step: Step, x: Interval, all: readonly Bounds[]): Bounds {
    const { operation, a, b, fraction, free, still } = step
    if (operation === "variable") return { ...unknown, defined: 2, values: x, analytic: true, slope: point(1) }
    const left = all[a]
    const right = all[b]
    // A step that is one number, whatever it is made of, is that number; that its parts are defined is still asked.
    const constant = fraction !== null && still ? this.symbols.number(fraction) : null
    if (operation === "constant")
      return {
        ...unknown,
        defined: 2,
        values: constant ?? interval(of.down(step.value), of.up(step.value)),
        analytic: true,
        slope: point(0),
      }
    if (left === undefined) return unknown
    const parts = Math.min(left.defined, right?.defined ?? 2) as Certain
    const turns = step.turns < 0 ? null : (all[step.turns]?.values ?? null)
    const found = right === undefined ? ofOne(operation, left, turns) : ofTwo(operation, left, right, wholeExponent(this.steps[b] as Step))
    const defined = (parts === 0 || found.defined === 0 ? 0 : Math.min(parts, found.defined)) as Certain
    const analytic = found.analytic && left.analytic && (right?.analytic ?? true)
    if (constant !== null && defined === 2) return { ...unknown, defined, values: constant, analytic, slope: point(0) }
    return { ...found, defined, analytic, slope: free ? point(0) : defined === 2 ? found.slope : null }
  }

  /** The value or limit of a step at one end. `inward` is the side on which the stretch lies: 1 above the end, −1 below it. */
  private limit(k: number, end: End, inward: 1 | -1, inside: readonly (Interval | null)[] | null, all: readonly Bounds[]): Interval | null {
    if (end.type === "inside") return inside?.[k] ?? null
    const { operation, a, b, fraction, turns } = this.steps[k] as Step
    if (fraction !== null) {
      const found = this.approached(fraction, end, inward)
      if (found !== null) return found
    }
    if (end.type === "limit") {
      const value = this.exactValues(end.place, k + 1)[k] ?? null
      const around = value === null ? null : this.symbols.enclosure(value)
      if (around !== null) return around
    }
    const side = (of: Bounds | undefined): Interval | null => (of === undefined ? null : inward === 1 ? of.low : of.high)
    const [left, right] = [side(all[a]), side(all[b])]
    if (operation === "less" || operation === "plus") {
      const logarithms = operation === "less" ? this.quotientOfLogarithms(a, b, end, inward) : null
      if (logarithms !== null) return logarithms
      // Beside an infinity, what stays bounded does not count.
      if (left !== null && isInfinite(left) && isBounded(all[b])) return left
      if (right !== null && isInfinite(right) && isBounded(all[a])) return operation === "less" ? of.minus(right) : right
    }
    if (left === null || (b >= 0 && right === null)) return null
    if (right === null)
      return limitOfOne(operation, left, all[a] as Bounds, turns < 0 ? null : { at: side(all[turns]), all: all[turns] as Bounds })
    const n = operation === "power" ? wholeExponent(this.steps[b] as Step) : null
    if (n !== null) return limitOfWholePower(left, n, all[a] as Bounds)
    return limitOfTwo(operation, left, right, all[a] as Bounds, all[b] as Bounds)
  }

  /** log u − log v is log(u/v), which has a limit where both have none. */
  private quotientOfLogarithms(a: number, b: number, end: Exclude<End, { type: "inside" }>, inward: 1 | -1): Interval | null {
    const [left, right] = [this.steps[a], this.steps[b]]
    if (left?.operation !== "log" || right?.operation !== "log") return null
    const [u, v] = [this.steps[left.a]?.fraction ?? null, this.steps[right.a]?.fraction ?? null]
    const quotient = u === null || v === null ? null : exact.over(u, v)
    const at = quotient === null ? null : this.approached(quotient, end, inward)
    return at === null || at.lo < 0 ? null : of.logarithm(at)
  }

  private approached(fraction: exact.Fraction, end: Exclude<End, { type: "inside" }>, inward: 1 | -1): Interval | null {
    const found =
      end.type === "infinity" ? exact.approachFar(fraction, variableSymbol) : exact.approach(fraction, variableSymbol, end.place)
    if (found === null) return null
    if (found.type === "value") return this.symbols.enclosure(found.value)
    if (found.type === "zero") return point(0)
    const times = this.symbols.enclosure(found.times)
    if (times === null || !of.withoutZero(times)) return null
    const odd = found.order % 2 !== 0
    const turned = odd && (end.type === "infinity" ? end.sign === -1 : inward === -1)
    return infinite(isPositive(times) !== turned ? 1 : -1)
  }

  private exactValues(place: exact.Fraction, count: number): readonly (exact.Fraction | null)[] {
    const key = exact.named(place)
    const known = this.exactly.get(key)
    if (known !== undefined && known.length >= count) return known
    const values: (exact.Fraction | null)[] = []
    for (let k = 0; k < count; k++) values.push(this.exactValue(this.steps[k] as Step, place, values))
    this.exactly.set(key, values)
    return values
  }

  private exactValue(step: Step, place: exact.Fraction, values: readonly (exact.Fraction | null)[]): exact.Fraction | null {
    const { operation, fraction } = step
    if (operation === "variable") return place
    if (operation === "constant") return fraction
    const [a, b] = [values[step.a] ?? null, values[step.b] ?? null]
    if (a === null || (step.b >= 0 && b === null)) return null
    return this.symbols.result(operation, a, b)
  }
}

const unknown: Bounds = { defined: 1, values: everything, analytic: false, slope: null, low: null, high: null }
const undefinedHere: Bounds = { ...unknown, defined: 0 }
const infinite = (sign: 1 | -1): Interval => ({ lo: sign * Infinity, hi: sign * Infinity, loOpen: true, hiOpen: true })

/** A whole number as the exponent; null for any other. */
function wholeExponent({ fraction }: Step): number | null {
  const number = fraction === null ? null : exact.numberOf(fraction)
  return number === null || number[1] !== 1n ? null : Number(number[0])
}

const isBounded = (of: Bounds | undefined): boolean => of !== undefined && of.defined === 2 && hasFiniteEnds(of.values)

const hasFiniteEnds = ({ lo, hi }: Interval): boolean => lo > -Infinity && hi < Infinity

/** Narrower by the slope, where the step is known to have one at every point of the stretch. */
function narrowed(bounds: Bounds, low: Interval | null, high: Interval | null, x: Interval): Bounds {
  const { slope, defined } = bounds
  let values = bounds.values
  if (defined === 2 && slope !== null && (low !== null || high !== null)) {
    const rises = isNotNegative(slope)
    if (rises || isNotPositive(slope)) {
      const [least, most] = rises ? [low, high] : [high, low]
      const [leastOpen, mostOpen] = rises ? [x.loOpen, x.hiOpen] : [x.hiOpen, x.loOpen]
      const strictly = of.withoutZero(slope)
      const range = interval(least?.lo ?? -Infinity, most?.hi ?? Infinity, leastOpen && strictly, mostOpen && strictly)
      // A limit that is only known between two doubles is not known to be left out.
      const known = interval(range.lo, range.hi, range.loOpen && least?.lo === least?.hi, range.hiOpen && most?.lo === most?.hi)
      values = of.common(values, known)
    } else if (hasFiniteEnds(x)) {
      const width = of.less(interval(x.lo, x.hi), point(x.lo))
      if (low !== null && hasFiniteEnds(low)) values = of.common(values, of.plus(low, of.times(slope, width)))
      if (high !== null && hasFiniteEnds(high)) values = of.common(values, of.less(high, of.times(slope, width)))
    }
  }
  return { ...bounds, values, low, high }
}

const found = (values: Interval, slope: Interval | null, defined: Certain = 2, analytic = true): Bounds => ({
  defined,
  values,
  analytic,
  slope,
  low: null,
  high: null,
})

/** f'(u)·u', where both are known. */
const chained = (outer: Interval | null, inner: Bounds): Interval | null =>
  outer === null || inner.slope === null ? null : of.times(outer, inner.slope)

/** Whether an argument is in an open domain above `low` and below `high`: everywhere, maybe, or not everywhere. */
function inDomain(u: Bounds, low: number, high: number): Certain {
  const { values: v } = u
  const above = v.lo > low || (v.lo === low && v.loOpen)
  const below = v.hi < high || (v.hi === high && v.hiOpen)
  if (above && below) return 2
  const outside = (end: Interval | null): boolean => end !== null && (end.hi < low || end.lo > high)
  if (v.hi < low || v.lo > high || (v.hi === low && v.lo === low) || (v.lo === high && v.hi === high)) return 0
  // The step is continuous where it is defined, so an end beyond the domain takes points of the stretch with it.
  return u.defined === 2 && (outside(u.low) || outside(u.high)) ? 0 : 1
}

/** The part of an argument that lies in the domain: what is bounded are the values where there are any. */
const within = (v: Interval, low: number, high: number): Interval =>
  interval(Math.max(v.lo, low), Math.min(v.hi, high), v.lo > low ? v.loOpen : true, v.hi < high ? v.hiOpen : true)

function ofOne(operation: Operation, u: Bounds, turns: Interval | null): Bounds {
  const v = u.values
  const simple = (values: Interval, outer: Interval | null): Bounds => found(values, chained(outer, u))
  const restricted = (low: number, high: number, value: of.Monotone, outer: (v: Interval, values: Interval) => Interval): Bounds => {
    const domain = inDomain(u, low, high)
    if (domain === 0) return undefinedHere
    const inside = within(v, low, high)
    const values = value(inside)
    return found(values, domain === 2 ? chained(outer(inside, values), u) : null, domain)
  }
  const one = point(1)
  switch (operation) {
    case "minus":
      return found(of.minus(v), u.slope === null ? null : of.minus(u.slope))
    case "exp": {
      const values = of.exponential(v)
      return simple(values, values)
    }
    case "expm1":
      return simple(of.exponentialLessOne(v), of.exponential(v))
    case "log":
      return restricted(0, Infinity, of.logarithm, (inside) => of.over(one, inside))
    case "log10":
      return restricted(0, Infinity, of.decimalLogarithm, (inside) => of.over(one, of.times(inside, of.logarithm(point(10)))))
    case "log1p":
      return restricted(-1, Infinity, of.logarithmOfOneMore, (inside) => of.over(one, of.plus(one, inside)))
    case "square_root": {
      const domain = inDomain(u, 0, Infinity)
      // 0 has a root, but no slope.
      const known = isNotNegative(v) ? 2 : domain
      if (v.hi < 0 || (domain === 0 && v.hi !== 0)) return undefinedHere
      const values = of.squareRoot(interval(Math.max(0, v.lo), Math.max(0, v.hi), v.lo > 0 ? v.loOpen : v.lo === 0 && v.loOpen, v.hiOpen))
      const hasSlope = isPositive(values)
      return found(values, hasSlope ? chained(of.over(one, of.times(point(2), values)), u) : null, known, hasSlope)
    }
    case "asin":
      return restricted(-1, 1, of.arcSine, (inside) => {
        const rest = of.times(of.less(one, inside), of.plus(one, inside))
        return isPositive(rest) ? of.over(one, of.squareRoot(rest)) : interval(1, Infinity)
      })
    case "atan":
      return simple(of.arcTangent(v), of.over(one, of.plus(one, of.square(v))))
    case "tanh": {
      const values = of.hyperbolicTangent(v)
      return simple(values, of.less(one, of.square(values)))
    }
    case "normal_cdf":
      return simple(of.normalShare(v), normalDensity(v))
    case "normal_quantile":
      return restricted(0, 1, of.normalPoint, (_, values) => of.over(one, normalDensity(values)))
    case "logit":
      return restricted(0, 1, of.logOdds, (inside) => of.over(one, of.times(inside, of.less(one, inside))))
    case "inverse_logit": {
      const values = of.shareOfLogOdds(v)
      return simple(values, of.times(values, of.less(one, values)))
    }
    case "sin": {
      const t = turns ?? of.halfTurns(v)
      return simple(of.sine(t), of.cosine(t))
    }
    case "cos": {
      const t = turns ?? of.halfTurns(v)
      return simple(of.cosine(t), of.minus(of.sine(t)))
    }
    case "tan": {
      const t = turns ?? of.halfTurns(v)
      const values = of.tangent(t)
      if (values !== null) return simple(values, of.plus(one, of.square(values)))
      return t.lo === t.hi && Math.abs(t.lo - Math.round(t.lo)) === 0.5 ? undefinedHere : unknown
    }
    default:
      return unknown
  }
}

const normalDensity = (v: Interval): Interval =>
  of.over(of.exponential(of.minus(of.over(of.square(v), point(2)))), of.squareRoot(of.times(point(2), of.pi)))

function ofTwo(operation: Operation, left: Bounds, right: Bounds, exponent: number | null): Bounds {
  const [a, b] = [left.values, right.values]
  const [da, db] = [left.slope, right.slope]
  const slopes = (make: (x: Interval, y: Interval) => Interval): Interval | null => (da === null || db === null ? null : make(da, db))
  switch (operation) {
    case "plus":
      return found(of.plus(a, b), slopes(of.plus))
    case "less":
      return found(of.less(a, b), slopes(of.less))
    case "times":
      return found(
        of.times(a, b),
        slopes((x, y) => of.plus(of.times(x, b), of.times(a, y))),
      )
    case "over": {
      if (b.lo === 0 && b.hi === 0) return undefinedHere
      if (!of.withoutZero(b)) {
        // Where the divisor changes its sign it is 0 in between.
        const crosses =
          right.defined === 2 &&
          right.low !== null &&
          right.high !== null &&
          right.low.lo * right.high.hi !== 0 &&
          oppositeSigns(right.low, right.high)
        return crosses ? undefinedHere : unknown
      }
      const values = of.over(a, b)
      // (a' − (a/b)·b')/b
      return found(
        values,
        slopes((x, y) => of.over(of.less(x, of.times(values, y)), b)),
      )
    }
    case "power":
      return ofPower(left, right, exponent)
    default:
      return unknown
  }
}

const oppositeSigns = (a: Interval, b: Interval): boolean => (a.hi < 0 && b.lo > 0) || (a.lo > 0 && b.hi < 0)

function ofPower(base: Bounds, exponent: Bounds, n: number | null): Bounds {
  const [u, v] = [base.values, exponent.values]
  if (n !== null) {
    if (n === 0) return found(point(1), point(0))
    if (n < 0 && !of.withoutZero(u)) {
      if (u.lo === 0 && u.hi === 0) return undefinedHere
      const crosses = base.defined === 2 && base.low !== null && base.high !== null && oppositeSigns(base.low, base.high)
      return crosses ? undefinedHere : unknown
    }
    const slope = n === 1 ? point(1) : of.times(point(n), of.wholePower(u, n - 1))
    return found(of.wholePower(u, n), chained(slope, base))
  }
  const domain = inDomain(base, 0, Infinity)
  // 0 to a power above 0 is 0, though without a slope where the power is below 1.
  const atZero = isNotNegative(u) && isPositive(v)
  if (domain === 0 && !(u.hi === 0 && isPositive(v))) return undefinedHere
  if (domain !== 2 && !atZero) return unknown
  const values = of.positivePower(u, v)
  if (domain !== 2) {
    // At 0 a power above 1 has the slope 0, but hardly a power series.
    const flat = exponent.slope !== null && exponent.slope.lo === 0 && exponent.slope.hi === 0 && v.lo > 1
    return found(values, flat ? chained(of.times(v, of.positivePower(u, of.less(v, point(1)))), base) : null, 2, false)
  }
  const constant = exponent.slope !== null && exponent.slope.lo === 0 && exponent.slope.hi === 0
  if (constant) return found(values, chained(of.times(v, of.positivePower(u, of.less(v, point(1)))), base))
  const [du, dv] = [base.slope, exponent.slope]
  if (du === null || dv === null) return found(values, null)
  return found(values, of.times(values, of.plus(of.times(dv, of.logarithm(u)), of.over(of.times(v, du), u))))
}

const isOne = (of: Interval, value: number): boolean => of.lo === value && of.hi === value
const isInfinite = ({ lo, hi }: Interval): boolean => lo === hi && (lo === Infinity || lo === -Infinity)

/** The limit of a function from that of its argument; the sides from which it comes are told by the values over the stretch. */
function limitOfOne(
  operation: Operation,
  u: Interval,
  over: Bounds,
  turns: { readonly at: Interval | null; readonly all: Bounds } | null,
): Interval | null {
  switch (operation) {
    case "minus":
      return of.minus(u)
    case "sin":
    case "cos":
    case "tan": {
      if (isInfinite(u)) return null
      const t = turns?.at ?? of.halfTurns(u)
      if (operation === "sin") return of.sine(t)
      if (operation === "cos") return of.cosine(t)
      if (t.lo !== t.hi || Math.abs(t.lo - Math.round(t.lo)) !== 0.5) return of.tangent(t)
      const range = turns?.all.values ?? everything
      if (range.lo >= t.lo) return infinite(-1)
      return range.hi <= t.hi ? infinite(1) : null
    }
    case "log":
    case "log10":
      return isOne(u, 0) ? (isPositive(over.values) ? infinite(-1) : null) : u.lo > 0 ? (ofOneLimit(operation, u) ?? null) : null
    case "log1p":
      return isOne(u, -1) ? infinite(-1) : u.lo > -1 ? (ofOneLimit(operation, u) ?? null) : null
    case "square_root":
      return u.lo >= 0 ? of.squareRoot(u) : null
    case "asin":
      return u.lo >= -1 && u.hi <= 1 ? of.arcSine(u) : null
    case "normal_quantile":
    case "logit":
      if (isOne(u, 0)) return infinite(-1)
      if (isOne(u, 1)) return infinite(1)
      return u.lo > 0 && u.hi < 1 ? (ofOneLimit(operation, u) ?? null) : null
    default:
      return ofOneLimit(operation, u)
  }
}

const functionsAtLimits: Readonly<Partial<Record<Operation, of.Monotone>>> = {
  exp: of.exponential,
  expm1: of.exponentialLessOne,
  log: of.logarithm,
  log10: of.decimalLogarithm,
  log1p: of.logarithmOfOneMore,
  atan: of.arcTangent,
  tanh: of.hyperbolicTangent,
  normal_cdf: of.normalShare,
  normal_quantile: of.normalPoint,
  logit: of.logOdds,
  inverse_logit: of.shareOfLogOdds,
}

const ofOneLimit = (operation: Operation, u: Interval): Interval | null => {
  const value = functionsAtLimits[operation]
  return value === undefined ? null : value(u)
}

function limitOfWholePower(u: Interval, n: number, over: Bounds): Interval | null {
  if (n === 0) return point(1)
  const even = n % 2 === 0
  if (isInfinite(u)) return n < 0 ? point(0) : infinite(u.lo > 0 || even ? 1 : -1)
  if (n > 0 || of.withoutZero(u)) return of.wholePower(u, n)
  // From which side the base comes to 0 decides the sign.
  const sign = isOne(u, 0) ? certainSign(over.values) : 0
  return sign === 0 ? null : infinite(even ? 1 : sign)
}

/** Null where the limit depends on how fast both go: ∞ − ∞, 0·∞, 0/0 and their like. */
function limitOfTwo(operation: Operation, a: Interval, b: Interval, overA: Bounds, overB: Bounds): Interval | null {
  const [farA, farB] = [isInfinite(a), isInfinite(b)]
  switch (operation) {
    case "plus":
      return farA && farB ? (a.lo === b.lo ? a : null) : farA ? a : farB ? b : of.plus(a, b)
    case "less":
      return limitOfTwo("plus", a, of.minus(b), overA, overB)
    case "times": {
      if (!farA && !farB) return of.times(a, b)
      const [sa, sb] = [certainSign(a), certainSign(b)]
      return sa === 0 || sb === 0 ? null : infinite((sa * sb) as 1 | -1)
    }
    case "over": {
      if (farA && farB) return null
      if (farB) return point(0)
      if (isOne(b, 0)) {
        const [sa, sb] = [certainSign(a), certainSign(overB.values)]
        return sa === 0 || sb === 0 ? null : infinite((sa * sb) as 1 | -1)
      }
      if (!of.withoutZero(b)) return null
      return farA ? infinite((certainSign(a) * certainSign(b)) as 1 | -1) : of.over(a, b)
    }
    case "power": {
      if (a.lo < 0 || (farB && !(a.lo > 1 || (a.hi < 1 && a.lo >= 0)))) return null
      const indeterminate = (isOne(a, 0) || farA) && !of.withoutZero(b)
      if (indeterminate || (a.lo === 0 && a.hi !== 0 && !isPositive(b))) return null
      return of.positivePower(a, b)
    }
    default:
      return null
  }
}

const certainSign = (of: Interval): 1 | -1 | 0 => (isPositive(of) ? 1 : isNegative(of) ? -1 : 0)

/** Numbers that are no fractions, each by a name that says what it is, and between which doubles they lie. */
class Symbols {
  ranges: Ranges = new Map()
  private readonly made = new Map<
    string,
    { readonly operation: Operation; readonly a: exact.Fraction; readonly b: exact.Fraction | null }
  >()
  private readonly known = new Map<string, Interval | null>()
  private readonly numbers = new Map<exact.Fraction, Interval | null>()

  /** The value of a step from exact values; null where it is not defined, or cannot be said. */
  result(operation: Operation, a: exact.Fraction, b: exact.Fraction | null): exact.Fraction | null {
    switch (operation) {
      case "minus":
        return exact.minus(a)
      case "plus":
        return b === null ? null : exact.plus(a, b)
      case "less":
        return b === null ? null : exact.less(a, b)
      case "times":
        return b === null ? null : exact.times(a, b)
      case "over":
        return b === null ? null : exact.over(a, b)
      case "power":
        return b === null ? null : this.power(a, b)
      default:
        return this.function(operation, a)
    }
  }

  /** The enclosure of a number, kept for the next time. */
  number(fraction: exact.Fraction): Interval | null {
    let known = this.numbers.get(fraction)
    if (known === undefined) {
      known = this.enclosure(fraction)
      this.numbers.set(fraction, known)
    }
    return known
  }

  /** @param x  the values of the variable, where it may stand in the fraction */
  enclosure(fraction: exact.Fraction, x: Interval | null = null): Interval | null {
    const number = exact.numberOf(fraction)
    if (number !== null) return ofQuotient(number[0], number[1])
    const above = this.polynomial(fraction.above, x)
    const below = this.polynomial(fraction.below, x)
    return above === null || below === null || !of.withoutZero(below) ? null : of.over(above, below)
  }

  private polynomial(polynomial: exact.Polynomial, x: Interval | null): Interval | null {
    let sum = point(0)
    for (const [monomial, coefficient] of polynomial) {
      let term = ofQuotient(coefficient, 1n)
      for (const [name, power] of exact.partsOf(monomial)) {
        const factor = name === variableSymbol ? x : this.symbol(name)
        if (factor === null) return null
        term = of.times(term, of.wholePower(factor, power))
      }
      sum = of.plus(sum, term)
    }
    return sum
  }

  private symbol(name: string): Interval | null {
    if (name === "pi") return of.pi
    const range = this.ranges.get(name)
    if (range !== undefined) return range
    const known = this.known.get(name)
    if (known !== undefined) return known
    const made = this.made.get(name)
    if (made === undefined) return null
    const [a, b] = [this.enclosure(made.a), made.b === null ? null : this.enclosure(made.b)]
    const asBounds = (values: Interval): Bounds => ({ ...unknown, defined: 2, values })
    const value =
      a === null || (made.b !== null && b === null)
        ? null
        : b === null
          ? ofOne(made.operation, asBounds(a), null)
          : ofTwo(made.operation, asBounds(a), asBounds(b), null)
    const enclosure = value === null || value.defined !== 2 ? null : value.values
    this.known.set(name, enclosure)
    return enclosure
  }

  private power(a: exact.Fraction, b: exact.Fraction): exact.Fraction | null {
    const exponent = exact.numberOf(b)
    if (exponent !== null && exponent[1] === 1n) return exact.power(a, Number(exponent[0]))
    const base = exact.numberOf(a)
    if (base !== null && base[0] === base[1]) return exact.one
    if (base !== null && base[0] === 0n) return exponent !== null && exponent[0] > 0n ? exact.zero : null
    if (exponent !== null && exponent[1] === 2n && exponent[0] === 1n) return this.function("square_root", a)
    return this.named("power", a, b)
  }

  private function(operation: Operation, a: exact.Fraction): exact.Fraction | null {
    const number = exact.numberOf(a)
    const half = exact.over(exact.one, exact.whole(2n))
    if (number !== null) {
      const [n, d] = number
      if (n === 0n) {
        if (["expm1", "log1p", "sin", "tan", "asin", "atan", "tanh", "square_root"].includes(operation)) return exact.zero
        if (operation === "exp" || operation === "cos") return exact.one
        if (operation === "normal_cdf" || operation === "inverse_logit") return half
        return null
      }
      if (n === d && (operation === "log" || operation === "log10")) return exact.zero
      if (2n * n === d && (operation === "logit" || operation === "normal_quantile")) return exact.zero
      if (operation === "square_root") {
        const [top, bottom] = [root(n), root(d)]
        if (top !== null && bottom !== null) return exact.over(exact.whole(top), exact.whole(bottom))
      }
    }
    if (operation === "sin" || operation === "cos" || operation === "tan") {
      const turns = exact.over(a, exact.symbol("pi"))
      const value = turns === null ? null : exact.numberOf(turns)
      if (value !== null) {
        const known = ofHalfTurns(operation, value)
        if (known !== undefined) return known
      }
    }
    return this.named(operation, a, null)
  }

  private named(operation: Operation, a: exact.Fraction, b: exact.Fraction | null): exact.Fraction | null {
    const name = `${operation}(${exact.named(a)}${b === null ? "" : `,${exact.named(b)}`})`.replaceAll(" ", "_")
    if (name.length > 2_000) return null
    this.made.set(name, { operation, a, b })
    return exact.symbol(name)
  }
}

/** sin, cos and tan of multiples of a quarter of pi, where they are whole; null at a pole, undefined where they are not whole. */
function ofHalfTurns(operation: "sin" | "cos" | "tan", [n, d]: readonly [bigint, bigint]): exact.Fraction | null | undefined {
  if (4n % d !== 0n) return undefined
  const eighths = (((n * (4n / d)) % 8n) + 8n) % 8n
  if (operation === "tan") {
    const quarters = eighths % 4n
    return quarters === 2n ? null : exact.whole(quarters === 3n ? -1n : quarters)
  }
  const of = operation === "sin" ? eighths : (eighths + 2n) % 8n
  if (of % 2n !== 0n) return undefined
  return exact.whole(of === 2n ? 1n : of === 6n ? -1n : 0n)
}

/** The whole root of a square; null for what is none. */
function root(of: bigint): bigint | null {
  if (of < 0n) return null
  let x = BigInt(Math.floor(Math.sqrt(Number(of))))
  // One step of Heron's method, from a double's first guess, and its neighbours.
  if (x > 0n) x = (x + of / x) / 2n
  for (const near of [x - 1n, x, x + 1n]) if (near >= 0n && near * near === of) return near
  return null
}

/** The doubles around n/d, equal where it is one. */
export function ofQuotient(n: bigint, d: bigint): Interval {
  if (n === 0n) return point(0)
  const exactDouble = (x: bigint): boolean => x < 9007199254740992n && x > -9007199254740992n
  if (exactDouble(n) && exactDouble(d)) {
    const [top, bottom] = [Number(n), Number(d)]
    if (d === 1n) return point(top)
    return of.over(point(top), point(bottom))
  }
  const quotient = (size(n) * 1n) / d
  if (d === 1n || quotient * d === size(n)) {
    const value = Number(n < 0n ? -quotient : quotient)
    return Number.isFinite(value) && BigInt(value) === (n < 0n ? -quotient : quotient)
      ? point(value)
      : interval(of.down(value), of.up(value))
  }
  // 64 bits of the quotient, and what is left only decides the last of them.
  const shift = BigInt(64 - bitsOf(size(n)) + bitsOf(d))
  const scaled = shift >= 0n ? (size(n) << shift) / d : size(n) / (d << -shift)
  const value = scaledBy(Number(scaled), -Number(shift)) * (n < 0n ? -1 : 1)
  return interval(of.down(of.down(value)), of.up(of.up(value)))
}

const size = (x: bigint): bigint => (x < 0n ? -x : x)
const bitsOf = (x: bigint): number => x.toString(2).length

/** x·2^k by steps that a double can hold. */
function scaledBy(x: number, k: number): number {
  let value = x
  let left = k
  const step = 9.332636185032189e-302 // 2^−1000
  while (left < -1000) {
    value *= step
    left += 1000
  }
  while (left > 1000) {
    value /= step
    left -= 1000
  }
  for (; left < 0; left++) value /= 2
  for (; left > 0; left--) value *= 2
  return value
}
