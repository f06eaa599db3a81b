// The desk: the one controller between the page and the notebook that lies open. Elements are given what it knows and hand it what a person
// did; it turns that into transactions, says when the notebook is at rest, and keeps the bytes of the enclosures. It draws nothing.

import type { CellId, Change, Enclosed, Notebook } from "../../runtime/document.ts"
import type { Engine, EngineEvent, State } from "../../runtime/engine.ts"
import type { ClauseEdit, Notice } from "../../runtime/notice.ts"
import { rewritten } from "../../runtime/statement.ts"
import { blobDigest, mediaOf, mostEnclosureBytes } from "../../storage/file/index.ts"
import type { IntentDetail } from "./intent.ts"
import { maker, reading } from "./statement/reading.ts"

/** How long a hand may pause in a statement before what it typed counts as one step. */
const quiet = 1000

/** How long a hand may hold a dial still before its drag counts as ended, should its end never be told. */
const still = 5000

/** Bytes of enclosures, by their SHA-256: the page's side of what the evaluator reads. */
export interface Bytes {
  get(sha256: string): Blob | null
  put(sha256: string, blob: Blob): void
}

export type DeskEvent =
  | { readonly type: "notebook" }
  | { readonly type: "rest" }
  | { readonly type: "settled" }
  | { readonly type: "writable" }

/** What came of enclosing a file. `stated` is what the notebook states where the file is another. */
export type Enclosing =
  | { readonly ok: true; readonly cell: CellId | null; readonly replaced: boolean }
  | { readonly ok: false; readonly why: string; readonly stated: Enclosed | null }

export class Desk {
  readonly engine: Engine
  readonly bytes: Bytes
  #readOnly: boolean
  readonly #stated: readonly Enclosed[]
  #due: ReturnType<typeof setTimeout> | undefined
  readonly #cells = new Map<CellId, Set<() => void>>()
  readonly #listeners = new Set<(event: DeskEvent) => void>()
  readonly #leave: () => void

  /** `stated` are the enclosures that the notebook names and whose bytes are not here. */
  constructor(engine: Engine, bytes: Bytes, readOnly: boolean, stated: readonly Enclosed[] = []) {
    this.engine = engine
    this.bytes = bytes
    this.#readOnly = readOnly
    this.#stated = stated
    this.#leave = engine.subscribe((event) => this.#heard(event))
  }

  get notebook(): Notebook {
    return this.engine.notebook
  }

  /** Enclosures whose bytes are still not here. */
  get stated(): readonly Enclosed[] {
    const held = new Set(this.notebook.enclosures.map(({ name }) => name))
    return this.#stated.filter(({ name }) => !held.has(name))
  }

  /** True where another tab writes this notebook, or where it is not as it was written and nobody has decided yet. */
  get readOnly(): boolean {
    return this.#readOnly
  }

