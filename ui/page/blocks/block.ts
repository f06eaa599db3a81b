// One block of a finding: whatever its type, drawn by the element for that type. The switch is over all types, so that a new one shows
// here first.

import { css, html, LitElement, type TemplateResult } from "lit"
import type { Block } from "../../../cells/block.ts"
import { blockStyles } from "./look.ts"
import "./dial.ts"
import "./figure.ts"
import "./formula.ts"
import "./prose.ts"
import "./scales.ts"
import "./table.ts"
import "./tapes.ts"

export class BlockElement extends LitElement {
  static override properties = { block: { attribute: false } }
  declare block: Block | null

  static override styles = [
    blockStyles,
    css`
      p {
        margin: 0;
        max-width: 68ch;
        white-space: pre-line;
      }
      .lead {
        font-size: 15px;
      }
    `,
  ]

  constructor() {
    super()
    this.block = null
  }

  protected override render(): TemplateResult | null {
    return this.block === null ? null : drawnBlock(this.block)
  }
}

function drawnBlock(block: Block): TemplateResult {
  switch (block.type) {
    case "sentence":
      return html`<p class=${block.tone}>${block.text}</p>`
    case "table":
      return html`<etamu-table .block=${block}></etamu-table>`
    case "formula":
      return html`<etamu-formula .block=${block}></etamu-formula>`
    case "figure":
      return html`<etamu-figure .block=${block}></etamu-figure>`
    case "tapes":
      return html`<etamu-tapes .block=${block}></etamu-tapes>`
    case "scales":
      return html`<etamu-scales .block=${block}></etamu-scales>`
    case "dial":
      return html`<etamu-dial .block=${block}></etamu-dial>`
    case "prose":
      return html`<etamu-prose .block=${block}></etamu-prose>`
    default: {
      const never: never = block
      return never
    }
  }
}

customElements.define("etamu-block", BlockElement)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-block": BlockElement
  }
}
