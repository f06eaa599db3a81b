// Singular values of a small matrix by one-sided Jacobi rotations, which find even the smallest of them to full relative precision.
// Hestenes 1958, J. SIAM 6:51; Demmel & Veselić 1992, SIAM J. Matrix Anal. 13:1204.

/** Singular values, largest first, of the square matrix `a` by rows; `a` is overwritten. */
export function singularValues(a: Float64Array, n: number): Float64Array {
  // Rotations go over columns, which are laid out as rows first.
  const columns = new Float64Array(n * n)
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) columns[j * n + i] = a[i * n + j] as number
  for (let sweep = 0; sweep < 40; sweep++) {
    let largest = 0
    for (let p = 0; p < n; p++) {
      for (let q = p + 1; q < n; q++) {
        let [alpha, beta, gamma] = [0, 0, 0]
        for (let k = 0; k < n; k++) {
          const x = columns[p * n + k] as number
          const y = columns[q * n + k] as number
          alpha += x * x
          beta += y * y
          gamma += x * y
        }
        const size = Math.sqrt(alpha) * Math.sqrt(beta)
        if (!(size > 0) || Math.abs(gamma) <= 1e-15 * size) continue
        largest = Math.max(largest, Math.abs(gamma) / size)
        const zeta = (beta - alpha) / (2 * gamma)
        const t = (zeta < 0 ? -1 : 1) / (Math.abs(zeta) + Math.sqrt(1 + zeta * zeta))
        const c = 1 / Math.sqrt(1 + t * t)
        const s = c * t
        for (let k = 0; k < n; k++) {
          const x = columns[p * n + k] as number
          const y = columns[q * n + k] as number
          columns[p * n + k] = c * x - s * y
          columns[q * n + k] = s * x + c * y
        }
      }
    }
    if (largest < 1e-14) break
  }
  const values = new Float64Array(n)
  for (let j = 0; j < n; j++) {
    let sum = 0
    for (let k = 0; k < n; k++) sum += (columns[j * n + k] as number) * (columns[j * n + k] as number)
    values[j] = Math.sqrt(sum)
  }
  return values.sort().reverse()
}
