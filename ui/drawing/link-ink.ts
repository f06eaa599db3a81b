// Which colour and which dash a link is drawn in: the same one wherever it appears in a notebook, so that it is known again. Colours are
// places in Okabe & Ito's palette (2008), told by number; dashes tell links apart without colour. A link not in the table gets its place
// from its name, so that it is the same on every machine.

export interface LinkInk {
  /** 1 to 8: the custom properties --link-1 … --link-8. */
  readonly colour: number
  /** A stroke-dasharray for a line two pixels wide; empty for an unbroken line. */
  readonly dash: string
}

const TABLE: Readonly<Record<string, LinkInk>> = {
  logit: { colour: 1, dash: "" },
  probit: { colour: 2, dash: "7 4" },
  cloglog: { colour: 3, dash: "14 3" },
  loglog: { colour: 4, dash: "2 3.5" },
  cauchit: { colour: 5, dash: "9 3 2 3" },
  identity: { colour: 8, dash: "5 3" },
  log: { colour: 6, dash: "18 3" },
  square_root: { colour: 7, dash: "9 3 2 3 2 3" },
  reciprocal: { colour: 3, dash: "4 2.5" },
  reciprocal_square: { colour: 4, dash: "12 3 4 3" },
  log_complement: { colour: 7, dash: "3 3" },
  power: { colour: 2, dash: "2 2 7 2" },
  box_cox: { colour: 5, dash: "16 3 2 3" },
  aranda_ordaz: { colour: 8, dash: "10 4" },
  symmetric_power: { colour: 6, dash: "2 4" },
  stukel: { colour: 4, dash: "6 2 2 2" },
}

const SPARE_DASHES = ["8 3", "3 2.5", "11 3 3 3", "5 2 1.5 2"] as const

/** The ink of a link as a `link` clause says it; `power(0.3)` has that of `power`. */
export function linkInk(link: string): LinkInk {
  const name = link.replace(/\(.*$/s, "").trim()
  const known = TABLE[name]
  if (known !== undefined) return known
  let sum = 0
  for (const sign of name) sum = (sum * 31 + (sign.codePointAt(0) ?? 0)) % 9973
  return { colour: 1 + (sum % 8), dash: SPARE_DASHES[Math.floor(sum / 8) % SPARE_DASHES.length] ?? "8 3" }
}

/** The dash as a word of a role, such as `dash-14-3`: roles hold no styles, ink.ts has a rule for each. */
export const dashRole = (dash: string): string => (dash === "" ? "dash-none" : `dash-${dash.replaceAll(".", "_").replaceAll(" ", "-")}`)

/** The role words that give a mark the colour and dash of a link. */
export const linkRole = (link: string): string => {
  const ink = linkInk(link)
  return `link-${ink.colour} ${dashRole(ink.dash)}`
}

/** Every dash there is, for the rules that draw them. */
export const allDashes: readonly string[] = [...new Set([...Object.values(TABLE).map((ink) => ink.dash), ...SPARE_DASHES])]
