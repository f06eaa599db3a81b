// Sums over rows: X'WX and X's of a basis, with factors by cell. Rows go in blocks small enough for the nearest cache, blocks in a fixed number of
// chunks, and the chunks' sums are added in a fixed tree, so that the same numbers come out whoever adds them. Then the solving: the block
// of the largest factor is diagonal and eliminated first, so that many levels cost no more than few.

import type { Cells, Shape } from "./basis.ts"

/** Rows taken together: their part of the columns stays in the nearest cache. */
export const blockRows = 96

/** Where each sum has its place in one flat array. */
export class Layout {
  readonly shape: Shape
  /** Columns without factor. */
  readonly plain: number
  readonly gramAt: number
  readonly blocksAt: readonly { readonly score: number; readonly diagonal: number; readonly cross: number }[]
  /** For blocks b > c at b(b − 1)/2 + c. */
  readonly pairsAt: readonly number[]
  readonly length: number
  readonly chunks: number
  /** Basis columns outside the eliminated block, and inside. */
  readonly rest: number
  readonly last: number

  constructor(shape: Shape) {
    this.shape = shape
    const P = shape.plain.length
    this.plain = P
    let at = P
    this.gramAt = at
    at += (P * (P + 1)) / 2
    this.blocksAt = shape.blocks.map(({ count }) => {
      const place = { score: at, diagonal: at + count, cross: at + 2 * count }
      at += count * (2 + P)
      return place
    })
    const pairs: number[] = []
    shape.blocks.forEach((block, b) => {
      for (let c = 0; c < b; c++) {
        pairs.push(at)
        at += block.count * (shape.blocks[c] as Cells).count
      }
    })
    this.pairsAt = pairs
    this.length = at
    // Chunks are worth their adding up only while each has more rows than there are sums; the number depends on the data alone.
    this.chunks = Math.max(1, Math.min(64, Math.floor(shape.rows / Math.max(blockRows, at / Math.max(4, P)))))
    const block = shape.eliminated >= 0 ? shape.blocks[shape.eliminated] : undefined
    let last = 0
    if (block?.only) for (const column of block.only) if (column >= 0) last++
    this.last = last
    this.rest = shape.size - last
  }

  /** First row of a chunk. */
  chunkStart(chunk: number): number {
    return Math.floor((this.shape.rows * chunk) / this.chunks)
  }
}

/**
 * Adds the rows from … to of Σ w·xx' and Σ s·x to `sums`.
 * @param w, s     weight and score of each row of the whole
 * @param scratch  at least blockRows·(blocks + 1) numbers
 */
export function addRows(
  layout: Layout,
  from: number,
  to: number,
  w: Float64Array,
  s: Float64Array,
  sums: Float64Array,
  scratch: Float64Array,
): void {
  for (let low = from; low < to; low += blockRows) addBlock(layout, low, Math.min(to, low + blockRows), w, s, sums, scratch)
}

/** Adds the rows from … to of Σ s·x alone. */
function addScores(layout: Layout, from: number, to: number, s: Float64Array, sums: Float64Array): void {
  const { plain, blocks } = layout.shape
  for (let low = from; low < to; low += blockRows) {
    const high = Math.min(to, low + blockRows)
    for (let i = 0; i < plain.length; i++) {
      const x = plain[i] as Float64Array | null
      let sum = 0
      if (x === null) for (let row = low; row < high; row++) sum += s[row] as number
      else for (let row = low; row < high; row++) sum += (s[row] as number) * (x[row] as number)
      sums[i] = (sums[i] as number) + sum
    }
    for (let b = 0; b < blocks.length; b++) {
      const { cells, multiplier } = blocks[b] as Cells
      const { score } = layout.blocksAt[b] as { score: number }
      for (let row = low; row < high; row++) {
        const at = score + (cells[row] as number)
        sums[at] = (sums[at] as number) + (multiplier === null ? (s[row] as number) : (s[row] as number) * (multiplier[row] as number))
      }
    }
  }
}