  set readOnly(readOnly: boolean) {
    this.#readOnly = readOnly
    this.#tell({ type: "writable" })
    for (const id of this.#cells.keys()) this.#wake(id)
  }

  /** No hand is in a statement or on a dial: what stands now is to stay. */
  get isAtRest(): boolean {
    return this.#due === undefined
  }

  state(id: CellId): State {
    return this.engine.state(id)
  }

  notices(id: CellId): readonly Notice[] {
    return this.engine.notices(id)
  }

  /** Called again whenever the state of the cell changes; gives the way to end it. */
  watch(id: CellId, told: () => void): () => void {
    const watching = this.#cells.get(id) ?? new Set()
    this.#cells.set(id, watching.add(told))
    return () => {
      watching.delete(told)
      if (watching.size === 0 && this.#cells.get(id) === watching) this.#cells.delete(id)
    }
  }

  listen(told: (event: DeskEvent) => void): () => void {
    this.#listeners.add(told)
    return () => void this.#listeners.delete(told)
  }

  /** A keystroke: the text is live at once, and one step of undo with its neighbours once the hand rests. */
  typed(id: CellId, text: string): void {
    if (this.#apply([{ type: "write", id, text }])) this.#restAfter(quiet)
  }

  /** What a block asks for: a click at once, a gesture step by step until it has ended. */
  act(id: CellId, { intent, gesture, ended }: IntentDetail): void {
    const changes = this.#writes(id, intent.edits)
    if (gesture === undefined) {
      this.#restIfDue()
      if (this.#apply(changes, intent.label)) this.rest()
      return
    }
    if (this.#readOnly) return
    this.#restAfter(still)
    if (changes.length > 0) this.engine.dispatch({ changes, because: intent.label }, { gesture })
    if (ended === true) this.rest()
  }

  /** A new cell at a place in the reading order. */
  add(at: number, text: string): CellId | null {
    this.#restIfDue()
    const cell = { id: newCellId(this.notebook), text }
    if (!this.#apply([{ type: "insert", at, cell }], "add a cell")) return null
    this.rest()
    return cell.id
  }

  remove(id: CellId): void {
    this.#step([{ type: "remove", id }], "take a cell away")
  }

  /** Moves a cell one place up (−1) or down (+1) in the reading order. */
  move(id: CellId, by: -1 | 1): void {
    const to = this.notebook.cells.findIndex((cell) => cell.id === id) + by
    if (to >= 0 && to < this.notebook.cells.length) this.#step([{ type: "move", id, to }], "move a cell")
  }

  /** Switches a cell off, or on again: by its text, like everything else. */
  turn(id: CellId): void {
    const cell = this.notebook.cells.find((each) => each.id === id)
    if (cell === undefined) return
    const { statement } = reading(cell)
    const first = statement.heading[0]
    const at = first?.from ?? /^\s*/.exec(cell.text)?.[0].length ?? 0
    const text = statement.off
      ? cell.text.slice(0, at) + cell.text.slice(first?.to ?? at).replace(/^[ \t]+/, "")
      : `${cell.text.slice(0, at)}off ${cell.text.slice(at)}`
    this.#step([{ type: "write", id, text }], statement.off ? "switch a cell on" : "switch a cell off")
  }

  rename(title: string): void {
    if (title !== this.notebook.title) this.#step([{ type: "title", title }], "name the notebook")
  }

  /** The file under the name by which the notebook states the same bytes, if it does: a file may have been renamed on its way. */
  async asStated(file: File): Promise<File> {
    const { stated } = this
    if (stated.every(({ size }) => size !== file.size) || stated.some(({ name }) => name === file.name)) return file
    const sha256 = await blobDigest(file)
    const known = stated.find((each) => each.sha256 === sha256)
    return known === undefined ? file : new File([file], known.name, { type: file.type })
  }

  /**
   * Encloses a file, in the place of one with the same name; `cell` is a new cell that reads it. One step of undo. Gives the reason in a
   * sentence where it cannot. A file whose bytes are not those that the notebook states under its name is not taken unless that is `meant`.
   */
  async enclose(file: File, cell: { readonly at: number; readonly text: string } | null, meant = false): Promise<Enclosing> {
    if (this.#readOnly) return { ok: false, why: "This notebook is only read here, so nothing can be enclosed.", stated: null }
    if (file.size > mostEnclosureBytes) {
      return {
        ok: false,
        why: `${file.name} is larger than ${mostEnclosureBytes / 2 ** 20} MiB, the most a notebook encloses.`,
        stated: null,
      }
    }
    const sha256 = await blobDigest(file)
    const stated = this.stated.find(({ name }) => name === file.name) ?? null
    if (stated !== null && stated.sha256 !== sha256 && !meant) return { ok: false, why: otherFile(file, sha256, stated), stated }
    this.bytes.put(sha256, file)
    const enclosed: Enclosed = { name: file.name, media: mediaOf(file.name), size: file.size, sha256 }
    const known = this.notebook.enclosures.find(({ name }) => name === file.name)
    const changes: Change[] = []
    if (known !== undefined && known.sha256 !== sha256) changes.push({ type: "release", name: file.name })
    if (known?.sha256 !== sha256) changes.push({ type: "enclose", file: enclosed })
    const made = cell === null ? null : { id: newCellId(this.notebook), text: cell.text }
    if (cell !== null && made !== null) changes.push({ type: "insert", at: cell.at, cell: made })
    this.#step(changes, `enclose ${file.name}`)
    return { ok: true, cell: made?.id ?? null, replaced: known !== undefined && known.sha256 !== sha256 }
  }

  undo(): void {
    this.#restIfDue()
    if (!this.#readOnly && this.engine.undo()) this.engine.rest()
  }

  redo(): void {
    this.#restIfDue()
    if (!this.#readOnly && this.engine.redo()) this.engine.rest()
  }

  /** What a hand began has come to its end. */
  rest(): void {
    clearTimeout(this.#due)
    this.#due = undefined
    this.engine.rest()
  }

  /** Ends what is still counting down, so that the next step stands by itself. */
  #restIfDue(): void {
    if (!this.isAtRest) this.rest()
  }

  /** No more is heard of this notebook. */
  close(): void {
    this.#restIfDue()
    this.#leave()
    this.#listeners.clear()
    this.#cells.clear()
  }

  #restAfter(milliseconds: number): void {
    clearTimeout(this.#due)
    this.#due = setTimeout(() => this.rest(), milliseconds)
  }

  #step(changes: readonly Change[], because: string): void {
    this.#restIfDue()
    if (this.#apply(changes, because)) this.rest()
  }

  #apply(changes: readonly Change[], because?: string): boolean {
    if (this.#readOnly || changes.length === 0) return false
    return this.engine.dispatch(because === undefined ? { changes } : { changes, because }).ok
  }

  /** Edits of clauses as writes of whole texts, one for each cell they touch. */
  #writes(id: CellId, edits: readonly ClauseEdit[]): readonly Change[] {
    const texts = new Map<CellId, string>()
    for (const edit of edits) {
      const target = edit.cell === null ? id : maker(this.notebook, edit.cell)
      const cell = this.notebook.cells.find((each) => each.id === target)
      if (cell !== undefined) texts.set(cell.id, rewritten(texts.get(cell.id) ?? cell.text, edit))
    }
    return [...texts].map(([cell, text]) => ({ type: "write", id: cell, text }))
  }

  #heard(event: EngineEvent): void {
    switch (event.type) {
      case "state":
        this.#wake(event.id)
        break
      case "notebook":
        // Notices of a statement come at once, before any work: whoever was written to is drawn again.
        for (const change of event.transaction.changes) if ("id" in change) this.#wake(change.id)
        this.#tell({ type: "notebook" })
        break
      case "rest":
      case "settled":
        this.#tell({ type: event.type })
        break
      case "ran":
        break
    }
  }

  #wake(id: CellId): void {
    for (const told of this.#cells.get(id) ?? []) told()
  }

  #tell(event: DeskEvent): void {
    for (const told of this.#listeners) told(event)
  }
}

function otherFile(file: File, sha256: string, stated: Enclosed): string {
  const size = (bytes: number): string => `${bytes.toString().replace(/\B(?=(\d{3})+$)/g, ",")} bytes`
  const sizes = file.size === stated.size ? "" : ` It has ${size(file.size)}, and that one has ${size(stated.size)}.`
  return `This is not the ${stated.name} that the notebook was written with: the SHA-256 of its bytes begins with ${sha256.slice(0, 8)}, and the notebook states ${stated.sha256.slice(0, 8)}.${sizes}`
}

/** Short, and not in use here; that it was never used here before is as good as certain. */
export function newCellId(notebook: Notebook): CellId {
  for (;;) {
    const id = Array.from(crypto.getRandomValues(new Uint8Array(8)), (byte) => (byte % 36).toString(36)).join("")
    if (!notebook.cells.some((cell) => cell.id === id)) return id
  }
}
