// How the roles of a scene look, as rules over custom properties: one sheet for the page and the report, in light, dark and print. The
// properties themselves (--paper, --ink, --soft, --line, --tint, --accent, --link-1 … --link-8) come from whoever shows the scene.

import { DOT_SIZES, dotWidth } from "./curve.ts"
import { allDashes, dashRole } from "./link-ink.ts"

const dashes = allDashes
  .filter((dash) => dash !== "")
  .map((dash) => `.${dashRole(dash)} { stroke-dasharray: ${dash}; }`)
  .join("\n")

const dots = Array.from({ length: DOT_SIZES }, (_, i) => `.dot-${i + 1} { stroke-width: ${dotWidth(i + 1)}; }`).join("\n")

const links = [1, 2, 3, 4, 5, 6, 7, 8].map((colour) => `.link-${colour} { --link: var(--link-${colour}); }`).join("\n")

/** The sheet, to be put inside whatever holds the drawing. */
export const inkRules = `
${links}
.scene { display: block; overflow: visible; font-family: var(--text-face, system-ui, "DejaVu Sans", sans-serif); }
.scene text { fill: var(--soft); stroke: none; font-variant-numeric: tabular-nums; }
.scene .ink { fill: var(--ink); }
.scene .title { fill: var(--ink); font-family: var(--title-face, Georgia, "DejaVu Serif", serif); font-style: italic; }
.scene .symbol { font-family: var(--title-face, Georgia, "DejaVu Serif", serif); font-style: italic; }
.scene .lit-text { fill: var(--ink); font-weight: 600; }
.scene .halo { paint-order: stroke; stroke: var(--paper); stroke-width: 4px; stroke-linejoin: round; }
.scene path { fill: none; stroke: none; }
.scene .frame { fill: none; stroke: var(--rule); stroke-width: 1; }
.scene .tick { stroke: var(--rule); stroke-width: 1; }
.scene .guide { stroke: var(--line); stroke-width: 1; }
.scene .end-of-range { stroke: var(--rule); stroke-width: 1; }
.scene .beyond-data { fill: var(--shade); stroke: none; }
.scene .hatch { stroke: var(--hatch); stroke-width: 1; }
.scene .band { fill: var(--link); fill-opacity: 0.16; }
.scene .band.of-split { fill-opacity: 0.1; }
.scene .band.link-8 { fill-opacity: 0.09; }
.scene .band.beyond { fill-opacity: 0.1; }
.scene .band.ghost { fill-opacity: 0.1; }
.scene .curve { stroke: var(--link); stroke-width: 1.1; stroke-opacity: 0.75; stroke-linejoin: round; }
.scene .curve.beyond { stroke-opacity: 0.45; }
.scene .curve.chosen { stroke-width: 2.5; stroke-opacity: 1; }
.scene .curve.chosen.beyond { stroke-width: 1.75; stroke-opacity: 0.75; }
.scene .curve.ghost { stroke-width: 2; stroke-opacity: 1; }
.scene .curve.ghost.beyond { stroke-width: 1.5; stroke-opacity: 0.6; }
.scene .curve-end { stroke: var(--link); stroke-width: 2; fill: var(--paper); }
.scene .bar { stroke: var(--link); stroke-width: 2; }
.scene .bar.others, .scene .fitted.others { stroke-width: 1.25; }
.scene .fitted { fill: var(--link); stroke: var(--link); }
.scene .point { fill: var(--paper); stroke: var(--ink); stroke-width: 1.4; }
.scene .point.many { fill: var(--ink); fill-opacity: 0.34; stroke: none; }
.scene .dots { stroke: var(--ink); stroke-opacity: 0.3; stroke-linecap: round; }
.scene .dots.held-back { stroke-opacity: 0.2; }
.scene .dots.of-series, .scene .dots.ghost { stroke: var(--link); }
.scene .point.ghost { fill: none; stroke: var(--link); stroke-width: 1.2; }
.scene .point.off { fill: var(--soft); stroke: none; }
.scene .point.off.ghost { fill: var(--link); }
.scene .bars { fill: var(--tint); stroke: var(--rule); stroke-width: 1; }
.scene .hair { stroke: var(--link); stroke-width: 1; stroke-opacity: 0.22; }
.scene .join { stroke: var(--link); stroke-width: 1.25; stroke-opacity: 0.85; }
.scene .knot { fill: var(--link); }
.scene .lit-knot { fill: var(--ink); }
.scene .plate { fill: var(--paper); }
.scene .join.ghost, .scene .hair.ghost { stroke-opacity: 0.8; stroke-width: 1.25; }
.scene .used { fill: var(--link); fill-opacity: 0.09; }
.scene .held-back { opacity: 0.45; }
.scene .pointer { stroke: var(--ink); stroke-width: 1; stroke-dasharray: 1.5 3; }
.scene .lit { stroke: var(--ink); stroke-width: 1.75; }
.scene .lit-interval { stroke: var(--ink); stroke-width: 5; stroke-opacity: 0.3; stroke-linecap: butt; }
.scene .lit-band { fill: var(--ink); fill-opacity: 0.12; }
.scene .lit-point { fill: var(--ink); stroke: var(--paper); stroke-width: 1.5; }
.scene .series-0 { --link: var(--link-1); }
.scene .series-1 { --link: var(--link-3); }
.scene .series-2 { --link: var(--link-2); }
.scene .series-3 { --link: var(--link-4); }
.scene .series-4 { --link: var(--link-5); }
.scene .series-5 { --link: var(--link-8); }
.scene .point.of-series { stroke: var(--link); }
.scene .point.many.of-series { fill: var(--link); stroke: none; }
.scene .level-1 { --mix: 35%; }
.scene .level-2 { --mix: 62%; }
.scene .level-3 { --mix: 18%; }
.scene .level-4 { --mix: 48%; }
.scene .level-5 { --mix: 74%; }
.scene .curve.level-1, .scene .curve.level-2, .scene .curve.level-3, .scene .curve.level-4, .scene .curve.level-5,
.scene .bar.level-1, .scene .bar.level-2, .scene .bar.level-3, .scene .bar.level-4, .scene .bar.level-5 {
  stroke: color-mix(in oklab, var(--ink) var(--mix), var(--link));
}
${dots}
.dash-none { stroke-dasharray: none; }
${dashes}
.scene .solid { stroke-dasharray: none; }
`
