// A table of numbers, lined up on the decimal point. Numbers are shown to the digits the finding gives them; the full values, and a copy
// that pastes into a spreadsheet, come on request.

import { css, html, LitElement, nothing, type TemplateResult } from "lit"
import type { TableBlock, TableColumn, TableEntry } from "../../../cells/block.ts"
import { absent, atPoint, plain, written, writtenInFull, writtenRange } from "../../drawing/number.ts"
import { SayEvent } from "../intent.ts"
import { blockStyles } from "./look.ts"

export class TableElement extends LitElement {
  static override properties = {
    block: { attribute: false },
    full: { state: true },
    said: { state: true },
    unfolded: { state: true },
  }
  declare block: TableBlock | null
  /** Whether every digit is shown. */
  declare full: boolean
  /** What came of copying, until something else happens. */
  declare said: string | null
  /** Whether a folded table was opened: until then its rows are not made, since a drag would make them at every step. */
  declare unfolded: boolean

  static override styles = [
    blockStyles,
    css`
      .scroll {
        overflow-x: auto;
        max-width: 100%;
      }
      table {
        border-collapse: collapse;
        font-variant-numeric: tabular-nums;
        font-size: 13px;
      }
      caption {
        text-align: left;
        color: var(--soft);
        font-size: 12.5px;
        padding: 2px 0 4px;
      }
      th,
      td {
        padding: 2px 22px 2px 0;
        font-weight: 400;
        text-align: left;
        vertical-align: baseline;
        white-space: nowrap;
      }
      thead th {
        color: var(--soft);
        font-size: 12px;
        border-bottom: 1px solid var(--line);
      }
      thead th[title] {
        cursor: help;
      }
      .number {
        text-align: right;
      }
      .after {
        display: inline-block;
        text-align: left;
      }
      .absent {
        color: var(--soft);
      }
      .whole {
        display: flex;
        flex-wrap: wrap;
        align-items: flex-end;
      }
      .asks {
        min-height: 26px;
      }
      @media (hover: hover) {
        .asks {
          opacity: 0;
          transition: opacity 120ms;
        }
        :host(:hover) .asks,
        :host(:focus-within) .asks {
          opacity: 1;
        }
      }
      @media (prefers-reduced-motion: reduce) {
        .asks {
          transition: none;
        }
      }
      @media print {
        .asks {
          display: none;
        }
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
      details table {
        margin-top: 4px;
      }
    `,
  ]

  constructor() {
    super()
    this.block = null
    this.full = false
    this.said = null
    this.unfolded = false
  }

  protected override render(): TemplateResult | null {
    const { block } = this
    if (block === null) return null
    if (!block.folded) return this.#table(block, true)
    return html`<details @toggle=${this.#unfold}>
      <summary>${block.caption ?? "In numbers"}</summary>
      ${this.unfolded ? this.#table(block, false) : nothing}
    </details>`
  }

  #table(block: TableBlock, withCaption: boolean): TemplateResult {
    const columns = block.columns.map((column, c) =>
      columnSet(
        column,
        block.rows.map((row) => row[c] ?? null),
        this.full,
      ),
    )
    return html`<div class="whole"><div class="scroll" tabindex=${block.columns.length > 4 ? 0 : nothing} role="group" aria-label=${block.caption ?? "table"}>
        <table>
          ${withCaption && block.caption !== null ? html`<caption>${block.caption}</caption>` : html`<caption class="unseen">${block.caption ?? "table"}</caption>`}
          <thead>
            <tr>
              ${block.columns.map(
                (column) =>
                  html`<th scope="col" class=${column.align} title=${column.says ?? nothing}>${column.head === "" ? html`<span class="unseen">${column.says ?? "of"}</span>` : column.head}</th>`,
              )}
            </tr>
          </thead>
          <tbody>
            ${block.rows.map(
              (_, r) =>
                html`<tr>
                  ${columns.map((column, c) =>
                    c === 0 && column.align === "text"
                      ? html`<th scope="row">${column.cells[r]}</th>`
                      : html`<td class=${column.align}>${column.cells[r]}</td>`,
                  )}
                </tr>`,
            )}
          </tbody>
        </table>
      </div>
      <div class="asks">
        <button class="small-button" @click=${() => this.#copy(block)}>copy</button
        ><button class="small-button" aria-pressed=${this.full} @click=${() => this.#turn()}>${this.full ? "fewer digits" : "every digit"}</button>
        <span class="quiet" role="status">${this.said ?? ""}</span>
      </div></div>`
  }

  readonly #unfold = (event: Event): void => {
    this.unfolded = (event.currentTarget as HTMLDetailsElement).open
  }

  #turn(): void {
    this.full = !this.full
    this.said = null
  }

  async #copy(block: TableBlock): Promise<void> {
    try {
      await navigator.clipboard.writeText(tableText(block))
      this.said = "copied, with every digit"
    } catch {
      this.said = "the browser did not allow copying"
    }
    this.dispatchEvent(new SayEvent(this.said))
  }
}

