// The design: from terms and variables to columns. What is learned from the rows used (levels, knots, orthogonal polynomials) goes into a
// recipe, so that other rows get the same columns. Factors stay codes: a term with factors is a block of cells, each with the columns it
// belongs to, and no column of zeros and ones is ever made here unless it is asked for.

import { productError, widePower } from "./double-double.ts"
import { cos, log, pow, sin } from "./elementary.ts"
import type { Piece, Term, Variable } from "./problem.ts"
import type { PieceRecipe, Recipe, TermRecipe } from "./recipe.ts"

export type Variables = Readonly<Record<string, Variable>>

/**
 * What rounding took from the values of a column: powers and products have twice the digits of what they are made of. It is made only when
 * it is asked for, and null where nothing was taken.
 */
type Rest = (() => Float64Array) | null
type Made = { readonly values: Float64Array; readonly rest: Rest }

/** A column of numbers. */
type PlainColumn = Made & { readonly column: number }

/** A column written out with 32 digits; no low part where the high one is exact. */
export type WrittenColumn = { readonly high: Float64Array; readonly low: Float64Array | null }

/**
 * The columns of a term with factors. Row i is in cell `cells[i]` (−1: a level never seen); cell c belongs to the columns
 * `column[starts[c] … starts[c + 1])` with the values `value[…]` (contrasts), times `multiplier[i]`. One block for each numeric column.
 */
export type Block = {
  readonly term: number
  readonly cells: Int32Array
  readonly count: number
  readonly starts: Int32Array
  readonly column: Int32Array
  readonly value: Float64Array
  readonly multiplier: Float64Array | null
  readonly multiplierRest: Rest
  /** The columns of the whole block, in order. */
  readonly columns: Int32Array
  /** Blocks of one term share cells and contrasts. */
  readonly shape: number
}

export type Design = {
  readonly rows: number
  readonly recipe: Recipe
  /** The term of each column; −1 for the constant. */
  readonly termOf: Int32Array
  readonly constant: boolean
  readonly plain: readonly PlainColumn[]
  readonly blocks: readonly Block[]
}

/** Most columns a design may have: a normal matrix of this size is still solved in seconds. */
export const mostColumns = 2000

/** How many columns a predictor makes at most; asked before any is made. */
export function columnsNeeded(terms: readonly Term[], intercept: boolean, variables: Variables): number {
  let count = intercept ? 1 : 0
  for (const term of terms) {
    let size = 1
    for (const piece of term.pieces) size *= sizeOf(piece, variables[piece.variable])
    count += size
  }
  return count
}

/**
 * Learns the recipe of a predictor from the rows used.
 * @param repeat  how often each row stands, or null: orthogonality, knots and means count it
 */
export function recipeOf(
  terms: readonly Term[],
  intercept: boolean,
  variables: Variables,
  rows: number,
  repeat: Float64Array | null,
): Recipe {
  const keys = new Set(terms.map((term) => setOf(term.pieces.map(pieceKey))))
  if (intercept) keys.add("")
  const columns: string[] = intercept ? ["intercept"] : []
  const made: TermRecipe[] = []
  for (const term of terms) {
    const pieces = term.pieces.map((piece, k): PieceRecipe => {
      const variable = variables[piece.variable]
      if (!variable) throw new RangeError(`no variable ${piece.variable}`)
      if (variable.type === "factor" || piece.as === "category") {
        const without = term.pieces.filter((_, other) => other !== k).map(pieceKey)
        return categoryRecipe(piece, variable, rows, keys.has(setOf(without)))
      }
      return numberRecipe(piece, variable.values, repeat)
    })
    const names = pieces.map(namesOf).reduce((left, right) => left.flatMap((a) => right.map((b) => (a === "" ? b : `${a} . ${b}`))), [""])
    made.push({ says: term.says, pieces, from: columns.length, count: names.length })
    for (const name of names) columns.push(name)
  }
  return { intercept, terms: made, columns }
}

