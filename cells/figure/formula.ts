// Formulas as plain data: a small tree that every face turns into its own notation (MathML on the page and in the report, text in the
// terminal). It knows nothing of what the symbols mean.

export type Formula =
  | { readonly type: "row"; readonly of: readonly Formula[] }
  | { readonly type: "name"; readonly text: string }
  /** Upright text, such as a column's name or a function's. */
  | { readonly type: "word"; readonly text: string }
  | { readonly type: "number"; readonly text: string }
  | { readonly type: "sign"; readonly text: string }
  | { readonly type: "sub" | "power"; readonly base: Formula; readonly with: Formula }
  | { readonly type: "fraction"; readonly above: Formula; readonly below: Formula }
  | { readonly type: "root"; readonly of: Formula }
  | { readonly type: "bracket"; readonly of: Formula }
