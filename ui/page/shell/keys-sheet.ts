// The keys of the page, shown on request.

import { html, LitElement } from "lit"
import { createRef, ref } from "lit/directives/ref.js"
import { otherKeys, shortcuts, written } from "../keys.ts"

export class KeysSheet extends LitElement {
  readonly #dialog = createRef<HTMLDialogElement>()

  protected override createRenderRoot(): HTMLElement {
    return this
  }

  show(): void {
    if (this.#dialog.value?.open === false) this.#dialog.value.showModal()
  }

  override render() {
    const all = [...shortcuts.map((each) => ({ keys: written(each), says: each.says })), ...otherKeys]
    return html`<dialog class="sheet" aria-labelledby="keys-title" ${ref(this.#dialog)}>
      <div class="top"><h2 id="keys-title">Keys</h2><button type="button" class="close" @click=${() => this.#dialog.value?.close()}>Close</button></div>
      <div class="inside"><table class="keys"><tbody>${all.map(({ keys, says }) => html`<tr><td><kbd>${keys}</kbd></td><td>${says}</td></tr>`)}</tbody></table></div>
    </dialog>`
  }
}

customElements.define("etamu-keys", KeysSheet)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-keys": KeysSheet
  }
}
