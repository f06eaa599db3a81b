// The two scales with the bridge between them, under the link strip. Resting on a candidate of the strip, by pointer or by key, shows its
// ghost at once from what the block brought; choosing one sends its intent. Pointing at a panel or the bridge, or walking along x by key,
// reads off x, μ, η and their intervals in a line above the drawing, where it covers nothing.

import { css, html, LitElement, nothing, type PropertyValues, svg, type TemplateResult } from "lit"
import { guard } from "lit/directives/guard.js"
import { repeat } from "lit/directives/repeat.js"
import type { ScalesBlock, ScalesCandidate } from "../../../cells/block.ts"
import { linkInk, linkRole } from "../../drawing/link-ink.ts"
import { written } from "../../drawing/number.ts"
import {
  ghostSays,
  linkThumbnail,
  type Pointing,
  pointed,
  pointerMarks,
  pointsTable,
  type Reading,
  readingOf,
  readingSentence,
  type ScalesLayout,
  scalesLayout,
  scalesLegend,
  scalesScene,
  steppedReading,
} from "../../drawing/scales/index.ts"
import { IntentEvent, SayEvent } from "../intent.ts"
import { drawn } from "./drawn.ts"
import { blockStyles, linkTokens, sceneStyles } from "./look.ts"
import { WidthController } from "./width.ts"
import "./table.ts"

/** How far Page Up and Page Down go along the grid. */
const LEAP = 20

export class ScalesElement extends LitElement {
  static override properties = {
    block: { attribute: false },
    preview: { state: true },
    pointing: { state: true },
    walked: { state: true },
    unfolded: { state: true },
  }
  declare block: ScalesBlock | null
  /** The candidate that is rested on. */
  declare preview: string | null
  declare pointing: Pointing | null
  /** The candidate that the tab key comes to; null: the chosen one. */
  declare walked: string | null
  /** Whether the points are shown in numbers. */
  declare unfolded: boolean
  readonly #width = new WidthController(this)
  #layout: ScalesLayout | null = null

  static override styles = [
    blockStyles,
    linkTokens,
    css`
      ${sceneStyles}
      :host {
        container-type: inline-size;
      }
      figure {
        margin: 0;
      }
      .strip {
        display: flex;
        flex-wrap: wrap;
        gap: 6px;
        margin: 0 0 2px;
      }
      .candidate {
        display: grid;
        grid-template-columns: 44px minmax(54px, auto);
        column-gap: 9px;
        align-items: center;
        text-align: left;
        border: 1px solid var(--line);
        border-radius: 3px;
        padding: 4px 12px 6px 7px;
        background: var(--sheet, var(--paper));
        min-height: 42px;
      }
      .candidate:hover {
        border-color: var(--link);
      }
      .candidate[aria-pressed="true"] {
        border-color: var(--link);
        box-shadow: inset 0 -4px 0 var(--link);
      }
      .candidate.previewed:not([aria-pressed="true"]) {
        border-color: var(--link);
        box-shadow: inset 0 -1.5px 0 var(--link);
      }
      .candidate svg {
        display: block;
        overflow: visible;
      }
      .candidate path {
        fill: none;
        stroke: var(--link);
        stroke-width: 2;
      }
      .candidate b {
        display: block;
        font-weight: 600;
        font-size: 13px;
        line-height: 1.25;
      }
      .candidate small {
        display: block;
        font-size: 11.5px;
        line-height: 1.3;
        color: var(--soft);
        font-variant-numeric: tabular-nums;
        white-space: nowrap;
      }
      .troubles {
        margin: 4px 0 0;
        max-width: 92ch;
      }
      .troubles b {
        font-weight: 600;
      }
      .reading {
        display: flex;
        flex-wrap: wrap;
        align-content: center;
        column-gap: 18px;
        min-height: 30px;
        padding: 4px 0 2px;
        font-size: 13px;
        font-variant-numeric: tabular-nums;
        line-height: 1.45;
      }
      .reading b {
        font-weight: 600;
      }
      .reading span {
        white-space: nowrap;
      }
      .reading .symbol {
        font-family: var(--title-face);
        font-style: italic;
        margin-right: 5px;
      }
      .reading i {
        font-style: normal;
        color: var(--soft);
        margin-left: 5px;
      }
      .reading .hint {
        color: var(--soft);
        font-size: 12.5px;
        white-space: normal;
      }
      .plot {
        position: relative;
        border-radius: 2px;
        touch-action: pan-y;
        cursor: crosshair;
      }
      summary {
        color: var(--soft);
        font-size: 12.5px;
        cursor: pointer;
        padding: 3px 0;
        width: fit-content;
      }
      summary:hover {
        color: var(--ink);
      }
      .points {
        margin-top: 6px;
      }
      figcaption {
        margin-top: 8px;
        max-width: 92ch;
      }
      @media (forced-colors: active) {
        .candidate[aria-pressed="true"] {
          outline: 3px solid Highlight;
          outline-offset: -3px;
        }
      }
      @media print {
        .reading {
          display: none;
        }
        .candidate {
          break-inside: avoid;
        }
      }
      @container (max-width: 480px) {
        .reading {
          min-height: 66px;
        }
        .strip {
          display: grid;
          grid-template-columns: 1fr 1fr;
        }
      }
    `,
  ]

