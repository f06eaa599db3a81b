// Intervals with outward rounding: every operation gives an interval that holds all results of real arithmetic over its operands. Ends may be
// open, so that a value that is only approached (0 at the end of a range, an infinity) is told from one that is taken. Sums, products and
// quotients are widened only where they were rounded; functions by more than the error bounds stated in elementary.ts and special.ts.

import { productError } from "../statistics/double-double.ts"
import { asin, atan, exp, expm1, log, log1p, log10, pow, tanh } from "../statistics/elementary.ts"
import { normalCdf, normalQuantile } from "../statistics/special.ts"
import { cosineOfTurns, sineOfTurns, tangentOfTurns } from "./turns.ts"

/** All reals from `lo` to `hi`; an open end is not taken. An infinite end is never taken. As a limit, both ends may be one infinity. */
export type Interval = { readonly lo: number; readonly hi: number; readonly loOpen: boolean; readonly hiOpen: boolean }

export const interval = (lo: number, hi: number, loOpen = false, hiOpen = false): Interval => ({
  lo,
  hi,
  loOpen: loOpen || lo === -Infinity,
  hiOpen: hiOpen || hi === Infinity,
})
export const point = (x: number): Interval => ({ lo: x, hi: x, loOpen: false, hiOpen: false })
export const everything: Interval = interval(-Infinity, Infinity)

export const isPositive = (of: Interval): boolean => of.lo > 0 || (of.lo === 0 && of.loOpen)
export const isNegative = (of: Interval): boolean => of.hi < 0 || (of.hi === 0 && of.hiOpen)
export const isNotNegative = (of: Interval): boolean => of.lo >= 0
export const isNotPositive = (of: Interval): boolean => of.hi <= 0
export const withoutZero = (of: Interval): boolean => isPositive(of) || isNegative(of)

/** What both hold; where rounding left them apart, the second. */
export function common(a: Interval, b: Interval): Interval {
  if (a.lo > b.hi || b.lo > a.hi) return b
  const low = a.lo > b.lo || (a.lo === b.lo && a.loOpen) ? a : b
  const high = a.hi < b.hi || (a.hi === b.hi && a.hiOpen) ? a : b
  return { lo: low.lo, hi: high.hi, loOpen: low.loOpen, hiOpen: high.hiOpen }
}

/** The next double above, or the one after it. */
export const up = (x: number): number => (x === -Infinity ? -Number.MAX_VALUE : x + ((x < 0 ? -x : x) * 1.1102230246251568e-16 + 5e-324))
export const down = (x: number): number => -up(-x)

const sumLow = (a: number, b: number): number => {
  const s = a + b
  if (Number.isNaN(s)) return -Infinity
  if (!(s > -Infinity && s < Infinity)) return s === Infinity && a !== Infinity && b !== Infinity ? Number.MAX_VALUE : s
  const t = s - a
  return a - (s - t) + (b - t) < 0 ? down(s) : s
}
const sumHigh = (a: number, b: number): number => -sumLow(-a, -b)

const isLarge = (x: number): boolean => x > 1e150 || x < -1e150

const productLow = (a: number, b: number): number => {
  if (a === 0 || b === 0) return 0
  const p = a * b
  if (!(p > -Infinity && p < Infinity))
    return p === Infinity && !(a === Infinity || b === Infinity || a === -Infinity || b === -Infinity) ? Number.MAX_VALUE : p
  // Where the splitting could overflow, or the error itself be lost, the result is widened unseen.
  if (isLarge(a) || isLarge(b) || (p < 1e-270 && p > -1e-270)) return p >= 0 && a > 0 === b > 0 ? Math.max(0, down(p)) : down(p)
  return productError(a, b, p) < 0 ? down(p) : p
}
const productHigh = (a: number, b: number): number => -productLow(-a, b)

const quotientLow = (a: number, b: number): number => {
  if (a === 0) return 0
  const q = a / b
  if (b === Infinity || b === -Infinity || a === Infinity || a === -Infinity) return Number.isNaN(q) ? -Infinity : q
  if (!(q > -Infinity && q < Infinity)) return b === 0 ? q : q === Infinity ? Number.MAX_VALUE : q
  if (isLarge(a) || isLarge(b) || isLarge(q) || (q < 1e-270 && q > -1e-270) || (a < 1e-270 && a > -1e-270))
    return q >= 0 && a > 0 === b > 0 ? Math.max(0, down(q)) : down(q)
  const p = q * b
  const left = a - p - productError(q, b, p)
  return left < 0 === b > 0 && left !== 0 ? down(q) : q
}
const quotientHigh = (a: number, b: number): number => -quotientLow(-a, b)

