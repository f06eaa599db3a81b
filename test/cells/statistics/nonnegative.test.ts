import { describe, expect, it } from "vitest"
import { nonnegativeCombination } from "../../../cells/statistics/nonnegative.ts"
import { dot } from "../../../cells/statistics/scoring.ts"
import { generator } from "./problems.ts"

const draw = generator(3)
const unit = (p: number): Float64Array => {
  const v = Float64Array.from({ length: p }, () => draw() - 0.5)
  const size = Math.sqrt(dot(v, v))
  return v.map((x) => x / size)
}

describe("a combination without negative parts", () => {
  it("gives back a vector that is one, however many columns depend on each other", () => {
    for (let k = 0; k < 50; k++) {
      const p = 2 + (k % 4)
      const columns = Array.from({ length: p + (k % 5) }, () => unit(p))
      const target = new Float64Array(p)
      columns.forEach((column, j) => {
        if ((j + k) % 2 === 1) return
        for (let i = 0; i < p; i++) target[i] = (target[i] as number) + 2 * (column[i] as number) * ((j % 3) + 0.5)
      })
      const { lambda, left } = nonnegativeCombination(columns, target)
      expect(lambda.every((l) => l >= 0)).toBe(true)
      expect(Math.sqrt(dot(left, left))).toBeLessThan(1e-10 * (1 + Math.sqrt(dot(target, target))))
    }
  })

  it("leaves what no column leads to: nothing that is left points along one, and what is used is at right angles to it", () => {
    for (let k = 0; k < 50; k++) {
      const columns = Array.from({ length: 3 }, () => unit(4))
      const { lambda, left } = nonnegativeCombination(columns, unit(4))
      columns.forEach((column, j) => {
        expect(dot(column, left)).toBeLessThan(1e-10)
        if ((lambda[j] as number) > 0) expect(Math.abs(dot(column, left))).toBeLessThan(1e-10)
      })
    }
  })
})