interface ColumnSet {
  readonly align: TableColumn["align"]
  readonly cells: readonly (TemplateResult | string)[]
}

/** The entries of a column, numbers split at the point so that it stands in one line down the page. */
function columnSet(column: TableColumn, entries: readonly TableEntry[], full: boolean): ColumnSet {
  const texts = entries.map((entry) => entryText(entry, full))
  if (column.align === "text") return { align: "text", cells: texts.map((text) => text ?? missing) }
  const halves = texts.map((text) => atPoint(text ?? ""))
  const after = Math.max(0, ...halves.map((half) => half.after.length))
  return {
    align: "number",
    cells: entries.map((entry, r) => {
      const text = texts[r]
      if (text === null || text === undefined) return missing
      const half = halves[r]
      const whole = entry !== null && typeof entry === "object" && "value" in entry ? writtenInFull(entry.value) : null
      const { before, after: rest } =
        half?.before === text && half.after === "" ? { before: text, after: "" } : (half ?? { before: text, after: "" })
      // A point is about half a figure wide; without one the place of the decimals stays empty.
      const room = after === 0 ? 0 : after - 0.5
      return html`<span title=${whole ?? nothing}>${before}${after === 0 ? rest : html`<span class="after" .style=${`width:${room}ch`}>${rest}</span>`}</span>`
    }),
  }
}

const missing = html`<span class="absent" aria-label="not available">${absent}</span>`

function entryText(entry: TableEntry, full: boolean): string | null {
  if (entry === null) return null
  if (typeof entry === "string") return entry
  if ("value" in entry) {
    if (Number.isNaN(entry.value)) return null
    return full ? writtenInFull(entry.value) : written(entry.value, entry.digits)
  }
  if (Number.isNaN(entry.from) && Number.isNaN(entry.to)) return null
  return full ? `${writtenInFull(entry.from)} to ${writtenInFull(entry.to)}` : writtenRange(entry.from, entry.to, entry.digits)
}

/** The table as tab-separated text: every digit, an interval in two columns, so that a spreadsheet takes it as it is. */
export function tableText(block: TableBlock): string {
  const wide = block.columns.map((_, c) => block.rows.some((row) => isInterval(row[c] ?? null)))
  const head = block.columns.flatMap((column, c) => (wide[c] ? [`${column.head} from`, `${column.head} to`] : [column.head]))
  const rows = block.rows.map((row) =>
    row.flatMap((entry, c) => {
      if (entry === null) return wide[c] ? ["", ""] : [""]
      if (typeof entry === "string") return wide[c] ? [entry, ""] : [entry]
      if ("value" in entry) return wide[c] ? [plain(entry.value), ""] : [plain(entry.value)]
      return [plain(entry.from), plain(entry.to)]
    }),
  )
  return [head, ...rows].map((cells) => cells.map((cell) => cell.replaceAll(/[\t\n\r]+/g, " ")).join("\t")).join("\n")
}

const isInterval = (entry: TableEntry): boolean => entry !== null && typeof entry === "object" && "from" in entry

customElements.define("etamu-table", TableElement)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-table": TableElement
  }
}
