// Elementary functions in plain arithmetic: sums, products, quotients, square roots and the bits of a double, nothing else, so that every
// browser and every machine gives the same last bit. Each error bound is in units in the last place (ulp) of the exact result and is held
// by a test against values computed at 60 digits. Special values follow IEEE 754: NaN gives NaN, infinities and signed zeros their limits.
//
// The approximations are those of FDLIBM (https://netlib.org/fdlibm/), which carries this notice:
//   Copyright (C) 1993 by Sun Microsystems, Inc. All rights reserved.
//   Developed at SunSoft, a Sun Microsystems, Inc. business.
//   Permission to use, copy, modify, and distribute this software is freely granted, provided that this notice is preserved.
// What is ours: powers of two come from a table instead of being written into the exponent (a store to memory that is read back at once
// costs more than the whole polynomial), and large angles are reduced by whole numbers.

/** e^x, error below 1 ulp; Infinity above x ≈ 709.78, 0 below x ≈ −745.13, subnormal between −745.13 and −708.4. */
export const exp = (x: number): number => {
  if (!(x <= 709.782712893384)) return Number.isNaN(x) ? NaN : Infinity
  if (x < -745.1332191019411) return 0
  // x = k·ln 2 + r with |r| ≤ ½ln 2; adding and taking away 1.5·2^52 rounds to a whole number.
  const k = x * inverseLn2 + rounding - rounding
  const high = x - k * ln2High
  const low = k * ln2Low
  const r = high - low
  const t = r * r
  const c = r - t * (p1 + t * (p2 + t * (p3 + t * (p4 + t * p5))))
  const y = 1 - (low - (r * c) / (2 - c) - high)
  if (k >= -1021 && k <= 1023) return y * (powersOfTwo[k + 1074] as number)
  return k > 1023 ? y * 2 * (powersOfTwo[k + 1073] as number) : y * (powersOfTwo[k + 1174] as number) * 7.888609052210118e-31
}

/** e^x − 1, error below 1 ulp, without loss near 0. */
export const expm1 = (x: number): number => {
  const size = x < 0 ? -x : x
  if (!(size < 709.782712893384)) return Number.isNaN(x) ? NaN : x > 709.782712893384 ? Infinity : x > 0 ? exp(x) : -1
  if (x < -38.816242) return -1
  if (size < 5.551115123125783e-17) return x
  let k = 0
  let r = x
  let c = 0
  if (size > 0.34657359027997264) {
    k = x * inverseLn2 + rounding - rounding
    // Between ½ln 2 and 1½ln 2 the step is one, also where rounding would say nought.
    if (k === 0) k = x < 0 ? -1 : 1
    const high = x - k * ln2High
    const low = k * ln2Low
    r = high - low
    c = high - r - low
  }
  const half = 0.5 * r
  const square = r * half
  const r1 = 1 + square * (q1 + square * (q2 + square * (q3 + square * (q4 + square * q5))))
  const t = 3 - r1 * half
  let e = square * ((r1 - t) / (6 - r * t))
  if (k === 0) return r - (r * e - square)
  e = r * (e - c) - c
  e -= square
  if (k === -1) return 0.5 * (r - e) - 0.5
  if (k === 1) return r < -0.25 ? -2 * (e - (r + 0.5)) : 1 + 2 * (r - e)
  if (k <= -2 || k > 56) {
    const y = 1 - (e - r)
    return k === 1024 ? y * 2 * 8.98846567431158e307 - 1 : y * (powersOfTwo[k + 1074] as number) - 1
  }
  const shift = powersOfTwo[1074 - k] as number
  const scale = powersOfTwo[1074 + k] as number
  return k < 20 ? (1 - shift - (e - r)) * scale : (r - (e + shift) + 1) * scale
}

