// Numbers read straight from bytes, correctly rounded, without a string for each field. Also says how a number is written, since "007" and
// "9007199254740993" are numbers by syntax and names by intention.

export const byteOf = { tab: 9, blank: 32, plus: 43, comma: 44, minus: 45, point: 46, zero: 48, nine: 57 } as const

/** Whole numbers from here on are no longer told apart by a double. */
export const exactBelow = 9007199254740992

/** How a field is written, as bits; 0 where it is not a number at all. */
export const written = { number: 1, whole: 2, negative: 4, leadingZero: 8, long: 16, decimals: 32, threeDecimals: 64 } as const

// Every entry is a double exactly, so one multiplication or division by it rounds once and rightly (Clinger 1990).
const powersOfTen = [
  1, 10, 100, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
] as const

/**
 * The number a field says: sign, digits, the decimal sign with digits on either side or both, exponent.
 *
 * @param decimal  the byte of the decimal sign
 * @returns        the nearest double; ±Infinity beyond the largest; NaN where the field is anything else
 */
export const numberIn = (bytes: Uint8Array, from: number, to: number, decimal: number): number => {
  let at = from
  const negative = bytes[at] === byteOf.minus
  if (negative || bytes[at] === byteOf.plus) at++
  let mantissa = 0
  let significant = 0
  let digits = 0
  let shift = 0
  while (at < to) {
    const digit = (bytes[at] as number) - byteOf.zero
    if (digit < 0 || digit > 9) break
    mantissa = mantissa * 10 + digit
    if (mantissa > 0) significant++
    digits++
    at++
  }
  if (at < to && bytes[at] === decimal) {
    at++
    while (at < to) {
      const digit = (bytes[at] as number) - byteOf.zero
      if (digit < 0 || digit > 9) break
      mantissa = mantissa * 10 + digit
      if (mantissa > 0) significant++
      digits++
      shift--
      at++
    }
  }
  if (digits === 0) return Number.NaN
  if (at < to && ((bytes[at] as number) | 32) === 101) {
    at++
    const sign = at < to ? (bytes[at] as number) : 0
    if (sign === byteOf.minus || sign === byteOf.plus) at++
    if (at >= to) return Number.NaN
    let exponent = 0
    while (at < to) {
      const digit = (bytes[at] as number) - byteOf.zero
      if (digit < 0 || digit > 9) return Number.NaN
      if (exponent < 100_000) exponent = exponent * 10 + digit
      at++
    }
    shift += sign === byteOf.minus ? -exponent : exponent
  }
  if (at !== to) return Number.NaN
  if (mantissa === 0) return 0
  if (significant > 15 || shift > 22 || shift < -22) return slowly(bytes, from, to, decimal)
  const size = shift < 0 ? mantissa / (powersOfTen[-shift] as number) : mantissa * (powersOfTen[shift] as number)
  return negative ? -size : size
}

/** How a field is written as a number under this decimal sign: bits of `written`. */
export const shapeOf = (bytes: Uint8Array, from: number, to: number, decimal: number): number => {
  let at = from
  let shape: number = written.number
  if (bytes[at] === byteOf.minus) {
    shape |= written.negative
    at++
  } else if (bytes[at] === byteOf.plus) at++
  const begin = at
  while (at < to && isDigit(bytes[at] as number)) at++
  const before = at - begin
  if (before > 1 && bytes[begin] === byteOf.zero) shape |= written.leadingZero
  let after = 0
  let exponent = false
  const pointed = at < to && bytes[at] === decimal
  if (pointed) {
    const point = ++at
    while (at < to && isDigit(bytes[at] as number)) at++
    after = at - point
  }
  if (before + after === 0) return 0
  if (at < to && ((bytes[at] as number) | 32) === 101) {
    exponent = true
    at++
    if (at < to && (bytes[at] === byteOf.minus || bytes[at] === byteOf.plus)) at++
    if (at >= to) return 0
    while (at < to && isDigit(bytes[at] as number)) at++
  }
  if (at !== to) return 0
  if (pointed) {
    shape |= written.decimals
    // "1,234" may group thousands; "0,234" and "1234,567" cannot, nor can anything with an exponent.
    const groups = after === 3 && before >= 1 && before <= 3 && bytes[begin] !== byteOf.zero && !exponent
    if (groups) shape |= written.threeDecimals
  } else if (!exponent) {
    shape |= written.whole
    if (before > 15 && Math.abs(numberIn(bytes, from, to, decimal)) >= exactBelow) shape |= written.long
  }
  return shape
}

/**
 * Whether a whole number is written that reading would change: a double does not hold it exactly, and it is not the way that double is
 * written either (50741488950617130 is, though the double is two less: no other text would be written for it).
 */
export const isRounded = (bytes: Uint8Array, from: number, to: number, value: number): boolean => {
  if (!(Math.abs(value) >= exactBelow) || !Number.isFinite(value)) return false
  const words = ascii(bytes, from, to)
  if (!/^[+-]?\d+$/.test(words)) return false
  const whole = BigInt(words.replace("+", ""))
  return whole !== BigInt(value) && String(whole) !== String(value)
}

/** Whether a number is written with a zero that means nothing as a number, and may mean something as a name. */
export const hasLeadingZero = (bytes: Uint8Array, from: number, to: number): boolean => {
  const at = bytes[from] === byteOf.minus || bytes[from] === byteOf.plus ? from + 1 : from
  return bytes[at] === byteOf.zero && at + 1 < to && isDigit(bytes[at + 1] as number)
}

const isDigit = (byte: number): boolean => byte >= byteOf.zero && byte <= byteOf.nine

const ascii = (bytes: Uint8Array, from: number, to: number): string => {
  let words = ""
  for (let at = from; at < to; at++) words += String.fromCharCode(bytes[at] as number)
  return words
}

/** Many digits or a far exponent: left to the language's own correctly rounded reading. */
const slowly = (bytes: Uint8Array, from: number, to: number, decimal: number): number => {
  const words = ascii(bytes, from, to)
  return Number(decimal === byteOf.point ? words : words.replace(String.fromCharCode(decimal), "."))
}