/** The columns of a recipe at given rows. A level the recipe does not know, or a number where a piece is undefined, gives NaN. */
export function designOf(recipe: Recipe, variables: Variables, rows: number): Design {
  const termOf = new Int32Array(recipe.columns.length).fill(-1)
  const plain: PlainColumn[] = []
  const blocks: Block[] = []
  recipe.terms.forEach((term, t) => {
    termOf.fill(t, term.from, term.from + term.count)
    const numbers = term.pieces.map((piece) => (piece.type === "number" ? numberColumns(piece, variables, rows) : null))
    const factors = term.pieces.map((piece) => (piece.type === "category" ? piece : null))
    if (factors.every((factor) => factor === null)) {
      let products: (Made | null)[] = [null]
      for (const columns of numbers) products = products.flatMap((left) => (columns ?? []).map((right) => product(left, right)))
      products.forEach((made, j) => {
        if (made) plain.push({ column: term.from + j, ...made })
      })
      return
    }
    blocks.push(...termBlocks(term, t, numbers, variables, rows))
  })
  return { rows, recipe, termOf, constant: recipe.intercept, plain, blocks }
}

/** All columns written out, in the order of the coefficients: for few rows or small designs. */
export function denseColumns(design: Design): Float64Array[] {
  const { rows } = design
  const columns = design.recipe.columns.map(() => new Float64Array(rows))
  if (design.constant) columns[0]?.fill(1)
  for (const { column, values } of design.plain) columns[column]?.set(values)
  for (const block of design.blocks) {
    for (let i = 0; i < rows; i++) {
      const cell = block.cells[i] as number
      const times = block.multiplier ? (block.multiplier[i] as number) : 1
      if (cell < 0) {
        for (const column of block.columns) (columns[column] as Float64Array)[i] = Number.NaN
        continue
      }
      const end = block.starts[cell + 1] as number
      for (let e = block.starts[cell] as number; e < end; e++)
        (columns[block.column[e] as number] as Float64Array)[i] = times * (block.value[e] as number)
    }
  }
  return columns
}

/** The same with 32 digits, powers and products of numbers as well. */
export function writtenColumns(design: Design): WrittenColumn[] {
  const low = new Map<number, Float64Array>()
  for (const { column, rest } of design.plain) if (rest) low.set(column, rest())
  for (const block of design.blocks) {
    const rest = block.multiplierRest?.()
    if (!rest) continue
    for (let i = 0; i < design.rows; i++) {
      const cell = block.cells[i] as number
      if (cell < 0) continue
      for (let e = block.starts[cell] as number; e < (block.starts[cell + 1] as number); e++) {
        const column = block.column[e] as number
        const values = low.get(column) ?? new Float64Array(design.rows)
        low.set(column, values)
        values[i] = (rest[i] as number) * (block.value[e] as number)
      }
    }
  }
  return denseColumns(design).map((high, column) => ({ high, low: low.get(column) ?? null }))
}

/** The same columns at some of the rows. */
export function designAtRows(design: Design, rows: Int32Array): Design {
  const taken = new Map<Float64Array | Int32Array, Float64Array | Int32Array>()
  const take = <A extends Float64Array | Int32Array>(values: A): A => {
    const known = taken.get(values)
    if (known) return known as A
    const some = (
      values instanceof Float64Array ? Float64Array.from(rows, (i) => values[i] as number) : rows.map((i) => values[i] as number)
    ) as A
    taken.set(values, some)
    return some
  }
  const takeRest = (rest: Rest): Rest => (rest === null ? null : () => take(rest()))
  return {
    ...design,
    rows: rows.length,
    plain: design.plain.map(({ column, values, rest }) => ({ column, values: take(values), rest: takeRest(rest) })),
    blocks: design.blocks.map((block) => ({
      ...block,
      cells: take(block.cells),
      multiplier: block.multiplier === null ? null : take(block.multiplier),
      multiplierRest: takeRest(block.multiplierRest),
    })),
  }
}

/** The largest size of each column. */
export function columnSizes(design: Design): Float64Array {
  const sizes = new Float64Array(design.recipe.columns.length)
  if (design.constant) sizes[0] = 1
  const largest = (values: Float64Array): number => values.reduce((most, x) => Math.max(most, Math.abs(x)), 0)
  for (const { column, values } of design.plain) sizes[column] = largest(values)
  for (const block of design.blocks) {
    const size = block.multiplier === null ? 1 : largest(block.multiplier)
    for (const column of block.columns) sizes[column] = size
  }
  return sizes
}

/**
 * Which rows have every piece of the predictor: 1 where present. A missing number is NaN, a missing level −1; a piece that is undefined
 * there (the log of 0, the root of −1) counts as missing.
 */