/** Natural logarithm, error below 1 ulp; −Infinity at 0, NaN below. */
export const log = (x: number): number => {
  if (!(x > 0)) return x === 0 ? -Infinity : NaN
  if (x === Infinity) return x
  let k = 0
  let m = x
  if (m < 2.2250738585072014e-308) {
    m *= 18014398509481984
    k = -54
  }
  double[0] = m
  // The exponent for which the mantissa lies between √½ and √2.
  const e = ((words[highWord] as number) + 0x95f62) >> 20
  k += e - 1023
  // 2^(1023 − e) is a subnormal for the largest e, and the product exact all the same.
  const f = m * (powersOfTwo[2097 - e] as number) - 1
  const half = 0.5 * f * f
  const s = f / (2 + f)
  return k * ln2High - (half - (s * (half + logarithmTail(s)) + k * ln2Low) - f)
}

/** log(1 + x), error below 1 ulp, without loss near 0; −Infinity at −1, NaN below. */
export const log1p = (x: number): number => {
  if (!(x > -1)) return x === -1 ? -Infinity : NaN
  if (x === Infinity) return x
  const size = x < 0 ? -x : x
  if (size < 1.1102230246251565e-16) return x
  let k = 0
  let f = x
  let c = 0
  if (x < -0.29289321881345254 || x > 0.41421356237309503) {
    const u = 1 + x
    double[0] = u
    const e = ((words[highWord] as number) + 0x95f62) >> 20
    k = e - 1023
    // What 1 + x lost by rounding, as a share of it.
    c = k < 54 ? (k >= 2 ? 1 - (u - x) : x - (u - 1)) / u : 0
    f = u * (powersOfTwo[2097 - e] as number) - 1
  }
  const half = 0.5 * f * f
  const s = f / (2 + f)
  return s * (half + logarithmTail(s)) + (k * ln2Low + c) - half + f + k * ln2High
}

/** Logarithm to base 10, error below 1 ulp; exact at whole powers of ten. */
export const log10 = (x: number): number => {
  if (!(x > 0)) return x === 0 ? -Infinity : NaN
  if (x === Infinity) return x
  const k = split(x)
  const y = k * 0.30102999566361177
  const high = splitHigh * 0.4342944818781689
  const w = y + high
  return y - w + high + (k * 3.694239077158931e-13 + (splitLow + splitHigh) * 2.5082946711645275e-11 + splitLow * 0.4342944818781689) + w
}

/** Logarithm to base 2, error below 1 ulp; exact at whole powers of two. */
export const log2 = (x: number): number => {
  if (!(x > 0)) return x === 0 ? -Infinity : NaN
  if (x === Infinity) return x
  const k = split(x)
  const high = splitHigh * 1.4426950407214463
  const w = k + high
  return k - w + high + ((splitLow + splitHigh) * 1.6751713164886512e-10 + splitLow * 1.4426950407214463) + w
}

/** x^y, error below 1 ulp; x^0 is 1 for every x, NaN included; NaN for a negative x unless y is whole. */
export const pow = (x: number, y: number): number => {
  if (y === 0) return 1
  if (Number.isNaN(x) || Number.isNaN(y)) return NaN
  if (y === 1) return x
  if (y === 2) return x * x
  if (y === 0.5 && x >= 0) return Math.sqrt(x)
  if (y === -1) return 1 / x
  const size = x < 0 ? -x : x
  if (y === Infinity || y === -Infinity) return size === 1 ? NaN : size > 1 === y > 0 ? Infinity : 0
  const odd = isOdd(y)
  if (x === 0 || size === Infinity) {
    const result = (x === 0) === y > 0 ? 0 : Infinity
    return odd && (x < 0 || (x === 0 && 1 / x < 0)) ? -result : result
  }
  const negative = x < 0
  if (negative && Math.floor(y) !== y) return NaN
  const result = size === 1 ? 1 : positivePower(size, y)
  return negative && odd ? -result : result
}