export const minus = (of: Interval): Interval => ({ lo: 0 - of.hi, hi: 0 - of.lo, loOpen: of.hiOpen, hiOpen: of.loOpen })

export const plus = (a: Interval, b: Interval): Interval =>
  interval(sumLow(a.lo, b.lo), sumHigh(a.hi, b.hi), a.loOpen || b.loOpen, a.hiOpen || b.hiOpen)

export const less = (a: Interval, b: Interval): Interval => plus(a, minus(b))

/** A corner of a product or a quotient: its value rounded down and up, and whether it is approached only. */
type Corner = { readonly low: number; readonly high: number; readonly open: boolean }

/** 0·∞ is 0 as a corner: along the sides of the rectangle the product is 0, and the other corners say how far it goes. */
const productCorner = (a: number, aOpen: boolean, b: number, bOpen: boolean): Corner => ({
  low: productLow(a, b),
  high: productHigh(a, b),
  open: (a === 0 && !aOpen) || (b === 0 && !bOpen) ? false : aOpen || bOpen,
})

function hull(corners: readonly Corner[], sign: 1 | -1 | 0): Interval {
  let [lo, hi, loOpen, hiOpen] = [Infinity, -Infinity, true, true]
  for (const { low, high, open } of corners) {
    if (low < lo) {
      lo = low
      loOpen = open
    } else if (low === lo) loOpen &&= open
    if (high > hi) {
      hi = high
      hiOpen = open
    } else if (high === hi) hiOpen &&= open
  }
  // Factors of known sign give no 0, even where doubles have no number that small.
  if (sign === 1 && lo <= 0) return interval(0, hi, true, hiOpen)
  if (sign === -1 && hi >= 0) return interval(lo, 0, loOpen, true)
  return interval(lo, hi, loOpen, hiOpen)
}

const signOf = (of: Interval): 1 | -1 | 0 => (isPositive(of) ? 1 : isNegative(of) ? -1 : 0)

export function times(a: Interval, b: Interval): Interval {
  const corners = [
    productCorner(a.lo, a.loOpen, b.lo, b.loOpen),
    productCorner(a.lo, a.loOpen, b.hi, b.hiOpen),
    productCorner(a.hi, a.hiOpen, b.lo, b.loOpen),
    productCorner(a.hi, a.hiOpen, b.hi, b.hiOpen),
  ]
  return hull(corners, (signOf(a) * signOf(b)) as 1 | -1 | 0)
}

/** a/b where b does not hold 0; the ends of b towards 0 may be 0 itself, as a limit. */
export function over(a: Interval, b: Interval): Interval {
  if (isNegative(b)) return over(minus(a), minus(b))
  const corner = (x: number, xOpen: boolean, y: number, yOpen: boolean): Corner => {
    if (y === 0) {
      // Towards 0 the quotient grows without end, or stays 0 where x is.
      const far = x > 0 ? Infinity : x < 0 ? -Infinity : 0
      return { low: far, high: far, open: x !== 0 || xOpen }
    }
    const infinite = (x === Infinity || x === -Infinity) && y === Infinity
    const low = infinite ? 0 : quotientLow(x, y)
    const high = infinite ? 0 : quotientHigh(x, y)
    return { low, high, open: x === 0 && !xOpen ? false : xOpen || yOpen }
  }
  const corners = [
    corner(a.lo, a.loOpen, b.lo, b.loOpen),
    corner(a.lo, a.loOpen, b.hi, b.hiOpen),
    corner(a.hi, a.hiOpen, b.lo, b.loOpen),
    corner(a.hi, a.hiOpen, b.hi, b.hiOpen),
  ]
  return hull(corners, signOf(a))
}

/** u², which knows that both factors are one. */
export function square(u: Interval): Interval {
  if (isNotNegative(u)) return times(u, u)
  if (isNotPositive(u)) return square(minus(u))
  const size = Math.max(-u.lo, u.hi)
  return interval(0, productHigh(size, size), false, -u.lo > u.hi ? u.loOpen : u.hi > -u.lo ? u.hiOpen : u.loOpen && u.hiOpen)
}

/** u^n for a whole n ≠ 0; u does not hold 0 where n is below 0. */
export function wholePower(u: Interval, n: number): Interval {
  if (n < 0) return over(point(1), wholePower(u, -n))
  if (n === 1) return u
  if (n === 2) return square(u)
  if (n % 2 === 0) return positivePower(magnitude(u), point(n))
  const raised = (x: number): { low: number; high: number } => {
    const size = positivePower(point(x < 0 ? -x : x), point(n))
    return x < 0 ? { low: -size.hi, high: -size.lo } : { low: size.lo, high: size.hi }
  }
  return interval(raised(u.lo).low, raised(u.hi).high, u.loOpen, u.hiOpen)
}

