// Singular values of a small matrix, by ml-matrix: its decomposition has additions, multiplications, divisions and square roots in it and
// nothing else that rounds, so that its bits are the same everywhere. The smallest value is good to a share of the largest.

import { Matrix, SingularValueDecomposition } from "ml-matrix"

/** Singular values, largest first, of the square matrix `a` by rows. */
export function singularValues(a: Float64Array, n: number): Float64Array {
  const matrix = Matrix.from1DArray(n, n, a)
  const { diagonal } = new SingularValueDecomposition(matrix, { computeLeftSingularVectors: false, computeRightSingularVectors: false })
  return Float64Array.from(diagonal)
}