/** Sine of x radians, error below 1 ulp for every x. */
export const sin = (x: number): number => {
  if (!(x > -Infinity && x < Infinity)) return NaN
  if (x > -quarterPi && x < quarterPi) return x > -tiny && x < tiny ? x : sineKernel(x, 0)
  const quarter = reduced(x)
  const value = (quarter & 1) === 0 ? sineKernel(angle, angleRest) : cosineKernel(angle, angleRest)
  return (quarter & 2) === 0 ? value : -value
}

/** Cosine of x radians, error below 1 ulp for every x. */
export const cos = (x: number): number => {
  if (!(x > -Infinity && x < Infinity)) return NaN
  if (x > -quarterPi && x < quarterPi) return cosineKernel(x, 0)
  const quarter = reduced(x)
  const value = (quarter & 1) === 0 ? cosineKernel(angle, angleRest) : sineKernel(angle, angleRest)
  return ((quarter + 1) & 2) === 0 ? value : -value
}

/** Tangent of x radians, error below 1 ulp for every x. */
export const tan = (x: number): number => {
  if (!(x > -Infinity && x < Infinity)) return NaN
  if (x > -quarterPi && x < quarterPi) return x > -tiny && x < tiny ? x : tangentKernel(x, 0, false)
  const quarter = reduced(x)
  return tangentKernel(angle, angleRest, (quarter & 1) === 1)
}

/** Arc sine in [−π/2, π/2], error below 1 ulp; NaN outside [−1, 1]. */
export const asin = (x: number): number => {
  const size = x < 0 ? -x : x
  if (!(size <= 1)) return NaN
  if (size === 1) return x * halfPi + x * halfPiLow
  if (size < 0.5) return size < tiny ? x : x + x * arcTail(x * x)
  const z = 0.5 * (1 - size)
  const r = arcTail(z)
  const s = Math.sqrt(z)
  const high = withoutLowWord(s)
  const result =
    size > 0.975
      ? halfPi - (2 * (s + s * r) - halfPiLow)
      : quarterPi - (2 * s * r - (halfPiLow - 2 * ((z - high * high) / (s + high))) - (quarterPi - 2 * high))
  return x < 0 ? -result : result
}

/** Arc cosine in [0, π], error below 1 ulp; NaN outside [−1, 1]. */
export const acos = (x: number): number => {
  const size = x < 0 ? -x : x
  if (!(size <= 1)) return NaN
  if (size === 1) return x > 0 ? 0 : 2 * halfPi + 2 * halfPiLow
  if (size < 0.5) return halfPi - (x - (halfPiLow - x * arcTail(x * x)))
  const z = 0.5 * (1 - size)
  const s = Math.sqrt(z)
  const r = arcTail(z)
  if (x < 0) return 2 * (halfPi - (s + (r * s - halfPiLow)))
  const high = withoutLowWord(s)
  return 2 * (high + (r * s + (z - high * high) / (s + high)))
}

/** Arc tangent in [−π/2, π/2], error below 1 ulp. */
export const atan = (x: number): number => {
  if (Number.isNaN(x)) return NaN
  const size = x < 0 ? -x : x
  if (size >= 7.378697629483821e19) return x < 0 ? -halfPi : halfPi
  if (size < 0.4375) return size < tiny ? x : x - x * arcTangentTail(x)
  let result: number
  if (size < 0.6875) result = arcTangentAbout((2 * size - 1) / (2 + size), 0.4636476090008061, 2.2698777452961687e-17)
  else if (size < 1.1875) result = arcTangentAbout((size - 1) / (size + 1), quarterPi, 3.061616997868383e-17)
  else if (size < 2.4375) result = arcTangentAbout((size - 1.5) / (1 + 1.5 * size), 0.982793723247329, 1.3903311031230998e-17)
  else result = arcTangentAbout(-1 / size, halfPi, halfPiLow)
  return x < 0 ? -result : result
}

