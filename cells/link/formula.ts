// A formula of a link as it is drawn and as it is said: quotients as fractions, powers raised, Greek letters for mu, eta and pi.

import type { Formula } from "../figure/formula.ts"
import { type Expression, printed } from "../language/expression.ts"

/** The expression as text with the signs of mathematics: `ln(μ/(1 − μ))`. */
export const formulaText = (expression: Expression): string => asText(printed(expression))

/** A text of the language with the signs of mathematics. */
export const asText = (text: string): string =>
  text
    .replace(/\bmu\b/g, "μ")
    .replace(/\beta\b/g, "η")
    .replace(/\bpi\b/g, "π")
    .replace(/\blog\(/g, "ln(")
    .replace(/\bnormal_quantile\(/g, "Φ⁻¹(")
    .replace(/\bnormal_cdf\(/g, "Φ(")
    .replace(/\bsquare_root\(/g, "√(")
    .replaceAll("*", "·")
    .replaceAll("-", "−")

/** The expression as a formula tree. */
export function formulaOf(expression: Expression): Formula {
  switch (expression.type) {
    case "number":
      return expression.text === "pi" ? name("π") : { type: "number", text: expression.text }
    case "name":
      return expression.name === "mu" ? name("μ") : expression.name === "eta" ? name("η") : word(expression.name)
    case "minus":
      return row(sign("−"), binds(expression.of) < bindings.times ? bracket(formulaOf(expression.of)) : formulaOf(expression.of))
    case "pair":
      return pair(expression)
    case "call":
      return called(expression)
    default:
      return word(printed(expression))
  }
}

const bindings = { plus: 1, times: 2, power: 3, whole: 4 } as const

/** How tightly a part holds together on the page: a fraction or a root needs no brackets. */
function binds(expression: Expression): number {
  if (expression.type === "minus") return bindings.plus
  if (expression.type !== "pair") return bindings.whole
  if (expression.sign === "+" || expression.sign === "-") return bindings.plus
  if (expression.sign === "*") return bindings.times
  return expression.sign === "/" ? bindings.times : bindings.power
}

function pair({ sign: says, left, right }: Expression & { readonly type: "pair" }): Formula {
  const within = (part: Expression, least: number): Formula => (binds(part) < least ? bracket(formulaOf(part)) : formulaOf(part))
  switch (says) {
    case "/":
      return { type: "fraction", above: formulaOf(left), below: formulaOf(right) }
    case "^":
      return { type: "power", base: within(left, bindings.whole), with: formulaOf(right) }
    case "*":
      return row(within(left, bindings.times), sign("·"), within(right, bindings.times))
    case "-":
      return row(formulaOf(left), sign("−"), within(right, bindings.times))
    default:
      return row(formulaOf(left), sign(signs[says] ?? says), formulaOf(right))
  }
}

const signs: Readonly<Record<string, string>> = { "<=": "≤", ">=": "≥", "!=": "≠" }

const functionWords: Readonly<Record<string, string>> = { log: "ln", normal_cdf: "Φ", normal_quantile: "Φ⁻¹" }

function called({ name: says, of }: Expression & { readonly type: "call" }): Formula {
  const [first] = of
  if (first === undefined) return word(says)
  if (says === "square_root") return { type: "root", of: formulaOf(first) }
  if (says === "exp") return { type: "power", base: name("e"), with: formulaOf(first) }
  const inside = of.map(formulaOf).flatMap((each, k) => (k === 0 ? [each] : [sign(","), each]))
  return row(word(functionWords[says] ?? says), bracket(row(...inside)))
}

const row = (...of: readonly Formula[]): Formula => ({ type: "row", of })
const name = (text: string): Formula => ({ type: "name", text })
const word = (text: string): Formula => ({ type: "word", text })
const sign = (text: string): Formula => ({ type: "sign", text })
const bracket = (of: Formula): Formula => ({ type: "bracket", of })
