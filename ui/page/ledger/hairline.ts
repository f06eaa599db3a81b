// The hairline between statement and finding: the state of a row as a form. Growing from the top while work proceeds, whole when ready, a gap
// at the height of the clause at fault, a ring at its end while it waits, dotted when off, broken off where the program itself failed.

import { svg, type TemplateResult } from "lit"
import type { Standing } from "./standing.ts"

/** Half the gap at a fault, in pixels. */
const gap = 9

/** Where a waiting line ends. */
const ringAt = 30

/** The line as SVG content, 13 wide and as high as the row. `at` are the heights of the clauses at fault. */
export function hairline(form: Standing["form"], at: readonly number[]): TemplateResult {
  switch (form) {
    case "ready":
      return svg`<line x1="6.5" x2="6.5" y1="0" y2="100%"/>`
    case "more":
      return svg`<line x1="6.5" x2="6.5" y1="0" y2="100%" class="track"/><line x1="6.5" x2="6.5" y1="0" y2="72%"/>`
    case "working":
      return svg`<line x1="6.5" x2="6.5" y1="0" y2="100%" class="track"/><line x1="6.5" x2="6.5" y1="0" y2="100%" class="grows" pathLength="1"/>`
    case "due":
    case "empty":
      return svg`<line x1="6.5" x2="6.5" y1="0" y2="100%" class="track"/>`
    case "off":
      return svg`<line x1="6.5" x2="6.5" y1="1" y2="100%" class="dots"/>`
    case "waiting":
      return svg`<line x1="6.5" x2="6.5" y1="0" y2=${ringAt - 5}/><circle cx="6.5" cy=${ringAt} r="4.5"/>`
    case "crash":
      return svg`<path d="M6.5 0V22L2 27L11 33L6.5 38"/>`
    case "fault":
      return svg`${pieces(at).map(
        ({ from, to }) => svg`<line x1="6.5" x2="6.5" y1=${from} y2=${to ?? "100%"}/>
          ${from > 0 ? svg`<line x1="2" x2="11" y1=${from} y2=${from}/>` : null}
          ${to === null ? null : svg`<line x1="2" x2="11" y1=${to} y2=${to}/>`}`,
      )}`
  }
}

/** What is left of the line between the gaps. */
function pieces(at: readonly number[]): readonly { readonly from: number; readonly to: number | null }[] {
  const sorted = [...new Set(at)].sort((one, other) => one - other)
  const found: { from: number; to: number | null }[] = []
  let from = 0
  for (const height of sorted) {
    if (height - gap > from) found.push({ from, to: height - gap })
    from = height + gap
  }
  return [...found, { from, to: null }]
}
