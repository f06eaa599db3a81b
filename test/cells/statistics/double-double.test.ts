import { describe, expect, it } from "vitest"
import { productError, type Wide, WideSum, wideDivide, wideDot, wideRoot, wideSubtract } from "../../../cells/statistics/double-double.ts"
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