function addBlock(
  layout: Layout,
  from: number,
  to: number,
  w: Float64Array,
  s: Float64Array,
  sums: Float64Array,
  scratch: Float64Array,
): void {
  const { plain, blocks } = layout.shape
  const P = plain.length
  const m = to - from
  let g = layout.gramAt
  for (let i = 0; i < P; i++) {
    const x = plain[i] as Float64Array | null
    let score = 0
    if (x === null) {
      for (let k = 0; k < m; k++) {
        scratch[k] = w[from + k] as number
        score += s[from + k] as number
      }
    } else {
      for (let k = 0; k < m; k++) {
        const v = x[from + k] as number
        scratch[k] = (w[from + k] as number) * v
        score += (s[from + k] as number) * v
      }
    }
    sums[i] = (sums[i] as number) + score
    let j = 0
    // A constant among the columns is the first; its product with a column is the sum of the weighted column.
    if (j <= i && plain[0] === null) {
      let sum = 0
      for (let k = 0; k < m; k++) sum += scratch[k] as number
      sums[g] = (sums[g] as number) + sum
      j = 1
    }
    for (; j + 3 <= i; j += 4) {
      const a = plain[j] as Float64Array
      const b = plain[j + 1] as Float64Array
      const c = plain[j + 2] as Float64Array
      const d = plain[j + 3] as Float64Array
      let sa = 0
      let sb = 0
      let sc = 0
      let sd = 0
      for (let k = 0; k < m; k++) {
        const t = scratch[k] as number
        const row = from + k
        sa += t * (a[row] as number)
        sb += t * (b[row] as number)
        sc += t * (c[row] as number)
        sd += t * (d[row] as number)
      }
      sums[g + j] = (sums[g + j] as number) + sa
      sums[g + j + 1] = (sums[g + j + 1] as number) + sb
      sums[g + j + 2] = (sums[g + j + 2] as number) + sc
      sums[g + j + 3] = (sums[g + j + 3] as number) + sd
    }
    for (; j <= i; j++) {
      const a = plain[j] as Float64Array
      let sum = 0
      for (let k = 0; k < m; k++) sum += (scratch[k] as number) * (a[from + k] as number)
      sums[g + j] = (sums[g + j] as number) + sum
    }
    g += i + 1
  }
  if (blocks.length === 0) return
  let pair = 0
  for (let b = 0; b < blocks.length; b++) {
    const { cells, multiplier, count } = blocks[b] as Cells
    const { score, diagonal, cross } = layout.blocksAt[b] as { score: number; diagonal: number; cross: number }
    const own = (b + 1) * blockRows
    for (let k = 0; k < m; k++) {
      const row = from + k
      const cell = cells[row] as number
      const times = multiplier === null ? 1 : (multiplier[row] as number)
      const weighted = (w[row] as number) * times
      scratch[own + k] = weighted
      sums[score + cell] = (sums[score + cell] as number) + (s[row] as number) * times
      sums[diagonal + cell] = (sums[diagonal + cell] as number) + weighted * times
    }
    // Crossed with the plain columns, a column at a time: the sums of one column lie together.
    for (let j = 0; j < P; j++) {
      const x = plain[j] as Float64Array | null
      const base = cross + j * count
      if (x === null) {
        for (let k = 0; k < m; k++) {
          const at = base + (cells[from + k] as number)
          sums[at] = (sums[at] as number) + (scratch[own + k] as number)
        }
      } else {
        for (let k = 0; k < m; k++) {
          const at = base + (cells[from + k] as number)
          sums[at] = (sums[at] as number) + (scratch[own + k] as number) * (x[from + k] as number)
        }
      }
    }
    for (let c = 0; c < b; c++) {
      const other = blocks[c] as Cells
      const base = layout.pairsAt[pair++] as number
      for (let k = 0; k < m; k++) {
        const row = from + k
        const at = base + (cells[row] as number) * other.count + (other.cells[row] as number)
        const times = other.multiplier === null ? 1 : (other.multiplier[row] as number)
        sums[at] = (sums[at] as number) + (scratch[own + k] as number) * times
      }
    }
  }
}

