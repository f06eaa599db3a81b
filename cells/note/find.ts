// What a note says once its marks are filled in.

import type { Input, Outcome } from "../../runtime/kind.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { absent, written, writtenInFull } from "../figure/number.ts"
import { printed, type Scalar } from "../language/expression.ts"
import { worthOf } from "../model-number.ts"
import type { Mark } from "./marks.ts"
import * as say from "./notices.ts"
import type { NoteSaid } from "./words.ts"

export type NoteFinding = {
  /** CommonMark, with the values in the place of the marks. */
  readonly markdown: string
  /** The value of each mark, in order; null where it is missing. */
  readonly values: readonly (number | string | boolean | null)[]
}

export function found({ body, marks }: NoteSaid, inputs: ReadonlyMap<Name, Input>): Outcome<NoteFinding> {
  const notices: Notice[] = []
  const values: NoteFinding["values"][number][] = []
  let markdown = ""
  let at = 0
  for (const mark of marks) {
    const place = say.placeOf(mark)
    const result = worthOf(mark.expression, inputs)
    markdown += body.slice(at, mark.from)
    at = mark.to
    if (!result.ok) {
      notices.push(...result.troubles.map((trouble) => say.markTrouble(trouble, place)))
      continue
    }
    notices.push(...result.held.map((held) => say.markHeld(held, place)))
    notices.push(...result.doubts.map((doubt) => say.markDoubt(doubt, place)))
    const value = plainValue(result.value)
    if (value === null) notices.push(say.markMissing(printed(mark.expression), place))
    values.push(value)
    markdown += inText(value, mark)
  }
  markdown += body.slice(at)
  const faults = notices.some(({ level }) => level === "fault")
  return faults ? { ok: false, found: null, notices } : { ok: true, found: { markdown, values }, notices }
}

function plainValue(value: Scalar): NoteFinding["values"][number] {
  if (value.type === "text") return value.text
  if (value.type === "missing" || Number.isNaN(value.value)) return null
  return value.type === "truth" ? value.value === 1 : value.value
}

/** A text keeps its characters, whatever they mean in CommonMark. */
function inText(value: NoteFinding["values"][number], mark: Mark): string {
  if (value === null) return absent
  if (typeof value === "string") return value.replace(/[!-/:-@[-`{-~]/g, "\\$&")
  if (typeof value === "boolean") return `${value}`
  if (mark.digits !== null) return written(value, mark.digits)
  return `${value}`.length <= 8 ? writtenInFull(value) : written(value, 6)
}
