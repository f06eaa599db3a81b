// Exact numbers and exact rational functions: quotients of polynomials with whole coefficients over named symbols. A symbol is the variable `mu`,
// a constant of the user's that is not yet known, or a number that is no fraction, such as pi or log(10). With them it is decided,
// not only seen to some digits, whether two pieces meet, where a formula has its limit, and whether a slope is that of a canonical link.

/** Whole coefficients by monomial; a monomial is `symbol:power` in order of names, joined by blanks. The zero polynomial is empty. */
export type Polynomial = ReadonlyMap<string, bigint>

export type Fraction = { readonly above: Polynomial; readonly below: Polynomial }

/** Beyond these a fraction is given up: what follows from it would cost more than it tells. */
const mostTerms = 120
const mostBits = 6_000n
const bitBound = 1n << mostBits
const mostDegree = 64

const constantPolynomial = (value: bigint): Polynomial => (value === 0n ? new Map() : new Map([["", value]]))
const onePolynomial = constantPolynomial(1n)

export const whole = (value: bigint): Fraction => ({ above: constantPolynomial(value), below: onePolynomial })
export const symbol = (name: string): Fraction => ({ above: new Map([[`${name}:1`, 1n]]), below: onePolynomial })
export const zero = whole(0n)
export const one = whole(1n)

/** A decimal as written, or a percentage, exactly; null for what is none or too long. */
export function decimal(text: string): Fraction | null {
  const found = /^(-?)(\d+)(?:\.(\d+))?(?:[eE]([+-]?\d+))?(%?)$/.exec(text.trim())
  if (found === null) return null
  const [, sign = "", digits = "", part = "", power = "0", percent = ""] = found
  const exponent = Number(power) - part.length - (percent === "%" ? 2 : 0)
  if (!(exponent > -1200 && exponent < 1200)) return null
  const value = BigInt(digits + part) * (sign === "-" ? -1n : 1n)
  const scale = BigInt(`1${"0".repeat(exponent < 0 ? -exponent : exponent)}`)
  return exponent >= 0 ? ratio(value * scale, 1n) : ratio(value, scale)
}

/** A double, exactly; null for what is not finite. */
export function double(value: number): Fraction | null {
  if (!Number.isFinite(value)) return null
  let scaled = value
  let shift = 0n
  while (!Number.isInteger(scaled)) {
    // Doubling is exact, and 2^1100 times any double is whole.
    scaled *= 2
    shift += 1n
  }
  return ratio(BigInt(scaled), 1n << shift)
}

const ratio = (above: bigint, below: bigint): Fraction => {
  const common = divisor(above < 0n ? -above : above, below)
  return { above: constantPolynomial(above / common), below: constantPolynomial(below / common) }
}

const divisor = (a: bigint, b: bigint): bigint => {
  let [x, y] = [a, b]
  while (y !== 0n) [x, y] = [y, x % y]
  return x === 0n ? 1n : x
}

/** The number a fraction is, as two whole numbers, the lower one above 0; null where symbols stay in it. */
export function numberOf({ above, below }: Fraction): readonly [bigint, bigint] | null {
  if (above.size === 0) return [0n, 1n]
  const [first] = below
  if (first === undefined || above.size !== below.size) return null
  const [monomial, coefficient] = first
  const other = above.get(monomial)
  if (other === undefined) return null
  for (const [key, value] of below) if ((above.get(key) ?? 0n) * coefficient !== value * other) return null
  const common = divisor(other < 0n ? -other : other, coefficient < 0n ? -coefficient : coefficient)
  const sign = coefficient < 0n ? -1n : 1n
  return [(sign * other) / common, (sign * coefficient) / common]
}

export const isZero = ({ above }: Fraction): boolean => above.size === 0

/** Whether both are the same number, or the same function of their symbols. */
export function areEqual(a: Fraction, b: Fraction): boolean {
  const left = productOf(a.above, b.below)
  const right = productOf(b.above, a.below)
  return left !== null && right !== null && differenceOf(left, right).size === 0
}

export function plus(a: Fraction, b: Fraction): Fraction | null {
  if (samePolynomial(a.below, b.below)) return made(sumOf(a.above, b.above), a.below)
  const [x, y, below] = [productOf(a.above, b.below), productOf(b.above, a.below), productOf(a.below, b.below)]
  return x === null || y === null || below === null ? null : made(sumOf(x, y), below)
}

export const minus = ({ above, below }: Fraction): Fraction => ({ above: negativeOf(above), below })
export const less = (a: Fraction, b: Fraction): Fraction | null => plus(a, minus(b))

export function times(a: Fraction, b: Fraction): Fraction | null {
  // A whole factor that one has below and the other above falls out, so that x/y·y is x.
  if (samePolynomial(a.below, b.above)) return made(a.above, b.below)
  if (samePolynomial(b.below, a.above)) return made(b.above, a.below)
  const [above, below] = [productOf(a.above, b.above), productOf(a.below, b.below)]
  return above === null || below === null ? null : made(above, below)
}

