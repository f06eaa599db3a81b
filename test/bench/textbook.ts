// Iteratively reweighted least squares as a textbook has it, with ml-matrix: what the project's own fitting is measured against.

import { CholeskyDecomposition, Matrix } from "ml-matrix"
import type { Case } from "./data.ts"

/** The columns of a design with its constant, as the matrix that the loop below wants. */
export function designMatrix(columns: readonly Float64Array[]): Matrix {
  const rows = columns[0]?.length ?? 0
  const X = new Matrix(rows, columns.length + 1)
  for (let i = 0; i < rows; i++) {
    X.set(i, 0, 1)
    columns.forEach((x, j) => {
      X.set(i, j + 1, x[i] as number)
    })
  }
  return X
}

/** Coefficients and deviance, until the deviance changes by less than 1e-10 of itself. */
export function textbook(
  { family, link }: Case,
  X: Matrix,
  y: Float64Array,
): { readonly beta: readonly number[]; readonly deviance: number } {
  const n = X.rows
  const p = X.columns
  const start = y.reduce((sum, v) => sum + v, 0) / n
  let mu = y.map((v) => (family === "binomial" ? (v + 0.5) / 2 : (v + start) / 2))
  let eta = mu.map((m) => (family !== "binomial" ? Math.log(m) : link === "logit" ? Math.log(m / (1 - m)) : Math.log(-Math.log(1 - m))))
  let deviance = Number.POSITIVE_INFINITY
  for (let step = 0; step < 50; step++) {
    const weighted = new Matrix(n, p)
    const right = new Float64Array(n)
    for (let i = 0; i < n; i++) {
      const m = mu[i] as number
      const slope = family !== "binomial" ? m : link === "logit" ? m * (1 - m) : Math.exp((eta[i] as number) - Math.exp(eta[i] as number))
      const variance = family === "binomial" ? m * (1 - m) : family === "poisson" ? m : m * m
      const w = (slope * slope) / variance
      right[i] = (eta[i] as number) + ((y[i] as number) - m) / slope
      for (let j = 0; j < p; j++) weighted.set(i, j, w * X.get(i, j))
    }
    const across = weighted.transpose()
    const gram = across.mmul(X)
    // The product is symmetric but for rounding, and the library wants it exactly so.
    for (let i = 0; i < p; i++) for (let j = 0; j < i; j++) gram.set(j, i, gram.get(i, j))
    const beta = new CholeskyDecomposition(gram).solve(across.mmul(Matrix.columnVector(right)))
    eta = Float64Array.from(X.mmul(beta).to1DArray())
    mu = eta.map((e) => (family !== "binomial" ? Math.exp(e) : link === "logit" ? 1 / (1 + Math.exp(-e)) : 1 - Math.exp(-Math.exp(e))))
    const before = deviance
    deviance = 0
    for (let i = 0; i < n; i++) deviance += unitDeviance(family, y[i] as number, mu[i] as number)
    if (Math.abs(deviance - before) < 1e-10 * (Math.abs(deviance) + 0.1)) return { beta: beta.to1DArray(), deviance }
  }
  return { beta: [], deviance }
}

function unitDeviance(family: Case["family"], y: number, m: number): number {
  if (family === "binomial") return -2 * Math.log(y === 1 ? m : 1 - m)
  if (family === "poisson") return 2 * ((y > 0 ? y * Math.log(y / m) : 0) - (y - m))
  return 2 * ((y - m) / m - Math.log(y / m))
}
