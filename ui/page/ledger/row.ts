// One row of the ledger: a statement, its finding, and the hairline between them. It draws the state it is given and tells the desk what
// a hand did. A finding whose drawing fails is shown as that, and the statement stays as it is: to be read and written.

import { html, LitElement, nothing, type PropertyValues, svg, type TemplateResult } from "lit"
import { createRef, ref } from "lit/directives/ref.js"
import { repeat } from "lit/directives/repeat.js"
import type { Block } from "../../../cells/block.ts"
import type { Cell, CellId } from "../../../runtime/document.ts"
import type { Shown } from "../../../runtime/evaluator.ts"
import type { Notice } from "../../../runtime/notice.ts"
import { textRange } from "../../../runtime/place.ts"
import type { Desk } from "../desk.ts"
import { IntentEvent } from "../intent.ts"
import { keyOf } from "../keys.ts"
import type { MenuItem } from "../menu.ts"
import { ink } from "../statement/ink.ts"
import { marks } from "../statement/marks.ts"
import { lineOf, reading } from "../statement/reading.ts"
import { surroundings } from "../statement/surroundings.ts"
import { hairline } from "./hairline.ts"
import { type Standing, standing } from "./standing.ts"
import { lanes, type Strand, sameStrands } from "./threads.ts"
import "../menu.ts"

/** How long after a keystroke what is wrong is put into words; underlined it is at once. */
const wordsAfter = 700

/** How long a finding may be due again before that is shown. */
const briefly = 120

export type RowAsk =
  | { readonly type: "edit"; readonly at: number; readonly offer: boolean }
  | { readonly type: "leave"; readonly to: "stay" | "above" | "below" }
  | { readonly type: "go"; readonly to: CellId }
  | { readonly type: "step"; readonly by: -1 | 1 }
  | { readonly type: "add" }
  | { readonly type: "remove" }
  | { readonly type: "move"; readonly by: -1 | 1 }
  | { readonly type: "enclose"; readonly name: string }

/** What the row wants of the ledger. */
export class RowEvent extends CustomEvent<RowAsk> {
  static readonly type = "etamu-row"
  constructor(ask: RowAsk) {
    super(RowEvent.type, { detail: ask, bubbles: true })
  }
}

export class Row extends LitElement {
  static override properties = {
    desk: { attribute: false },
    cell: { attribute: false },
    // Made anew with every change of the notebook, and hardly ever different: a row that nothing has happened to is not drawn again.
    strands: { attribute: false, hasChanged: (next: readonly Strand[], now: readonly Strand[]) => !sameStrands(next, now ?? []) },
    editing: { attribute: false },
    first: { type: Boolean },
    last: { type: Boolean },
    tops: { state: true },
    gutter: { state: true },
    still: { state: true },
    failure: { state: true },
  }
  declare desk: Desk
  declare cell: Cell
  declare strands: readonly Strand[]
  /** Where the caret goes when the row is being edited; null while it stands still. */
  declare editing: { readonly at: number; readonly offer: boolean } | null
  declare first: boolean
  declare last: boolean
  /** The middle of each line of the statement, in pixels from the top of the row. */
  declare tops: readonly number[]
  /** The width of the gutter, in pixels. */
  declare gutter: number
  /** No key was struck for a moment: what is wrong may be put into words. */
  declare still: boolean
  /** A finding that could not be drawn, and why. */
  declare failure: { readonly shown: Shown | null; readonly why: string } | null

  #unwatch: (() => void) | null = null
  #watched: CellId | null = null
  #sized: Element | null = null
  /** What is being drawn. */
  #shown: Shown | null = null
  #timer: ReturnType<typeof setTimeout> | undefined
  #lag: ReturnType<typeof setTimeout> | undefined
  readonly #editor = createRef<HTMLElementTagNameMap["etamu-editor"]>()
  readonly #size = new ResizeObserver(() => this.#measure())

