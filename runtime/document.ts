// The notebook as an immutable value, and the transactions that make the next one. A cell that was not written to stays the same
// object (===), so whoever remembers something by the cell knows whether it still holds. Nothing here reads a statement.

import type { Notice } from "./notice.ts"
import { badFile, knownCell, outOfPlace, tooLargeFile, tooLongText, tooManyCells, unknownCell, unknownFile } from "./notices.ts"
import type { Json } from "./value.ts"

/** Short, unique in the notebook, never reused; made by ui. */
export type CellId = string

export interface Cell {
  readonly id: CellId
  readonly text: string
}

/** A file that travels with the notebook. Its bytes live in a store by their SHA-256. */
export interface Enclosed {
  readonly name: string
  readonly media: string
  /** In bytes. */
  readonly size: number
  /** Lower-case hex. */
  readonly sha256: string
}

export interface Notebook {
  readonly id: string
  readonly title: string
  /** In reading order, which never decides a result. */
  readonly cells: readonly Cell[]
  readonly enclosures: readonly Enclosed[]
  /** Unknown records and members of the file, opaque here. */
  readonly rest: Json
}

export type Change =
  | { readonly type: "insert"; readonly at: number; readonly cell: Cell }
  | { readonly type: "remove"; readonly id: CellId }
  | { readonly type: "write"; readonly id: CellId; readonly text: string }
  | { readonly type: "move"; readonly id: CellId; readonly to: number }
  | { readonly type: "title"; readonly title: string }
  | { readonly type: "enclose"; readonly file: Enclosed }
  | { readonly type: "release"; readonly name: string }

export interface Transaction {
  readonly changes: readonly Change[]
  readonly because?: string
}

export type Applied =
  | { readonly ok: true; readonly notebook: Notebook; readonly inverse: Transaction }
  | { readonly ok: false; readonly notice: Notice }

/** What a notebook can hold at most: as in the file format, so that what is made here can be saved and opened again. */
export const bounds = { cells: 10_000, textBytes: 1_048_576, enclosureBytes: 536_870_912 } as const

/** The next notebook and the way back; or, for a change that does not fit, why not, and nothing has changed. */
export function apply(notebook: Notebook, transaction: Transaction): Applied {
  let next = notebook
  const back: Change[][] = []
  for (const change of transaction.changes) {
    const step = applied(next, change)
    if ("notice" in step) return { ok: false, notice: step.notice }
    next = step.notebook
    back.push(step.back)
  }
  return { ok: true, notebook: next, inverse: { changes: back.reverse().flat() } }
}

type Step = { readonly notebook: Notebook; readonly back: Change[] } | { readonly notice: Notice }

function applied(notebook: Notebook, change: Change): Step {
  const { cells } = notebook
  switch (change.type) {
    case "insert": {
      if (cells.some(({ id }) => id === change.cell.id)) return { notice: knownCell(change.cell.id) }
      if (!isPlace(change.at, cells.length)) return { notice: outOfPlace(change.at, cells.length) }
      if (cells.length >= bounds.cells) return { notice: tooManyCells(bounds.cells) }
      if (!fits(change.cell.text)) return { notice: tooLongText(bounds.textBytes) }
      return {
        notebook: { ...notebook, cells: cells.toSpliced(change.at, 0, change.cell) },
        back: [{ type: "remove", id: change.cell.id }],
      }
    }
    case "remove": {
      const at = placeOf(cells, change.id)
      const cell = cells[at]
      if (cell === undefined) return { notice: unknownCell(change.id) }
      return { notebook: { ...notebook, cells: cells.toSpliced(at, 1) }, back: [{ type: "insert", at, cell }] }
    }
    case "write": {
      const at = placeOf(cells, change.id)
      const cell = cells[at]
      if (cell === undefined) return { notice: unknownCell(change.id) }
      if (cell.text === change.text) return { notebook, back: [] }
      if (!fits(change.text)) return { notice: tooLongText(bounds.textBytes) }
      return {
        notebook: { ...notebook, cells: cells.with(at, { id: cell.id, text: change.text }) },
        back: [{ type: "write", id: cell.id, text: cell.text }],
      }
    }
    case "move": {
      const at = placeOf(cells, change.id)
      const cell = cells[at]
      if (cell === undefined) return { notice: unknownCell(change.id) }
      if (!isPlace(change.to, cells.length - 1)) return { notice: outOfPlace(change.to, cells.length - 1) }
      if (change.to === at) return { notebook, back: [] }
      return {
        notebook: { ...notebook, cells: cells.toSpliced(at, 1).toSpliced(change.to, 0, cell) },
        back: [{ type: "move", id: change.id, to: at }],
      }
    }
    case "title":
      if (change.title === notebook.title) return { notebook, back: [] }
      return { notebook: { ...notebook, title: change.title }, back: [{ type: "title", title: notebook.title }] }
    case "enclose":
      return enclosed(notebook, change.file)
    case "release":
      return released(notebook, change.name)
    default:
      return change satisfies never
  }
}

/** A file of the same name is replaced where it stands; any other goes last. */
function enclosed(notebook: Notebook, file: Enclosed): Step {
  const { enclosures } = notebook
  if (file.name === "" || !Number.isInteger(file.size) || file.size < 0 || !/^[0-9a-f]{64}$/.test(file.sha256))
    return { notice: badFile(file.name) }
  if (file.size > bounds.enclosureBytes) return { notice: tooLargeFile(file.name, bounds.enclosureBytes) }
  const at = enclosures.findIndex(({ name }) => name === file.name)
  const former = enclosures[at]
  if (former === undefined) {
    return { notebook: { ...notebook, enclosures: [...enclosures, file] }, back: [{ type: "release", name: file.name }] }
  }
  if (former.sha256 === file.sha256 && former.size === file.size && former.media === file.media) return { notebook, back: [] }
  return { notebook: { ...notebook, enclosures: enclosures.with(at, file) }, back: [{ type: "enclose", file: former }] }
}

/** To enclose a file again puts it last, so the way back lets go of those behind it and encloses them again, in their order. */
function released(notebook: Notebook, name: string): Step {
  const { enclosures } = notebook
  const at = enclosures.findIndex((file) => file.name === name)
  const file = enclosures[at]
  if (file === undefined) return { notice: unknownFile(name) }
  const behind = enclosures.slice(at + 1).flatMap((other): Change[] => [
    { type: "release", name: other.name },
    { type: "enclose", file: other },
  ])
  return { notebook: { ...notebook, enclosures: enclosures.toSpliced(at, 1) }, back: [{ type: "enclose", file }, ...behind] }
}

const placeOf = (cells: readonly Cell[], wanted: CellId): number => cells.findIndex(({ id }) => id === wanted)

const isPlace = (at: number, last: number): boolean => Number.isInteger(at) && at >= 0 && at <= last

/** Whether a text is within the bound in UTF-8. Counted only where it could be over: a UTF-16 unit takes at most three bytes. */
function fits(text: string): boolean {
  if (text.length * 3 <= bounds.textBytes) return true
  let bytes = 0
  for (const character of text) {
    const code = character.codePointAt(0) ?? 0
    bytes += code < 0x80 ? 1 : code < 0x800 ? 2 : code < 0x10000 ? 3 : 4
  }
  return bytes <= bounds.textBytes
}
