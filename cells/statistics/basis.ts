// The basis a design is fitted in: columns that span the same space and are well conditioned. As a rule the design's own columns, numbers
// centred and scaled and factors left as cells; where those are too nearly dependent, an orthonormal basis made in double-double arithmetic
// (Björck 1967, BIT 7:1, with 32 digits). Here columns that say nothing new are found, in the order of the terms, and named.

import type { Design } from "./design.ts"
import { type WrittenColumn, writtenColumns } from "./design.ts"
import { productError, type Wide, wide, wideDivide, wideDot, wideRoot, wideSubtract } from "./double-double.ts"
import { Factor, type Gram, gramOf, Layout, pacedSums, rangeSums } from "./gram.ts"
import type { Pace } from "./scoring.ts"

/** Columns of a factor term in a basis: as in the design, with columns numbered within the basis. */
export type Cells = {
  readonly cells: Int32Array
  readonly count: number
  readonly starts: Int32Array
  readonly column: Int32Array
  readonly value: Float64Array
  readonly multiplier: Float64Array | null
  /** Where each cell has at most one column, with value 1: that column or −1. */
  readonly only: Int32Array | null
}

export type Shape = {
  readonly rows: number
  /** Columns without a factor, in the basis' order from 0; null is the constant. */
  readonly plain: readonly (Float64Array | null)[]
  readonly blocks: readonly Cells[]
  /** The block whose columns come last and are eliminated one by one, or −1. */
  readonly eliminated: number
  readonly size: number
}

/** How coefficients in the basis become coefficients of the design's columns. */
export type Change =
  | {
      readonly type: "scaled"
      /** For each basis column: column of the design, centre, scale, and the design column the centre is charged to (−1: none). */
      readonly column: Int32Array
      readonly centre: Float64Array
      readonly scale: Float64Array
      readonly carrier: Int32Array
    }
  | {
      readonly type: "orthogonal"
      /** Basis column j belongs to `column[j]` of the design; X = Q·R over those columns, R upper triangular by rows. */
      readonly column: Int32Array
      readonly high: Float64Array
      readonly low: Float64Array
    }

export type Basis = Shape & {
  readonly layout: Layout
  /** X'X without weights, where it was made on the way. */
  readonly products?: Gram
  readonly change: Change
  /** The design's columns written out, for orthogonal bases only: η is then summed from them with 32 digits. */
  readonly written: readonly WrittenColumn[] | null
}

export type Dependence = { readonly column: number; readonly on: readonly { readonly column: number; readonly times: number }[] }

/** A part beyond the earlier columns below this share of a column's length says nothing (conventions, certificates). */
const dependenceTolerance = 1e-11

/** Largest variance inflation that plain double sums bear: their error in a standard error is about 1e-16 times this. */
export const mostInflation = 1e4

/** Most numbers that are written out for an orthogonal basis. */
const mostWritten = 6e6

/**
 * A basis for a design, and the columns left out because earlier ones make them.
 * @param order  in which columns come first, where not that of the terms
 */
export async function basisOf(
  design: Design,
  pace: Pace,
  order: readonly number[] | null = null,
): Promise<{ readonly basis: Basis; readonly dependences: readonly Dependence[] }> {
  const p = design.recipe.columns.length
  const all = new Uint8Array(p).fill(1)
  const first = scaledBasis(design, all)
  if (pace.due(20 * design.rows * (design.plain.length + design.blocks.length))) await pace.rest()
  if (first) {
    const sums = await pacedSums(first.layout, new Float64Array(design.rows).fill(1), new Float64Array(design.rows), pace)
    const products = gramOf(first.layout, sums)
    const most = Factor.of(products)?.inflation() ?? Number.POSITIVE_INFINITY
    if (most < mostInflation) return { basis: { ...first, products }, dependences: [] }
  }
  if (design.rows * p <= mostWritten) {
    const written = writtenColumns(design)
    const { kept, dependences, change } = orthogonalised(written, null, order)
    if (dependences.length > 0) {
      const keep = new Uint8Array(p)
      for (const column of kept) keep[column] = 1
      const rest = scaledBasis(design, keep)
      if (rest && inflation(rest) < mostInflation) return { basis: rest, dependences }
    }
    return { basis: orthogonalBasis(written, kept, change), dependences }
  }
  // Too large to be written out: dependences by the normal matrix, which can tell parts down to about 1e-7 of a length.
  const dependences = dependencesByNormalMatrix(design)
  const keep = new Uint8Array(p).fill(1)
  for (const { column } of dependences) keep[column] = 0
  const basis = scaledBasis(design, keep)
  if (!basis) throw new RangeError("a column of the design is zero")
  return { basis, dependences }
}