/** All sums of a basis at once, for designs and tests; the fitting loop goes chunk by chunk so that it can be interrupted. */
export function rangeSums(layout: Layout, w: Float64Array, s: Float64Array): Float64Array {
  const tree = new SumTree(layout.length)
  const scratch = new Float64Array(blockRows * (layout.shape.blocks.length + 1))
  for (let chunk = 0; chunk < layout.chunks; chunk++) {
    addRows(layout, layout.chunkStart(chunk), layout.chunkStart(chunk + 1), w, s, tree.next(), scratch)
    tree.push()
  }
  return tree.total().slice()
}

/** The same with pauses: `due` counts nanoseconds of work, `rest` pauses. */
export async function pacedSums(
  layout: Layout,
  w: Float64Array,
  s: Float64Array,
  pace: { due(work: number): boolean; rest(): Promise<void> },
): Promise<Float64Array> {
  const tree = new SumTree(layout.length)
  const scratch = new Float64Array(blockRows * (layout.shape.blocks.length + 1))
  const workOfRow = 10 + layout.plain * layout.plain + layout.shape.blocks.length * 10
  for (let chunk = 0; chunk < layout.chunks; chunk++) {
    const [from, to] = [layout.chunkStart(chunk), layout.chunkStart(chunk + 1)]
    addRows(layout, from, to, w, s, tree.next(), scratch)
    tree.push()
    if (pace.due((to - from) * workOfRow)) await pace.rest()
  }
  return tree.total().slice()
}

/** X's alone, over the basis. */
export function scoreSums(layout: Layout, s: Float64Array): Float64Array {
  const tree = new SumTree(layout.length)
  for (let chunk = 0; chunk < layout.chunks; chunk++) {
    addScores(layout, layout.chunkStart(chunk), layout.chunkStart(chunk + 1), s, tree.next())
    tree.push()
  }
  return scoreOf(layout, tree.total())
}

/** Adds arrays as the leaves of a binary tree, in their order: 64 leaves need 7 arrays. */
export class SumTree {
  private readonly levels: Float64Array[] = []
  private readonly filled: boolean[] = []
  private current: Float64Array
  private readonly spare: Float64Array[] = []
  private readonly length: number
  constructor(length: number) {
    this.length = length
    this.current = new Float64Array(length)
  }
  /** An array of zeros for the next leaf. */
  next(): Float64Array {
    this.current = this.spare.pop() ?? new Float64Array(this.length)
    this.current.fill(0)
    return this.current
  }
  push(): void {
    let carry = this.current
    let level = 0
    while (this.filled[level]) {
      const left = this.levels[level] as Float64Array
      for (let i = 0; i < left.length; i++) left[i] = (left[i] as number) + (carry[i] as number)
      this.spare.push(carry)
      this.filled[level] = false
      carry = left
      level++
    }
    this.levels[level] = carry
    this.filled[level] = true
  }
  /** The sum of all leaves; the tree is empty afterwards. */
  total(): Float64Array {
    let sum: Float64Array | null = null
    for (let level = 0; level < this.levels.length; level++) {
      if (!this.filled[level]) continue
      const own = this.levels[level] as Float64Array
      this.filled[level] = false
      if (sum === null) sum = own
      else {
        for (let i = 0; i < own.length; i++) own[i] = (own[i] as number) + (sum[i] as number)
        this.spare.push(sum)
        sum = own
      }
    }
    const found = sum ?? new Float64Array(this.length)
    this.spare.push(found)
    return found
  }
}

