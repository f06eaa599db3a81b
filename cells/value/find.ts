// What a value is worth.

import type { Input, Outcome } from "../../runtime/kind.ts"
import type { Name } from "../../runtime/value.ts"
import { faultFrom, warningFrom } from "../language/slip.ts"
import { worthOf } from "../model-number.ts"
import * as say from "./notices.ts"
import type { ValueSaid } from "./words.ts"

/** The value itself, so that its readers run again only when it changes. */
export type ValueFinding = number | boolean | string

export function found(said: ValueSaid, inputs: ReadonlyMap<Name, Input>): Outcome<ValueFinding> {
  const { name, expression } = said
  if (expression === null) return { ok: false, found: null, notices: [] }
  const result = worthOf(expression, inputs)
  if (!result.ok) return { ok: false, found: null, notices: result.troubles.map((trouble) => faultFrom(trouble, null)) }
  const { value, held, doubts } = result
  const notices = [...held.map(say.heldByDefault), ...doubts.map((doubt) => warningFrom(doubt, null))]
  if (value.type === "text") return { ok: true, found: value.text, notices }
  if (value.type === "missing" || Number.isNaN(value.value))
    return { ok: false, found: null, notices: [...notices, say.noValue(name ?? "This value", expression.at)] }
  return { ok: true, found: value.type === "truth" ? value.value === 1 : value.value, notices }
}
