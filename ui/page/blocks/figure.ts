// A figure of any kind: its panels drawn as a scene at the width there is, with its text summary for those who cannot see it.

import { css, html, LitElement, svg, type TemplateResult } from "lit"
import type { FigureBlock } from "../../../cells/block.ts"
import { figureScene } from "../../drawing/figure.ts"
import { drawn } from "./drawn.ts"
import { blockStyles, linkTokens, sceneStyles } from "./look.ts"
import { WidthController } from "./width.ts"

export class FigureElement extends LitElement {
  static override properties = { block: { attribute: false } }
  declare block: FigureBlock | null
  readonly #width = new WidthController(this)

  static override styles = [
    blockStyles,
    linkTokens,
    css`
      ${sceneStyles}
      figure {
        margin: 0;
      }
    `,
  ]

  constructor() {
    super()
    this.block = null
  }

  protected override render(): TemplateResult | null {
    if (this.block === null || this.#width.width < 40) return null
    const scene = figureScene(this.block.figure, this.#width.width)
    return html`<figure>
      <svg class="scene" role="img" aria-label=${this.block.text} width=${scene.width} height=${scene.height}>${svg`${drawn(scene.marks)}`}</svg>
      <figcaption class="quiet">${this.block.text}</figcaption>
    </figure>`
  }
}

customElements.define("etamu-figure", FigureElement)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-figure": FigureElement
  }
}