function magnitude(u: Interval): Interval {
  if (isNotNegative(u)) return u
  if (isNotPositive(u)) return minus(u)
  return -u.lo > u.hi ? interval(0, -u.lo, false, u.loOpen) : interval(0, u.hi, false, u.hi > -u.lo ? u.hiOpen : u.hiOpen && u.loOpen)
}

/**
 * u^v for u ≥ 0: monotone in each of both while the other stays, so the corners say it all. Where u holds 0 as a value, v is positive.
 * The power is off by less than 1 ulp; two are allowed on either side.
 */
export function positivePower(u: Interval, v: Interval): Interval {
  const corner = (x: number, xOpen: boolean, y: number, yOpen: boolean): Corner => {
    // 1 to any power is 1, and the power 0 of anything: also towards infinity, where the other corners say how far it goes.
    if (x === 1 || y === 0) return { low: 1, high: 1, open: (x === 1 && xOpen) || (y === 0 && yOpen) }
    const value = pow(x, y)
    const exact = (y === 1 || value === 0 || value === Infinity) && (x === 0 || x === Infinity || y === 1)
    const low = exact ? value : value === Infinity ? Number.MAX_VALUE : Math.max(0, down(down(value)))
    return { low, high: exact ? value : up(up(value)), open: x === 0 && y > 0 ? xOpen : xOpen || yOpen }
  }
  return hull(
    [
      corner(u.lo, u.loOpen, v.lo, v.loOpen),
      corner(u.lo, u.loOpen, v.hi, v.hiOpen),
      corner(u.hi, u.hiOpen, v.lo, v.loOpen),
      corner(u.hi, u.hiOpen, v.hi, v.hiOpen),
    ],
    isPositive(u) ? 1 : 0,
  )
}

/** A function of one number over an interval. */
export type Monotone = (u: Interval) => Interval

/** A rising function whose value is off by at most `relative` of itself and `absolute`; `ends` is the open range it stays in. */
const rising =
  (of: (x: number) => number, relative: number, absolute: number, ends: Interval, exact: ReadonlyMap<number, number>): Monotone =>
  (u) => {
    const value = (x: number, sign: 1 | -1): number => {
      const known = exact.get(x)
      if (known !== undefined) return known
      const y = of(x)
      if (y === Infinity) return sign < 0 ? Number.MAX_VALUE : y
      if (y === -Infinity) return sign > 0 ? -Number.MAX_VALUE : y
      const off = (y < 0 ? -y : y) * relative + absolute
      return sign < 0 ? y - off : y + off
    }
    const [lo, hi] = [value(u.lo, -1), value(u.hi, 1)]
    // At an end of its range the function only comes near, however doubles round.
    return interval(
      Math.max(lo, ends.lo),
      Math.min(hi, ends.hi),
      u.loOpen || (lo <= ends.lo && ends.loOpen),
      u.hiOpen || (hi >= ends.hi && ends.hiOpen),
    )
  }

/** Two ulp, where one is promised. */
const twoUlp = 4.5e-16
/** Of the normal law 13 digits are promised. */
const thirteenDigits = 2e-13
const tiny = 5e-324
const unitOpen = interval(0, 1, true, true)
const positiveOpen = interval(0, Infinity, true, true)

