// The ledger: the rows of the notebook in reading order. It knows which row is in focus and which is being edited, lays out the threads, tells
// the engine what is on the screen, and adds, moves and takes away. There is no button to run anything, and no row has a number.

import { html, LitElement, nothing, type PropertyValues } from "lit"
import { repeat } from "lit/directives/repeat.js"
import { words } from "../../../cells/words.ts"
import type { CellId } from "../../../runtime/document.ts"
import type { Desk } from "../desk.ts"
import type { Command } from "../keys.ts"
import type { Menu, MenuItem } from "../menu.ts"
import { reading } from "../statement/reading.ts"
import { startOf } from "../statement/start.ts"
import type { Row, RowAsk, RowEvent } from "./row.ts"
import { strands, threads } from "./threads.ts"
import "./row.ts"

/** The ledger asks for files: the page has the dialog for it. */
export class ChooseEvent extends CustomEvent<{ readonly name: string | null }> {
  static readonly type = "etamu-choose"
  constructor(name: string | null) {
    super(ChooseEvent.type, { detail: { name }, bubbles: true })
  }
}

export class Ledger extends LitElement {
  static override properties = {
    desk: { attribute: false },
    focused: { state: true },
    editing: { state: true },
  }
  declare desk: Desk
  /** The row in focus; it stays so while the focus is elsewhere on the page. */
  declare focused: CellId | null
  declare editing: { readonly id: CellId; readonly at: number; readonly offer: boolean } | null

  #stop: (() => void) | null = null
  readonly #visible = new Set<CellId>()
  #sight: IntersectionObserver | null = null
  readonly #offers: (readonly MenuItem[])[] = []

  constructor() {
    super()
    this.focused = null
    this.editing = null
    this.addEventListener("focusin", (event) => this.#focusIn(event))
    this.addEventListener("focusout", (event) => this.#focusOut(event))
    this.addEventListener("etamu-row", (event) => this.#asked(event))
  }

  protected override createRenderRoot(): HTMLElement {
    return this
  }

  override connectedCallback(): void {
    super.connectedCallback()
    this.#sight = new IntersectionObserver((entries) => this.#saw(entries), { rootMargin: "200px 0px" })
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback()
    this.#stop?.()
    this.#stop = null
    this.#sight?.disconnect()
    this.#sight = null
  }

  protected override willUpdate(changed: PropertyValues<this>): void {
    if (!changed.has("desk")) return
    this.#stop?.()
    this.focused = null
    this.editing = null
    this.#visible.clear()
    this.#stop = this.desk.listen((event) => {
      if (event.type === "notebook" || event.type === "writable") this.requestUpdate()
    })
  }

  protected override updated(): void {
    for (const row of this.querySelectorAll("etamu-row")) this.#sight?.observe(row)
  }

  override render() {
    const { cells } = this.desk.notebook
    const all = threads(this.desk.notebook)
    const writable = !this.desk.readOnly
    return html`
      ${repeat(
        cells,
        (cell) => cell.id,
        (cell, row) => html`
          ${writable ? this.#adder(row) : nothing}
          <etamu-row class="row" .desk=${this.desk} .cell=${cell} .first=${row === 0} .last=${row === cells.length - 1}
            .strands=${strands(all, row, cell.id, this.focused)} .editing=${this.editing?.id === cell.id ? this.editing : null}
            data-cell=${cell.id} ?data-focused=${this.focused === cell.id}></etamu-row>
        `,
      )}
      ${writable ? this.#end() : nothing}
    `
  }

  /** Adds below the row in focus, or at the end, by asking which kind. */
  async offer(): Promise<void> {
    const { cells } = this.desk.notebook
    const row = cells.findIndex(({ id }) => id === this.focused)
    const menus = [...this.querySelectorAll<Menu>(".adder etamu-menu")]
    const menu = row < 0 ? menus.at(-1) : menus[row + 1]
    menu?.scrollIntoView({ block: "nearest" })
    await menu?.show()
  }

  /** Goes into a cell, once it is there. */
  async edit(id: CellId, at: number, offer: boolean): Promise<void> {
    await import("../statement/editor.ts")
    if (this.desk.readOnly) return
    this.focused = id
    this.editing = { id, at, offer }
    await this.updateComplete
  }

  /** Acts on the row in focus; false where that is not for the ledger, or no row is in focus. */
  command(command: Command): boolean {
    const id = this.focused
    if (command === "add") {
      void this.offer()
      return true
    }
    if (id === null || this.desk.readOnly || !this.desk.notebook.cells.some((cell) => cell.id === id)) return false
    switch (command) {
      case "up":
      case "down":
        void this.#move(id, command === "up" ? -1 : 1)
        return true
      case "off":
        this.desk.turn(id)
        return true
      case "remove":
        void this.#remove(id)
        return true
      default:
        return false
    }
  }

  #adder(at: number) {
    return html`<div class="adder"><etamu-menu text="+" label="Add a cell here" .items=${this.#kinds(at)}></etamu-menu></div>`
  }

  #end() {
    const at = this.desk.notebook.cells.length
    const file = html`<button type="button" class="button" @click=${() => this.dispatchEvent(new ChooseEvent(null))}>Choose a data file</button>`
    return html`<div class="adder end">
      ${at === 0 ? html`<p>Nothing is on this page yet. Drop a CSV or TSV file anywhere on it, or begin with a cell.</p>${file}` : nothing}
      <etamu-menu text="Add a cell" label="Add a cell at the end" .items=${this.#kinds(at)}></etamu-menu>
    </div>`
  }

