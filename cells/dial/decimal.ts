// Decimals, exactly: a whole number of units of the last digit. A dial stops at from + k·step, and 0.1 + 2·0.1 has to be 0.3 there and in
// the text that a move writes, which sums of doubles do not give.

/** `units` / 10^`digits`. */
export type Decimal = { readonly units: bigint; readonly digits: number }

/** Longer ones are of no use on a dial, and their sums would be without end. */
const mostDigits = 30

/** The decimal a number or percentage says, as written; null where it has more than 30 digits before or after its point. */
export function decimalFrom(text: string): Decimal | null {
  const found = /^([+-]?)(\d+)(?:\.(\d+))?(?:[eE]([+-]?\d+))?(%?)$/.exec(text)
  if (found === null) return null
  const [, sign = "", whole = "0", fraction = "", exponent = "0", percent = ""] = found
  const shift = fraction.length - Number(exponent) + (percent === "%" ? 2 : 0)
  if (shift > mostDigits || whole.length - shift + fraction.length > 2 * mostDigits || whole.length + fraction.length > 2 * mostDigits)
    return null
  const units = BigInt(sign + whole + fraction)
  return shift >= 0 ? { units, digits: shift } : { units: units * tenTo(-shift), digits: 0 }
}

/** The same number with more digits. */
export const withDigits = (of: Decimal, digits: number): Decimal => ({ units: of.units * tenTo(digits - of.digits), digits })

/** As a clause says it: all its digits, and no sign before a zero. */
export function decimalText({ units, digits }: Decimal): string {
  const figures = `${units < 0n ? -units : units}`.padStart(digits + 1, "0")
  const text = digits === 0 ? figures : `${figures.slice(0, -digits)}.${figures.slice(-digits)}`
  return units < 0n ? `-${text}` : text
}

/** The double nearest to it. */
export const numberOf = (of: Decimal): number => Number(decimalText(of))

/** 10^digits, for digits ≥ 0. */
export const tenTo = (digits: number): bigint => BigInt(`1${"0".repeat(digits)}`)