export const exponential = rising(
  exp,
  twoUlp,
  tiny,
  positiveOpen,
  new Map([
    [0, 1],
    [-Infinity, 0],
    [Infinity, Infinity],
  ]),
)
export const exponentialLessOne = rising(
  expm1,
  twoUlp,
  tiny,
  interval(-1, Infinity, true),
  new Map([
    [0, 0],
    [-Infinity, -1],
    [Infinity, Infinity],
  ]),
)
export const logarithm = rising(
  log,
  twoUlp,
  0,
  everything,
  new Map([
    [1, 0],
    [0, -Infinity],
    [Infinity, Infinity],
  ]),
)
export const decimalLogarithm = rising(
  log10,
  twoUlp,
  0,
  everything,
  new Map([
    [1, 0],
    [0, -Infinity],
    [Infinity, Infinity],
  ]),
)
export const logarithmOfOneMore = rising(
  log1p,
  twoUlp,
  tiny,
  everything,
  new Map([
    [0, 0],
    [-1, -Infinity],
    [Infinity, Infinity],
  ]),
)
export const arcSine = rising(asin, twoUlp, tiny, interval(-1.5707963267948968, 1.5707963267948968), new Map([[0, 0]]))
export const arcTangent = rising(atan, twoUlp, tiny, interval(-1.5707963267948968, 1.5707963267948968, true, true), new Map([[0, 0]]))
export const hyperbolicTangent = rising(
  tanh,
  2 * twoUlp,
  tiny,
  interval(-1, 1, true, true),
  new Map([
    [0, 0],
    [-Infinity, -1],
    [Infinity, 1],
  ]),
)
export const normalShare = rising(
  normalCdf,
  thirteenDigits,
  tiny,
  unitOpen,
  new Map([
    [0, 0.5],
    [-Infinity, 0],
    [Infinity, 1],
  ]),
)
export const normalPoint = rising(
  normalQuantile,
  thirteenDigits,
  0,
  everything,
  new Map([
    [0.5, 0],
    [0, -Infinity],
    [1, Infinity],
  ]),
)
/** As a difference of two logarithms, each off by an ulp of itself: near ½ both are about 0.7. */
export const logOdds = rising(
  (p) => log(p) - log1p(-p),
  2 * twoUlp,
  1e-15,
  everything,
  new Map([
    [0.5, 0],
    [0, -Infinity],
    [1, Infinity],
  ]),
)
export const shareOfLogOdds = rising(
  (x) => {
    const e = exp(x < 0 ? x : -x)
    return x < 0 ? e / (1 + e) : 1 / (1 + e)
  },
  3 * twoUlp,
  tiny,
  unitOpen,
  new Map([
    [0, 0.5],
    [-Infinity, 0],
    [Infinity, 1],
  ]),
)

/** √u for u ≥ 0, rounded as a quotient is: checked by its square. */
export function squareRoot(u: Interval): Interval {
  const low = Math.sqrt(u.lo)
  const high = Math.sqrt(u.hi)
  const exact = (root: number, of: number): boolean =>
    root === Infinity || (productLow(root, root) === of && productHigh(root, root) === of)
  return interval(exact(low, u.lo) ? low : Math.max(0, down(low)), exact(high, u.hi) ? high : up(high), u.loOpen, u.hiOpen)
}

/** π as a double below and one above. */
export const pi: Interval = interval(Math.PI, up(Math.PI), true, true)

/** An angle in half turns, u/π. */
export const halfTurns = (u: Interval): Interval => over(u, pi)

/** sin πt. */
export const sine = (t: Interval): Interval => wave(t, sineOfTurns, 0.5)
/** cos πt. */
export const cosine = (t: Interval): Interval => wave(t, cosineOfTurns, 0)

/** A wave of period 2 that is 1 at `crest` and −1 half a period on. */
function wave(t: Interval, of: (t: number) => number, crest: number): Interval {
  if (!(t.hi - t.lo < 2) || t.lo < -1e15 || t.hi > 1e15) return interval(-1, 1)
  const has = (place: number): boolean => {
    // Whether place + 2k lies between, taken generously: saying yes is never wrong.
    const k = Math.floor((t.hi - place) / 2)
    return place + 2 * k >= t.lo
  }
  const [a, b] = [of(t.lo), of(t.hi)]
  const lo = Math.min(a, b)
  const hi = Math.max(a, b)
  const off = (y: number): number => (y < 0 ? -y : y) * 4 * twoUlp + tiny
  const [loOpen, hiOpen] = [a <= b ? t.loOpen : t.hiOpen, a >= b ? t.loOpen : t.hiOpen]
  return interval(
    has(crest + 1) ? -1 : Math.max(-1, lo === 0 ? 0 : lo - off(lo)),
    has(crest) ? 1 : Math.min(1, hi === 0 ? 0 : hi + off(hi)),
    !has(crest + 1) && loOpen && a !== b,
    !has(crest) && hiOpen && a !== b,
  )
}

/** tan πt; null where a pole lies inside, or is taken. */
export function tangent(t: Interval): Interval | null {
  if (!(t.hi - t.lo <= 1) || t.lo < -1e15 || t.hi > 1e15) return null
  // The pole at or below the lower end, and the next above.
  const below = Math.floor(t.lo - 0.5) + 0.5
  if (t.hi > below + 1 || (t.hi === below + 1 && !t.hiOpen) || (t.lo === below && !t.loOpen)) return null
  const off = (y: number): number => (y < 0 ? -y : y) * 6 * twoUlp + tiny
  const low = t.lo === below ? -Infinity : tangentOfTurns(t.lo)
  const high = t.hi === below + 1 ? Infinity : tangentOfTurns(t.hi)
  return interval(
    low === 0 ? 0 : low - (low === -Infinity ? 0 : off(low)),
    high === 0 ? 0 : high + (high === Infinity ? 0 : off(high)),
    t.loOpen,
    t.hiOpen,
  )
}