/** Null also where the divisor is 0. */
export const over = (a: Fraction, b: Fraction): Fraction | null => (isZero(b) ? null : times(a, { above: b.below, below: b.above }))

export function power(a: Fraction, n: number): Fraction | null {
  if (!Number.isInteger(n) || n > mostDegree || n < -mostDegree) return null
  if (n < 0) return isZero(a) ? null : power({ above: a.below, below: a.above }, -n)
  let result: Fraction | null = one
  for (let k = 0; k < n && result !== null; k++) {
    const [above, below]: readonly [Polynomial | null, Polynomial | null] = [
      productOf(result.above, a.above),
      productOf(result.below, a.below),
    ]
    result = above === null || below === null ? null : made(above, below)
  }
  return result
}

/** The derivative of a fraction with respect to a symbol. */
export function slope(of: Fraction, name: string): Fraction | null {
  const [x, y] = [productOf(slopeOf(of.above, name), of.below), productOf(of.above, slopeOf(of.below, name))]
  const below = productOf(of.below, of.below)
  return x === null || y === null || below === null ? null : made(differenceOf(x, y), below)
}

/** Whether a symbol falls out: the derivative with respect to it is 0 everywhere. */
export function isFreeOf(of: Fraction, name: string): boolean {
  const [x, y] = [productOf(slopeOf(of.above, name), of.below), productOf(of.above, slopeOf(of.below, name))]
  return x !== null && y !== null && differenceOf(x, y).size === 0
}

/** How a fraction behaves where a symbol takes a value: the value, or how fast it goes to 0 or to infinity. */
export type Approach =
  | { readonly type: "value"; readonly value: Fraction }
  /** times (symbol − place)^order, or symbol^order at infinity: an infinity where the order says so, else 0. */
  | { readonly type: "infinite" | "zero"; readonly times: Fraction; readonly order: number }

/** At a place: zeros above and below are cancelled, order by order. */
export function approach(of: Fraction, name: string, place: Fraction): Approach | null {
  const above = leading(of.above, name, place)
  const below = leading(of.below, name, place)
  if (above === null || below === null) return null
  if (above === "zero") return { type: "value", value: zero }
  if (below === "zero") return null
  const quotient = over(above.value, below.value)
  if (quotient === null) return null
  const order = above.order - below.order
  if (order === 0) return { type: "value", value: quotient }
  return { type: order > 0 ? "zero" : "infinite", times: quotient, order }
}

/** The same where the symbol goes to infinity, by the highest powers. */
export function approachFar(of: Fraction, name: string): Approach | null {
  if (isZero(of)) return { type: "value", value: zero }
  const above = highest(of.above, name)
  const below = highest(of.below, name)
  const quotient = over({ above: above.coefficient, below: onePolynomial }, { above: below.coefficient, below: onePolynomial })
  if (quotient === null) return null
  const order = above.degree - below.degree
  if (order === 0) return { type: "value", value: quotient }
  return { type: order > 0 ? "infinite" : "zero", times: quotient, order }
}

/** The fraction in words, one for each number: for naming symbols after what they are made of. */
export function named(of: Fraction): string {
  const number = numberOf(of)
  if (number !== null) return number[1] === 1n ? `${number[0]}` : `${number[0]}/${number[1]}`
  const written = (polynomial: Polynomial): string =>
    [...polynomial]
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([monomial, value]) => `${value} ${monomial}`)
      .join(" + ")
  return `(${written(of.above)})/(${written(of.below)})`
}

/** The monomial as pairs of symbol and power. */
export const partsOf = (monomial: string): readonly (readonly [string, number])[] =>
  monomial === ""
    ? []
    : monomial.split(" ").map((part) => {
        const at = part.lastIndexOf(":")
        return [part.slice(0, at), Number(part.slice(at + 1))] as const
      })

/** Takes out what all coefficients share, so that whole numbers stay short. */
function made(above: Polynomial, below: Polynomial): Fraction | null {
  if (below.size === 0) return null
  if (above.size === 0) return zero
  if (above.size + below.size > mostTerms) return null
  let common = 0n
  for (const polynomial of [above, below]) {
    for (const value of polynomial.values()) {
      if (value > bitBound || value < -bitBound) return null
      common = divisor(common, value < 0n ? -value : value)
      if (common === 1n) break
    }
  }
  const [shared, first] = [sharedPowers(above, below), [...below.values()][0] ?? 1n]
  const by = first < 0n ? -common : common
  if (by === 1n && shared === null) return { above, below }
  const reduced = (polynomial: Polynomial): Polynomial =>
    new Map([...polynomial].map(([monomial, value]) => [shared === null ? monomial : lowered(monomial, shared), value / by]))
  return { above: reduced(above), below: reduced(below) }
}

/** Powers of symbols that every monomial above and below has. */
function sharedPowers(above: Polynomial, below: Polynomial): ReadonlyMap<string, number> | null {
  let shared: Map<string, number> | null = null
  for (const polynomial of [above, below]) {
    for (const monomial of polynomial.keys()) {
      const own = new Map(partsOf(monomial))
      if (shared === null) shared = own
      else
        for (const [name, least] of shared) {
          const power = Math.min(least, own.get(name) ?? 0)
          if (power === 0) shared.delete(name)
          else shared.set(name, power)
        }
      if (shared.size === 0) return null
    }
  }
  return shared
}

