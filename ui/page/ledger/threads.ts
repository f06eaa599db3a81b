// Threads: which cell makes a name and which use it, laid out in lanes of the gutter so that no two threads run over each other. A lane
// is counted from the statement outwards. When the lanes are used up, a thread is drawn only while one of its cells is in focus.

import type { CellId, Notebook } from "../../../runtime/document.ts"
import { lineOf, reading } from "../statement/reading.ts"

export interface Thread {
  readonly name: string
  readonly maker: CellId
  /** Rows, in reading order, that the thread runs through. */
  readonly from: number
  readonly to: number
  readonly lane: number
  /** Shown only while in focus: there was no lane left. */
  readonly hidden: boolean
  readonly users: readonly { readonly cell: CellId; readonly row: number; readonly line: number }[]
}

/** What one row shows of one thread. */
export interface Strand {
  readonly lane: number
  readonly above: boolean
  readonly below: boolean
  readonly knot: { readonly type: "ring" | "dot"; readonly line: number } | null
  readonly lit: boolean
  readonly name: string
}

export const sameStrands = (one: readonly Strand[], other: readonly Strand[]): boolean =>
  one.length === other.length &&
  one.every((strand, i) => {
    const its = other[i] as Strand
    const sameKnot = strand.knot?.type === its.knot?.type && strand.knot?.line === its.knot?.line
    return (
      sameKnot &&
      strand.lane === its.lane &&
      strand.above === its.above &&
      strand.below === its.below &&
      strand.lit === its.lit &&
      strand.name === its.name
    )
  })

/** As many as stand side by side in the gutter. */
export const lanes = 4

/** All threads of a notebook. Of two cells that make one name the first counts: that is a fault in both anyway. */
export function threads(notebook: Notebook): readonly Thread[] {
  const rows = new Map<string, { row: number; cell: CellId }>()
  notebook.cells.forEach((cell, row) => {
    const name = reading(cell).names.defines
    if (name !== null && !rows.has(name)) rows.set(name, { row, cell: cell.id })
  })
  const users = new Map<string, { cell: CellId; row: number; line: number }[]>()
  notebook.cells.forEach((cell, row) => {
    const { names, statement } = reading(cell)
    for (const use of names.uses) {
      const made = rows.get(use.name)
      if (made === undefined || made.cell === cell.id) continue
      const list = users.get(use.name) ?? []
      if (!list.some((user) => user.row === row)) list.push({ cell: cell.id, row, line: lineOf(statement, use.at) })
      users.set(use.name, list)
    }
  })
  const free: number[] = Array.from({ length: lanes }, () => -1)
  const spans = [...users].map(([name, list]) => {
    const made = rows.get(name) ?? { row: 0, cell: "" }
    const all = [made.row, ...list.map(({ row }) => row)]
    return { name, maker: made.cell, users: list, from: Math.min(...all), to: Math.max(...all) }
  })
  spans.sort((one, other) => one.from - other.from || other.to - one.to)
  return spans.map((span) => {
    // The outermost free lane first: long threads begin early and so come to run outside the short ones.
    const lane = free.findLastIndex((until) => until < span.from)
    if (lane >= 0) free[lane] = span.to
    return { ...span, lane: Math.max(lane, 0), hidden: lane < 0 }
  })
}

/** What the row of a cell shows of the threads; `focus` is the cell in focus. */
export function strands(all: readonly Thread[], row: number, cell: CellId, focus: CellId | null): readonly Strand[] {
  return all.flatMap((thread) => {
    if (row < thread.from || row > thread.to) return []
    const lit = focus !== null && (thread.maker === focus || thread.users.some((user) => user.cell === focus))
    if (thread.hidden && !lit) return []
    const user = thread.users.find((each) => each.cell === cell)
    const knot =
      thread.maker === cell ? ({ type: "ring", line: 0 } as const) : user === undefined ? null : ({ type: "dot", line: user.line } as const)
    return [{ lane: thread.lane, above: row > thread.from, below: row < thread.to, knot, lit, name: thread.name }]
  })
}