/** Hyperbolic sine, error below 3 ulp. */
export const sinh = (x: number): number => {
  const size = x < 0 ? -x : x
  const half = x < 0 ? -0.5 : 0.5
  if (size < 22) {
    if (size < 3.725290298461914e-9) return x
    const t = expm1(size)
    return size < 1 ? half * (2 * t - (t * t) / (t + 1)) : half * (t + t / (t + 1))
  }
  return half * 2 * halfExp(size)
}

/** Hyperbolic cosine, error below 2 ulp. */
export const cosh = (x: number): number => {
  const size = x < 0 ? -x : x
  if (size < 0.34657359027997264) {
    const t = expm1(size)
    const w = 1 + t
    return 1 + (t * t) / (w + w)
  }
  if (size < 22) {
    const t = exp(size)
    return 0.5 * t + 0.5 / t
  }
  return halfExp(size)
}

/** Hyperbolic tangent, error below 2 ulp. */
export const tanh = (x: number): number => {
  const size = x < 0 ? -x : x
  if (size < 2.7755575615628914e-17) return x
  let result: number
  if (size >= 22) result = 1
  else if (size >= 1) result = 1 - 2 / (expm1(2 * size) + 2)
  else {
    const t = expm1(-2 * size)
    result = -t / (t + 2)
  }
  return Number.isNaN(x) ? NaN : x < 0 ? -result : result
}

// One double and its two halves. Nothing is kept here between calls.
const double = new Float64Array(1)
const words = new Int32Array(double.buffer)
const highWord = new Uint8Array(new Uint32Array([1]).buffer)[0] === 1 ? 1 : 0
const lowWord = 1 - highWord

/** 2^(i − 1074), every power of two that a double can hold. */
const powersOfTwo = new Float64Array(2098)
for (let i = 0, power = 5e-324; i < 2098; i++, power *= 2) powersOfTwo[i] = power

const rounding = 6755399441055744
const inverseLn2 = Math.LOG2E
const ln2 = Math.LN2
const ln2High = 0.6931471803691238
const ln2Low = 1.9082149292705877e-10
const halfPi = 1.5707963267948966
const halfPiLow = 6.123233995736766e-17
/** 2^−27: the square of less is lost beside 1. */
const tiny = 7.450580596923828e-9
const quarterPi = 0.7853981633974483

// exp: r − t·P(t) is r·(e^r + 1)/(e^r − 1) but for a term, on |r| ≤ ½ln 2.
const p1 = 0.16666666666666602
const p2 = -0.0027777777777015593
const p3 = 0.00006613756321437934
const p4 = -0.0000016533902205465252
const p5 = 4.1381367970572385e-8

// expm1: the same idea with the first terms taken out.
const q1 = -0.03333333333333313
const q2 = 0.0015873015872548146
const q3 = -0.0000793650757867488
const q4 = 0.000004008217827329362
const q5 = -2.0109921818362437e-7

/** log((1 + s)/(1 − s)) = 2s + s·R(s²), |s| ≤ 0.1716: this is R. */
const logarithmTail = (s: number): number => {
  const z = s * s
  const w = z * z
  return (
    w * (0.3999999999940942 + w * (0.22222198432149784 + w * 0.15313837699209373)) +
    z * (0.6666666666666735 + w * (0.2857142874366239 + w * (0.1818357216161805 + w * 0.14798198605116586)))
  )
}

let splitHigh = 0
let splitLow = 0
/** Splits log x into k·ln 2 and a high and a low part (left in splitHigh and splitLow); gives k. */
const split = (x: number): number => {
  let k = 0
  let m = x
  if (m < 2.2250738585072014e-308) {
    m *= 18014398509481984
    k = -54
  }
  double[0] = m
  const e = ((words[highWord] as number) + 0x95f62) >> 20
  k += e - 1023
  const f = m * (powersOfTwo[2097 - e] as number) - 1
  const half = 0.5 * f * f
  const s = f / (2 + f)
  splitHigh = withoutLowWord(f - half)
  splitLow = f - splitHigh - half + s * (half + logarithmTail(s))
  return k
}