export function presentRows(terms: readonly Term[], variables: Variables, rows: number): Uint8Array {
  const present = new Uint8Array(rows).fill(1)
  for (const piece of terms.flatMap((term) => term.pieces)) {
    const variable = variables[piece.variable]
    if (!variable) continue
    for (let i = 0; i < rows; i++) {
      const there =
        variable.type === "factor" ? (variable.codes[i] as number) >= 0 : Number.isFinite(simplePiece(piece, variable.values[i] as number))
      if (!there) present[i] = 0
    }
  }
  return present
}

// Pieces ---------------------------------------------------------------------------------------------------------------------------------

const pieceKey = (piece: Piece): string => `${piece.as}(${piece.variable}, ${piece.setting})`
const setOf = (keys: readonly string[]): string => [...new Set(keys)].sort().join(" . ")

const sizeOf = (piece: Piece, variable: Variable | undefined): number => {
  if (variable?.type === "factor") return variable.levels.length
  if (piece.as === "category") return new Set(variable?.values).size
  return piece.as === "polynomial"
    ? (piece.setting ?? 1)
    : piece.as === "natural_spline"
      ? (piece.setting ?? 0) + 1
      : piece.as === "periodic"
        ? 2
        : 1
}

const namesOf = (piece: PieceRecipe): readonly string[] =>
  piece.type === "number"
    ? piece.says
    : (piece.contrasts ? piece.levels.slice(1) : piece.levels).map((level) => `${piece.says} is ${level}`)

function categoryRecipe(piece: Piece, variable: Variable, rows: number, contrasts: boolean): PieceRecipe {
  if (variable.type === "factor") {
    const used = new Uint8Array(variable.levels.length)
    for (let i = 0; i < rows; i++) if ((variable.codes[i] as number) >= 0) used[variable.codes[i] as number] = 1
    const levels = variable.levels.filter((_, code) => used[code] === 1)
    return { type: "category", variable: piece.variable, says: piece.variable, levels, coding: variable.coding, contrasts }
  }
  const values = [...new Set(variable.values.subarray(0, rows))].sort((a, b) => a - b)
  const says = `category(${piece.variable})`
  return { type: "category", variable: piece.variable, says, levels: values.map(String), coding: "corner", contrasts }
}

function numberRecipe(piece: Piece, x: Float64Array, repeat: Float64Array | null): PieceRecipe {
  const { variable, setting } = piece
  const as = piece.as === "category" ? "itself" : piece.as
  const many = (count: number): string[] => Array.from({ length: count }, (_, j) => `${as}(${variable}) ${j + 1}`)
  const none = new Float64Array(0)
  const made = (says: readonly string[], learned: Float64Array): PieceRecipe => ({ type: "number", variable, says, as, setting, learned })
  switch (as) {
    case "itself":
      return made([variable], none)
    case "log":
    case "square_root":
      return made([`${as}(${variable})`], none)
    case "power":
      return made([`power(${variable}, ${setting})`], none)
    case "polynomial":
      return made(many(setting ?? 1), polynomialRecurrence(x, setting ?? 1, repeat))
    case "natural_spline":
      return made(many((setting ?? 0) + 1), splineKnots(x, setting ?? 0, repeat))
    case "periodic":
      return made(many(2), none)
  }
}

/** The value of a piece that needs nothing learned; the number itself for the others. */
function simplePiece(piece: Pick<Piece, "as" | "setting">, x: number): number {
  switch (piece.as) {
    case "log":
      return x > 0 ? log(x) : Number.NaN
    case "square_root":
      return Math.sqrt(x)
    case "power":
      return power(x, piece.setting ?? 1)
    default:
      return x
  }
}

/** x^a; small whole powers by multiplication in 32 digits, which allows negative x. */
function power(x: number, a: number): number {
  if (isSmallWhole(a)) return widePower(x, a)[0]
  return x < 0 ? Number.NaN : pow(x, a)
}

const isSmallWhole = (a: number): boolean => Number.isInteger(a) && Math.abs(a) <= 64

