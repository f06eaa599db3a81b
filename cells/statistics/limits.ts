// What became of the search for a maximum: it arrived inside, it runs to infinity, it ends at the edge of the possible means, or it gave up. Where
// coefficients run to infinity, the rest of the fit is that of the rows that stay.

import { basisOf } from "./basis.ts"
import { designCoefficients } from "./change.ts"
import { columnSizes, type Design, designAtRows } from "./design.ts"
import { type Edge, edgeAlongBarrier, edgeMaximum, leaningMaximum, wholeEdge } from "./edge.ts"
import { Factor } from "./gram.ts"
import type { Problem } from "./problem.ts"
import { type Recession, recessionAlong } from "./recession.ts"
import { type Responses, responsesOf } from "./rows.ts"
import { Equations, type Maximum, maximum, type Point } from "./scoring.ts"
import { startingPoint } from "./start.ts"

/** The rows a maximum was found over, and the maximum. */
export type Climb = {
  readonly problem: Problem
  readonly design: Design
  readonly responses: Responses
  readonly equations: Equations
  readonly found: Maximum
}

export type Limit =
  | { readonly type: "inside" }
  | { readonly type: "edge"; readonly edge: Edge }
  | {
      readonly type: "infinite"
      /** Directions over the columns of the design, the first found first. */
      readonly directions: readonly Float64Array[]
      /** Rows of the whole whose means stay, and the climb over them; null where none stays. */
      readonly rows: Int32Array
      readonly rest: Climb | null
      /** Where the best of those rows is at the edge of the possible means, that; its rows are counted among them. */
      readonly edge: Edge | null
      /** x'b of the rows that move, by the direction that moves them first; 0 for the others. */
      readonly along: Float64Array
    }
  | { readonly type: "gave_up" }

/** The least deviance of the rows whose means stay: those that move add nothing. */
export const leastDeviance = (limit: Limit & { readonly type: "infinite" }): number =>
  (limit.edge?.point ?? limit.rest?.found.point)?.deviance ?? 0

/** Looks at where a search ended and finds what kind of end it is. */
export async function limitOf(climb: Climb, phi: (point: Point) => number): Promise<Limit> {
  const { equations, found } = climb
  const recession = recessionAlong(equations, found.step) ?? recessionAlong(equations, await expectedStep(climb))
  if (recession) return receding(climb, recession, phi)
  const whole = await wholeEdge(equations)
  if (whole) return { type: "edge", edge: whole }
  if (found.end !== "arrived" || nearEdge(equations, found.point)) {
    const edge = await edgeMaximum(equations, found.point)
    if (edge) return { type: "edge", edge }
  }
  if (found.end === "arrived") return { type: "inside" }
  // Where rows at the edge and coefficients that run to infinity stand in each other's way, the barrier keeps the ones apart from the others.
  const along = await edgeAlongBarrier(equations, (await startOf(climb)) ?? found.point)
  if (along) {
    for (const drift of along.drifts) {
      const drifting = recessionAlong(equations, drift)
      if (drifting) return receding(climb, drifting, phi)
    }
    const edge = along.leaning.size > 0 ? await leaningMaximum(equations, along) : null
    if (edge) return { type: "edge", edge }
  }
  return { type: "gave_up" }
}

/** The limit along a direction in which the likelihood never falls, and what is left of the rows that it does not move. */
async function receding(climb: Climb, recession: Recession, phi: (point: Point) => number): Promise<Limit> {
  const { equations, design, problem } = climb
  const columns = design.recipe.columns.length
  const direction = cleaned(designCoefficients(equations.basis, columns, recession.gamma), columnSizes(design))
  const kept = rowsWhere(problem.rows, (i) => recession.along[i] === 0)
  const next = await restOf(climb, kept, direction, phi)
  const directions = [direction]
  const along = recession.along.slice()
  if (next === null) return { type: "infinite", directions, rows: kept, rest: null, edge: null, along }
  const further = await limitOf(next, phi)
  if (further.type === "infinite") {
    for (const other of further.directions) directions.push(other)
    kept.forEach((row, k) => {
      along[row] = further.along[k] as number
    })
    return {
      type: "infinite",
      directions,
      rows: further.rows.map((k) => kept[k] as number),
      rest: further.rest,
      edge: further.edge,
      along,
    }
  }
  if (further.type === "gave_up") return further
  return { type: "infinite", directions, rows: kept, rest: next, edge: further.type === "edge" ? further.edge : null, along }
}