const withoutLowWord = (x: number): number => {
  double[0] = x
  words[lowWord] = 0
  return double[0] as number
}

const isOdd = (y: number): boolean => {
  const size = y < 0 ? -y : y
  return size < 9007199254740992 && size % 2 === 1
}

/** x^y for x > 0, x ≠ 1, both finite, y ≠ 0: 2 to the power y·log₂x, with log₂x as the sum of two doubles. */
const positivePower = (x: number, y: number): number => {
  let t1: number
  let t2: number
  const size = y < 0 ? -y : y
  if (size > 2147483648) {
    if (size > 1.8446744073709552e19 || x < 0.9999995231628418 || x > 1.0000009536743164) return x < 1 === y < 0 ? Infinity : 0
    // |x − 1| is at most 2^−20: four terms of the series will do.
    const t = x - 1
    const w = t * t * (0.5 - t * (0.3333333333333333 - t * 0.25))
    const u = 1.4426950216293335 * t
    const v = t * 1.9259629911266175e-8 - w * inverseLn2
    t1 = withoutLowWord(u + v)
    t2 = v - (t1 - u)
  } else {
    let n = 0
    let m = x
    if (m < 2.2250738585072014e-308) {
      m *= 9007199254740992
      n = -53
    }
    double[0] = m
    const word = words[highWord] as number
    n += (word >> 20) - 1023
    const j = word & 0xfffff
    let high = j | 0x3ff00000
    // Taken from 1 or from 1½, whichever leaves the smaller logarithm.
    let middle = false
    if (j > 0x3988e) {
      if (j < 0xbb67a) middle = true
      else {
        n += 1
        high -= 0x00100000
      }
    }
    words[highWord] = high
    m = double[0] as number
    const base = middle ? 1.5 : 1
    const u = m - base
    const v = 1 / (m + base)
    const s = u * v
    const sHigh = withoutLowWord(s)
    double[0] = 0
    words[highWord] = ((high >> 1) | 0x20000000) + 0x00080000 + (middle ? 0x40000 : 0)
    const sumHigh = double[0] as number
    const sumLow = m - (sumHigh - base)
    const sLow = v * (u - sHigh * sumHigh - sHigh * sumLow)
    const s2 = s * s
    const r =
      s2 *
        s2 *
        (0.5999999999999946 +
          s2 *
            (0.4285714285785502 +
              s2 * (0.33333332981837743 + s2 * (0.272728123808534 + s2 * (0.23066074577556175 + s2 * 0.20697501780033842))))) +
      sLow * (sHigh + s)
    const sHigh2 = sHigh * sHigh
    const thirdHigh = withoutLowWord(3 + sHigh2 + r)
    const thirdLow = r - (thirdHigh - 3 - sHigh2)
    const a = sHigh * thirdHigh
    const b = sLow * thirdHigh + thirdLow * s
    const pHigh = withoutLowWord(a + b)
    const pLow = b - (pHigh - a)
    const zHigh = 0.9617967009544373 * pHigh
    const zLow = -7.028461650952758e-9 * pHigh + pLow * 0.9617966939259756 + (middle ? 1.350039202129749e-8 : 0)
    const offset = middle ? 0.5849624872207642 : 0
    t1 = withoutLowWord(zHigh + zLow + offset + n)
    t2 = zLow - (t1 - n - offset - zHigh)
  }
  const yHigh = withoutLowWord(y)
  const low = (y - yHigh) * t1 + y * t2
  let high = yHigh * t1
  const z = low + high
  // 8.0085662595372944372e-17 is how far past 1024 the exponent may be before the result rounds to Infinity.
  if (z > 1024 || (z === 1024 && low + 8.008566259537294e-17 > z - high)) return Infinity
  if (z < -1075 || (z === -1075 && low <= z - high)) return 0
  const n = z + rounding - rounding
  high -= n
  const t = withoutLowWord(low + high)
  const u = t * 0.6931471824645996
  const v = (low - (t - high)) * ln2 + t * -1.904654299957768e-9
  const w = u + v
  const rest = v - (w - u)
  const w2 = w * w
  const c = w - w2 * (p1 + w2 * (p2 + w2 * (p3 + w2 * (p4 + w2 * p5))))
  const result = 1 - ((w * c) / (c - 2) - (rest + w * rest) - w)
  if (n >= -1021 && n <= 1023) return result * (powersOfTwo[n + 1074] as number)
  return n > 1023 ? result * 2 * (powersOfTwo[n + 1073] as number) : result * (powersOfTwo[n + 1174] as number) * 7.888609052210118e-31
}

