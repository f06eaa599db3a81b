// Limits of a share's mean, and the rows of no dose whose mean is the lower one: what the clauses `limits` and `control` come to over a table.

import type { Input } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name, Value } from "../../runtime/value.ts"
import { evaluated } from "../language/evaluate.ts"
import { namesIn } from "../language/expression.ts"
import type { Bound } from "../language/form.ts"
import { faultFrom } from "../language/slip.ts"
import type { Control, Limits } from "../statistics/problem.ts"
import * as say from "./notices.ts"
import type { Response } from "./response.ts"
import { scalarOf, type TableHere, vectorOf } from "./table.ts"
import type { ModelSaid } from "./words.ts"

type Inputs = ReadonlyMap<Name, Input>
type Say = (notice: Notice) => void

/** The number a bound stands for: itself or that of a dial; null once a fault was said. */
export function numberOf(bound: Bound, clause: "family" | "link" | "limits", inputs: Inputs, notice: Say): number | null {
  if (bound.type === "number") return bound.value
  if (bound.type !== "cell") return null
  const value = inputs.get(bound.name)?.value
  if (typeof value === "number" && Number.isFinite(value)) return value
  notice(say.notANumber(bound.name, clause, bound.at))
  return null
}

/** The limits with numbers for dials; null where there are none, and once a fault was said. */
export function limitsOf(said: ModelSaid, inputs: Inputs, notice: Say): Limits | null {
  if (said.limits === null) return null
  const { low, high, at } = said.limits
  const estimated = [...(low.type === "estimate" ? ["low" as const] : []), ...(high.type === "estimate" ? ["high" as const] : [])]
  const end = (bound: Bound, otherwise: number): number | null => {
    if (bound.type === "estimate") return otherwise
    if (bound.type === "infinity") return bound.sign * Number.POSITIVE_INFINITY
    return numberOf(bound, "limits", inputs, notice)
  }
  // Where the search for those estimated starts is for the fit to say.
  const [from, to] = [end(low, 0), end(high, 1)]
  if (from === null || to === null) return null
  if (from < 0 || to > 1 || from >= to) {
    notice(say.limitsOutside(from, to, at))
    return null
  }
  return { low: from, high: to, estimated }
}

/** Which rows are of no dose (1); null where nothing is said, and once a fault was said. */
export function controlOf(said: ModelSaid, table: TableHere, inputs: Inputs, notice: Say): Uint8Array | null {
  if (said.control === null) return null
  const { expression, at } = said.control
  const cells = new Map<Name, Value>()
  let fault = false
  for (const { name, at: place } of namesIn(expression)) {
    const isColumn = table.columns.has(name)
    const cell = name === table.name || name === said.name ? undefined : inputs.get(name)
    if (isColumn && cell !== undefined) notice(say.columnAndCell(name, table.name, place))
    else if (cell !== undefined) cells.set(name, cell.value)
    else if (!isColumn)
      notice(say.noSuchColumn(name, table.name, "control", place, nearest(name, table.offered), table.offered, said.clauses["control"]))
    fault ||= isColumn === (cell !== undefined)
  }
  if (fault) return null
  const result = evaluated(expression, table.rows, (name) => {
    const column = table.columns.get(name)
    return column === undefined ? scalarOf(cells.get(name)) : vectorOf(column)
  })
  if (!result.ok) {
    for (const trouble of result.troubles) notice(faultFrom(trouble, "control"))
    return null
  }
  for (const doubt of result.doubts) notice({ ...faultFrom(doubt, "control"), level: "warning" })
  const { vector } = result
  if (vector.type !== "truth") {
    notice(say.controlWantsTruth(vector.type, at))
    return null
  }
  return Uint8Array.from({ length: table.rows }, (_, row) => (("values" in vector ? vector.values[row] : vector.value) === 1 ? 1 : 0))
}

/** Responses and weights of the rows marked. */
export function controlRows(
  marked: Uint8Array,
  response: Response,
  repeat: Float64Array | null,
  precision: Float64Array | null,
): Control | null {
  const rows: number[] = []
  marked.forEach((is, row) => {
    if (is === 1) rows.push(row)
  })
  const only = (values: Float64Array | null): Float64Array | null =>
    values === null ? null : Float64Array.from(rows, (row) => values[row] as number)
  return { y: only(response.y) as Float64Array, trials: only(response.trials), repeat: only(repeat), precision: only(precision) }
}

/** Where there are none, and where a given limit cannot be the mean of those there are. */
export function controlNotices(control: Control, limits: Limits | null, at: Place, notice: Say): void {
  if (control.y.length === 0) notice(say.noControlRows(at))
  if (limits === null || limits.estimated.includes("low")) return
  const impossible = limits.low === 0 ? control.y.some((y) => y > 0) : limits.low === 1 && control.y.some((y) => y < 1)
  if (impossible) notice(say.controlAboveLimit(limits.low, at))
}
