// Columns of data, each as one ruled line like a tape measure: name and unit, the values as dots or a density on a true scale with the ends
// written at its ends, and in words what is missing.

import { css, html, LitElement, svg, type TemplateResult } from "lit"
import type { Tape, TapeBlock } from "../../../cells/block.ts"
import { writtenCount } from "../../drawing/number.ts"
import { tenth } from "../../drawing/scene.ts"
import { blockStyles, linkTokens } from "./look.ts"

const LINE = 1000
const HEIGHT = 24

export class TapesElement extends LitElement {
  static override properties = { block: { attribute: false } }
  declare block: TapeBlock | null

  static override styles = [
    blockStyles,
    linkTokens,
    css`
      :host {
        container-type: inline-size;
      }
      ul {
        list-style: none;
        margin: 0;
        padding: 0;
        display: grid;
        grid-template-columns: fit-content(26%) fit-content(16%) minmax(30px, max-content) minmax(140px, 1fr) minmax(30px, max-content) minmax(90px, max-content);
        column-gap: 12px;
        align-items: center;
      }
      li {
        display: grid;
        grid-template-columns: subgrid;
        grid-column: 1 / -1;
        align-items: center;
        min-height: 30px;
        font-size: 13px;
      }
      .name {
        overflow-wrap: anywhere;
      }
      .called,
      .kind,
      .says,
      .end {
        color: var(--soft);
        font-size: 12px;
      }
      .called {
        display: block;
      }
      .end {
        font-variant-numeric: tabular-nums;
        white-space: nowrap;
      }
      .from {
        text-align: right;
        justify-self: end;
      }
      svg {
        display: block;
        width: 100%;
        height: ${HEIGHT}px;
        overflow: visible;
      }
      .rule {
        stroke: var(--rule);
        stroke-width: 1;
        vector-effect: non-scaling-stroke;
        fill: none;
      }
      .value {
        stroke: var(--ink);
        stroke-opacity: 0.6;
        stroke-linecap: round;
        vector-effect: non-scaling-stroke;
        fill: none;
      }
      .density {
        fill: var(--ink);
        fill-opacity: 0.35;
      }
      .levels {
        grid-column: 3 / 6;
        display: flex;
        flex-wrap: wrap;
        gap: 2px 0;
        font-size: 12.5px;
      }
      .levels span {
        padding: 1px 10px 1px 0;
        margin-right: 10px;
        border-right: 1px solid var(--line);
      }
      .levels span:last-child {
        border-right: none;
      }
      .levels b {
        font-weight: 400;
        color: var(--soft);
        font-variant-numeric: tabular-nums;
        margin-left: 4px;
      }
      @container (max-width: 640px) {
        ul {
          grid-template-columns: fit-content(52%) minmax(0, 1fr) fit-content(40%);
        }
        li {
          padding: 6px 0;
          row-gap: 0;
        }
        .name {
          grid-column: 1;
        }
        .kind {
          grid-column: 2;
        }
        .says {
          grid-column: 3;
          grid-row: 1;
          text-align: right;
        }
        .from {
          grid-column: 1;
          justify-self: start;
        }
        .line {
          grid-column: 1 / 4;
          grid-row: 2;
        }
        .from {
          grid-row: 3;
        }
        .to {
          grid-row: 3;
          grid-column: 3;
          justify-self: end;
        }
        .levels {
          grid-column: 1 / 4;
          grid-row: 2;
        }
      }
    `,
  ]

  constructor() {
    super()
    this.block = null
  }

  protected override render(): TemplateResult | null {
    return this.block === null ? null : html`<ul>${this.block.tapes.map(oneTape)}</ul>`
  }
}

function oneTape(tape: Tape): TemplateResult {
  const name = html`<span class="name">${tape.name}${tape.called === null || tape.called === tape.name ? null : html`<span class="called">${tape.called}</span>`}</span>`
  const kind = html`<span class="kind">${tape.unit ?? WORDS[tape.columnType]}</span>`
  const says = html`<span class="says">${tape.says}</span>`
  if (tape.levels !== null) {
    const levels = tape.levels.map((level) => html`<span>${level.level}<b>${writtenCount(level.rows)}</b></span>`)
    return html`<li>${name}${kind}<span class="levels">${levels}</span>${says}</li>`
  }
  const [from, to] = tape.ends ?? ["", ""]
  return html`<li>
    ${name}${kind}<span class="end from">${from}</span><span class="line">${tape.ends === null ? null : line(tape)}</span
    ><span class="end to">${to}</span>${says}
  </li>`
}

const WORDS: Readonly<Record<Tape["columnType"], string>> = {
  number: "number",
  count: "count",
  category: "category",
  truth: "truth",
  date: "date",
  text: "text",
}

/** The ruled line, drawn on a scale of its own and stretched to the room there is; strokes keep their width. */
function line(tape: Tape): TemplateResult {
  const middle = HEIGHT / 2
  const rule = svg`<path class="rule" d="M0 ${middle}H${LINE}M0 ${middle - 5}v10M${LINE} ${middle - 5}v10"></path>`
  return html`<svg viewBox="0 0 ${LINE} ${HEIGHT}" preserveAspectRatio="none" aria-hidden="true">
    ${tape.bins === null ? null : svg`<path class="density" d=${density(tape.bins, middle)}></path>`}${rule}${
      tape.marks === null ? null : dots(tape.marks, middle)
    }
  </svg>`
}

/** Dots are strokes without length and with round ends: they stay round when the line is stretched. Area goes with rows. */
function dots(marks: NonNullable<Tape["marks"]>, middle: number): readonly TemplateResult[] {
  const bySize = new Map<number, string>()
  for (const mark of marks) {
    const size = Math.min(11, Math.round(5.5 * Math.sqrt(Math.min(mark.rows, 5)) * 2) / 2)
    bySize.set(size, `${bySize.get(size) ?? ""}M${tenth(mark.at * LINE)} ${middle}h0`)
  }
  return [...bySize].map(([size, d]) => svg`<path class="value" stroke-width=${size} d=${d}></path>`)
}

function density(bins: readonly number[], middle: number): string {
  const most = Math.max(1, ...bins)
  const width = LINE / bins.length
  return bins
    .map((count, i) =>
      count === 0 ? "" : `M${tenth(i * width)} ${middle}V${tenth(middle - 1 - (count / most) * 10)}h${tenth(width)}V${middle}Z`,
    )
    .join("")
}

customElements.define("etamu-tapes", TapesElement)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-tapes": TapesElement
  }
}