/** An orthonormal basis under row weights, over the columns a basis has: where weights have made it ill conditioned. Null if too large. */
export function reweightedBasis(design: Design, basis: Basis, weight: Float64Array): Basis | null {
  if (design.rows * basis.size > mostWritten) return null
  const columns = [...basis.change.column].sort((a, b) => a - b)
  const written = basis.written ?? writtenColumns(design)
  const { kept, change } = orthogonalised(written, weight, columns)
  return kept.length === columns.length ? orthogonalBasis(written, kept, change) : null
}

/** The largest variance inflation of the columns, from the normal matrix without weights; Infinity where it is not positive definite. */
function inflation(basis: Basis): number {
  const one = new Float64Array(basis.rows).fill(1)
  const gram = gramOf(basis.layout, rangeSums(basis.layout, one, new Float64Array(basis.rows)))
  return Factor.of(gram)?.inflation() ?? Number.POSITIVE_INFINITY
}

// Scaled ---------------------------------------------------------------------------------------------------------------------------------

/** The design's own columns, those with `keep`, numbers centred where a column can carry the centre, and scaled. Null if one is zero. */
function scaledBasis(design: Design, keep: Uint8Array): Basis | null {
  const { rows } = design
  const plain: (Float64Array | null)[] = []
  const column: number[] = []
  const centre: number[] = []
  const scale: number[] = []
  const carrier: number[] = []
  const constant = design.constant && keep[0] === 1
  const add = (at: number, c: number, s: number, on: number): void => {
    column.push(at)
    centre.push(c)
    scale.push(s)
    carrier.push(on)
  }
  if (constant) {
    plain.push(null)
    add(0, 0, 1, -1)
  }
  for (const { column: at, values } of design.plain) {
    if (keep[at] !== 1) continue
    const c = constant ? meanOf(values) : 0
    const made = new Float64Array(rows)
    let squares = 0
    for (let i = 0; i < rows; i++) {
      const z = (values[i] as number) - c
      squares += z * z
      made[i] = z
    }
    if (!(squares > 0)) return null
    const s = powerOfTwo(Math.sqrt(squares / rows))
    for (let i = 0; i < rows; i++) made[i] = (made[i] as number) / s
    plain.push(made)
    add(at, c, s, constant ? 0 : -1)
  }
  // The block with most columns goes last, if it is one column a cell and worth it.
  const sizes = design.blocks.map((block) => (isPlain(block.starts, block.value) ? block.columns.filter((at) => keep[at] === 1).length : 0))
  const most = sizes.reduce((best, size, b) => (size > (sizes[best] ?? 0) ? b : best), 0)
  const last = (sizes[most] ?? 0) >= 24 ? most : -1
  const sequence = design.blocks.map((_, b) => b).filter((b) => b !== last)
  if (last >= 0) sequence.push(last)
  const blocks: Cells[] = []
  for (const b of sequence) {
    const block = design.blocks[b]
    if (!block) continue
    const mates = block.multiplier ? carriersOf(design, b, keep) : null
    const c = block.multiplier && mates ? meanOf(block.multiplier) : 0
    let s = 1
    let multiplier: Float64Array | null = null
    if (block.multiplier) {
      multiplier = new Float64Array(rows)
      let squares = 0
      for (let i = 0; i < rows; i++) {
        const z = (block.multiplier[i] as number) - c
        squares += z * z
        multiplier[i] = z
      }
      if (!(squares > 0)) return null
      s = powerOfTwo(Math.sqrt(squares / rows))
      for (let i = 0; i < rows; i++) multiplier[i] = (multiplier[i] as number) / s
    }
    const place = new Map<number, number>()
    block.columns.forEach((at, k) => {
      if (keep[at] !== 1) return
      place.set(at, column.length)
      add(at, c, s, mates ? (mates[k] as number) : -1)
    })
    const starts = new Int32Array(block.count + 1)
    const columns: number[] = []
    const values: number[] = []
    for (let cell = 0; cell < block.count; cell++) {
      for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++) {
        const at = place.get(block.column[e] as number)
        if (at === undefined) continue
        columns.push(at)
        values.push(block.value[e] as number)
      }
      starts[cell + 1] = columns.length
    }
    const value = Float64Array.from(values)
    const only = isPlain(starts, value)
      ? Int32Array.from({ length: block.count }, (_, cell) =>
          starts[cell] === starts[cell + 1] ? -1 : (columns[starts[cell] as number] as number),
        )
      : null
    blocks.push({ cells: block.cells, count: block.count, starts, column: Int32Array.from(columns), value, multiplier, only })
  }
  const eliminated = last >= 0 && blocks.at(-1)?.only ? blocks.length - 1 : -1
  const shape: Shape = { rows, plain, blocks, eliminated, size: column.length }
  return {
    ...shape,
    layout: new Layout(shape),
    change: {
      type: "scaled",
      column: Int32Array.from(column),
      centre: Float64Array.from(centre),
      scale: Float64Array.from(scale),
      carrier: Int32Array.from(carrier),
    },
    written: null,
  }
}