const lowered = (monomial: string, by: ReadonlyMap<string, number>): string =>
  joined(partsOf(monomial).map(([name, power]) => [name, power - (by.get(name) ?? 0)] as const))

const joined = (parts: readonly (readonly [string, number])[]): string =>
  parts
    .filter(([, power]) => power !== 0)
    .sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0))
    .map(([name, power]) => `${name}:${power}`)
    .join(" ")

function sumOf(a: Polynomial, b: Polynomial): Polynomial {
  const sum = new Map(a)
  for (const [monomial, value] of b) {
    const total = (sum.get(monomial) ?? 0n) + value
    if (total === 0n) sum.delete(monomial)
    else sum.set(monomial, total)
  }
  return sum
}
const negativeOf = (a: Polynomial): Polynomial => new Map([...a].map(([monomial, value]) => [monomial, -value]))
const differenceOf = (a: Polynomial, b: Polynomial): Polynomial => sumOf(a, negativeOf(b))
const samePolynomial = (a: Polynomial, b: Polynomial): boolean =>
  a === b || (a.size === b.size && a.size > 0 && [...a].every(([monomial, value]) => b.get(monomial) === value))

function productOf(a: Polynomial, b: Polynomial): Polynomial | null {
  if (a.size * b.size > mostTerms * mostTerms) return null
  if (a.size === 1 && a.get("") === 1n) return b
  if (b.size === 1 && b.get("") === 1n) return a
  const product = new Map<string, bigint>()
  for (const [left, x] of a) {
    for (const [right, y] of b) {
      const monomial = left === "" ? right : right === "" ? left : multiplied(left, right)
      if (monomial === null) return null
      const total = (product.get(monomial) ?? 0n) + x * y
      if (total === 0n) product.delete(monomial)
      else product.set(monomial, total)
    }
  }
  return product
}

function multiplied(a: string, b: string): string | null {
  const powers = new Map(partsOf(a))
  for (const [name, power] of partsOf(b)) powers.set(name, (powers.get(name) ?? 0) + power)
  let degree = 0
  for (const power of powers.values()) degree += power
  return degree > mostDegree ? null : joined([...powers])
}

function slopeOf(of: Polynomial, name: string): Polynomial {
  const result = new Map<string, bigint>()
  for (const [monomial, value] of of) {
    const parts = partsOf(monomial)
    const power = parts.find(([own]) => own === name)?.[1] ?? 0
    if (power === 0) continue
    const next = joined(parts.map(([own, times]) => [own, own === name ? times - 1 : times] as const))
    result.set(next, (result.get(next) ?? 0n) + value * BigInt(power))
  }
  return result
}

/** The coefficients of the powers of one symbol. */
function byPower(of: Polynomial, name: string): readonly (readonly [number, Polynomial])[] {
  const powers = new Map<number, Map<string, bigint>>()
  for (const [monomial, value] of of) {
    const parts = partsOf(monomial)
    const power = parts.find(([own]) => own === name)?.[1] ?? 0
    const rest = joined(parts.filter(([own]) => own !== name))
    const terms = powers.get(power) ?? new Map<string, bigint>()
    powers.set(power, terms)
    terms.set(rest, value)
  }
  return [...powers].sort(([a], [b]) => a - b)
}

function highest(of: Polynomial, name: string): { readonly degree: number; readonly coefficient: Polynomial } {
  const [degree, coefficient] = byPower(of, name).at(-1) ?? [0, onePolynomial]
  return { degree, coefficient }
}

/** The value of a polynomial at a place. */
function valueAt(of: Polynomial, name: string, place: Fraction): Fraction | null {
  let sum: Fraction | null = zero
  let [raised, reached]: [Fraction | null, number] = [one, 0]
  for (const [degree, coefficient] of byPower(of, name)) {
    for (; reached < degree && raised !== null; reached++) raised = times(raised, place)
    const term: Fraction | null = raised === null ? null : times({ above: coefficient, below: onePolynomial }, raised)
    sum = term === null || sum === null ? null : plus(sum, term)
    if (sum === null) return null
  }
  return sum
}

/** The first derivative at the place that is not 0, over its factorial, and its order; `zero` for the zero polynomial. */
function leading(of: Polynomial, name: string, place: Fraction): { readonly value: Fraction; readonly order: number } | "zero" | null {
  let polynomial = of
  let factorial = 1n
  for (let order = 0; order <= mostDegree; order++) {
    if (polynomial.size === 0) return "zero"
    const value = valueAt(polynomial, name, place)
    if (value === null) return null
    if (!isZero(value)) {
      const quotient = over(value, whole(factorial))
      return quotient === null ? null : { value: quotient, order }
    }
    polynomial = slopeOf(polynomial, name)
    factorial *= BigInt(order + 1)
  }
  return null
}