/** A symmetric matrix over the basis whose last block is diagonal: `rest` by rows, `cross` by rows of the last block. */
export class Gram {
  readonly rest: number
  readonly last: number
  readonly matrix: Float64Array
  readonly diagonal: Float64Array
  readonly cross: Float64Array
  constructor(rest: number, last: number) {
    this.rest = rest
    this.last = last
    this.matrix = new Float64Array(rest * rest)
    this.diagonal = new Float64Array(last)
    this.cross = new Float64Array(last * rest)
  }
  diagonalAt(j: number): number {
    return j < this.rest ? (this.matrix[j * this.rest + j] as number) : (this.diagonal[j - this.rest] as number)
  }
  at(i: number, j: number): number {
    if (i < j) return this.at(j, i)
    if (i < this.rest) return this.matrix[i * this.rest + j] as number
    if (j < this.rest) return this.cross[(i - this.rest) * this.rest + j] as number
    return i === j ? (this.diagonal[i - this.rest] as number) : 0
  }
  /** Written out by rows. */
  full(): Float64Array {
    const { rest, last } = this
    const p = rest + last
    const full = new Float64Array(p * p)
    for (let i = 0; i < rest; i++) for (let j = 0; j < rest; j++) full[i * p + j] = this.matrix[i * rest + j] as number
    for (let e = 0; e < last; e++) {
      full[(rest + e) * p + rest + e] = this.diagonal[e] as number
      for (let j = 0; j < rest; j++) {
        full[(rest + e) * p + j] = this.cross[e * rest + j] as number
        full[j * p + rest + e] = this.cross[e * rest + j] as number
      }
    }
    return full
  }
  /** this·v. */
  times(v: Float64Array): Float64Array {
    const { rest, last } = this
    const out = new Float64Array(rest + last)
    for (let i = 0; i < rest; i++) {
      let sum = 0
      for (let j = 0; j < rest; j++) sum += (this.matrix[i * rest + j] as number) * (v[j] as number)
      out[i] = sum
    }
    for (let e = 0; e < last; e++) {
      const own = v[rest + e] as number
      let sum = (this.diagonal[e] as number) * own
      for (let j = 0; j < rest; j++) {
        const c = this.cross[e * rest + j] as number
        sum += c * (v[j] as number)
        out[j] = (out[j] as number) + c * own
      }
      out[rest + e] = sum
    }
    return out
  }
}

/** X's from the sums, over the basis. */
export function scoreOf(layout: Layout, sums: Float64Array): Float64Array {
  const { shape } = layout
  const score = new Float64Array(shape.size)
  for (let i = 0; i < layout.plain; i++) score[i] = sums[i] as number
  shape.blocks.forEach((block, b) => {
    const base = (layout.blocksAt[b] as { score: number }).score
    for (let cell = 0; cell < block.count; cell++) {
      const own = sums[base + cell] as number
      for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++) {
        const column = block.column[e] as number
        score[column] = (score[column] as number) + own * (block.value[e] as number)
      }
    }
  })
  return score
}

/** X'WX from the sums, over the basis: sums by cell taken through the contrasts of both sides. */
export function gramOf(layout: Layout, sums: Float64Array): Gram {
  const { shape } = layout
  const { blocks } = shape
  const gram = new Gram(layout.rest, layout.last)
  const { rest, matrix, diagonal, cross } = gram
  const add = (i: number, j: number, x: number): void => {
    if (i < rest && j < rest) {
      matrix[i * rest + j] = (matrix[i * rest + j] as number) + x
      if (i !== j) matrix[j * rest + i] = (matrix[j * rest + i] as number) + x
    } else if (i >= rest && j >= rest) diagonal[i - rest] = (diagonal[i - rest] as number) + x
    else if (i >= rest) cross[(i - rest) * rest + j] = (cross[(i - rest) * rest + j] as number) + x
    else cross[(j - rest) * rest + i] = (cross[(j - rest) * rest + i] as number) + x
  }
  let g = layout.gramAt
  for (let i = 0; i < layout.plain; i++) for (let j = 0; j <= i; j++) add(i, j, sums[g++] as number)
  let pair = 0
  for (let b = 0; b < blocks.length; b++) {
    const block = blocks[b] as Cells
    const at = layout.blocksAt[b] as { diagonal: number; cross: number }
    for (let cell = 0; cell < block.count; cell++) {
      const low = block.starts[cell] as number
      const high = block.starts[cell + 1] as number
      const weight = sums[at.diagonal + cell] as number
      for (let e = low; e < high; e++) {
        const column = block.column[e] as number
        const value = block.value[e] as number
        for (let f = low; f <= e; f++) add(column, block.column[f] as number, weight * value * (block.value[f] as number))
        for (let j = 0; j < layout.plain; j++) add(column, j, value * (sums[at.cross + j * block.count + cell] as number))
      }
    }
    for (let c = 0; c < b; c++) {
      const other = blocks[c] as Cells
      const base = layout.pairsAt[pair++] as number
      for (let cell = 0; cell < block.count; cell++) {
        for (let theirs = 0; theirs < other.count; theirs++) {
          const weight = sums[base + cell * other.count + theirs] as number
          if (weight === 0) continue
          for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++) {
            for (let f = other.starts[theirs] as number; f < (other.starts[theirs + 1] as number); f++)
              add(block.column[e] as number, other.column[f] as number, weight * (block.value[e] as number) * (other.value[f] as number))
          }
        }
      }
    }
  }
  return gram
}