function numberColumns(piece: PieceRecipe & { type: "number" }, variables: Variables, rows: number): Made[] {
  const exact = (values: Float64Array): Made => ({ values, rest: null })
  const variable = variables[piece.variable]
  if (variable?.type !== "number") throw new RangeError(`${piece.variable} has to be a number`)
  const x = variable.values
  switch (piece.as) {
    case "itself":
      return [exact(x.length === rows ? x : x.subarray(0, rows))]
    case "polynomial":
      return polynomialColumns(x, piece.learned, piece.says.length, rows).map(exact)
    case "natural_spline":
      return splineColumns(x, piece.learned, rows).map(exact)
    case "periodic": {
      const period = piece.setting ?? 1
      const sines = new Float64Array(rows)
      const cosines = new Float64Array(rows)
      for (let i = 0; i < rows; i++) {
        // The whole periods are taken off first, so that far-off dates lose nothing.
        const turns = (x[i] as number) / period
        const angle = 2 * Math.PI * (turns - Math.round(turns))
        sines[i] = sin(angle)
        cosines[i] = cos(angle)
      }
      return [exact(sines), exact(cosines)]
    }
    default: {
      const values = new Float64Array(rows)
      for (let i = 0; i < rows; i++) values[i] = simplePiece(piece, x[i] as number)
      const a = piece.as === "power" ? (piece.setting ?? 1) : 1
      // Logarithms and broken powers are taken as the numbers they round to.
      if (a === 1 || !isSmallWhole(a)) return [exact(values)]
      return [{ values, rest: () => Float64Array.from(values, (_, i) => widePower(x[i] as number, a)[1]) }]
    }
  }
}

/**
 * Three-term recurrence of the polynomials that are orthogonal over the rows (Forsythe 1957, J. SIAM 5:74):
 *     p₀ = 1, pₖ₊₁ = (x − αₖ₊₁)pₖ − (‖pₖ‖²/‖pₖ₋₁‖²)pₖ₋₁, each then divided by its norm; leading coefficients are positive.
 * @returns α₁…α_d, then ‖p₀‖…‖p_d‖ of the monic ones; a norm is 0 from the degree on that the distinct x cannot carry
 */
function polynomialRecurrence(x: Float64Array, degree: number, repeat: Float64Array | null): Float64Array {
  const n = x.length
  const learned = new Float64Array(2 * degree + 1)
  let before = new Float64Array(n)
  let now = new Float64Array(n).fill(1)
  let normBefore = 1
  let norm = weightedSum(n, (i) => (repeat ? (repeat[i] as number) : 1))
  learned[degree] = Math.sqrt(norm)
  const spread = Math.max(
    1e-300,
    x.reduce((most, value) => Math.max(most, Math.abs(value - (x[0] as number))), 0),
  )
  for (let k = 0; k < degree; k++) {
    const current = now
    // α is a mean about the first x, so that nothing cancels where x is far from 0.
    const origin = x[0] as number
    const moment = weightedSum(n, (i) => {
      const p = current[i] as number
      return (repeat ? (repeat[i] as number) : 1) * ((x[i] as number) - origin) * p * p
    })
    const alpha = norm === 0 ? 0 : origin + moment / norm
    learned[k] = alpha
    const ratio = k === 0 || norm === 0 ? 0 : norm / normBefore
    const next = new Float64Array(n)
    for (let i = 0; i < n; i++) next[i] = ((x[i] as number) - alpha) * (now[i] as number) - ratio * (before[i] as number)
    before = now
    now = next
    normBefore = norm
    norm = weightedSum(n, (i) => (repeat ? (repeat[i] as number) : 1) * (next[i] as number) * (next[i] as number))
    if (!(norm > normBefore * spread * spread * 1e-24)) norm = 0
    learned[degree + k + 1] = Math.sqrt(norm)
    if (norm === 0) break
  }
  return learned
}

function polynomialColumns(x: Float64Array, learned: Float64Array, degree: number, rows: number): Float64Array[] {
  const columns: Float64Array[] = []
  let before = new Float64Array(rows)
  let now = new Float64Array(rows).fill(1)
  for (let k = 0; k < degree; k++) {
    const alpha = learned[k] as number
    const norm = learned[degree + k] as number
    const shrink = k === 0 ? 0 : norm / (learned[degree + k - 1] as number)
    const ratio = shrink * shrink
    const next = new Float64Array(rows)
    const scaled = new Float64Array(rows)
    const length = learned[degree + k + 1] as number
    if (length > 0) {
      for (let i = 0; i < rows; i++) {
        const value = ((x[i] as number) - alpha) * (now[i] as number) - ratio * (before[i] as number)
        next[i] = value
        scaled[i] = value / length
      }
    }
    columns.push(scaled)
    before = now
    now = next
  }
  return columns
}