/** Columns of the same cells without the number: they can carry its centre. Null unless each column kept has one. */
function carriersOf(design: Design, b: number, keep: Uint8Array): Int32Array | null {
  const block = design.blocks[b]
  if (!block) return null
  const own = cellPattern(design, block)
  for (const other of design.blocks) {
    if (other.multiplier !== null || other.columns.length !== block.columns.length || other.count !== block.count) continue
    const theirs = cellPattern(design, other)
    if (own !== theirs) continue
    if (block.columns.every((at, k) => keep[at] !== 1 || keep[other.columns[k] as number] === 1)) return other.columns
  }
  return null
}

/** What a block's cells and contrasts are, apart from the number: equal for `lot` and `lot.night`. */
function cellPattern(design: Design, block: Design["blocks"][number]): string {
  const term = design.recipe.terms[block.term]
  return JSON.stringify(
    term?.pieces.flatMap((piece) => (piece.type === "category" ? [[piece.says, piece.coding, piece.contrasts]] : [])) ?? block.shape,
  )
}

const isPlain = (starts: Int32Array, value: Float64Array): boolean => {
  for (let cell = 0; cell + 1 < starts.length; cell++) if ((starts[cell + 1] as number) - (starts[cell] as number) > 1) return false
  return value.every((v) => v === 1)
}

const meanOf = (values: Float64Array): number => {
  let sum = 0
  for (let from = 0; from < values.length; from += 128) {
    let part = 0
    const to = Math.min(values.length, from + 128)
    for (let i = from; i < to; i++) part += values[i] as number
    sum += part
  }
  return sum / values.length
}

/** The power of two at or below x, so that scaling rounds nothing. */
const powerOfTwo = (x: number): number => {
  let power = 1
  while (power * 2 <= x && power < 1e300) power *= 2
  while (power > x && power > 1e-300) power /= 2
  return power
}

// Orthogonal -----------------------------------------------------------------------------------------------------------------------------

type Orthogonalised = {
  readonly kept: number[]
  readonly dependences: Dependence[]
  readonly change: Change & { type: "orthogonal" }
}

