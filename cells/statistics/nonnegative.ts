// Least squares with coefficients that are not negative: whether a vector is a sum of others taken so often or not at all, as the multipliers
// of rows at an edge have to be. Lawson & Hanson 1974, Solving Least Squares Problems, ch. 23.

import { definiteSolver } from "./definite.ts"
import { dot } from "./scoring.ts"

/**
 * λ ≥ 0 for which Σ λ·column is nearest to the target, and what is left of the target.
 * @param columns  vectors of length one
 */
export function nonnegativeCombination(
  columns: readonly Float64Array[],
  target: Float64Array,
): { readonly lambda: Float64Array; readonly left: Float64Array } {
  const lambda = new Float64Array(columns.length)
  const taken: number[] = []
  const leftOf = (): Float64Array => {
    const left = target.slice()
    for (const k of taken) {
      const column = columns[k] as Float64Array
      for (let j = 0; j < left.length; j++) left[j] = (left[j] as number) - (lambda[k] as number) * (column[j] as number)
    }
    return left
  }
  const size = Math.sqrt(dot(target, target))
  let left: Float64Array = target.slice()
  for (let round = 0; round < 3 * (columns.length + target.length); round++) {
    // The column that would shorten what is left most.
    let best = -1
    let most = 1e-12 * size
    columns.forEach((column, k) => {
      const along = dot(column, left)
      if (along <= most || taken.includes(k)) return
      most = along
      best = k
    })
    if (best < 0) break
    taken.push(best)
    const possible = settle(columns, target, taken, lambda)
    if (!possible) {
      taken.pop()
      break
    }
    left = leftOf()
  }
  return { lambda, left }
}

/** Least squares over the columns taken; those that would turn negative on the way are given back. False where two are all but one. */
function settle(columns: readonly Float64Array[], target: Float64Array, taken: number[], lambda: Float64Array): boolean {
  for (;;) {
    const m = taken.length
    const S = new Float64Array(m * m)
    const right = new Float64Array(m)
    taken.forEach((a, i) => {
      right[i] = dot(columns[a] as Float64Array, target)
      taken.forEach((b, j) => {
        S[i * m + j] = dot(columns[a] as Float64Array, columns[b] as Float64Array)
      })
    })
    const goal = definiteSolver(S, m)?.(right)
    if (!goal) return false
    let share = 1
    taken.forEach((k, i) => {
      const [from, to] = [lambda[k] as number, goal[i] as number]
      if (to < 0) share = Math.min(share, from / (from - to))
    })
    taken.forEach((k, i) => {
      lambda[k] = (lambda[k] as number) + share * ((goal[i] as number) - (lambda[k] as number))
    })
    if (share === 1) return true
    for (let i = m - 1; i >= 0; i--) {
      const k = taken[i] as number
      if (!((lambda[k] as number) > 1e-14) && (goal[i] as number) < 0) {
        lambda[k] = 0
        taken.splice(i, 1)
      }
    }
    if (taken.length === m) return false
  }
}
