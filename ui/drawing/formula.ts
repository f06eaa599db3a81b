// Formulas for every face: as a tree of MathML elements for page and report, and as one line of text for the terminal and for copying.
// Symbols lean and words stand upright, as mathematics is set.

import type { Formula } from "../../cells/figure/formula.ts"

/** One MathML element; leaves have text. `upright` for names of more than one letter that are words. */
export type MathElement =
  | { readonly tag: "mi"; readonly text: string; readonly upright: boolean }
  | { readonly tag: "mn" | "mo"; readonly text: string }
  | { readonly tag: "mrow" | "msub" | "msup" | "mfrac" | "msqrt"; readonly of: readonly MathElement[] }

export function mathOf(formula: Formula): MathElement {
  switch (formula.type) {
    case "row":
      return { tag: "mrow", of: formula.of.map(mathOf) }
    case "name":
      return { tag: "mi", text: formula.text, upright: false }
    case "word":
      return { tag: "mi", text: formula.text, upright: true }
    case "number":
      return { tag: "mn", text: formula.text }
    case "sign":
      return { tag: "mo", text: formula.text }
    case "sub":
      return { tag: "msub", of: [mathOf(formula.base), mathOf(formula.with)] }
    case "power":
      return { tag: "msup", of: [mathOf(formula.base), mathOf(formula.with)] }
    case "fraction":
      return { tag: "mfrac", of: [mathOf(formula.above), mathOf(formula.below)] }
    case "root":
      return { tag: "msqrt", of: [mathOf(formula.of)] }
    case "bracket":
      return { tag: "mrow", of: [{ tag: "mo", text: "(" }, mathOf(formula.of), { tag: "mo", text: ")" }] }
    default: {
      const never: never = formula
      return never
    }
  }
}

/** The formula in one line: `ln(−ln(1 − μ)) = β₀ + β₁ night`. */
export function formulaText(formula: Formula): string {
  switch (formula.type) {
    case "row":
      return rowText(formula.of)
    case "name":
    case "word":
    case "number":
    case "sign":
      return formula.text
    case "sub":
      return formulaText(formula.base) + small(formulaText(formula.with), LOWERED, "_")
    case "power":
      return formulaText(formula.base) + small(formulaText(formula.with), RAISED, "^")
    case "fraction":
      return `${together(formula.above)}/${together(formula.below)}`
    case "root":
      return `√(${formulaText(formula.of)})`
    case "bracket":
      return `(${formulaText(formula.of)})`
    default: {
      const never: never = formula
      return never
    }
  }
}

const isBinary = (formula: Formula | undefined): boolean => formula?.type === "sign" && /^[=+−·×<>≤≥~]$/u.test(formula.text)
const isOperand = (formula: Formula | undefined): boolean => formula !== undefined && formula.type !== "sign"

/** Signs between two operands get room on both sides; neighbours that would run together get a space. */
function rowText(parts: readonly Formula[]): string {
  let text = ""
  parts.forEach((part, i) => {
    const before = parts[i - 1]
    const between = isBinary(part) && i > 0 && !isBinary(before)
    const afterSign = isBinary(before) && i > 1 && !isBinary(parts[i - 2])
    const runsOn = isOperand(before) && isOperand(part) && part.type !== "bracket" && before?.type !== "bracket"
    text += (between || afterSign || runsOn ? " " : "") + formulaText(part)
  })
  return text
}

/** In brackets unless it is a single thing. */
const together = (formula: Formula): string => {
  const text = formulaText(formula)
  return formula.type === "row" && formula.of.length > 1 ? `(${text})` : text
}

const LOWERED: Readonly<Record<string, string>> = Object.fromEntries(
  [..."0123456789+−"].map((sign, i) => [sign, [..."₀₁₂₃₄₅₆₇₈₉₊₋"][i] ?? sign]),
)
const RAISED: Readonly<Record<string, string>> = Object.fromEntries(
  [..."0123456789+−"].map((sign, i) => [sign, [..."⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻"][i] ?? sign]),
)

/** Small figures where every sign has one, else the mark and brackets. */
function small(text: string, signs: Readonly<Record<string, string>>, mark: string): string {
  const found = [...text].map((sign) => signs[sign])
  if (found.every((sign) => sign !== undefined)) return found.join("")
  return [...text].length === 1 ? mark + text : `${mark}(${text})`
}