  constructor() {
    super()
    this.block = null
    this.preview = null
    this.pointing = null
    this.walked = null
    this.unfolded = false
  }

  protected override willUpdate(changed: PropertyValues<this>): void {
    const { block } = this
    if (block === null) {
      this.#layout = null
      return
    }
    if (changed.has("block") || this.#layout?.width !== this.#width.width) {
      this.#layout = this.#width.width < 120 ? null : scalesLayout(block, this.#width.width)
    }
    const gone = (link: string | null): boolean => link !== null && !block.candidates.some((candidate) => candidate.link === link)
    if (gone(this.preview)) this.preview = null
    if (gone(this.walked)) this.walked = null
  }

  protected override render(): TemplateResult | null {
    const { block } = this
    if (block === null) return null
    return html`<figure aria-label="The two scales">
      ${this.#strip(block)} ${this.#layout === null ? this.#nothingToDraw(block) : this.#drawing(block, this.#layout)}
    </figure>`
  }

  #nothingToDraw(block: ScalesBlock): TemplateResult | typeof nothing {
    return this.#width.width < 120
      ? nothing
      : html`<p class="quiet">${block.summary === "" ? "No candidate has a fit to draw." : block.summary}</p>`
  }

  // ————— The strip —————

  #strip(block: ScalesBlock): TemplateResult {
    const reachable = this.walked ?? (block.candidates.find((candidate) => candidate.chosen) ?? block.candidates[0])?.link
    const troubles = [...new Set(block.candidates.flatMap((candidate) => candidate.trouble ?? []))]
    return html`<div class="strip" role="toolbar" aria-label="candidate links" @keydown=${this.#walk}>
        ${repeat(
          block.candidates,
          (candidate) => candidate.link,
          (candidate) => this.#candidate(block, candidate, candidate.link === reachable, troubles),
        )}
      </div>
      ${
        troubles.length === 0
          ? nothing
          : html`<p class="troubles quiet">
              ${troubles.map((trouble, i) => {
                const links = block.candidates.filter((candidate) => candidate.trouble === trouble).map((candidate) => candidate.link)
                return html`<span id=${`trouble-${i}`}><b>${links.join(", ")}</b>: ${sentenceEnd(trouble)}</span> `
              })}
            </p>`
      }`
  }

  #candidate(block: ScalesBlock, candidate: ScalesCandidate, reachable: boolean, troubles: readonly string[]): TemplateResult {
    const ink = linkInk(candidate.link)
    return html`<button
      class=${`candidate link-${ink.colour}${this.preview === candidate.link ? " previewed" : ""}`}
      data-link=${candidate.link}
      aria-pressed=${candidate.chosen}
      aria-describedby=${candidate.trouble === null ? nothing : `trouble-${troubles.indexOf(candidate.trouble)}`}
      tabindex=${reachable ? 0 : -1}
      title=${`η = ${candidate.formula}`}
      @pointerenter=${() => this.#rest(candidate.link)}
      @pointerleave=${() => this.#rest(this.#focusedLink())}
      @focus=${() => this.#reach(candidate.link)}
      @blur=${() => this.#rest(null)}
      @click=${() => this.#choose(candidate)}
    >
      <svg width="44" height="28" aria-hidden="true">
        ${guard(shapeOfBridge(candidate), () => svg`<path class=${linkRole(candidate.link)} d=${linkThumbnail(candidate, 44, 28)}></path>`)}
      </svg>
      <span><b>${candidate.link}</b><small>${standing(block, candidate)}</small></span>
    </button>`
  }

  #rest(link: string | null): void {
    this.preview = link
    if (link !== null) this.pointing = null
  }

  #reach(link: string): void {
    this.walked = link
    // A click focuses too; only a focus that is seen is a rest.
    if (this.shadowRoot?.activeElement?.matches(":focus-visible")) this.#rest(link)
  }

  #focusedLink(): string | null {
    const focused = this.shadowRoot?.activeElement
    return focused instanceof HTMLElement && focused.matches(".candidate:focus-visible") ? (focused.dataset["link"] ?? null) : null
  }

  #choose(candidate: ScalesCandidate): void {
    if (!candidate.chosen) this.dispatchEvent(new IntentEvent({ intent: candidate.choose }))
  }

  readonly #walk = (event: KeyboardEvent): void => {
    const { block } = this
    if (block === null) return
    const links = block.candidates.map((candidate) => candidate.link)
    const at = links.indexOf(this.#focusedLink() ?? this.walked ?? "")
    const next = stripStep(event.key, at, links.length)
    if (event.key === "Escape") this.#rest(null)
    if (next === null) return
    event.preventDefault()
    const link = links[next]
    this.shadowRoot?.querySelectorAll<HTMLElement>(".candidate")[next]?.focus()
    if (link !== undefined) this.#rest(link)
  }

  // ————— The drawing —————

  /** The candidate that is read: the previewed one while there is a preview, else the one that sets the axes. */
  #subject(block: ScalesBlock, layout: ScalesLayout): ScalesCandidate {
    return block.candidates.find((candidate) => candidate.link === this.preview && candidate.curves.length > 0) ?? layout.subject
  }

  #drawing(block: ScalesBlock, layout: ScalesLayout): TemplateResult {
    const subject = this.#subject(block, layout)
    const reading = this.pointing === null ? null : readingOf(block, layout, subject, this.pointing)
    const curve = this.pointing?.type === "curve" ? this.pointing.at : null
    const length = (subject.curves[0]?.x.length ?? 1) - 1
    return html`<div class="reading" aria-hidden="true">${this.#readingLine(block, layout, reading)}</div>
      <div
        class="plot"
        tabindex="0"
        role="slider"
        aria-label=${`read the curve along ${block.across.label}`}
        aria-valuemin="0"
        aria-valuemax=${length}
        aria-valuenow=${curve ?? Math.floor(length / 2)}
        aria-valuetext=${reading === null ? "arrow keys read the curve" : readingSentence(block, subject, reading)}
        @pointermove=${this.#point}
        @pointerdown=${this.#point}
        @pointerleave=${this.#leave}
        @keydown=${this.#step}
        @blur=${() => this.#unpoint()}
      >
        <svg class="scene" aria-hidden="true" width=${layout.width} height=${layout.height}>
          ${guard([block, layout, this.preview], () => svg`<g>${drawn(scalesScene(block, layout, this.preview).marks)}</g>`)}
          ${svg`<g>${drawn(pointerMarks(block, layout, subject, this.pointing))}</g>`}
        </svg>
      </div>
      <p class="unseen">${block.summary}</p>
      <figcaption class="quiet">${scalesLegend(block, layout).join(" ")}</figcaption>
      ${layout.subject.points.some((points) => points.x.length > 0) ? this.#points(block, layout) : nothing}`
  }

  /** The points in numbers, made only once they are asked for: a thousand rows would slow every redraw. */
  #points(block: ScalesBlock, layout: ScalesLayout): TemplateResult {
    return html`<details class="points" @toggle=${this.#unfold}>
      <summary>The points under ${layout.subject.link} in numbers</summary>
      ${this.unfolded ? guard([block, layout], () => html`<etamu-table .block=${{ ...pointsTable(block, layout), caption: null }}></etamu-table>`) : nothing}
    </details>`
  }

  readonly #unfold = (event: Event): void => {
    this.unfolded = (event.currentTarget as HTMLDetailsElement).open
  }

  #readingLine(block: ScalesBlock, layout: ScalesLayout, reading: Reading | null): TemplateResult {
    if (reading !== null) {
      const interval = (text: string | null): TemplateResult | typeof nothing => (text === null ? nothing : html`<i>${text}</i>`)
      return html`${reading.x === null ? nothing : html`<span>${block.across.label} <b>${reading.x}</b>${reading.level === null ? nothing : html`<i>${reading.level}</i>`}</span>`}
        <span><span class="symbol">μ</span><b>${reading.mu}</b>${interval(reading.muInterval)}</span>
        <span><span class="symbol">η</span><b>${reading.eta}</b>${interval(reading.etaInterval)}</span>
        ${reading.caution === null ? nothing : html`<span><i>${reading.caution}</i></span>`}`
    }
    const previewed = block.candidates.find((candidate) => candidate.link === this.preview)
    if (previewed !== undefined && previewed !== layout.subject) {
      const says =
        previewed.curves.length > 0 ? ghostSays(block, layout, previewed.link) : `${previewed.link}: ${unfitted(block, previewed)}.`
      return html`<span class="hint">${says}</span>`
    }
    return html`<span class="hint">Point at a panel or the bridge, or use the arrow keys, to read x, μ and η with their intervals.</span>`
  }

  readonly #point = (event: PointerEvent): void => {
    const { block } = this
    const layout = this.#layout
    if (block === null || layout === null) return
    const box = (event.currentTarget as HTMLElement).getBoundingClientRect()
    const found = pointed(block, layout, this.#subject(block, layout), event.clientX - box.left, event.clientY - box.top)
    if (!same(found, this.pointing)) this.pointing = found
  }

  readonly #leave = (event: PointerEvent): void => {
    // A touch that ends keeps its reading, since there is no pointer to come back to.
    if (event.pointerType !== "touch") this.#unpoint()
  }

  #unpoint(): void {
    this.pointing = null
  }

  readonly #step = (event: KeyboardEvent): void => {
    const { block } = this
    const layout = this.#layout
    if (block === null || layout === null) return
    if (event.key === "Escape") {
      this.#unpoint()
      return
    }
    const { subject } = layout
    const length = subject.curves[0]?.x.length ?? 0
    const step = readingStep(event.key, length)
    if (step === null) return
    event.preventDefault()
    // A pointer left resting on the strip does not decide what is read by key.
    this.preview = null
    this.pointing = steppedReading(subject, this.pointing, step)
    const reading = this.pointing === null ? null : readingOf(block, layout, subject, this.pointing)
    if (reading !== null) this.dispatchEvent(new SayEvent(readingSentence(block, subject, reading)))
  }
}

