// A formula, set in MathML; its text goes along for copying and for those whom MathML does not reach.

import { css, html, LitElement, mathml, type TemplateResult } from "lit"
import type { FormulaBlock } from "../../../cells/block.ts"
import { type MathElement, mathOf } from "../../drawing/formula.ts"
import { blockStyles } from "./look.ts"

export class FormulaElement extends LitElement {
  static override properties = { block: { attribute: false } }
  declare block: FormulaBlock | null

  static override styles = [
    blockStyles,
    css`
      div {
        overflow-x: auto;
        padding: 2px 0 4px;
      }
      math {
        font-size: 1.3em;
      }
    `,
  ]

  constructor() {
    super()
    this.block = null
  }

  protected override render(): TemplateResult | null {
    const { block } = this
    if (block === null) return null
    return html`<div><math aria-label=${block.text} title=${block.text}>${element(mathOf(block.formula))}</math></div>`
  }
}

function element(math: MathElement): TemplateResult {
  switch (math.tag) {
    case "mi":
      return math.upright ? mathml`<mi mathvariant="normal">${math.text}</mi>` : mathml`<mi>${math.text}</mi>`
    case "mn":
      return mathml`<mn>${math.text}</mn>`
    case "mo":
      return mathml`<mo>${math.text}</mo>`
    case "mrow":
      return mathml`<mrow>${math.of.map(element)}</mrow>`
    case "msub":
      return mathml`<msub>${math.of.map(element)}</msub>`
    case "msup":
      return mathml`<msup>${math.of.map(element)}</msup>`
    case "mfrac":
      return mathml`<mfrac>${math.of.map(element)}</mfrac>`
    case "msqrt":
      return mathml`<msqrt>${math.of.map(element)}</msqrt>`
    default: {
      const never: never = math
      return never
    }
  }
}

customElements.define("etamu-formula", FormulaElement)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-formula": FormulaElement
  }
}
