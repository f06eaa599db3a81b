// Every notice a value can give beside those of its expression.

import type { Notice, Place } from "../../runtime/notice.ts"
import type { Trouble } from "../language/expression.ts"

export const noValue = (name: string, at: Place): Notice => ({
  level: "fault",
  code: "value/missing",
  text: `${name} comes out missing.`,
  hint: "A part of it is missing, or has no number there, such as the logarithm of 0.",
  clause: null,
  at,
  mend: null,
})

export const heldByDefault = (trouble: Trouble): Notice => ({ level: "remark", clause: null, mend: null, ...trouble })
