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
 * @param scratch  at least blockRows numbers
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
  const first = plain[0] === null ? 1 : 0
  const P = plain.length
  for (let low = from; low < to; low += blockRows) {
    const high = Math.min(to, low + blockRows)
    if (first === 1) addSum(s, low, high, sums, 0)
    let j = first
    for (; j + 3 < P; j += 4)
      add1x4(s, columnAt(plain, j), columnAt(plain, j + 1), columnAt(plain, j + 2), columnAt(plain, j + 3), low, high, sums, j)
    for (; j < P; j++) add1x1(s, columnAt(plain, j), low, high, sums, j)
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

/** A column that is not the constant, which is only ever the first. */
const columnAt = (plain: Shape["plain"], j: number): Float64Array => plain[j] as Float64Array

/** One block: it stays in the nearest cache while its columns are gone over four at a time. */
export function addBlock(
  layout: Layout,
  from: number,
  to: number,
  w: Float64Array,
  s: Float64Array,
  sums: Float64Array,
  scratch: Float64Array,
): void {
  const { plain, blocks } = layout.shape
  const { gramAt } = layout
  const P = plain.length
  const first = plain[0] === null ? 1 : 0
  // The constant: its products with a column are the sums of the weighted column, found beside the scores.
  if (first === 1) {
    addSum(w, from, to, sums, gramAt)
    addSum(s, from, to, sums, 0)
    let j = 1
    for (; j + 3 < P; j += 4) {
      const [a, b, c, d] = [columnAt(plain, j), columnAt(plain, j + 1), columnAt(plain, j + 2), columnAt(plain, j + 3)]
      const [ga, gb] = [gramAt + triangle(j), gramAt + triangle(j + 1)]
      const [gc, gd] = [gramAt + triangle(j + 2), gramAt + triangle(j + 3)]
      addConstant4(w, s, a, b, c, d, from, to, sums, j, ga, gb, gc, gd)
    }
    for (; j < P; j++) {
      add1x1(w, columnAt(plain, j), from, to, sums, gramAt + triangle(j))
      add1x1(s, columnAt(plain, j), from, to, sums, j)
    }
  } else {
    let j = 0
    for (; j + 3 < P; j += 4)
      add1x4(s, columnAt(plain, j), columnAt(plain, j + 1), columnAt(plain, j + 2), columnAt(plain, j + 3), from, to, sums, j)
    for (; j < P; j++) add1x1(s, columnAt(plain, j), from, to, sums, j)
  }
  // Four columns with themselves, then with the rest of the columns two at a time.
  let j = first
  for (; j + 3 < P; j += 4) {
    const [a, b, c, d] = [columnAt(plain, j), columnAt(plain, j + 1), columnAt(plain, j + 2), columnAt(plain, j + 3)]
    addCorner(
      w,
      a,
      b,
      c,
      d,
      from,
      to,
      sums,
      gramAt + triangle(j) + j,
      gramAt + triangle(j + 1) + j,
      gramAt + triangle(j + 2) + j,
      gramAt + triangle(j + 3) + j,
    )
    let i = j + 4
    for (; i + 1 < P; i += 2)
      add2x4(
        w,
        columnAt(plain, i),
        columnAt(plain, i + 1),
        a,
        b,
        c,
        d,
        from,
        to,
        sums,
        gramAt + triangle(i) + j,
        gramAt + triangle(i + 1) + j,
      )
    if (i < P) addWeighted1x4(w, columnAt(plain, i), a, b, c, d, from, to, sums, gramAt + triangle(i) + j)
  }
  for (; j < P; j++)
    for (let i = j; i < P; i++) addWeighted1x1(w, columnAt(plain, i), columnAt(plain, j), from, to, sums, gramAt + triangle(i) + j)
  if (blocks.length > 0) addCells(layout, from, to, w, s, sums, scratch)
}

/** Where row i of a lower triangle by rows begins. */
const triangle = (i: number): number => (i * (i + 1)) / 2

/** The sums by cell of every factor: of scores, of weights, crossed with the plain columns, and with the cells of other factors. */
function addCells(
  layout: Layout,
  from: number,
  to: number,
  w: Float64Array,
  s: Float64Array,
  sums: Float64Array,
  weighted: Float64Array,
): void {
  const { plain, blocks } = layout.shape
  const P = plain.length
  const m = to - from
  let pair = 0
  for (let b = 0; b < blocks.length; b++) {
    const { cells, multiplier } = blocks[b] as Cells
    const { score, diagonal, cross } = layout.blocksAt[b] as { score: number; diagonal: number; cross: number }
    for (let k = 0; k < m; k++) {
      const row = from + k
      const cell = cells[row] as number
      const times = multiplier === null ? 1 : (multiplier[row] as number)
      const own = (w[row] as number) * times
      weighted[k] = own
      sums[score + cell] = (sums[score + cell] as number) + (s[row] as number) * times
      sums[diagonal + cell] = (sums[diagonal + cell] as number) + own * times
    }
    let j = 0
    if (P > 0 && plain[0] === null) {
      for (let k = 0; k < m; k++) {
        const at = cross + (cells[from + k] as number) * P
        sums[at] = (sums[at] as number) + (weighted[k] as number)
      }
      j = 1
    }
    for (; j + 3 < P; j += 4)
      addCross4(
        weighted,
        cells,
        columnAt(plain, j),
        columnAt(plain, j + 1),
        columnAt(plain, j + 2),
        columnAt(plain, j + 3),
        from,
        m,
        sums,
        cross + j,
        P,
      )
    for (; j < P; j++) {
      const x = columnAt(plain, j)
      for (let k = 0; k < m; k++) {
        const at = cross + (cells[from + k] as number) * P + j
        sums[at] = (sums[at] as number) + (weighted[k] as number) * (x[from + k] as number)
      }
    }
    for (let c = 0; c < b; c++) {
      const other = blocks[c] as Cells
      const base = layout.pairsAt[pair++] as number
      for (let k = 0; k < m; k++) {
        const row = from + k
        const at = base + (cells[row] as number) * other.count + (other.cells[row] as number)
        const times = other.multiplier === null ? 1 : (other.multiplier[row] as number)
        sums[at] = (sums[at] as number) + (weighted[k] as number) * times
      }
    }
  }
}

// Kernels: sums over the rows of a block that take several columns at once, so that a number read serves several products and no sum has to
// wait for the one before. Which products go together changes no result but in its last digits, and is the same everywhere.

function addSum(v: Float64Array, from: number, to: number, sums: Float64Array, at: number): void {
  let sum = 0
  for (let k = from; k < to; k++) sum += v[k] as number
  sums[at] = (sums[at] as number) + sum
}

function add1x1(v: Float64Array, a: Float64Array, from: number, to: number, sums: Float64Array, at: number): void {
  let sum = 0
  for (let k = from; k < to; k++) sum += (v[k] as number) * (a[k] as number)
  sums[at] = (sums[at] as number) + sum
}

function add1x4(
  v: Float64Array,
  a: Float64Array,
  b: Float64Array,
  c: Float64Array,
  d: Float64Array,
  from: number,
  to: number,
  sums: Float64Array,
  at: number,
): void {
  let [va, vb, vc, vd] = [0, 0, 0, 0]
  for (let k = from; k < to; k++) {
    const t = v[k] as number
    va += t * (a[k] as number)
    vb += t * (b[k] as number)
    vc += t * (c[k] as number)
    vd += t * (d[k] as number)
  }
  sums[at] = (sums[at] as number) + va
  sums[at + 1] = (sums[at + 1] as number) + vb
  sums[at + 2] = (sums[at + 2] as number) + vc
  sums[at + 3] = (sums[at + 3] as number) + vd
}

/** Weights and scores with four columns: the constant's products, and the columns' scores. */
function addConstant4(
  w: Float64Array,
  s: Float64Array,
  a: Float64Array,
  b: Float64Array,
  c: Float64Array,
  d: Float64Array,
  from: number,
  to: number,
  sums: Float64Array,
  scoresAt: number,
  aAt: number,
  bAt: number,
  cAt: number,
  dAt: number,
): void {
  let [wa, wb, wc, wd] = [0, 0, 0, 0]
  let [sa, sb, sc, sd] = [0, 0, 0, 0]
  for (let k = from; k < to; k++) {
    const t = w[k] as number
    const u = s[k] as number
    const x = a[k] as number
    const y = b[k] as number
    const z = c[k] as number
    const v = d[k] as number
    wa += t * x
    wb += t * y
    wc += t * z
    wd += t * v
    sa += u * x
    sb += u * y
    sc += u * z
    sd += u * v
  }
  sums[aAt] = (sums[aAt] as number) + wa
  sums[bAt] = (sums[bAt] as number) + wb
  sums[cAt] = (sums[cAt] as number) + wc
  sums[dAt] = (sums[dAt] as number) + wd
  sums[scoresAt] = (sums[scoresAt] as number) + sa
  sums[scoresAt + 1] = (sums[scoresAt + 1] as number) + sb
  sums[scoresAt + 2] = (sums[scoresAt + 2] as number) + sc
  sums[scoresAt + 3] = (sums[scoresAt + 3] as number) + sd
}

/** The lower triangle of four weighted columns. */
function addCorner(
  w: Float64Array,
  a: Float64Array,
  b: Float64Array,
  c: Float64Array,
  d: Float64Array,
  from: number,
  to: number,
  sums: Float64Array,
  aAt: number,
  bAt: number,
  cAt: number,
  dAt: number,
): void {
  let [aa, ba, ca, da] = [0, 0, 0, 0]
  let [bb, cb, db] = [0, 0, 0]
  let [cc, dc, dd] = [0, 0, 0]
  for (let k = from; k < to; k++) {
    const own = w[k] as number
    const x = a[k] as number
    const y = b[k] as number
    const z = c[k] as number
    const v = d[k] as number
    const wx = own * x
    aa += wx * x
    ba += wx * y
    ca += wx * z
    da += wx * v
    const wy = own * y
    bb += wy * y
    cb += wy * z
    db += wy * v
    const wz = own * z
    cc += wz * z
    dc += wz * v
    dd += own * v * v
  }
  sums[aAt] = (sums[aAt] as number) + aa
  sums[bAt] = (sums[bAt] as number) + ba
  sums[bAt + 1] = (sums[bAt + 1] as number) + bb
  sums[cAt] = (sums[cAt] as number) + ca
  sums[cAt + 1] = (sums[cAt + 1] as number) + cb
  sums[cAt + 2] = (sums[cAt + 2] as number) + cc
  sums[dAt] = (sums[dAt] as number) + da
  sums[dAt + 1] = (sums[dAt + 1] as number) + db
  sums[dAt + 2] = (sums[dAt + 2] as number) + dc
  sums[dAt + 3] = (sums[dAt + 3] as number) + dd
}

/** Two weighted columns e, f with four others. */
function add2x4(
  w: Float64Array,
  e: Float64Array,
  f: Float64Array,
  a: Float64Array,
  b: Float64Array,
  c: Float64Array,
  d: Float64Array,
  from: number,
  to: number,
  sums: Float64Array,
  eAt: number,
  fAt: number,
): void {
  let [ea, eb, ec, ed] = [0, 0, 0, 0]
  let [fa, fb, fc, fd] = [0, 0, 0, 0]
  for (let k = from; k < to; k++) {
    const own = w[k] as number
    const t = own * (e[k] as number)
    const u = own * (f[k] as number)
    const x = a[k] as number
    const y = b[k] as number
    const z = c[k] as number
    const v = d[k] as number
    ea += t * x
    eb += t * y
    ec += t * z
    ed += t * v
    fa += u * x
    fb += u * y
    fc += u * z
    fd += u * v
  }
  sums[eAt] = (sums[eAt] as number) + ea
  sums[eAt + 1] = (sums[eAt + 1] as number) + eb
  sums[eAt + 2] = (sums[eAt + 2] as number) + ec
  sums[eAt + 3] = (sums[eAt + 3] as number) + ed
  sums[fAt] = (sums[fAt] as number) + fa
  sums[fAt + 1] = (sums[fAt + 1] as number) + fb
  sums[fAt + 2] = (sums[fAt + 2] as number) + fc
  sums[fAt + 3] = (sums[fAt + 3] as number) + fd
}

function addWeighted1x4(
  w: Float64Array,
  e: Float64Array,
  a: Float64Array,
  b: Float64Array,
  c: Float64Array,
  d: Float64Array,
  from: number,
  to: number,
  sums: Float64Array,
  at: number,
): void {
  let [ea, eb, ec, ed] = [0, 0, 0, 0]
  for (let k = from; k < to; k++) {
    const t = (w[k] as number) * (e[k] as number)
    ea += t * (a[k] as number)
    eb += t * (b[k] as number)
    ec += t * (c[k] as number)
    ed += t * (d[k] as number)
  }
  sums[at] = (sums[at] as number) + ea
  sums[at + 1] = (sums[at + 1] as number) + eb
  sums[at + 2] = (sums[at + 2] as number) + ec
  sums[at + 3] = (sums[at + 3] as number) + ed
}

function addWeighted1x1(w: Float64Array, e: Float64Array, a: Float64Array, from: number, to: number, sums: Float64Array, at: number): void {
  let sum = 0
  for (let k = from; k < to; k++) sum += (w[k] as number) * (e[k] as number) * (a[k] as number)
  sums[at] = (sums[at] as number) + sum
}

/** Four columns crossed with the cells of a factor: the sums of a cell lie together. */
function addCross4(
  weighted: Float64Array,
  cells: Int32Array,
  a: Float64Array,
  b: Float64Array,
  c: Float64Array,
  d: Float64Array,
  from: number,
  m: number,
  sums: Float64Array,
  cross: number,
  P: number,
): void {
  for (let k = 0; k < m; k++) {
    const row = from + k
    const at = cross + (cells[row] as number) * P
    const t = weighted[k] as number
    sums[at] = (sums[at] as number) + t * (a[row] as number)
    sums[at + 1] = (sums[at + 1] as number) + t * (b[row] as number)
    sums[at + 2] = (sums[at + 2] as number) + t * (c[row] as number)
    sums[at + 3] = (sums[at + 3] as number) + t * (d[row] as number)
  }
}

/** All sums of a basis at once, for designs and tests; the fitting loop goes chunk by chunk so that it can be interrupted. */
export function rangeSums(layout: Layout, w: Float64Array, s: Float64Array): Float64Array {
  const tree = new SumTree(layout.length)
  const scratch = new Float64Array(blockRows)
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
  const scratch = new Float64Array(blockRows)
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
  /** The same, every number times k. */
  multiplied(k: number): Gram {
    const out = new Gram(this.rest, this.last)
    for (const part of ["matrix", "diagonal", "cross"] as const) {
      const from = this[part]
      const to = out[part]
      for (let i = 0; i < from.length; i++) to[i] = (from[i] as number) * k
    }
    return out
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
        for (let j = 0; j < layout.plain; j++) add(column, j, value * (sums[at.cross + cell * layout.plain + j] as number))
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
