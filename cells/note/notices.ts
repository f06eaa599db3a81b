// Every notice a note can give. Places count from the start of its body.

import type { Notice, Place } from "../../runtime/notice.ts"
import type { Trouble } from "../language/expression.ts"

/** Where a mark stands. */
export const placeOf = ({ from, to }: { readonly from: number; readonly to: number }): Place => ({ clause: 0, from, to })

export const bracesAreText = (at: Place, why: string): Notice => ({
  level: "remark",
  code: "note/braces-are-text",
  text: `What stands in these braces is no expression, so it stays text. ${why}`.trim(),
  hint: "A live value is written {NAME} or {EXPR; 3}; a brace that is meant as text is written \\{.",
  clause: null,
  at,
  mend: null,
})

export const markTrouble = (trouble: Trouble, at: Place): Notice => ({
  level: "fault",
  code: trouble.code,
  text: trouble.text,
  hint: trouble.hint,
  clause: null,
  at,
  mend: null,
})

export const markHeld = (trouble: Trouble, at: Place): Notice => ({ ...markTrouble(trouble, at), level: "remark" })

export const markDoubt = (doubt: Trouble, at: Place): Notice => ({ ...markTrouble(doubt, at), level: "warning" })

export const markMissing = (says: string, at: Place): Notice => ({
  level: "warning",
  code: "note/missing",
  text: `{${says}} comes out missing.`,
  hint: "A part of it is missing, or has no number there, such as the logarithm of 0.",
  clause: null,
  at,
  mend: null,
})