/** A Cholesky factor of a Gram matrix scaled to a unit diagonal. */
export class Factor {
  private readonly gram: Gram
  private readonly scale: Float64Array
  /** Lower triangle of the Schur complement by rows. */
  private readonly lower: Float64Array
  /** Scaled cross block. */
  private readonly cross: Float64Array

  private constructor(gram: Gram, scale: Float64Array, lower: Float64Array, cross: Float64Array) {
    this.gram = gram
    this.scale = scale
    this.lower = lower
    this.cross = cross
  }

  /** Null where the matrix is not positive definite. */
  static of(gram: Gram): Factor | null {
    const { rest: r, last } = gram
    const scale = new Float64Array(r + last)
    for (let j = 0; j < r + last; j++) {
      const d = gram.diagonalAt(j)
      if (!(d > 0) || d === Number.POSITIVE_INFINITY) return null
      scale[j] = 1 / Math.sqrt(d)
    }
    const lower = new Float64Array(r * r)
    for (let i = 0; i < r; i++)
      for (let j = 0; j <= i; j++) lower[i * r + j] = (gram.matrix[i * r + j] as number) * (scale[i] as number) * (scale[j] as number)
    const cross = new Float64Array(last * r)
    for (let e = 0; e < last; e++) {
      const own = scale[r + e] as number
      const base = e * r
      for (let j = 0; j < r; j++) cross[base + j] = (gram.cross[base + j] as number) * own * (scale[j] as number)
      for (let i = 0; i < r; i++) {
        const c = cross[base + i] as number
        if (c === 0) continue
        for (let j = 0; j <= i; j++) lower[i * r + j] = (lower[i * r + j] as number) - c * (cross[base + j] as number)
      }
    }
    return cholesky(lower, r) ? new Factor(gram, scale, lower, cross) : null
  }

  get size(): number {
    return this.gram.rest + this.gram.last
  }

  /** G⁻¹u. */
  solve(u: Float64Array): Float64Array {
    const { rest: r, last } = this.gram
    const x = new Float64Array(r + last)
    for (let j = 0; j < r + last; j++) x[j] = (u[j] as number) * (this.scale[j] as number)
    for (let e = 0; e < last; e++) {
      const own = x[r + e] as number
      for (let j = 0; j < r; j++) x[j] = (x[j] as number) - (this.cross[e * r + j] as number) * own
    }
    forward(this.lower, r, x)
    backward(this.lower, r, x)
    for (let e = 0; e < last; e++) {
      let sum = x[r + e] as number
      for (let j = 0; j < r; j++) sum -= (this.cross[e * r + j] as number) * (x[j] as number)
      x[r + e] = sum
    }
    for (let j = 0; j < r + last; j++) x[j] = (x[j] as number) * (this.scale[j] as number)
    return x
  }