/** e^x/2 for x ≥ 22, where the other half of a hyperbolic function is lost in rounding; finite as long as it can be. */
const halfExp = (x: number): number => {
  if (x < 709) return 0.5 * exp(x)
  if (x > 711) return Infinity
  const root = exp(0.5 * x)
  // The root's own error counts twice, so it is made good by what its argument lost: nothing, ½x being exact.
  return 0.5 * root * root
}

let angle = 0
let angleRest = 0
/** Leaves x − q·π/2 in angle + angleRest, at most a little over π/4 in size, and gives q modulo 4. */
const reduced = (x: number): number => {
  if (!(x > -1e6 && x < 1e6)) return reducedByWholeNumbers(x)
  // π/2 in pieces of 33 bits, so that each product with q is exact (Cody & Waite 1980).
  const q = x * 0.6366197723675814 + rounding - rounding
  const first = x - q * 1.5707963267341256
  let piece = q * 6.077100506303966e-11
  let r = first - piece
  let rest = q * 2.0222662487959506e-21 - (first - r - piece)
  angle = r - rest
  if (angle > -1e-9 && angle < 1e-9) {
    const second = r
    piece = q * 2.0222662487111665e-21
    r = second - piece
    // What the first subtraction lost still counts.
    rest = q * 8.4784276603689e-32 - (second - r - piece)
    angle = r - rest
  }
  angleRest = r - angle - rest
  return ((q % 4) + 4) % 4
}

/** The same for angles beyond the reach of doubles, with 2/π to 1200 bits: about a microsecond, and seldom asked for. */
const reducedByWholeNumbers = (x: number): number => {
  double[0] = x < 0 ? -x : x
  const exponent = ((words[highWord] as number) >> 20) - 1075
  const mantissa = (BigInt(((words[highWord] as number) & 0xfffff) | 0x100000) << 32n) | BigInt((words[lowWord] as number) >>> 0)
  const places = BigInt(1200 - exponent)
  const turns = mantissa * twoOverPi
  const q = (turns + (1n << (places - 1n))) >> places
  const part = (turns - (q << places)) >> (places - 180n)
  const whole = (part * halfPiTo180) >> 180n
  const sign = x < 0 ? -1 : 1
  const high = Number(whole)
  angle = sign * high * 6.525304467998525e-55
  angleRest = sign * Number(whole - BigInt(high)) * 6.525304467998525e-55
  const quarter = Number(q & 3n)
  return sign < 0 ? (4 - quarter) % 4 : quarter
}
const twoOverPi = BigInt(
  "0x" +
    "a2f9836e4e441529fc2757d1f534ddc0db6295993c439041fe5163abdebbc561b7246e3a424dd2e006492eea09d1921cfe1deb1cb129a73ee88235f5" +
    "2ebb4484e99c7026b45f7e413991d639835339f49c845f8bbdf9283b1ff897ffde05980fef2f118b5a0a6d1f6d367ecf27cb09b74f463f669e5fea2d" +
    "7527bac7ebe5f17b3d0739f78a5292ea6bfb5fb11f8d5d0856033046fc7b",
)
const halfPiTo180 = 0x1921fb54442d18469898cc51701b839a252049c1114cf9n

