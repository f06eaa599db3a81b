// A dial: a slider over exact decimals, or a list to choose from. While a hand drags, every step is an intent of one gesture, and the value
// shown is the hand's, since findings may lag behind it; when the hand lets go the gesture ends.

import { css, html, LitElement, type TemplateResult } from "lit"
import { live } from "lit/directives/live.js"
import type { DialBlock } from "../../../cells/block.ts"
import type { Intent } from "../../../runtime/notice.ts"
import { IntentEvent, newGesture } from "../intent.ts"
import { blockStyles } from "./look.ts"

/** How long the hand's value is shown without a finding that agrees, in milliseconds. */
const LEAVE = 1500

export class DialElement extends LitElement {
  static override properties = { block: { attribute: false }, held: { state: true } }
  declare block: DialBlock | null
  /** The step in the hand, while there is one. */
  declare held: number | null
  #gesture: string | null = null
  #waiting: ReturnType<typeof setTimeout> | undefined

  static override styles = [
    blockStyles,
    css`
      .dial {
        display: grid;
        grid-template-columns: max-content minmax(120px, 420px) max-content minmax(64px, max-content);
        align-items: center;
        column-gap: 12px;
        font-variant-numeric: tabular-nums;
      }
      .end {
        color: var(--soft);
        font-size: 12.5px;
      }
      output {
        font-size: 17px;
        font-weight: 600;
        text-align: right;
      }
      input[type="range"] {
        appearance: none;
        width: 100%;
        height: 28px;
        margin: 0;
        background: transparent;
        cursor: pointer;
      }
      input[type="range"]::-webkit-slider-runnable-track {
        height: 1px;
        background: var(--ink);
        opacity: 0.55;
      }
      input[type="range"]::-webkit-slider-thumb {
        appearance: none;
        width: 13px;
        height: 24px;
        margin-top: -12px;
        border: 1.5px solid var(--ink);
        border-radius: 2px;
        background: linear-gradient(var(--ink), var(--ink)) center / 1.5px 12px no-repeat var(--paper);
      }
      input[type="range"]::-moz-range-track {
        height: 1px;
        background: var(--ink);
      }
      input[type="range"]::-moz-range-thumb {
        width: 10px;
        height: 21px;
        border: 1.5px solid var(--ink);
        border-radius: 2px;
        background: var(--paper);
      }
      input[type="range"]:hover::-webkit-slider-thumb {
        border-color: var(--accent);
      }
      input[type="range"]:active::-webkit-slider-thumb {
        background-color: var(--tint);
      }
      input[type="range"]:focus-visible {
        outline-offset: 0;
      }
      fieldset {
        border: none;
        margin: 0;
        padding: 0;
        display: flex;
        flex-wrap: wrap;
        gap: 6px 18px;
      }
      label {
        display: inline-flex;
        align-items: center;
        gap: 7px;
        min-height: 26px;
        cursor: pointer;
      }
      input[type="radio"] {
        accent-color: var(--accent);
        margin: 0;
      }
      @media (forced-colors: active) {
        input[type="range"] {
          appearance: auto;
        }
      }
    `,
  ]

  constructor() {
    super()
    this.block = null
    this.held = null
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback()
    this.#letGo()
    this.#gesture = null
  }

  protected override willUpdate(): void {
    const range = this.block?.range ?? null
    if (this.#gesture === null && this.held !== null && this.block !== null && range !== null && stepOf(this.block, range) === this.held)
      this.#letGo()
  }

  protected override render(): TemplateResult | null {
    const { block } = this
    if (block === null) return null
    return block.range === null ? this.#list(block) : this.#slider(block, block.range)
  }

  #slider(block: DialBlock, range: NonNullable<DialBlock["range"]>): TemplateResult {
    const at = this.held ?? stepOf(block, range)
    const text = readable(dialText(range, at))
    return html`<div class="dial">
      <span class="end">${readable(dialText(range, 0))}</span>
      <input
        type="range"
        min="0"
        max=${range.steps}
        step="1"
        .value=${live(String(at))}
        aria-label=${`dial ${block.name}`}
        aria-valuetext=${text}
        @input=${(event: Event) => this.#turn(block, range, stepInHand(event), false)}
        @change=${(event: Event) => this.#turn(block, range, stepInHand(event), true)}
      />
      <span class="end">${readable(dialText(range, range.steps))}</span>
      <output>${text}</output>
    </div>`
  }

  #letGo(): void {
    clearTimeout(this.#waiting)
    this.held = null
  }

  #list(block: DialBlock): TemplateResult {
    return html`<fieldset>
      <legend class="unseen">dial ${block.name}</legend>
      ${(block.choices ?? []).map(
        (choice) => html`<label
          ><input
            type="radio"
            name="choice"
            .checked=${live(choice === block.value)}
            @change=${() => this.#send({ intent: turned(block, quoted(choice)) })}
          />${choice}</label
        >`,
      )}
    </fieldset>`
  }

  #turn(block: DialBlock, range: NonNullable<DialBlock["range"]>, step: number, ended: boolean): void {
    // A key press gives `input` and `change` at once; a drag gives many of the first and one of the second.
    this.#gesture ??= newGesture()
    const gesture = this.#gesture
    const intent = turned(block, dialText(range, step))
    if (ended) {
      this.#gesture = null
      this.held = step
      this.#send({ intent, gesture, ended: true })
      // The hand's value stands until the finding has caught up; where the change was refused, not for long.
      clearTimeout(this.#waiting)
      this.#waiting = setTimeout(() => this.#letGo(), LEAVE)
      return
    }
    clearTimeout(this.#waiting)
    if (step === this.held) return
    this.held = step
    this.#send({ intent, gesture })
  }

  #send(detail: { intent: Intent; gesture?: string; ended?: boolean }): void {
    this.dispatchEvent(new IntentEvent(detail))
  }
}

const stepInHand = (event: Event): number => Number((event.target as HTMLInputElement).value)

/** Which step of the range the block's value is. */
function stepOf(block: DialBlock, range: NonNullable<DialBlock["range"]>): number {
  const step = Math.round((Number(block.value) - range.from) / range.step)
  return Math.min(range.steps, Math.max(0, step))
}

/** The exact decimal at a step, as a clause says it: from + k·step with the digits of the step. */
export const dialText = (range: NonNullable<DialBlock["range"]>, step: number): string => {
  const text = (range.from + step * range.step).toFixed(range.digits)
  return /^-0(\.0*)?$/.test(text) ? text.slice(1) : text
}

const readable = (text: string): string => text.replace("-", "−")

const quoted = (choice: string): string => `"${choice.replaceAll("\\", "\\\\").replaceAll('"', '\\"')}"`

const turned = (block: DialBlock, says: string): Intent => ({
  label: `Turn ${block.name} to ${says}`,
  edits: [{ cell: null, clause: block.clause, nth: 0, says }],
})

customElements.define("etamu-dial", DialElement)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-dial": DialElement
  }
}