/** What the shape of a thumbnail hangs on, so coarsely that a drag which hardly moves the means does not draw it again. */
function shapeOfBridge({ link, bridge: { mu } }: ScalesCandidate): unknown[] {
  const [low, high] = [mu[0] ?? Number.NaN, mu.at(-1) ?? Number.NaN]
  return [link, mu.length, low.toPrecision(2), high.toPrecision(2)]
}

/** The line under a candidate's name. */
function standing(block: ScalesBlock, candidate: ScalesCandidate): string {
  if (candidate.curves.length === 0) return candidate.trouble === null && !block.complete ? "being fitted" : "no fit"
  if (candidate.deltaAic === null) return block.complete ? "no AIC" : "AIC to come"
  if (candidate.deltaAic === 0) return "lowest AIC"
  return `AIC +${candidate.deltaAic < 0.05 ? written(candidate.deltaAic, 1) : candidate.deltaAic.toFixed(1)}`
}

const unfitted = (block: ScalesBlock, candidate: ScalesCandidate): string =>
  candidate.trouble?.replace(/\.$/, "") ?? (block.complete ? "there is no fit" : "not fitted yet")

/** A trouble as a sentence of its own, whether or not it came with a full stop. */
const sentenceEnd = (text: string): string => (/[.!?]$/.test(text) ? text : `${text}.`)