// The three kernels take an angle in [−π/4, π/4] as the sum of two doubles.
const sineKernel = (x: number, rest: number): number => {
  const z = x * x
  const w = z * z
  const r =
    0.00833333333332249 +
    z * (-0.0001984126982985795 + z * 0.0000027557313707070068) +
    z * w * (-2.5050760253406863e-8 + z * 1.58969099521155e-10)
  const v = z * x
  return rest === 0 ? x + v * (-0.16666666666666632 + z * r) : x - (z * (0.5 * rest - v * r) - rest - v * -0.16666666666666632)
}

const cosineKernel = (x: number, rest: number): number => {
  const z = x * x
  const w = z * z
  const r =
    z * (0.0416666666666666 + z * (-0.001388888888887411 + z * 0.00002480158728947673)) +
    w * w * (-2.7557314351390663e-7 + z * (2.087572321298175e-9 + z * -1.1359647557788195e-11))
  const half = 0.5 * z
  const most = 1 - half
  return most + (1 - most - half + (z * r - x * rest))
}

/** tan, or −1/tan where `inverted`. */
const tangentKernel = (x0: number, rest0: number, inverted: boolean): number => {
  let x = x0
  let rest = rest0
  const far = x >= 0.6743316650390625 || x <= -0.6743316650390625
  const negative = x < 0
  if (far) {
    // Towards π/4 it is taken from there: tan(π/4 − y) = (1 − tan y)/(1 + tan y).
    if (negative) {
      x = -x
      rest = -rest
    }
    x = quarterPi - x + (3.061616997868383e-17 - rest)
    rest = 0
  }
  const z = x * x
  const w = z * z
  const odd =
    0.13333333333320124 +
    w *
      (0.021869488294859542 +
        w * (0.0035920791075913124 + w * (0.0005880412408202641 + w * (0.00007817944429395571 + w * -0.000018558637485527546))))
  const even =
    z *
    (0.05396825397622605 +
      w *
        (0.0088632398235993 +
          w * (0.0014562094543252903 + w * (0.0002464631348184699 + w * (0.00007140724913826082 + w * 0.00002590730518636337)))))
  const s = z * x
  const r = rest + z * (s * (odd + even) + rest) + 0.3333333333333341 * s
  const tangent = x + r
  if (far) {
    const v = inverted ? -1 : 1
    const result = v - 2 * (x - ((tangent * tangent) / (tangent + v) - r))
    return negative ? -result : result
  }
  if (!inverted) return tangent
  // −1/(x + r) with the quotient's rounding made good.
  const high = withoutLowWord(tangent)
  const low = r - (high - x)
  const quotient = -1 / tangent
  const quotientHigh = withoutLowWord(quotient)
  return quotientHigh + quotient * (1 + quotientHigh * high + quotientHigh * low)
}

/** (asin x − x)/x as a function of z = x², z ≤ ¼. */
const arcTail = (z: number): number =>
  (z *
    (0.16666666666666666 +
      z *
        (-0.3255658186224009 +
          z * (0.20121253213486293 + z * (-0.04005553450067941 + z * (0.0007915349942898145 + z * 0.00003479331075960212)))))) /
  (1 + z * (-2.403394911734414 + z * (2.0209457602335057 + z * (-0.6882839716054533 + z * 0.07703815055590194))))

/** (x − atan x)/x, |x| < 7/16. */
const arcTangentTail = (x: number): number => {
  const z = x * x
  const w = z * z
  return (
    z *
      (0.3333333333333293 +
        w *
          (0.14285714272503466 +
            w * (0.09090887133436507 + w * (0.06661073137387531 + w * (0.049768779946159324 + w * 0.016285820115365782))))) +
    w *
      (-0.19999999999876483 +
        w * (-0.11111110405462356 + w * (-0.0769187620504483 + w * (-0.058335701337905735 + w * -0.036531572744216916))))
  )
}

/** atan of `x` past the known atan `about` (with its low part). */
const arcTangentAbout = (x: number, about: number, low: number): number => about - (x * arcTangentTail(x) - low - x)
