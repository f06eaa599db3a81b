// Expressions: text to tree, tree to columns, derivative and text. The evaluator is total: it ends, and it has no side effect. A missing
// value is NaN in numbers and truths; what makes NaN or an infinity out of present values gives missing, and is counted.

import type { Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"

export type Operator = "+" | "-" | "*" | "/" | "^" | "=" | "!=" | "<" | "<=" | ">" | ">=" | "and" | "or"

/** Plain data; `at` counts tokens of the clause it stands in. */
export type Expression = { readonly at: Place } & (
  | { readonly type: "number"; readonly value: number; readonly text: string }
  | { readonly type: "text"; readonly text: string }
  | { readonly type: "truth"; readonly value: boolean }
  | { readonly type: "missing" }
  | { readonly type: "name"; readonly name: Name }
  | { readonly type: "minus" | "not"; readonly of: Expression }
  | { readonly type: "pair"; readonly sign: Operator; readonly left: Expression; readonly right: Expression }
  | { readonly type: "in"; readonly of: Expression; readonly list: readonly Expression[] }
  | { readonly type: "call"; readonly name: string; readonly of: readonly Expression[] }
)

/** A column or a single value that an expression reads or gives. Numbers and dates use NaN for missing; truths are 0, 1 and NaN. */
export type Vector =
  | { readonly type: "number" | "truth" | "date"; readonly values: Float64Array }
  | { readonly type: "category"; readonly codes: Int32Array; readonly levels: readonly string[] }
/** A value that is the same in every row. */
export type Scalar =
  | { readonly type: "number" | "truth" | "date"; readonly value: number }
  | { readonly type: "text"; readonly text: string }
  | { readonly type: "missing" }

/** Why an expression has no value: to be made into a notice by the kind. `at` is the part at fault. */
export type Trouble = { readonly at: Place; readonly text: string; readonly hint: string | null; readonly code: string }

/** Every bare name, with its place, each once. The name left of `=` in `mean_at` is a column of the model's data, and not among them. */
export function namesIn(expression: Expression): readonly { readonly name: Name; readonly at: Place }[] {
  const found = new Map<Name, Place>()
  const visit = (part: Expression): void => {
    if (part.type === "name" && !found.has(part.name)) found.set(part.name, part.at)
    for (const child of partsOf(part)) visit(part.type === "call" && part.name === "mean_at" ? heldAt(child) : child)
  }
  visit(expression)
  return Array.from(found, ([name, at]) => ({ name, at }))
}

/** The expressions an expression is made of, in the order written. */
export function partsOf(expression: Expression): readonly Expression[] {
  switch (expression.type) {
    case "minus":
    case "not":
      return [expression.of]
    case "pair":
      return [expression.left, expression.right]
    case "in":
      return [expression.of, ...expression.list]
    case "call":
      return expression.of
    default:
      return []
  }
}

/** Text that reads back as the same tree. */
export const printed = (expression: Expression): string => written(expression, 0)

/** In `mean_at(M, C = v)` the comparison means "C held at v". */
const heldAt = (part: Expression): Expression => (part.type === "pair" && part.sign === "=" ? part.right : part)

/** How tightly each sign binds, as in expression.grammar. */
const bindings: Readonly<Record<Operator, number>> = {
  or: 1,
  and: 2,
  "=": 4,
  "!=": 4,
  "<": 4,
  "<=": 4,
  ">": 4,
  ">=": 4,
  "+": 5,
  "-": 5,
  "*": 6,
  "/": 6,
  "^": 8,
}
const [bindingOfNot, bindingOfComparison, bindingOfSum, bindingOfMinus, bindingOfPower] = [3, 4, 5, 7, 8]

/** Brackets stand where the part binds less tightly than its place asks for. */
function written(part: Expression, asked: number): string {
  const bracketed = (binding: number, text: string): string => (binding < asked ? `(${text})` : text)
  switch (part.type) {
    case "number":
      return part.text
    case "text":
      return `"${part.text.replaceAll("\\", "\\\\").replaceAll('"', '\\"')}"`
    case "truth":
      return part.value ? "true" : "false"
    case "missing":
      return "missing"
    case "name":
      return part.name
    case "minus":
      return bracketed(bindingOfMinus, `-${written(part.of, bindingOfMinus)}`)
    case "not":
      return bracketed(bindingOfNot, `not ${written(part.of, bindingOfNot)}`)
    case "in":
      return bracketed(bindingOfComparison, `${written(part.of, bindingOfSum)} in (${part.list.map(printed).join(", ")})`)
    case "call":
      return `${part.name}(${part.of.map(printed).join(", ")})`
    case "pair": {
      const binding = bindings[part.sign]
      if (part.sign === "^") {
        // A minus may stand bare on the right of a power only: 2^-x, but (-x)^2.
        const right = part.right.type === "minus" ? bindingOfMinus : bindingOfPower
        return bracketed(binding, `${written(part.left, bindingOfPower + 1)}^${written(part.right, right)}`)
      }
      // A comparison does not chain, so both its sides bind more tightly; everything else groups to the left.
      const left = written(part.left, binding === bindingOfComparison ? bindingOfSum : binding)
      const right = written(part.right, binding + 1)
      const close = part.sign === "*" || part.sign === "/"
      return bracketed(binding, close ? `${left}${part.sign}${right}` : `${left} ${part.sign} ${right}`)
    }
  }
}