/** Where a key leads on the strip, or null. */
export function stripStep(key: string, at: number, length: number): number | null {
  if (length === 0) return null
  switch (key) {
    case "ArrowRight":
    case "ArrowDown":
      return (at + 1) % length
    case "ArrowLeft":
    case "ArrowUp":
      return (at + length - 1) % length
    case "Home":
      return 0
    case "End":
      return length - 1
    default:
      return null
  }
}

/** How far a key steps along x, and to which curve; null for other keys. */
export function readingStep(key: string, length: number): { readonly along: number; readonly curves: number } | null {
  const leap = length > LEAP * 3 ? LEAP : 1
  switch (key) {
    case "ArrowRight":
      return { along: 1, curves: 0 }
    case "ArrowLeft":
      return { along: -1, curves: 0 }
    case "ArrowUp":
      return { along: 0, curves: 1 }
    case "ArrowDown":
      return { along: 0, curves: -1 }
    case "PageUp":
      return { along: leap, curves: 0 }
    case "PageDown":
      return { along: -leap, curves: 0 }
    case "Home":
      return { along: -length, curves: 0 }
    case "End":
      return { along: length, curves: 0 }
    default:
      return null
  }
}

const same = (a: Pointing | null, b: Pointing | null): boolean =>
  a === b ||
  (a !== null && b !== null && a.type === b.type && a.at === b.at && (a.type !== "curve" || b.type !== "curve" || a.curve === b.curve))

customElements.define("etamu-scales", ScalesElement)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-scales": ScalesElement
  }
}