/** Knots at the ends and at the quantiles j/(k + 1), linear between order statistics, rows counted as often as they stand. */
function splineKnots(x: Float64Array, inner: number, repeat: Float64Array | null): Float64Array {
  const order = [...x.keys()].sort((a, b) => (x[a] as number) - (x[b] as number))
  const counts = order.map((row) => (repeat ? (repeat[row] as number) : 1))
  const total = counts.reduce((sum, count) => sum + count, 0)
  const statistic = (k: number): number => {
    let passed = 0
    for (let j = 0; j < order.length; j++) {
      passed += counts[j] as number
      if (passed > k) return x[order[j] as number] as number
    }
    return x[order.at(-1) as number] as number
  }
  const knots = new Float64Array(inner + 2)
  for (let j = 0; j <= inner + 1; j++) {
    const at = ((total - 1) * j) / (inner + 1)
    const below = Math.floor(at)
    const low = statistic(below)
    knots[j] = at > below ? low + (at - below) * (statistic(below + 1) - low) : low
  }
  return knots
}

/** Natural cubic splines by truncated powers: x, then d_j − d_(K−1) with d_j = [(x − ξ_j)³₊ − (x − ξ_K)³₊]/(ξ_K − ξ_j), j = 1…K − 2. */
function splineColumns(x: Float64Array, knots: Float64Array, rows: number): Float64Array[] {
  const last = knots.length - 1
  const columns = [x.slice(0, rows)]
  const cube = (v: number): number => (v > 0 ? v * v * v : v <= 0 ? 0 : Number.NaN)
  const bend = (v: number, j: number): number => {
    const width = (knots[last] as number) - (knots[j] as number)
    return width > 0 ? (cube(v - (knots[j] as number)) - cube(v - (knots[last] as number))) / width : 0
  }
  for (let j = 0; j < last - 1; j++) {
    const values = new Float64Array(rows)
    for (let i = 0; i < rows; i++) values[i] = bend(x[i] as number, j) - bend(x[i] as number, last - 1)
    columns.push(values)
  }
  return columns
}

const weightedSum = (n: number, at: (row: number) => number): number => {
  // Sums of blocks: more accurate than one long sum.
  let total = 0
  for (let from = 0; from < n; from += 128) {
    let part = 0
    const to = Math.min(n, from + 128)
    for (let i = from; i < to; i++) part += at(i)
    total += part
  }
  return total
}

function product(left: Made | null, right: Made): Made {
  if (!left) return right
  const values = left.values.map((value, i) => value * (right.values[i] as number))
  const rest = (): Float64Array => {
    const [a, b] = [left.rest?.(), right.rest?.()]
    return values.map((value, i) => {
      const [x, y] = [left.values[i] as number, right.values[i] as number]
      const taken = productError(x, y, value) + (x * (b ? (b[i] as number) : 0) + (a ? (a[i] as number) : 0) * y)
      return Number.isFinite(taken) ? taken : 0
    })
  }
  return { values, rest }
}

// Terms with factors ---------------------------------------------------------------------------------------------------------------------

/** Codes of the recipe's levels at given rows; −1 where a level is missing or unknown. */
function codesOf(piece: PieceRecipe & { type: "category" }, variables: Variables, rows: number): Int32Array {
  const variable = variables[piece.variable]
  if (!variable) throw new RangeError(`no variable ${piece.variable}`)
  const place = new Map(piece.levels.map((level, code) => [level, code]))
  const codes = new Int32Array(rows)
  if (variable.type === "factor") {
    const translated = Int32Array.from(variable.levels, (level) => place.get(level) ?? -1)
    for (let i = 0; i < rows; i++) codes[i] = (variable.codes[i] as number) < 0 ? -1 : (translated[variable.codes[i] as number] as number)
    return codes
  }
  const byNumber = new Map(piece.levels.map((level, code) => [Number(level), code]))
  for (let i = 0; i < rows; i++) codes[i] = byNumber.get(variable.values[i] as number) ?? -1
  return codes
}

