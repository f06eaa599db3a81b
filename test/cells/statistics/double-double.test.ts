import { describe, expect, it } from "vitest"
import {
  productError,
  type Wide,
  WideSum,
  wideDivide,
  wideDot,
  widePower,
  wideRoot,
  wideSubtract,
} from "../../../cells/statistics/double-double.ts"
import { generator } from "./problems.ts"

/** A double as a whole number of 2^−200. */
const exact = (x: number): bigint => {
  let [scaled, shift] = [x, 0]
  while (!Number.isInteger(scaled)) {
    scaled *= 2
    shift++
  }
  return (BigInt(scaled) << 200n) >> BigInt(shift)
}
const draw = generator(11)
const column = (n: number): Wide => {
  const high = Float64Array.from({ length: n }, () => draw() - 0.5)
  return { high, low: high.map((h) => h * 1e-17 * draw()) }
}

describe("double-double arithmetic", () => {
  it("knows the error of a product exactly", () => {
    for (let k = 0; k < 200; k++) {
      const [a, b] = [draw() * 1e5, draw() - 0.5]
      const p = a * b
      expect((exact(a) * exact(b)) >> 200n).toBe(exact(p) + exact(productError(a, b, p)))
    }
  })

  it("takes whole powers to 31 digits, and their reciprocals", () => {
    for (let k = 0; k < 100; k++) {
      const x = 8 * (draw() - 0.5)
      for (const power of [2, 3, 7, 10]) {
        let whole = exact(x)
        for (let times = 1; times < power; times++) whole = (whole * exact(x)) >> 200n
        const [high, low] = widePower(x, power)
        expect(high).toBe(high + low)
        const far = exact(high) + exact(low) - whole
        expect(Number(far < 0n ? -far : far)).toBeLessThan(1e-31 * Number(whole < 0n ? -whole : whole) + 2 ** 10)
        const [over, rest] = widePower(x, -power)
        const product = ((exact(over) + exact(rest)) * whole) >> 200n
        expect(Math.abs(Number(product - (1n << 200n)) / 2 ** 200)).toBeLessThan(1e-30)
      }
    }
    expect([widePower(1e200, 2), widePower(0, -1), widePower(-3, 0)]).toEqual([
      [Number.POSITIVE_INFINITY, 0],
      [Number.POSITIVE_INFINITY, 0],
      [1, 0],
    ])
  })

  it("sums what cancels", () => {
    const sum = new WideSum()
    for (const x of [1e16, 1, -1e16, 2 ** -60, 3]) sum.add(x)
    expect([sum.high, sum.low]).toEqual([4, 2 ** -60])
    sum.clear()
    sum.addProduct(1 + 2 ** -30, 1 - 2 ** -30)
    sum.add(-1)
    expect(sum.high + sum.low).toBe(-(2 ** -60))
  })

  it("takes a projection off a column so that nothing of it is left", () => {
    const [q, v] = [column(50), column(50)]
    const out = new Float64Array(2)
    wideDot(q, q, 0, 50, out)
    const [length, lengthLow] = wideRoot(out[0] as number, out[1] as number)
    wideDivide(q, length, lengthLow)
    wideDot(q, q, 0, 50, out)
    expect(Math.abs((out[0] as number) - 1 + (out[1] as number))).toBeLessThan(1e-30)
    wideDot(q, v, 0, 50, out)
    wideSubtract(v, q, out[0] as number, out[1] as number)
    wideDot(q, v, 0, 50, out)
    expect(Math.abs(out[0] as number)).toBeLessThan(1e-30)
  })
})
