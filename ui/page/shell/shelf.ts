// The shelf as a sheet over the page: the notebooks kept in this browser, the samples, and a place to drop a file. It lists and asks; what is
// opened and taken away is the page's to do.

import { html, LitElement, nothing } from "lit"
import { createRef, ref } from "lit/directives/ref.js"
import type { Listed, Room } from "../../../storage/shelf/index.ts"
import type { Sample } from "../opening.ts"

export type ShelfAsk =
  | { readonly type: "open"; readonly id: string }
  | { readonly type: "remove"; readonly id: string }
  | { readonly type: "sample"; readonly sample: Sample }
  | { readonly type: "blank" }
  | { readonly type: "file" }

/** What was asked for on the shelf. */
export class ShelfEvent extends CustomEvent<ShelfAsk> {
  static readonly type = "etamu-shelf"
  constructor(ask: ShelfAsk) {
    super(ShelfEvent.type, { detail: ask, bubbles: true })
  }
}

export class ShelfSheet extends LitElement {
  static override properties = {
    books: { attribute: false },
    samples: { attribute: false },
    room: { attribute: false },
    trouble: { attribute: false },
    current: {},
    leaving: { state: true },
  }
  declare books: readonly Listed[]
  declare samples: readonly Sample[]
  declare room: Room | null
  /** Why there is no shelf, in words; null where there is one. */
  declare trouble: string | null
  /** The notebook that lies open. */
  declare current: string
  /** The notebook that is about to be taken away: asked once more, since that is for good. */
  declare leaving: string | null
  readonly #dialog = createRef<HTMLDialogElement>()

  constructor() {
    super()
    this.books = []
    this.samples = []
    this.room = null
    this.trouble = null
    this.current = ""
    this.leaving = null
  }

  protected override createRenderRoot(): HTMLElement {
    return this
  }

  show(): void {
    this.leaving = null
    if (this.#dialog.value?.open === false) this.#dialog.value.showModal()
  }

  override render() {
    return html`<dialog class="sheet" aria-labelledby="shelf-title" ${ref(this.#dialog)} @click=${(event: MouseEvent) => this.#outside(event)}>
      <div class="top"><h2 id="shelf-title">Shelf</h2><button type="button" class="close" @click=${() => this.#close()}>Close</button></div>
      <div class="inside">
        <h3>Kept in this browser</h3>
        ${this.trouble === null ? nothing : html`<p>${this.trouble}</p>`}
        ${this.books.length === 0 && this.trouble === null ? html`<p>Nothing yet.</p>` : nothing}
        <ul class="books">${this.books.map((book) => this.#book(book))}</ul>
        ${this.#roomSays()}
        <h3>Samples</h3>
        <ul class="books">${this.samples.map(
          (sample) => html`<li><button type="button" class="book" @click=${() => this.#ask({ type: "sample", sample })}>
            <strong>${sample.title}</strong><span>${sample.about}</span></button></li>`,
        )}</ul>
        <div class="drop">Drop a notebook (.etamu or .cells) or a data file (.csv, .tsv) anywhere on the page.</div>
        <div class="acts">
          <button type="button" @click=${() => this.#ask({ type: "file" })}>Choose a file…</button>
          <button type="button" @click=${() => this.#ask({ type: "blank" })}>Begin a new notebook</button>
        </div>
      </div>
    </dialog>`
  }

  #book({ id, title, changed, cells }: Listed) {
    const isOpen = id === this.current
    const away =
      this.leaving === id
        ? html`<span><button type="button" class="away" @click=${() => this.#ask({ type: "remove", id })}>take away for good</button>
            · <button type="button" class="away" @click=${() => this.#leave(null)}>keep</button></span>`
        : html`<button type="button" class="away" aria-label=${`Take ${title} off the shelf`} @click=${() => this.#leave(id)}>take away</button>`
    return html`<li>
      <button type="button" class="book" @click=${() => this.#ask({ type: "open", id })}>
        <strong>${title === "" ? "Without a title" : title}</strong>
        <span>${isOpen ? "open now · " : ""}changed ${when(changed)} · ${cells === 1 ? "one cell" : `${cells} cells`}</span>
      </button>${isOpen ? nothing : away}</li>`
  }

  #roomSays() {
    if (this.room?.persistent !== false || this.trouble !== null) return nothing
    return html`<p><span class="soft">The browser may clear the shelf when it runs short of room: hand over what has to last.</span></p>`
  }

  #leave(id: string | null): void {
    this.leaving = id
  }

  #ask(ask: ShelfAsk): void {
    if (ask.type !== "remove") this.#close()
    this.leaving = null
    this.dispatchEvent(new ShelfEvent(ask))
  }

  #close(): void {
    this.#dialog.value?.close()
  }

  #outside(event: MouseEvent): void {
    if (event.target === this.#dialog.value) this.#close()
  }
}

/** A time as it is said on the shelf: the hour for today, the day for the rest. */
function when(time: string): string {
  const date = new Date(time)
  const isToday = date.toDateString() === new Date().toDateString()
  return isToday ? `today ${clock(time)}` : date.toLocaleDateString("en-GB", { day: "numeric", month: "short", year: "numeric" })
}

/** Hours and minutes on the local clock. */
export const clock = (time: string): string => hours.format(new Date(time))

/** Made once: the head of the page asks at every draw. */
const hours = new Intl.DateTimeFormat("en-GB", { hour: "2-digit", minute: "2-digit" })

customElements.define("etamu-shelf", ShelfSheet)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-shelf": ShelfSheet
  }
}
