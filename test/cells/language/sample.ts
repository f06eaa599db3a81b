// Expressions at random for the laws of the language, and the reading of one from text.

import fc from "fast-check"
import type { Expression } from "../../../cells/language/expression.ts"
import { expressionFrom } from "../../../cells/language/expression-tree.ts"
import { read } from "../../../runtime/statement.ts"

export const expressionOf = (text: string): Expression => {
  const { expression, slips } = expressionFrom(read(`value v = ${text}`).rest.slice(1), -1, 4, new Set(["mu", "models"]))
  if (expression === null) throw new Error(`${text}: ${slips.map((slip) => slip.text).join(" ")}`)
  return expression
}

const at = { clause: 0, from: 0, to: 0 }
const number = fc.constantFrom("0", "1", "2", "0.5", "1e-3", "95%", "pi").map((text): Expression => expressionOf(text))
const name = fc.constantFrom("x", "y", "lot", "été").map((text): Expression => ({ type: "name", name: text, at }))

/** Any tree that a text can have. */
export const anyExpression: fc.Arbitrary<Expression> = fc.letrec<{ whole: Expression }>((tie) => ({
  whole: fc.oneof(
    { maxDepth: 6, depthSize: "medium" },
    number,
    name,
    fc.constantFrom("a", 'b "c" \\ d').map((text): Expression => ({ type: "text", text, at })),
    fc.boolean().map((value): Expression => ({ type: "truth", value, at })),
    tie("whole").map((of): Expression => ({ type: "minus", of, at })),
    tie("whole").map((of): Expression => ({ type: "not", of, at })),
    fc
      .tuple(fc.constantFrom("+", "-", "*", "/", "^", "=", "!=", "<", "<=", ">", ">=", "and", "or"), tie("whole"), tie("whole"))
      .map(([sign, left, right]): Expression => ({ type: "pair", sign, left, right, at })),
    fc
      .tuple(tie("whole"), fc.array(tie("whole"), { minLength: 1, maxLength: 3 }))
      .map(([of, list]): Expression => ({ type: "in", of, list, at })),
    tie("whole").map((of): Expression => ({ type: "call", name: "log", of: [of], at })),
    fc.tuple(tie("whole"), tie("whole"), tie("whole")).map((of): Expression => ({ type: "call", name: "if", of, at })),
  ),
})).whole

/** A tree without its places, to compare two readings. */
export const shape = (expression: Expression): unknown =>
  JSON.parse(JSON.stringify(expression, (key, value) => (key === "at" ? undefined : value)))
