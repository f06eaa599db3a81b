// A note: CommonMark read into tokens and each token drawn by a template, so that no text of a notebook ever becomes markup. What is
// written as HTML is shown as it is written; links lead out only by http, https and mailto; pictures are named, not fetched.

import { css, html, LitElement, type TemplateResult } from "lit"
import { marked, type Token, type Tokens } from "marked"
import type { ProseBlock } from "../../../cells/block.ts"
import { blockStyles } from "./look.ts"

type Drawn = TemplateResult | string | readonly Drawn[]

export class ProseElement extends LitElement {
  static override properties = { block: { attribute: false } }
  declare block: ProseBlock | null

  static override styles = [
    blockStyles,
    css`
      :host {
        max-width: 68ch;
        font-size: 15px;
        line-height: 1.55;
        overflow-wrap: break-word;
      }
      h2,
      h3,
      h4 {
        font-family: var(--title-face);
        font-weight: 600;
        line-height: 1.25;
        margin: 0.9em 0 0.35em;
      }
      h2 {
        font-size: 20px;
      }
      h3 {
        font-size: 17px;
      }
      h4 {
        font-size: 15px;
      }
      p,
      ul,
      ol,
      pre,
      blockquote,
      .scroll {
        margin: 0.55em 0;
      }
      :host > :first-child {
        margin-top: 0;
      }
      :host > :last-child {
        margin-bottom: 0;
      }
      ul,
      ol {
        padding-left: 1.4em;
      }
      li > p {
        margin: 0.2em 0;
      }
      code,
      pre {
        font-family: var(--mono-face);
        font-size: 0.88em;
      }
      pre {
        overflow-x: auto;
        padding: 8px 12px;
        background: var(--tint);
      }
      blockquote {
        padding-left: 14px;
        border-left: 2px solid var(--line);
        color: var(--soft);
        margin-inline: 0;
      }
      a {
        color: var(--accent);
        text-underline-offset: 2px;
      }
      hr {
        border: none;
        border-top: 1px solid var(--line);
        margin: 1em 0;
      }
      .scroll {
        overflow-x: auto;
      }
      table {
        border-collapse: collapse;
        font-size: 13.5px;
      }
      th,
      td {
        padding: 2px 18px 2px 0;
        text-align: left;
        font-weight: 400;
      }
      th {
        color: var(--soft);
        border-bottom: 1px solid var(--line);
      }
      .right {
        text-align: right;
        font-variant-numeric: tabular-nums;
      }
      .center {
        text-align: center;
      }
    `,
  ]

  constructor() {
    super()
    this.block = null
  }

  protected override render(): Drawn | null {
    return this.block === null ? null : drawnAll(marked.lexer(this.block.markdown))
  }
}

const drawnAll = (tokens: readonly Token[] | undefined): Drawn => (tokens ?? []).map(drawnToken)

/** The text of a token that has no template: shown as it stands. */
const bare = (token: Token): string => unescaped("text" in token && typeof token.text === "string" ? token.text : token.raw)

function drawnToken(token: Token): Drawn {
  switch (token.type) {
    case "space":
    case "def":
      return ""
    case "heading":
      return heading(token as Tokens.Heading)
    case "paragraph":
      return html`<p>${drawnAll(token.tokens)}</p>`
    case "text":
      return token.tokens === undefined ? bare(token) : drawnAll(token.tokens)
    case "escape":
      return bare(token)
    case "strong":
      return html`<strong>${drawnAll(token.tokens)}</strong>`
    case "em":
      return html`<em>${drawnAll(token.tokens)}</em>`
    case "del":
      return html`<del>${drawnAll(token.tokens)}</del>`
    case "codespan":
      return html`<code>${bare(token)}</code>`
    case "code":
      return html`<pre><code>${(token as Tokens.Code).text}</code></pre>`
    case "br":
      return html`<br />`
    case "hr":
      return html`<hr />`
    case "blockquote":
      return html`<blockquote>${drawnAll(token.tokens)}</blockquote>`
    case "list":
      return list(token as Tokens.List)
    case "link":
      return link(token as Tokens.Link)
    case "image":
      return html`<em>[picture: ${(token as Tokens.Image).text || (token as Tokens.Image).href}]</em>`
    case "table":
      return table(token as Tokens.Table)
    default:
      return token.raw
  }
}

/** The page has the one title; a note's headings start below it. */
function heading(token: Tokens.Heading): TemplateResult {
  const inside = drawnAll(token.tokens)
  if (token.depth <= 1) return html`<h2>${inside}</h2>`
  return token.depth === 2 ? html`<h3>${inside}</h3>` : html`<h4>${inside}</h4>`
}

function list(token: Tokens.List): TemplateResult {
  const items = token.items.map(
    (item) =>
      html`<li>${item.task ? html`<span aria-label=${item.checked ? "done" : "to do"}>${item.checked ? "☑ " : "☐ "}</span>` : null}${drawnAll(item.tokens)}</li>`,
  )
  return token.ordered ? html`<ol start=${token.start === "" ? 1 : token.start}>${items}</ol>` : html`<ul>${items}</ul>`
}

/** Only addresses that open a page or a letter; anything else is shown as text, with the address after it. */
function link(token: Tokens.Link): Drawn {
  const inside = drawnAll(token.tokens)
  return safeAddress(token.href)
    ? html`<a href=${token.href} rel="noreferrer noopener" target="_blank">${inside}</a>`
    : html`${inside} (${token.href})`
}

/** Whether an address is http, https or mailto. */
export const safeAddress = (href: string): boolean => /^(https?:\/\/|mailto:)/i.test(href.trim())

function table(token: Tokens.Table): TemplateResult {
  const side = (c: number): string => token.align[c] ?? "left"
  return html`<div class="scroll">
    <table>
      <thead>
        <tr>
          ${token.header.map((cell, c) => html`<th scope="col" class=${side(c)}>${drawnAll(cell.tokens)}</th>`)}
        </tr>
      </thead>
      <tbody>
        ${token.rows.map((row) => html`<tr>${row.map((cell, c) => html`<td class=${side(c)}>${drawnAll(cell.tokens)}</td>`)}</tr>`)}
      </tbody>
    </table>
  </div>`
}

const ENTITIES: Readonly<Record<string, string>> = {
  "&amp;": "&",
  "&lt;": "<",
  "&gt;": ">",
  "&quot;": '"',
  "&#39;": "'",
  "&nbsp;": "\u00a0",
}

/** The few entities that are written by hand in notes; lit escapes by itself. */
const unescaped = (text: string): string => text.replace(/&(?:amp|lt|gt|quot|#39|nbsp);/g, (entity) => ENTITIES[entity] ?? entity)

customElements.define("etamu-prose", ProseElement)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-prose": ProseElement
  }
}
