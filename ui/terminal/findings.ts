// What the cells of a notebook found, as the one object that `run --json` prints and as the list that is printed for people. Places are
// turned into line and column here: both from 1, in the cell's own text, the column counted in characters.

import type { Cell, CellId } from "../../runtime/document.ts"
import type { Engine, State } from "../../runtime/engine.ts"
import type { Level, Notice } from "../../runtime/notice.ts"
import { lineAndColumn, textRange } from "../../runtime/place.ts"
import { read, type Statement } from "../../runtime/statement.ts"
import type { Json } from "../../runtime/value.ts"
import { plain } from "../../storage/file/index.ts"

export interface PlacedNotice {
  readonly level: Level
  readonly code: string
  readonly clause: string | null
  readonly text: string
  readonly hint: string | null
  readonly line: number
  readonly column: number
}

/** A cell at rest. */
export interface Finding {
  readonly cell: CellId
  readonly kind: string | null
  readonly name: string | null
  readonly state: State
  readonly notices: readonly PlacedNotice[]
}

/** Every cell of a settled engine, in reading order. */
export const findings = (engine: Engine): readonly Finding[] => engine.notebook.cells.map((cell) => findingOf(engine, cell))

/** Whether nothing is wrong with a cell: it is ready or off. */
export const isWell = ({ state }: Finding): boolean => state.status === "ready" || state.status === "off"

/** The object that `run --json` prints. `id` is null for the plain form, which has none. */
export const findingsAsJson = (id: string | null, all: readonly Finding[]): Json =>
  plain({
    notebook: id,
    findings: all.map(({ cell, kind, name, state, notices }) => ({
      cell,
      kind,
      name,
      status: state.status,
      key: state.status === "ready" ? state.key : null,
      notices: notices.map((notice) => ({ ...notice })),
      summary: summaryOf(state),
    })),
  })

function findingOf(engine: Engine, cell: Cell): Finding {
  const statement = read(cell.text)
  return {
    cell: cell.id,
    kind: statement.kind,
    name: statement.name,
    state: engine.state(cell.id),
    notices: engine.notices(cell.id).map((notice) => placed(statement, notice)),
  }
}

function placed(statement: Statement, { level, code, clause, text, hint, at }: Notice): PlacedNotice {
  const { line, column } = lineAndColumn(statement.text, textRange(statement, at).from)
  // A notice that names no clause and stands in one is of that clause all the same.
  return { level, code, clause: clause ?? statement.clauses[at.clause]?.keyword ?? null, text, hint, line, column }
}

/** A fault may still show something: a refuted link says where. */
function summaryOf(state: State): Json {
  if (state.status === "ready") return state.shown.summary
  return state.status === "fault" ? (state.shown?.summary ?? null) : null
}
