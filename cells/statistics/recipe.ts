// Recipes: what the design learned from the rows used (levels, knots, orthogonal polynomials), as plain data, so that the same columns can
// be made for other rows. Made by design.ts; it holds no row of the data.

export type RecipeValue =
  | null
  | boolean
  | number
  | string
  | Float64Array
  | readonly RecipeValue[]
  | { readonly [member: string]: RecipeValue }

/** One piece of a term. A category has `levels` (those used, the first the reference); the others make numbers. */
export type PieceRecipe =
  | {
      readonly type: "category"
      readonly variable: string
      /** As it stands in names: the variable, or `category(x)` of a number. */
      readonly says: string
      readonly levels: readonly string[]
      readonly coding: "corner" | "sum_to_zero"
      /** Contrasts, or a column a level. */
      readonly contrasts: boolean
    }
  | {
      readonly type: "number"
      readonly variable: string
      /** Names of its columns, such as `night`, `polynomial(night) 2`. */
      readonly says: readonly string[]
      readonly as: "itself" | "log" | "square_root" | "power" | "polynomial" | "natural_spline" | "periodic"
      readonly setting: number | null
      /** Knots of a spline in order; for a polynomial α₁…α_d, then ‖·‖₀…‖·‖_d of its recurrence; else empty. */
      readonly learned: Float64Array
    }

export type TermRecipe = {
  readonly says: string
  readonly pieces: readonly PieceRecipe[]
  /** Index of its first column and how many it has. */
  readonly from: number
  readonly count: number
}

/** How to make the columns of the design for other rows. */
export type Recipe = {
  readonly intercept: boolean
  readonly terms: readonly TermRecipe[]
  /** Names of all columns in order. */
  readonly columns: readonly string[]
}
