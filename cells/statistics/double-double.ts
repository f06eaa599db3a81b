// Double-double arithmetic: a number as the unevaluated sum of two doubles, about 32 digits, in plain arithmetic. Used where a design is so
// badly conditioned that sums in doubles would lose the coefficients. Dekker 1971, Numer. Math. 18:224; Knuth, TAOCP vol. 2, §4.2.2.

/** Columns of numbers with 32 digits: high and low parts. */
export type Wide = { readonly high: Float64Array; readonly low: Float64Array }

export const wide = (n: number): Wide => ({ high: new Float64Array(n), low: new Float64Array(n) })

/** The error of a·b as a double, exactly: Dekker's splitting, since JavaScript has no fused multiply-add. Good below 1e290. */
export function productError(a: number, b: number, product: number): number {
  const ta = splitter * a
  const ah = ta - (ta - a)
  const al = a - ah
  const tb = splitter * b
  const bh = tb - (tb - b)
  const bl = b - bh
  return al * bl - (product - ah * bh - al * bh - ah * bl)
}

/** Σ a·b over wide columns; the low part is left in `out[1]`, the high part in `out[0]`. */
export function wideDot(a: Wide, b: Wide, from: number, to: number, out: Float64Array): void {
  const { high: ah, low: al } = a
  const { high: bh, low: bl } = b
  let sh = 0
  let sl = 0
  for (let i = from; i < to; i++) {
    const x = ah[i] as number
    const y = bh[i] as number
    const p = x * y
    const e = productError(x, y, p) + (x * (bl[i] as number) + (al[i] as number) * y)
    const s = sh + p
    const t = s - sh
    const error = sh - (s - t) + (p - t)
    const low = sl + e + error
    sh = s + low
    sl = low - (sh - s)
  }
  out[0] = sh
  out[1] = sl
}

/** target −= (high, low)·column, in place. */
export function wideSubtract(target: Wide, column: Wide, high: number, low: number): void {
  const { high: th, low: tl } = target
  const { high: ch, low: cl } = column
  for (let i = 0; i < th.length; i++) {
    const c = ch[i] as number
    const p = -high * c
    const e = productError(-high, c, p) - (high * (cl[i] as number) + low * c)
    const x = th[i] as number
    const s = x + p
    const t = s - x
    const error = x - (s - t) + (p - t)
    const tail = (tl[i] as number) + e + error
    const sum = s + tail
    th[i] = sum
    tl[i] = tail - (sum - s)
  }
}

/** target = target / (high, low), in place. */
export function wideDivide(target: Wide, high: number, low: number): void {
  const { high: th, low: tl } = target
  for (let i = 0; i < th.length; i++) {
    const x = th[i] as number
    const q = x / high
    const p = q * high
    const remainder = x - p - productError(q, high, p) + (tl[i] as number) - q * low
    const r = remainder / high
    const sum = q + r
    th[i] = sum
    tl[i] = r - (sum - q)
  }
}

/** √(high + low) to double-double; 0 at 0. */
export function wideRoot(high: number, low: number): readonly [number, number] {
  if (!(high > 0)) return [0, 0]
  const root = Math.sqrt(high)
  const p = root * root
  const correction = (high - p - productError(root, root, p) + low) / (2 * root)
  const sum = root + correction
  return [sum, correction - (sum - root)]
}

/** x^a for a whole a, by multiplying: the double next to it, and what is left, which is 0 where doubles hold no more. */
export function widePower(x: number, a: number): readonly [number, number] {
  let [high, low] = [1, 0]
  for (let k = 0; k < Math.abs(a); k++) {
    const p = high * x
    const e = productError(high, x, p) + low * x
    const sum = p + e
    low = e - (sum - p)
    // Where splitting overflows there is nothing to be kept.
    high = Number.isFinite(low) ? sum : p
    if (!Number.isFinite(low)) low = 0
  }
  if (a >= 0) return [high, low]
  const q = 1 / high
  const p = q * high
  const r = (1 - p - productError(q, high, p) - q * low) / high
  return Number.isFinite(r) ? [q + r, r - (q + r - q)] : [q, 0]
}

/** A running sum with 32 digits; `add` takes doubles, `addProduct` exact products. */
export class WideSum {
  high = 0
  low = 0
  add(x: number): void {
    const s = this.high + x
    const t = s - this.high
    const tail = this.low + (this.high - (s - t) + (x - t))
    this.high = s + tail
    this.low = tail - (this.high - s)
  }
  addProduct(a: number, b: number): void {
    const p = a * b
    const e = productError(a, b, p)
    this.add(p)
    this.add(e)
  }
  clear(): void {
    this.high = 0
    this.low = 0
  }
}

/** 2²⁷ + 1. */
const splitter = 134217729
