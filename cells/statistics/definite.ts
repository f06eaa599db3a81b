// Small symmetric positive definite systems, by ml-matrix. It is for what is solved a few times a fit; the normal matrix of every step has a
// Cholesky of its own (gram.ts), since there the block of a factor is eliminated first and ml-matrix, which calls a function for each
// number, takes several times as long.

import { CholeskyDecomposition, Matrix } from "ml-matrix"

/** With a unit diagonal, a pivot of rounding size says that the matrix is singular. */
const smallestPivot = 1e-15

/** Solves H·x = b for any b; null where H, of which the lower triangle by rows counts, is not positive definite. */
export function definiteSolver(H: Float64Array, n: number): ((b: Float64Array) => Float64Array) | null {
  const scale = Float64Array.from({ length: n }, (_, j) => 1 / Math.sqrt(H[j * n + j] as number))
  const scaled = new Matrix(n, n)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      const h = (H[i * n + j] as number) * (scale[i] as number) * (scale[j] as number)
      if (!Number.isFinite(h)) return null
      scaled.set(i, j, h)
      scaled.set(j, i, h)
    }
  }
  const cholesky = new CholeskyDecomposition(scaled)
  const { lowerTriangularMatrix: lower } = cholesky
  for (let j = 0; j < n; j++) if (!(lower.get(j, j) > Math.sqrt(smallestPivot))) return null
  return (b) => {
    const right = Matrix.columnVector(b.map((x, j) => x * (scale[j] as number)))
    return Float64Array.from(cholesky.solve(right).to1DArray(), (x, j) => x * (scale[j] as number))
  }
}