  /** G⁻¹ by rows. */
  inverse(): Float64Array {
    const { rest: r, last } = this.gram
    const p = r + last
    const inside = inverseOf(this.lower, r)
    const full = new Float64Array(p * p)
    for (let i = 0; i < r; i++) for (let j = 0; j < r; j++) full[i * p + j] = inside[i * r + j] as number
    // −C·S⁻¹ and D⁻¹ + C·S⁻¹·C', D the unit matrix after scaling.
    const product = new Float64Array(last * r)
    for (let e = 0; e < last; e++) {
      for (let j = 0; j < r; j++) {
        let sum = 0
        for (let k = 0; k < r; k++) sum += (this.cross[e * r + k] as number) * (inside[k * r + j] as number)
        product[e * r + j] = sum
        full[(r + e) * p + j] = -sum
        full[j * p + r + e] = -sum
      }
      for (let f = 0; f <= e; f++) {
        let sum = e === f ? 1 : 0
        for (let k = 0; k < r; k++) sum += (product[e * r + k] as number) * (this.cross[f * r + k] as number)
        full[(r + e) * p + r + f] = sum
        full[(r + f) * p + r + e] = sum
      }
    }
    for (let i = 0; i < p; i++)
      for (let j = 0; j < p; j++) full[i * p + j] = (full[i * p + j] as number) * (this.scale[i] as number) * (this.scale[j] as number)
    return full
  }

  /** Largest g_jj·(G⁻¹)_jj: how much other columns inflate the variance of one. */
  inflation(): number {
    const { rest: r, last } = this.gram
    const inside = inverseOf(this.lower, r)
    let most = 0
    for (let j = 0; j < r; j++) most = Math.max(most, inside[j * r + j] as number)
    for (let e = 0; e < last; e++) {
      let sum = 1
      for (let i = 0; i < r; i++) {
        const c = this.cross[e * r + i] as number
        if (c === 0) continue
        for (let j = 0; j < r; j++) sum += c * (inside[i * r + j] as number) * (this.cross[e * r + j] as number)
      }
      most = Math.max(most, sum)
    }
    return most
  }
}

/** Cholesky in place of the lower triangle by rows; false where it is not positive definite. */
export function cholesky(a: Float64Array, n: number): boolean {
  for (let i = 0; i < n; i++) {
    const row = i * n
    for (let j = 0; j <= i; j++) {
      const other = j * n
      let sum = a[row + j] as number
      for (let k = 0; k < j; k++) sum -= (a[row + k] as number) * (a[other + k] as number)
      if (i === j) {
        // With a unit diagonal, a pivot of rounding size says that the matrix is singular.
        if (!(sum > 1e-15)) return false
        a[row + i] = Math.sqrt(sum)
      } else a[row + j] = sum / (a[other + j] as number)
    }
  }
  return true
}

function forward(lower: Float64Array, n: number, x: Float64Array): void {
  for (let i = 0; i < n; i++) {
    let sum = x[i] as number
    for (let k = 0; k < i; k++) sum -= (lower[i * n + k] as number) * (x[k] as number)
    x[i] = sum / (lower[i * n + i] as number)
  }
}

function backward(lower: Float64Array, n: number, x: Float64Array): void {
  for (let i = n - 1; i >= 0; i--) {
    let sum = x[i] as number
    for (let k = i + 1; k < n; k++) sum -= (lower[k * n + i] as number) * (x[k] as number)
    x[i] = sum / (lower[i * n + i] as number)
  }
}

/** (L·L')⁻¹ by rows: L⁻¹ first, then its square. */
function inverseOf(lower: Float64Array, n: number): Float64Array {
  const inverse = new Float64Array(n * n)
  for (let j = 0; j < n; j++) {
    inverse[j * n + j] = 1 / (lower[j * n + j] as number)
    for (let i = j + 1; i < n; i++) {
      let sum = 0
      for (let k = j; k < i; k++) sum -= (lower[i * n + k] as number) * (inverse[k * n + j] as number)
      inverse[i * n + j] = sum / (lower[i * n + i] as number)
    }
  }
  const out = new Float64Array(n * n)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = 0
      for (let k = i; k < n; k++) sum += (inverse[k * n + i] as number) * (inverse[k * n + j] as number)
      out[i * n + j] = sum
      out[j * n + i] = sum
    }
  }
  return out
}
