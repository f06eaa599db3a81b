// The look that all blocks share: the colours of links in light and dark, and how text, buttons and figures are set. Okabe & Ito's palette
// (2008) is made for screens of one brightness; on paper its lighter colours are darkened until a line two pixels wide is seen at 3 : 1,
// on a dark page all are lightened until the same holds. The page gives --paper, --ink and their like, and the scheme they follow.

import { css, unsafeCSS } from "lit"
import { inkRules } from "../../drawing/ink.ts"

/** blue, bluish green, vermilion, reddish purple, orange, sky blue, yellow, black; each on light and on dark paper. */
export const linkColours: readonly (readonly [light: string, dark: string])[] = [
  ["#00639c", "#56a9e0"],
  ["#00805d", "#2fc49a"],
  ["#c2410c", "#f27f45"],
  ["#a04683", "#dd98c2"],
  ["#a36a00", "#e3a83c"],
  ["#3a86b8", "#93d2f5"],
  ["#77700a", "#e2d75b"],
  ["#3a3f45", "#d5d1c8"],
]

const colours = linkColours.map(([light, dark], i) => `--link-${i + 1}: light-dark(${light}, ${dark});`).join("\n  ")

/** Custom properties for whatever draws links or scenes. */
export const linkTokens = css`
  :host {
    ${unsafeCSS(colours)}
    --rule: color-mix(in oklab, var(--ink) 46%, var(--paper));
    --shade: color-mix(in oklab, var(--ink) 6%, var(--paper));
    --hatch: color-mix(in oklab, var(--ink) 30%, var(--paper));
  }
`

/** The sheet of a scene. */
export const sceneStyles = unsafeCSS(inkRules)

/** What every block starts from. */
export const blockStyles = css`
  :host {
    display: block;
    color: var(--ink);
    font-family: var(--text-face);
    font-size: 14px;
    line-height: 1.5;
    min-width: 0;
  }
  :host([hidden]) {
    display: none;
  }
  * {
    box-sizing: border-box;
  }
  button {
    font: inherit;
    color: inherit;
    cursor: pointer;
  }
  :focus-visible {
    outline: 2px solid var(--accent);
    outline-offset: 2px;
  }
  .quiet {
    color: var(--soft);
    font-size: 12.5px;
  }
  .unseen {
    position: absolute;
    width: 1px;
    height: 1px;
    margin: -1px;
    overflow: hidden;
    clip-path: inset(50%);
    white-space: nowrap;
  }
  .small-button {
    border: none;
    background: none;
    padding: 2px 4px;
    margin: 0 8px 0 -4px;
    min-height: 24px;
    font-size: 12px;
    color: var(--soft);
    text-decoration: underline;
    text-decoration-color: var(--line);
    text-underline-offset: 3px;
  }
  .small-button:hover {
    color: var(--ink);
    text-decoration-color: currentcolor;
  }
`
