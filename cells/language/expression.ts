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
export type Scalar = { readonly type: "number" | "truth" | "date"; readonly value: number } | { readonly type: "text"; readonly text: string } | { readonly type: "missing" }

/** Why an expression has no value: to be made into a notice by the kind. `at` is the part at fault. */
export type Trouble = { readonly at: Place; readonly text: string; readonly hint: string | null; readonly code: string }

export type Evaluated =
  | { readonly ok: true; readonly vector: Vector | Scalar; /** Rows where present values gave NaN or an infinity. */ readonly lost: number }
  | { readonly ok: false; readonly troubles: readonly Trouble[] }

/** Every bare name, with its place, each once. */
export declare function namesIn(expression: Expression): readonly { readonly name: Name; readonly at: Place }[]
/** Evaluates over `rows` rows. `lookup` gives a column or a single value for a name, null where there is none. */
export declare function evaluated(expression: Expression, rows: number, lookup: (name: Name) => Vector | Scalar | null): Evaluated
/** The derivative with respect to `name`, simplified; null where a part has no derivative (`round`, `abs`, a comparison outside `if`). */
export declare function derivative(expression: Expression, name: Name): Expression | null
/** Text that reads back as the same tree. */
export declare function printed(expression: Expression): string