/** Where scoring would go on from a search that did not arrive: observed weights can be flat where a mean is near the edge. */
async function expectedStep({ equations, found }: Climb): Promise<Float64Array> {
  const none = new Float64Array(equations.basis.size)
  if (found.end === "arrived" || !(await equations.fill(found.point, "expected"))) return none
  return Factor.of(found.point.gram)?.solve(found.point.score) ?? none
}

/** The climb over the rows that stay, with the columns that move last, so that the others are the ones kept. */
async function restOf(climb: Climb, rows: Int32Array, direction: Float64Array, phi: (point: Point) => number): Promise<Climb | null> {
  if (rows.length === 0) return null
  const problem = problemAtRows(climb.problem, rows)
  const design = designAtRows(climb.design, rows)
  const responses = responsesOf(problem)
  const all = [...direction.keys()]
  const order = [...all.filter((j) => direction[j] === 0), ...all.filter((j) => direction[j] !== 0)]
  const { basis } = await basisOf(design, climb.equations.pace, order)
  const equations = new Equations(basis, responses, climb.equations.pace)
  const start = await startOf({ design, equations })
  if (!start) return null
  const found = await maximum(equations, start, phi)
  return { problem, design, responses, equations, found }
}

/** Where a search over these rows begins: well inside the possible means. */
function startOf({ design, equations }: Pick<Climb, "design" | "equations">): Promise<Point | null> {
  const constant = design.constant && equations.basis.change.column.includes(0) ? 0 : -1
  return startingPoint(equations, constant, design.recipe.columns.length, null, null)
}

function problemAtRows(problem: Problem, rows: Int32Array): Problem {
  const take = (values: Float64Array | null): Float64Array | null => (values ? Float64Array.from(rows, (i) => values[i] as number) : null)
  return {
    ...problem,
    rows: rows.length,
    y: Float64Array.from(rows, (i) => problem.y[i] as number),
    trials: take(problem.trials),
    repeat: take(problem.repeat),
    precision: take(problem.precision),
    offset: take(problem.offset),
    exposure: take(problem.exposure),
    cluster: problem.cluster ? rows.map((i) => problem.cluster?.[i] as number) : null,
  }
}

/** Coefficients that move by nothing but rounding do not move. */
function cleaned(direction: Float64Array, sizes: Float64Array): Float64Array {
  let most = 0
  direction.forEach((b, j) => {
    most = Math.max(most, Math.abs(b * (sizes[j] as number)))
  })
  return direction.map((b, j) => (Math.abs(b * (sizes[j] as number)) < 1e-7 * most ? 0 : b))
}

const rowsWhere = (rows: number, keep: (row: number) => boolean): Int32Array => {
  const kept: number[] = []
  for (let i = 0; i < rows; i++) if (keep(i)) kept.push(i)
  return Int32Array.from(kept)
}

/** Whether a mean is so near to an end of its range that the maximum may be at the end. */
function nearEdge({ responses }: Equations, { state: { eta } }: Point): boolean {
  const { low, high, a } = responses
  if (!Number.isFinite(low) && !Number.isFinite(high)) return false
  let [least, most] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]
  for (let i = 0; i < eta.length; i++) {
    if ((a[i] as number) === 0) continue
    least = Math.min(least, eta[i] as number)
    most = Math.max(most, eta[i] as number)
  }
  const spread = most - least || Math.abs(most)
  return least - low < 1e-5 * spread || high - most < 1e-5 * spread
}
