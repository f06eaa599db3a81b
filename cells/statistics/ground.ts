// What a fit stands on and no link changes: the design, the basis it is fitted in, and the columns that say nothing new. Candidates of a
// comparison, and a link that is switched, have it in common, so the last one made is kept as long as its columns are.

import { type Basis, basisOf, type Dependence } from "./basis.ts"
import { type Design, designOf, recipeOf } from "./design.ts"
import type { Problem, Variable } from "./problem.ts"
import type { Pace } from "./scoring.ts"

export type Ground = {
  readonly design: Design
  readonly basis: Basis
  readonly dependences: readonly Dependence[]
}

/** The parts of a problem that decide its ground. */
type Asked = Pick<Problem, "terms" | "intercept" | "variables" | "rows" | "repeat">

type Kept = { readonly asked: Asked; readonly ground: Ground }

/** By the first column of the predictor: the entry goes when the column goes. At most one at a time, since a basis is as large as its columns. */
let kept = new WeakMap<object, Kept>()

/** The ground of a problem, or in words what is wrong with its columns. */
export async function groundOf(problem: Asked, pace: Pace): Promise<Ground | string> {
  const column = firstColumn(problem)
  const known = column === null ? undefined : kept.get(column)
  if (known && isSame(known.asked, problem)) return known.ground
  const { terms, intercept, variables, rows, repeat } = problem
  const design = designOf(recipeOf(terms, intercept, variables, rows, repeat), variables, rows)
  const unfit = missingIn(design)
  if (unfit !== null) return unfit
  if (pace.due(50 * rows)) await pace.rest()
  const ground = { design, ...(await basisOf(design, pace)) }
  if (column !== null) {
    kept = new WeakMap()
    kept.set(column, { asked: { terms, intercept, variables, rows, repeat }, ground })
  }
  return ground
}

const firstColumn = ({ terms, variables }: Asked): object | null => {
  const variable = variables[terms[0]?.pieces[0]?.variable ?? ""]
  return variable === undefined ? null : columnOf(variable)
}

const columnOf = (variable: Variable): Float64Array | Int32Array => (variable.type === "number" ? variable.values : variable.codes)

/** Whether two problems have the same predictor over the very same arrays: no value is looked at. */
function isSame(a: Asked, b: Asked): boolean {
  if (a.rows !== b.rows || a.intercept !== b.intercept || a.repeat !== b.repeat || a.terms.length !== b.terms.length) return false
  return a.terms.every((term, t) => {
    const other = b.terms[t]
    if (other === undefined || other.says !== term.says || other.pieces.length !== term.pieces.length) return false
    return term.pieces.every((piece, k) => {
      const theirs = other.pieces[k]
      if (theirs === undefined || theirs.variable !== piece.variable || theirs.as !== piece.as || theirs.setting !== piece.setting)
        return false
      const [x, y] = [a.variables[piece.variable], b.variables[piece.variable]]
      if (x === undefined || y === undefined || columnOf(x) !== columnOf(y)) return false
      if (x.type !== "factor" || y.type !== "factor") return x.type === y.type
      return x.coding === y.coding && x.levels.length === y.levels.length && x.levels.every((level, code) => level === y.levels[code])
    })
  })
}

/** Rows used have everything present; where that is not so it is our mistake, said rather than computed with. */
function missingIn(design: Design): string | null {
  for (const { column, values } of design.plain) {
    for (let i = 0; i < design.rows; i++)
      if (!Number.isFinite(values[i] as number)) return `${design.recipe.columns[column]} is missing in a row`
  }
  for (const { cells, multiplier, columns } of design.blocks) {
    for (let i = 0; i < design.rows; i++) {
      if ((cells[i] as number) < 0 || (multiplier && !Number.isFinite(multiplier[i] as number)))
        return `${design.recipe.columns[columns[0] as number]} is missing in a row`
    }
  }
  return null
}