/** Modified Gram-Schmidt in 32 digits over the columns in order, leaving out those whose part beyond the earlier ones is nothing. */
function orthogonalised(
  written: readonly WrittenColumn[],
  weight: Float64Array | null,
  only: readonly number[] | null = null,
): Orthogonalised {
  const n = written[0]?.high.length ?? 0
  const roots = weight?.map((w) => Math.sqrt(w)) ?? null
  const q: Wide[] = []
  const kept: number[] = []
  const triangle: Float64Array[] = []
  const dependences: Dependence[] = []
  const out = new Float64Array(2)
  for (const at of only ?? written.keys()) {
    const source = written[at] as WrittenColumn
    const column = wide(n)
    for (let i = 0; i < n; i++) {
      const x = source.high[i] as number
      const rest = source.low ? (source.low[i] as number) : 0
      const root = roots ? (roots[i] as number) : 1
      const p = x * root
      column.high[i] = p
      column.low[i] = roots ? productError(x, root, p) + rest * root : rest
    }
    wideDot(column, column, 0, n, out)
    const [length] = wideRoot(out[0] as number, out[1] as number)
    const entries = new Float64Array(2 * (q.length + 1))
    for (let k = 0; k < q.length; k++) {
      wideDot(q[k] as Wide, column, 0, n, out)
      entries[2 * k] = out[0] as number
      entries[2 * k + 1] = out[1] as number
      wideSubtract(column, q[k] as Wide, out[0] as number, out[1] as number)
    }
    wideDot(column, column, 0, n, out)
    const [beyond, beyondLow] = wideRoot(out[0] as number, out[1] as number)
    // Under weights the columns are already known to be independent, so only a zero is left out.
    if (!(beyond > (weight ? 0 : dependenceTolerance * length))) {
      dependences.push({ column: at, on: combination(entries, triangle, kept, written, length) })
      continue
    }
    entries[2 * q.length] = beyond
    entries[2 * q.length + 1] = beyondLow
    wideDivide(column, beyond, beyondLow)
    q.push(column)
    kept.push(at)
    triangle.push(entries)
  }
  const p = kept.length
  const high = new Float64Array(p * p)
  const low = new Float64Array(p * p)
  triangle.forEach((entries, j) => {
    for (let i = 0; i <= j; i++) {
      high[i * p + j] = entries[2 * i] as number
      low[i * p + j] = entries[2 * i + 1] as number
    }
  })
  return { kept, dependences, change: { type: "orthogonal", column: Int32Array.from(kept), high, low } }
}

/** A dependent column in terms of the earlier ones: R·c = entries, solved from the last row up; tiny parts are left out. */
function combination(
  entries: Float64Array,
  triangle: readonly Float64Array[],
  kept: readonly number[],
  written: readonly WrittenColumn[],
  length: number,
): Dependence["on"] {
  const p = triangle.length
  const c = new Float64Array(p)
  for (let i = p - 1; i >= 0; i--) {
    let sum = entries[2 * i] as number
    for (let j = i + 1; j < p; j++) sum -= ((triangle[j] as Float64Array)[2 * i] as number) * (c[j] as number)
    c[i] = sum / ((triangle[i] as Float64Array)[2 * i] as number)
  }
  return [...c.keys()].flatMap((k) => {
    const column = kept[k] as number
    const times = tidy(c[k] as number)
    let squares = 0
    for (const x of (written[column] as WrittenColumn).high) squares += x * x
    return Math.abs(times) * Math.sqrt(squares) > 1e-9 * length ? [{ column, times }] : []
  })
}

/** A whole number other than 0 where it is one but for rounding: a part of 1e-12 may be all of a column in another unit. */
const tidy = (x: number): number => (Math.round(x) !== 0 && Math.abs(x - Math.round(x)) < 1e-9 ? Math.round(x) : x)

function orthogonalBasis(written: readonly WrittenColumn[], kept: readonly number[], change: Change & { type: "orthogonal" }): Basis {
  const n = written[0]?.high.length ?? 0
  const p = kept.length
  // X = Q·R solved for Q, a column at a time and in 32 digits: under weights the columns at hand are those of √W·X.
  const columns: Wide[] = []
  for (let j = 0; j < p; j++) {
    const column = wide(n)
    const source = written[kept[j] as number] as WrittenColumn
    column.high.set(source.high)
    if (source.low) column.low.set(source.low)
    for (let k = 0; k < j; k++) wideSubtract(column, columns[k] as Wide, change.high[k * p + j] as number, change.low[k * p + j] as number)
    wideDivide(column, change.high[j * p + j] as number, change.low[j * p + j] as number)
    columns.push(column)
  }
  const shape: Shape = { rows: n, plain: columns.map(({ high }) => high), blocks: [], eliminated: -1, size: p }
  return { ...shape, layout: new Layout(shape), change, written }
}