function termBlocks(term: TermRecipe, t: number, numbers: readonly (Made[] | null)[], variables: Variables, rows: number): Block[] {
  const factors = term.pieces.filter((piece) => piece.type === "category")
  const { cells, levelsOfCell } = combinedCells(
    factors.map((factor) => codesOf(factor, variables, rows)),
    factors.map((factor) => factor.levels.length),
    rows,
  )
  const count = levelsOfCell.length
  // Every combination of numeric columns is a block of its own over the same cells.
  let combinations: { readonly made: Made | null; readonly at: readonly number[] }[] = [{ made: null, at: [] }]
  for (const columns of numbers) {
    if (columns)
      combinations = combinations.flatMap(({ made, at }) => columns.map((column, j) => ({ made: product(made, column), at: [...at, j] })))
  }
  const sizes = term.pieces.map((piece) => namesOf(piece).length)
  return combinations.map(({ made, at }): Block => {
    const starts = new Int32Array(count + 1)
    const column: number[] = []
    const value: number[] = []
    for (let cell = 0; cell < count; cell++) {
      // The columns of a cell are the products of what its levels give: one column, or all of them negative for a reference under sum_to_zero.
      let entries: { readonly index: number; readonly times: number }[] = [{ index: 0, times: 1 }]
      let factor = 0
      let number = 0
      term.pieces.forEach((piece, k) => {
        const size = sizes[k] as number
        const own =
          piece.type === "number"
            ? [{ index: at[number++] as number, times: 1 }]
            : levelEntries(piece, (levelsOfCell[cell] as readonly number[])[factor++] as number)
        entries = entries.flatMap(({ index, times }) =>
          own.map((entry) => ({ index: index * size + entry.index, times: times * entry.times })),
        )
      })
      for (const { index, times } of entries) {
        column.push(term.from + index)
        value.push(times)
      }
      starts[cell + 1] = column.length
    }
    return {
      term: t,
      cells,
      count,
      starts,
      column: Int32Array.from(column),
      value: Float64Array.from(value),
      multiplier: made?.values ?? null,
      multiplierRest: made?.rest ?? null,
      columns: blockColumns(term, sizes, at),
      shape: t,
    }
  })
}

/** Columns of the block with the numeric columns `at`. */
function blockColumns(term: TermRecipe, sizes: readonly number[], at: readonly number[]): Int32Array {
  let indices = [0]
  let number = 0
  term.pieces.forEach((piece, k) => {
    const size = sizes[k] as number
    const own = piece.type === "number" ? [at[number++] as number] : Array.from({ length: size }, (_, j) => j)
    indices = indices.flatMap((index) => own.map((j) => index * size + j))
  })
  return Int32Array.from(indices, (index) => term.from + index)
}

function levelEntries(piece: PieceRecipe & { type: "category" }, level: number): { readonly index: number; readonly times: number }[] {
  if (!piece.contrasts) return [{ index: level, times: 1 }]
  if (level > 0) return [{ index: level - 1, times: 1 }]
  return piece.coding === "corner" ? [] : Array.from({ length: piece.levels.length - 1 }, (_, j) => ({ index: j, times: -1 }))
}

/** One code for each combination of levels that occurs, in order of the levels. */
function combinedCells(
  codes: readonly Int32Array[],
  sizes: readonly number[],
  rows: number,
): { readonly cells: Int32Array; readonly levelsOfCell: readonly (readonly number[])[] } {
  if (codes.length === 1)
    return { cells: codes[0] as Int32Array, levelsOfCell: Array.from({ length: sizes[0] as number }, (_, level) => [level]) }
  const whole = new Float64Array(rows)
  for (let i = 0; i < rows; i++) {
    let mixed = 0
    for (let k = 0; k < codes.length; k++) {
      const code = (codes[k] as Int32Array)[i] as number
      mixed = code < 0 || mixed < 0 ? -1 : mixed * (sizes[k] as number) + code
    }
    whole[i] = mixed
  }
  const seen = [...new Set(whole)].filter((mixed) => mixed >= 0).sort((a, b) => a - b)
  const place = new Map(seen.map((mixed, cell) => [mixed, cell]))
  const cells = new Int32Array(rows)
  for (let i = 0; i < rows; i++) cells[i] = place.get(whole[i] as number) ?? -1
  const levelsOfCell = seen.map((mixed) => {
    const levels = new Array<number>(codes.length)
    let left = mixed
    for (let k = codes.length - 1; k >= 0; k--) {
      levels[k] = left % (sizes[k] as number)
      left = Math.floor(left / (sizes[k] as number))
    }
    return levels
  })
  return { cells, levelsOfCell }
}
