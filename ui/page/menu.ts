// A button with a list of things to do under it. Arrow keys walk along the list, Escape closes it and gives the focus back; each item has
// its name, one line on what it does, and its keys where it has some.

import { html, LitElement, nothing } from "lit"

export interface MenuItem {
  readonly label: string
  readonly says?: string
  readonly keys?: string
  readonly off?: boolean
  act(): void
}

export class Menu extends LitElement {
  static override properties = { label: {}, text: {}, items: { attribute: false }, open: { state: true }, above: { state: true } }
  /** What the button is for, said to those who cannot see where it stands. */
  declare label: string
  /** What the button shows. */
  declare text: string
  declare items: readonly MenuItem[]
  declare open: boolean
  declare above: boolean

  constructor() {
    super()
    this.label = ""
    this.text = ""
    this.items = []
    this.open = false
    this.above = false
    this.addEventListener("keydown", (event) => this.#key(event))
    this.addEventListener("focusout", (event) => {
      if (!(event.relatedTarget instanceof Node && this.contains(event.relatedTarget))) this.open = false
    })
  }

  protected override createRenderRoot(): HTMLElement {
    return this
  }

  override render() {
    return html`
      <button type="button" class="opener" aria-haspopup="menu" aria-expanded=${this.open} aria-label=${this.label} title=${this.label}
        @click=${() => this.#toggle()}>${this.text}</button>
      ${this.open ? html`<div class=${this.above ? "list above" : "list"} role="menu" aria-label=${this.label}>${this.items.map((item) => this.#item(item))}</div>` : nothing}
    `
  }

  /** Opens the list with its first item in focus. */
  async show(): Promise<void> {
    const { bottom } = this.getBoundingClientRect()
    this.above = bottom > innerHeight * 0.6
    this.open = true
    await this.updateComplete
    this.#items()[0]?.focus()
  }

  #item(item: MenuItem) {
    return html`<button type="button" role="menuitem" tabindex="-1" aria-disabled=${item.off === true} @click=${() => this.#act(item)}>
      <span class=${item.says !== undefined && /^\w+$/.test(item.label) ? "name word" : "name"}>${item.label}</span>${item.keys === undefined ? nothing : html`<kbd>${item.keys}</kbd>`}
      ${item.says === undefined ? nothing : html`<span class="says">${item.says}</span>`}
    </button>`
  }

  #toggle(): void {
    if (this.open) this.open = false
    else void this.show()
  }

  #act(item: MenuItem): void {
    if (item.off === true) return
    this.open = false
    this.querySelector<HTMLElement>(".opener")?.focus()
    item.act()
  }

  #items(): readonly HTMLElement[] {
    return [...this.querySelectorAll<HTMLElement>("[role=menuitem]")]
  }

  #key(event: KeyboardEvent): void {
    if (!this.open) {
      if (event.key === "ArrowDown") {
        event.preventDefault()
        void this.show()
      }
      return
    }
    const items = this.#items()
    const at = items.indexOf(document.activeElement as HTMLElement)
    const to = { ArrowDown: at + 1, ArrowUp: at - 1, Home: 0, End: items.length - 1 }[event.key]
    if (to !== undefined) {
      event.preventDefault()
      event.stopPropagation()
      items[(to + items.length) % items.length]?.focus()
    } else if (event.key === "Escape") {
      event.preventDefault()
      event.stopPropagation()
      this.open = false
      this.querySelector<HTMLElement>(".opener")?.focus()
    }
  }
}

customElements.define("etamu-menu", Menu)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-menu": Menu
  }
}
