// How numbers are written out, everywhere: to a number of significant digits, with a true minus sign, never in a programmer's notation.
// What is written here is for reading; what has to be read back by a machine is `plain`, which loses no digit.

const MINUS = "−"
const THIN = "\u202f"

/** The sign for "not available", wherever a number could stand. */
export const absent = "—"

/** Above this a whole number is written as a power of ten. */
const LARGEST_WHOLE = 1e12
/** Below 10 to this power a number is written as a power of ten. */
const LEAST_EXPONENT = -4

/**
 * A number to so many significant digits, trailing zeros kept: `written(0.48961, 3)` is 0.490. Digits before the point are never lost:
 * `written(1234.5, 2)` is 1235. Far from one it is written as a power of ten; NaN gives the sign for "not available".
 */
export function written(value: number, digits: number): string {
  if (Number.isNaN(value)) return absent
  if (value === 0) return "0"
  if (!Number.isFinite(value)) return value > 0 ? "∞" : `${MINUS}∞`
  const exponent = exponentOf(value, digits)
  if (exponent < LEAST_EXPONENT || Math.abs(value) >= LARGEST_WHOLE) return writtenAsPower(value, digits)
  return writtenFixed(value, Math.max(0, digits - 1 - exponent))
}

/** A number with so many decimals: for numbers that share a scale, such as the ticks of an axis. */
export function writtenFixed(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return written(value, 1)
  if (Math.abs(value) >= LARGEST_WHOLE) return writtenAsPower(value, 4)
  const text = value.toFixed(Math.min(100, decimals))
  const [whole = "", fraction] = text.replace("-", "").split(".")
  const isZero = !/[1-9]/.test(text)
  const sign = value < 0 && !isZero ? MINUS : ""
  return sign + grouped(whole) + (fraction === undefined ? "" : `.${fraction}`)
}

/** A whole number, its thousands set apart by thin spaces from 10 000 on. */
export const writtenCount = (count: number): string => writtenFixed(count, 0)

/** An interval in words, both ends to the same place after the point: `0.793 to 0.870`. */
export function writtenRange(from: number, to: number, digits: number): string {
  const decimals = sharedDecimals([from, to], digits)
  return decimals === null
    ? `${written(from, digits)} to ${written(to, digits)}`
    : `${fixedOrEnd(from, decimals)} to ${fixedOrEnd(to, decimals)}`
}

/** A p-value: two digits, and no more than the tails can bear. */
export function writtenProbability(p: number): string {
  if (Number.isNaN(p)) return absent
  if (p < 0.0001) return "below 0.0001"
  if (p > 0.99 && p < 1) return "above 0.99"
  return p >= 0.1 ? writtenFixed(p, 2) : written(p, 2)
}

/** A share of one as a percentage with so many decimals: `writtenShare(0.463)` is 46 %. */
export const writtenShare = (share: number, decimals = 0): string => `${writtenFixed(share * 100, decimals)}${THIN}%`

/** Every digit that tells the number from its neighbours, to be read: the full value on request. */
export function writtenInFull(value: number): string {
  if (!Number.isFinite(value)) return written(value, 1)
  const [mantissa = "", power] = String(value).split("e")
  const signed = mantissa.replace("-", MINUS)
  return power === undefined ? signed : `${signed} × 10${raised(Number(power))}`
}

/** Every digit, to be read by a machine: an ordinary hyphen for minus, no spaces; empty for what is not available. */
export const plain = (value: number): string => (Number.isNaN(value) ? "" : String(value))

/** The decimals that show the step between round numbers: 0.25 needs two, 5 none. */
export function decimalsOf(step: number): number {
  for (let decimals = 0; decimals < 20; decimals += 1) {
    if (Math.abs(Number(step.toFixed(decimals)) - step) <= Math.abs(step) * 1e-6) return decimals
  }
  return 20
}

/** The power of ten of a number once it is rounded to so many digits. */
const exponentOf = (value: number, digits: number): number => Number(value.toExponential(Math.max(0, digits - 1)).split("e")[1])

/**
 * The decimals that two ends share: those of the larger, but enough for two digits of the smaller. Null where one of them has to
 * be written as a power of ten.
 */
function sharedDecimals(values: readonly number[], digits: number): number | null {
  const finite = values.filter((value) => Number.isFinite(value) && value !== 0)
  const exponents = finite.map((value) => exponentOf(value, digits))
  if (exponents.length === 0) return null
  const least = Math.min(...exponents)
  const greatest = Math.max(...exponents)
  if (least < LEAST_EXPONENT || finite.some((value) => Math.abs(value) >= LARGEST_WHOLE)) return null
  return Math.max(0, digits - 1 - greatest, Math.min(digits, 2) - 1 - least)
}

const fixedOrEnd = (value: number, decimals: number): string => (Number.isFinite(value) ? writtenFixed(value, decimals) : written(value, 1))

/** A number as a power of ten, to so many significant digits: 1.2 × 10⁷. */
export function writtenAsPower(value: number, digits: number): string {
  const [mantissa = "", power = "0"] = value.toExponential(Math.max(0, digits - 1)).split("e")
  return `${mantissa.replace("-", MINUS)} × 10${raised(Number(power))}`
}

const RAISED: Readonly<Record<string, string>> = {
  "0": "⁰",
  "1": "¹",
  "2": "²",
  "3": "³",
  "4": "⁴",
  "5": "⁵",
  "6": "⁶",
  "7": "⁷",
  "8": "⁸",
  "9": "⁹",
  "-": "⁻",
}

const raised = (power: number): string => [...String(power)].map((sign) => RAISED[sign] ?? sign).join("")

/** Groups of three, only where there are at least five digits: 1234 reads well without. */
const grouped = (whole: string): string => (whole.length < 5 ? whole : whole.replace(/\B(?=(\d{3})+$)/g, THIN))
