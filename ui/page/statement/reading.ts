// What the page knows of a cell by its text alone: the statement, the words of its kind and the names it makes and uses. Remembered by the
// cell object, which stays the same for as long as its text does. What a cell finds comes from the engine, never from here.

import { words } from "../../../cells/words.ts"
import type { Cell, CellId, Notebook } from "../../../runtime/document.ts"
import type { AnyWords, Names } from "../../../runtime/kind.ts"
import { textRange } from "../../../runtime/place.ts"
import { read, type Statement } from "../../../runtime/statement.ts"

export interface Reading {
  readonly statement: Statement
  /** Null for an empty cell and for a kind nobody knows. */
  readonly words: AnyWords | null
  readonly names: Names
  /** What the cell is called on the page: `model kill`, `scales`, or `an empty cell`. */
  readonly title: string
}

const readings = new WeakMap<Cell, Reading>()

/** A cell as read; the same object for the same cell. */
export function reading(cell: Cell): Reading {
  const known = readings.get(cell)
  if (known !== undefined) return known
  const made = readingOf(cell.text)
  readings.set(cell, made)
  return made
}

/** A text as read. */
export function readingOf(text: string): Reading {
  const statement = read(text)
  const kind = words.find(({ word }) => word === statement.kind) ?? null
  return { statement, words: kind, names: namesOf(statement, kind), title: titleOf(statement) }
}

/** The cell that makes a name, the first in reading order; null where none does. */
export function maker(notebook: Notebook, name: string): CellId | null {
  return notebook.cells.find((cell) => reading(cell).names.defines === name)?.id ?? null
}

/** The line of the text (from 0) on which a place of the statement begins. */
export function lineOf(statement: Statement, place: { readonly clause: number; readonly from: number; readonly to: number }): number {
  return statement.text.slice(0, textRange(statement, place).from).split("\n").length - 1
}

function namesOf(statement: Statement, kind: AnyWords | null): Names {
  if (statement.off || kind === null) return { defines: null, uses: [], files: [] }
  return kind.names(kind.parse(statement).said)
}

function titleOf({ off, kind, name, text }: Statement): string {
  if (kind === null) return text.trim() === "" ? "an empty cell" : "a cell without a kind"
  return [...(off ? ["off"] : []), kind, ...(name === null ? [] : [name])].join(" ")
}
