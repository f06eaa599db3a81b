// The words of a value: one number (or text, or truth) with a name, made of dials, other values and numbers of models.

import type { Words } from "../../runtime/kind.ts"
import type { Name } from "../../runtime/value.ts"
import type { Expression } from "../language/expression.ts"
import { readClauses } from "../language/form.ts"
import { usesOf } from "../model-uses.ts"

export type ValueSaid = { readonly name: Name | null; readonly expression: Expression | null }

export const valueWords: Words<ValueSaid> = {
  word: "value",
  name: "needed",
  says: "A number with a name, made of dials, other values and numbers of a model",
  example: "value v = 1",
  heading: { forms: ["= EXPR+models:value"], says: "What it is worth: an expression over dials, values and models" },
  clauses: {},
  parse(statement) {
    const { clauses, notices } = readClauses(statement, valueWords)
    const [filled] = clauses[0]?.slots["value"] ?? []
    return { said: { name: statement.name, expression: filled?.type === "EXPR" ? filled.expression : null }, notices }
  },
  names(said) {
    return { defines: said.name, uses: said.expression === null ? [] : usesOf(said.expression), files: [] }
  },
}