  /** What can be added at a place. Made once for each place, so that no menu is drawn again when a text changes. */
  #kinds(at: number): readonly MenuItem[] {
    const known = this.#offers[at] ?? this.#offered(at)
    this.#offers[at] = known
    return known
  }

  #offered(at: number): readonly MenuItem[] {
    const file: MenuItem = {
      label: "data from a file…",
      says: "A CSV or TSV file is enclosed, and a cell written that reads it",
      act: () => void this.dispatchEvent(new ChooseEvent(null)),
    }
    return [...words.map(({ word, says }) => ({ label: word, says, act: () => void this.#add(at, word) })), file]
  }

  async #add(at: number, kind: string): Promise<void> {
    const { text, caret } = startOf(kind, this.desk.notebook, at)
    const id = this.desk.add(at, text)
    if (id === null) return
    await this.updateComplete
    await this.edit(id, caret, kind !== "note")
  }

  async #move(id: CellId, by: -1 | 1): Promise<void> {
    const wasEditing = this.editing?.id === id
    this.editing = null
    this.desk.move(id, by)
    await this.updateComplete
    if (wasEditing) await this.edit(id, this.#row(id)?.cell.text.length ?? 0, false)
    else this.#row(id)?.settle()
    this.#row(id)?.scrollIntoView({ block: "nearest" })
  }

  async #remove(id: CellId): Promise<void> {
    const { cells } = this.desk.notebook
    const at = cells.findIndex((cell) => cell.id === id)
    this.editing = null
    this.desk.remove(id)
    const next = this.desk.notebook.cells[Math.min(at, this.desk.notebook.cells.length - 1)]
    this.focused = next?.id ?? null
    await this.updateComplete
    if (next !== undefined) this.#row(next.id)?.settle()
  }

  #row(id: CellId): Row | null {
    return this.querySelector<Row>(`etamu-row[data-cell="${CSS.escape(id)}"]`)
  }

  #asked(event: RowEvent): void {
    const row = event.target
    if (row instanceof HTMLElement && "cell" in row) void this.#do((row as Row).cell.id, event.detail)
  }

  async #do(id: CellId, ask: RowAsk): Promise<void> {
    switch (ask.type) {
      case "edit":
        await this.edit(id, ask.at, ask.offer)
        break
      case "leave":
        await this.#leave(id, ask.to)
        break
      case "go":
        this.#row(ask.to)?.scrollIntoView({ block: "nearest" })
        this.#row(ask.to)?.settle()
        break
      case "step":
        this.#neighbour(id, ask.by)?.settle()
        break
      case "add":
        this.focused = id
        await this.offer()
        break
      case "remove":
        await this.#remove(id)
        break
      case "move":
        await this.#move(id, ask.by)
        break
      case "enclose":
        this.dispatchEvent(new ChooseEvent(ask.name))
    }
  }

  async #leave(id: CellId, to: "stay" | "above" | "below"): Promise<void> {
    const next = to === "stay" ? null : this.#neighbour(id, to === "above" ? -1 : 1)
    if (to !== "stay" && next === null) return
    this.editing = null
    this.desk.rest()
    await this.updateComplete
    const row = next ?? this.#row(id)
    await row?.updateComplete
    row?.settle()
  }

  #neighbour(id: CellId, by: -1 | 1): Row | null {
    const { cells } = this.desk.notebook
    const next = cells[cells.findIndex((cell) => cell.id === id) + by]
    return next === undefined ? null : this.#row(next.id)
  }

  #focusIn(event: FocusEvent): void {
    const row = event.target instanceof Element ? event.target.closest<Row>("etamu-row") : null
    if (row === null) return
    this.focused = row.cell.id
    if (this.editing !== null && this.editing.id !== row.cell.id) this.#still()
  }

  /** Focus that leaves a statement is rest; the editor stays while the focus is still in its row or in its completions. */
  #focusOut(event: FocusEvent): void {
    if (this.editing === null) return
    const from = event.target instanceof Element ? event.target.closest("etamu-editor") : null
    const to = event.relatedTarget instanceof Node ? event.relatedTarget : null
    if (from === null || (to !== null && from.contains(to))) return
    this.desk.rest()
    const row = from.closest("etamu-row")
    // Gone to another window altogether: the caret is to be where it was when the hand comes back.
    if (to === null && !document.hasFocus()) return
    if (to === null || row?.contains(to) !== true) this.#still()
  }

  #still(): void {
    this.editing = null
  }

  #saw(entries: readonly IntersectionObserverEntry[]): void {
    for (const { target, isIntersecting } of entries) {
      const id = (target as Row).cell?.id
      if (id === undefined) continue
      if (isIntersecting) this.#visible.add(id)
      else this.#visible.delete(id)
    }
    const cells = new Set(this.desk.notebook.cells.map(({ id }) => id))
    for (const id of this.#visible) if (!cells.has(id)) this.#visible.delete(id)
    this.desk.engine.look(new Set(this.#visible))
  }

  /** What the row in focus comes to, for the live region. */
  get spoken(): string {
    const row = this.focused === null ? null : this.#row(this.focused)
    return row === null ? "" : `${reading(row.cell).title}: ${row.querySelector(".state")?.textContent ?? ""}`
  }
}

customElements.define("etamu-ledger", Ledger)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-ledger": Ledger
  }
}
