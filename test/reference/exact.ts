// Doubles against exact values written out in decimal. An exact value has more digits than a double, so it is compared as a fraction of
// whole numbers and never read into one.

/** How far a double is from the exact value, in units in the last place of that value (at least the smallest subnormal). */
export function unitsInLastPlace(value: number, exact: string): number {
  const near = Number(exact)
  if (!Number.isFinite(value) || !Number.isFinite(near)) return value === near ? 0 : Infinity
  const error = magnitude(doubleScaled(value) - decimalScaled(exact))
  const unit = 2n ** BigInt(Math.max(exponent(near) - 52, -1074) + binaryShift) * 10n ** BigInt(decimalShift)
  return Number((error * 1_000_000n) / unit) / 1e6
}

/** |value − exact|/|exact|; 0 where both are 0, and where both are too small for a double. */
export function relativeError(value: number, exact: string): number {
  const near = Number(exact)
  if (!Number.isFinite(value) || !Number.isFinite(near)) return value === near ? 0 : Infinity
  // An exact value may be far below all doubles, such as 1e-123456789.
  if (near === 0) return Math.abs(value) <= 1e-323 ? 0 : Infinity
  if (Math.abs(near) < 2.3e-308) return unitsInLastPlace(value, exact) < 8 ? 0 : Infinity
  const whole = decimalScaled(exact)
  return Number((magnitude(doubleScaled(value) - whole) * 10n ** 30n) / magnitude(whole)) / 1e30
}

// Every double and every decimal of these tests is a whole number of 2^−1100·10^−420.
const binaryShift = 1100
const decimalShift = 420

const magnitude = (x: bigint): bigint => (x < 0n ? -x : x)

function exponent(x: number): number {
  const bits = new DataView(new ArrayBuffer(8))
  bits.setFloat64(0, x)
  return Math.max(((bits.getUint32(0) >>> 20) & 0x7ff) - 1023, -1022)
}

function doubleScaled(x: number): bigint {
  const shift = exponent(x) - 52
  const mantissa = BigInt(Math.abs(x) / 2 ** Math.max(shift, -1000) / 2 ** (shift - Math.max(shift, -1000)))
  const size = mantissa * 2n ** BigInt(shift + binaryShift) * 10n ** BigInt(decimalShift)
  return x < 0 ? -size : size
}

function decimalScaled(text: string): bigint {
  const parts = /^(-?)(\d+)(?:\.(\d*))?(?:e([+-]?\d+))?$/i.exec(text)
  if (parts === null) throw new Error(`${text} is not a decimal number.`)
  const [, sign, whole, fraction = "", power = "0"] = parts
  const places = Number(power) - fraction.length + decimalShift
  const digits = BigInt(`${whole}${fraction}`)
  const size = (places >= 0 ? digits * 10n ** BigInt(places) : digits / 10n ** BigInt(-places)) * 2n ** BigInt(binaryShift)
  return sign === "-" ? -size : size
}