// Normal matrix --------------------------------------------------------------------------------------------------------------------------

/** Dependences by Cholesky in the order of the columns on the scaled normal matrix in doubles. */
function dependencesByNormalMatrix(design: Design): Dependence[] {
  const p = design.recipe.columns.length
  const keep = new Uint8Array(p).fill(1)
  const zero: Dependence[] = []
  const lengths = new Float64Array(p)
  if (design.constant) lengths[0] = design.rows
  for (const { column, values } of design.plain) lengths[column] = values.reduce((sum, x) => sum + x * x, 0)
  for (const block of design.blocks) {
    for (let i = 0; i < design.rows; i++) {
      const cell = block.cells[i] as number
      const times = block.multiplier ? (block.multiplier[i] as number) : 1
      for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++) {
        const x = times * (block.value[e] as number)
        lengths[block.column[e] as number] = (lengths[block.column[e] as number] as number) + x * x
      }
    }
  }
  lengths.forEach((length, column) => {
    if (length > 0) return
    keep[column] = 0
    zero.push({ column, on: [] })
  })
  const basis = scaledBasis(design, keep)
  if (!basis) return zero
  const gram = gramOf(basis.layout, rangeSums(basis.layout, new Float64Array(design.rows).fill(1), new Float64Array(design.rows)))
  const full = gram.full()
  const m = basis.size
  const order = [...basis.change.column.keys()].sort((a, b) => (basis.change.column[a] as number) - (basis.change.column[b] as number))
  const rowsOfTriangle: Float64Array[] = []
  const kept: number[] = []
  const found: Dependence[] = [...zero]
  for (const at of order) {
    const row = new Float64Array(kept.length + 1)
    const own = full[at * m + at] as number
    let left = own
    for (let k = 0; k < kept.length; k++) {
      const above = rowsOfTriangle[k] as Float64Array
      let sum = full[at * m + (kept[k] as number)] as number
      for (let l = 0; l < k; l++) sum -= (row[l] as number) * (above[l] as number)
      row[k] = sum / (above[k] as number)
      left -= (row[k] as number) * (row[k] as number)
    }
    if (!(left > 1e-13 * own)) {
      const c = new Float64Array(kept.length)
      for (let i = kept.length - 1; i >= 0; i--) {
        let sum = row[i] as number
        for (let j = i + 1; j < kept.length; j++) sum -= ((rowsOfTriangle[j] as Float64Array)[i] as number) * (c[j] as number)
        c[i] = sum / ((rowsOfTriangle[i] as Float64Array)[i] as number)
      }
      const on = [...c.keys()].flatMap((k) => {
        const times = tidy(c[k] as number)
        return Math.abs(times) > 1e-7 ? [{ column: basis.change.column[kept[k] as number] as number, times }] : []
      })
      found.push({ column: basis.change.column[at] as number, on })
      continue
    }
    row[kept.length] = Math.sqrt(left)
    rowsOfTriangle.push(row)
    kept.push(at)
  }
  return found
}

/** A basis over some of the design's columns, already known to be independent. */
export function basisOver(design: Design, columns: readonly number[]): Basis {
  const keep = new Uint8Array(design.recipe.columns.length)
  for (const column of columns) keep[column] = 1
  const scaled = scaledBasis(design, keep)
  if (scaled && inflation(scaled) < mostInflation) return scaled
  if (design.rows * columns.length > mostWritten) {
    if (!scaled) throw new RangeError("a column of the design is zero")
    return scaled
  }
  const written = writtenColumns(design)
  const { kept, change } = orthogonalised(
    written,
    null,
    [...columns].sort((a, b) => a - b),
  )
  return orthogonalBasis(written, kept, change)
}