  constructor() {
    super()
    this.strands = []
    this.editing = null
    this.first = false
    this.last = false
    this.tops = []
    this.gutter = 60
    this.still = true
    this.failure = null
    this.addEventListener(IntentEvent.type, (event) => {
      event.stopPropagation()
      this.desk.act(this.cell.id, event.detail)
    })
  }

  protected override createRenderRoot(): HTMLElement {
    return this
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback()
    this.#unwatch?.()
    this.#unwatch = null
    this.#watched = null
    this.#size.disconnect()
    this.#sized = null
    clearTimeout(this.#timer)
    clearTimeout(this.#lag)
  }

  /**
   * The state of the cell is another. That a finding which is shown is due again is drawn only when it stays so: what is back at once, as at
   * every step of a drag, must neither flicker nor cost two drawings more.
   */
  #told(): void {
    const state = this.desk.state(this.cell.id)
    const isBrief = (state.status === "due" || state.status === "working") && state.last !== null
    if (isBrief) this.#lag ??= setTimeout(() => this.requestUpdate(), briefly)
    else this.requestUpdate()
  }

  protected override willUpdate(): void {
    clearTimeout(this.#lag)
    this.#lag = undefined

    if (this.#watched !== this.cell.id) {
      this.#unwatch?.()
      this.#watched = this.cell.id
      this.#unwatch = this.desk.watch(this.cell.id, () => this.#told())
    }
  }

  protected override updated(changed: PropertyValues<this>): void {
    // Measured when a size has changed, and after the text has: never at each draw, since that would lay out the page in the middle of a drag.
    if (this.#sized !== this.querySelector(".statement")) {
      this.#size.disconnect()
      this.#sized = this.querySelector(".statement")
      for (const sized of [this, this.#sized]) if (sized !== null) this.#size.observe(sized)
    } else if (changed.has("cell")) requestAnimationFrame(() => this.#measure())
    void this.#watchDrawing()
    if (changed.has("editing") && this.editing !== null) {
      const { at, offer } = this.editing
      this.#editor.value?.take(at, offer)
    }
  }

  override render() {
    const { statement, title } = reading(this.cell)
    const notices = this.desk.notices(this.cell.id)
    const faults = notices.filter(({ level }) => level === "fault")
    const state = this.desk.state(this.cell.id)
    const other = state.status === "waiting" ? this.desk.notebook.cells.find(({ id }) => id === state.for) : undefined
    const waitsFor = other === undefined ? null : { id: other.id, title: reading(other).statement.name ?? reading(other).title }
    const how = standing(state, statement.kind === null && this.cell.text.trim() === "", faults.length, waitsFor?.title ?? "another cell")
    this.className = `row form-${how.form} kind-${statement.kind ?? "none"}${this.editing === null ? "" : " editing"}`
    this.setAttribute("role", "group")
    this.setAttribute("aria-label", `${title}: ${how.words}`)
    return html`
      <div class="gutter" aria-hidden="true">${this.#threads()}</div>
      <div class="saying">
        ${this.#statement(title, notices)}
        ${this.still && faults.length > 0 ? html`<ul class="notices">${faults.map((notice) => this.#notice(notice))}</ul>` : nothing}
        <div class="foot">
          <span class="state">${how.form === "waiting" ? (how.stale ? "what is shown is out of date" : "") : how.words}</span>
          ${this.desk.readOnly ? nothing : html`<etamu-menu class="tools" text="⋯" .label=${`What can be done with ${title}`} .items=${this.#tools(statement.off)}></etamu-menu>`}
        </div>
      </div>
      <div class="hair" title=${how.words}>
        <svg width="13" height="100%" aria-hidden="true">${hairline(how.form, this.#heights(faults))}</svg>
      </div>
      <div class="finding">
        ${waitsFor === null ? nothing : html`<p class="waits">waits for <button type="button" class="link" @click=${() => this.#ask({ type: "go", to: waitsFor.id })}>${waitsFor.title}</button></p>`}
        ${this.#missing()}
        ${state.status === "crash" ? this.#crash(state) : nothing}
        ${this.#found(how, notices)}
      </div>
    `
  }

  /** Takes the focus while standing still. */
  settle(): void {
    this.querySelector<HTMLElement>(".statement")?.focus()
  }

  #ask(ask: RowAsk): void {
    this.dispatchEvent(new RowEvent(ask))
  }

  #statement(title: string, notices: readonly Notice[]): TemplateResult {
    if (this.editing !== null) {
      return html`<div class="statement live">
        <etamu-editor ${ref(this.#editor)} .label=${`Statement of ${title}`} .text=${this.cell.text} .notices=${notices.filter(inPlace)}
          .surroundings=${() => surroundings(this.desk, this.cell.id)}
          @etamu-text=${(event: CustomEvent<string>) => this.#typed(event.detail)}
          @etamu-leave=${(event: CustomEvent<"stay" | "above" | "below">) => this.#ask({ type: "leave", to: event.detail })}></etamu-editor>
      </div>`
    }
    const hint = this.desk.readOnly ? "" : ". Enter goes into it"
    return html`<div class="statement" tabindex="0" role="textbox" aria-multiline="true" aria-readonly="true"
      aria-label=${`Statement of ${title}${hint}`} @click=${(event: MouseEvent) => this.#click(event)}
      @keydown=${(event: KeyboardEvent) => this.#key(event)}>${this.#lines(notices)}</div>`
  }

  /** The text that stands still, coloured by its marks and underlined where something is wrong. */
  #lines(notices: readonly Notice[]): readonly TemplateResult[] {
    const { text } = this.cell
    const read = reading(this.cell)
    const all = marks(read)
    const wrong = notices.filter(inPlace).map((notice) => ({ ...textRange(read.statement, notice.at), level: notice.level }))
    const cuts = [...new Set([...all, ...wrong].flatMap(({ from, to }) => [from, to]))].sort((one, other) => one - other)
    const lines: TemplateResult[] = []
    let start = 0
    for (const line of text.split("\n")) {
      const end = start + line.length
      const inner = [start, ...cuts.filter((cut) => cut > start && cut < end), end]
      const spans = inner.slice(1).map((to, i) => {
        const from = inner[i] ?? start
        const mark = all.find((each) => each.from <= from && each.to >= to)
        const under = wrong.find((each) => each.from <= from && each.to >= to)
        const names = [...(mark === undefined ? [] : [`m-${mark.kind}`]), ...(under === undefined ? [] : [`wrong ${under.level}`])].join(
          " ",
        )
        return names === "" ? text.slice(from, to) : html`<span class=${names}>${text.slice(from, to)}</span>`
      })
      lines.push(html`<div class="line">${line === "" ? html`<br>` : spans}</div>`)
      start = end + 1
    }
    return text.trim() === "" ? [html`<div class="line empty">say what this cell is</div>`] : lines
  }

  #notice(notice: Notice): TemplateResult {
    const { mend } = notice
    return html`<li class=${notice.level}>${notice.text}${notice.hint === null ? nothing : html` <span class="hint">${notice.hint}</span>`}
      ${mend === null || this.desk.readOnly ? nothing : html`<button type="button" class="mend" @click=${() => this.desk.act(this.cell.id, { intent: mend })}>${mend.label}</button>`}</li>`
  }

  #found(how: Standing, notices: readonly Notice[]): TemplateResult | typeof nothing {
    // What was said beside a finding stays with it while it is out of date, dimmed like it, so that the page does not jump.
    const said = how.stale ? [...notices, ...(how.shown?.notices ?? [])] : notices
    const beside = [...new Set(said)].filter(({ level }) => level !== "fault")
    const warnings = beside.filter(({ level }) => level === "warning")
    const remarks = beside.filter(({ level }) => level === "remark")
    const list = (of: readonly Notice[]) =>
      of.length === 0
        ? nothing
        : html`<ul class=${how.stale ? "notices stale" : "notices"}>${of.map((notice) => this.#notice(notice))}</ul>`
    this.#shown = how.shown
    const blocks = (how.shown?.blocks ?? []) as readonly Block[]
    return html`
      ${list(warnings)}
      <div class=${how.stale ? "blocks stale" : "blocks"}>${repeat(
        blocks,
        (block, i) => `${i} ${block.type}`,
        (block) => html`<etamu-block .block=${block}></etamu-block>`,
      )}</div>
      ${
        this.failure === null || this.failure.shown !== how.shown
          ? nothing
          : html`<p class="drawing-failed" role="alert">Not all of this finding could be drawn: ${this.failure.why}. That is a fault of
            the program; the statement is untouched.</p>`
      }
      ${list(remarks)}
    `
  }

  /** A drawing that fails is said where it would stand, and goes no further. */
  async #watchDrawing(): Promise<void> {
    const shown = this.#shown
    if (this.failure !== null && this.failure.shown === shown) return
    try {
      for (const block of this.querySelectorAll("etamu-block")) {
        await block.updateComplete
        for (const drawing of block.shadowRoot?.children ?? []) if (drawing instanceof LitElement) await drawing.updateComplete
      }
    } catch (error) {
      this.failure = { shown, why: error instanceof Error ? error.message : String(error) }
    }
  }

  /** Files that the statement names and the notebook does not hold: asked for by name. */
  #missing(): TemplateResult | typeof nothing {
    const held = new Set(this.desk.notebook.enclosures.map(({ name }) => name))
    const missing = reading(this.cell).names.files.filter((name) => !held.has(name))
    if (missing.length === 0 || this.desk.readOnly) return nothing
    const stated = new Set(this.desk.stated.map(({ name }) => name))
    return html`${missing.map(
      (name) => html`<p class="missing">${stated.has(name) ? "The notebook was written with" : "The notebook does not hold"}
        <strong>${name}</strong>${stated.has(name) ? " and does not hold its bytes" : ""}. Drop the file here, or
        <button type="button" class="link" @click=${() => this.#ask({ type: "enclose", name })}>choose it</button>.</p>`,
    )}`
  }

  #crash(state: { readonly text: string; readonly stack: string }): TemplateResult {
    return html`<div class="crash" role="alert">
      <p>The program failed on this cell. That is our fault, not one of the notebook: ${state.text}</p>
      <details><summary>Where it failed</summary><pre>${state.stack}</pre></details>
    </div>`
  }

  #tools(off: boolean): readonly MenuItem[] {
    return [
      { label: "Add a cell below", keys: keyOf("add"), act: () => this.#ask({ type: "add" }) },
      { label: "Move up", keys: keyOf("up"), off: this.first, act: () => this.#ask({ type: "move", by: -1 }) },
      { label: "Move down", keys: keyOf("down"), off: this.last, act: () => this.#ask({ type: "move", by: 1 }) },
      { label: off ? "Switch on" : "Switch off", keys: keyOf("off"), act: () => this.desk.turn(this.cell.id) },
      { label: "Take away", keys: keyOf("remove"), act: () => this.#ask({ type: "remove" }) },
    ]
  }

  #threads(): TemplateResult {
    // In a narrow gutter the lanes stand closer.
    const [width, step] = this.gutter >= 60 ? [60, 12] : [this.gutter, (this.gutter - 14) / (lanes - 1)]
    const x = (lane: number): number => width - (width >= 60 ? 11 : 8) - lane * step
    const lit = [...this.strands].sort((one, other) => Number(one.lit) - Number(other.lit))
    return html`<svg width=${width} height="100%">${lit.map((strand) => {
      const at = x(Math.min(strand.lane, lanes - 1))
      const y = strand.knot === null ? 0 : (this.tops[strand.knot.line] ?? this.tops[0] ?? 25)
      const ring = strand.knot?.type === "ring"
      const end = ring ? 4 : 0
      return svg`<g class=${strand.lit ? "lit" : ""}><title>${strand.name}</title>
        ${strand.above ? svg`<line x1=${at} x2=${at} y1="0" y2=${strand.knot === null ? "100%" : y - end}/>` : null}
        ${strand.below && strand.knot !== null ? svg`<line x1=${at} x2=${at} y1=${y + end} y2="100%"/>` : null}
        ${strand.knot === null ? null : svg`<circle cx=${at} cy=${y} r=${ring ? 4 : 3} class=${strand.knot.type}/>`}
      </g>`
    })}</svg>`
  }

  #heights(faults: readonly Notice[]): readonly number[] {
    const { statement } = reading(this.cell)
    return faults.map(({ at }) => (this.tops[lineOf(statement, at)] ?? this.tops[0] ?? 25) - 10)
  }

  /** Where the lines of the statement stand, for the gap in the hairline and the knots of the threads. */
  #measure(): void {
    const { top, height } = this.getBoundingClientRect()
    const half = 10.5
    this.gutter = this.querySelector(".gutter")?.clientWidth ?? 60
    const lines = this.#editor.value?.lines ?? [...this.querySelectorAll(".statement .line")]
    // The text of a note may run on below the row, where it is not seen: its knots stay in the row.
    const tops = lines.map((line) => Math.min(Math.round(line.getBoundingClientRect().top - top + half), Math.round(height) - 14))
    // Only text that is cut off fades out: the rest is to be read.
    const statement = this.querySelector(".statement")
    const saying = this.querySelector(".saying")
    if (statement !== null && saying !== null) {
      const room = Math.min(saying.clientHeight - 20, Number.parseFloat(getComputedStyle(statement).maxHeight) || Number.POSITIVE_INFINITY)
      this.toggleAttribute("data-cut", statement.scrollHeight > room + 1)
    }
    if (tops.length !== this.tops.length || tops.some((each, i) => each !== this.tops[i])) this.tops = tops
  }

  #typed(text: string): void {
    this.still = false
    clearTimeout(this.#timer)
    this.#timer = setTimeout(() => {
      this.still = true
    }, wordsAfter)
    this.desk.typed(this.cell.id, text)
  }

  #click(event: MouseEvent): void {
    if (this.desk.readOnly || getSelection()?.isCollapsed === false) return
    this.#ask({ type: "edit", at: this.#placeAt(event) ?? this.cell.text.length, offer: false })
  }

  /** The place in the text under the pointer. */
  #placeAt(event: MouseEvent): number | null {
    const found = document.caretPositionFromPoint?.(event.clientX, event.clientY)
    if (found === null || found === undefined) return null
    const line = (found.offsetNode instanceof Element ? found.offsetNode : found.offsetNode.parentElement)?.closest(".line")
    if (line === null || line === undefined) return null
    const before = [...this.querySelectorAll(".statement .line")]
    const start = this.cell.text.split("\n").slice(0, before.indexOf(line)).join("\n").length + (before.indexOf(line) > 0 ? 1 : 0)
    const range = document.createRange()
    range.setStart(line, 0)
    range.setEnd(found.offsetNode, found.offset)
    return Math.min(start + range.toString().length, this.cell.text.length)
  }

  #key(event: KeyboardEvent): void {
    if (event.altKey || event.ctrlKey || event.metaKey) return
    if (event.key === "Enter" && !this.desk.readOnly) {
      event.preventDefault()
      this.#ask({ type: "edit", at: this.cell.text.length, offer: false })
    } else if (event.key === "ArrowDown" || event.key === "ArrowUp") {
      event.preventDefault()
      this.#ask({ type: "step", by: event.key === "ArrowDown" ? 1 : -1 })
    }
  }
}

/** What is about the cell as a whole is said in words and underlines nothing. */
const inPlace = ({ clause, level }: Notice): boolean => clause !== null || level === "fault"

// Where lines stand is known only once they are drawn: the hairline's gap and the threads' knots need a second draw.
Row.disableWarning?.("change-in-update")

if (ink.styleSheet !== undefined) document.adoptedStyleSheets = [...document.adoptedStyleSheets, ink.styleSheet]

customElements.define("etamu-row", Row)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-row": Row
  }
  interface HTMLElementEventMap {
    "etamu-row": RowEvent
  }
}
