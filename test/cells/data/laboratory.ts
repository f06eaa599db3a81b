// A data cell evaluated by itself: its statement and the texts of files in, the outcome out. Nothing of the engine is needed for that.

import type { DataFinding } from "../../../cells/data/finding.ts"
import { data } from "../../../cells/data/index.ts"
import { dataWords } from "../../../cells/data/words.ts"
import type { Column } from "../../../cells/table/column.ts"
import type { Input, Outcome, Work } from "../../../runtime/kind.ts"
import type { Intent, Notice } from "../../../runtime/notice.ts"
import { read, rewritten } from "../../../runtime/statement.ts"
import type { Key, Value } from "../../../runtime/value.ts"

export type Files = Readonly<Record<string, string | Uint8Array>>

/** Work as the evaluator does it, with files at hand. `pieces` is how many bytes a file comes in at once. */
export const workWith = (files: Files, pieces = 7): Work => {
  const bytes = (name: string): Uint8Array | null => {
    const file = files[name]
    return file === undefined ? null : typeof file === "string" ? new TextEncoder().encode(file) : file
  }
  return {
    cancelled: false,
    checkpoint: async () => {},
    publish: () => {},
    async *file(name) {
      const all = bytes(name)
      if (all === null) throw Object.assign(new Error(name), { name: "NoFile" })
      for (let from = 0; from < all.length; from += pieces) yield all.subarray(from, from + pieces)
    },
    fileHash: (name) => (bytes(name) === null ? null : "0".repeat(64)),
    near: null,
    late: async () => true,
  }
}

export type Found = { readonly ok: boolean; readonly found: DataFinding | null; readonly notices: readonly Notice[] }

/** What a statement finds; faults of the parse stand first, and nothing is evaluated where there are any. */
export async function finding(text: string, files: Files, cells: Readonly<Record<string, Value>> = {}): Promise<Found> {
  const { said, notices } = dataWords.parse(read(text))
  if (notices.some(({ level }) => level === "fault")) return { ok: false, found: null, notices }
  const inputs = new Map<string, Input>(
    Object.entries(cells).map(([name, value]) => [name, { value, key: "0".repeat(64) as Key, offers: null }]),
  )
  const outcome: Outcome<DataFinding> = await data.evaluate(said, inputs, workWith(files))
  return { ...outcome, notices: [...notices, ...outcome.notices] }
}

export const codes = (notices: readonly Notice[]): readonly string[] => notices.map(({ code }) => code)

export const noticeOf = (outcome: Found, code: string): Notice => {
  const notice = outcome.notices.find((one) => one.code === code)
  if (notice === undefined) throw new Error(`no notice ${code} among ${codes(outcome.notices).join(", ")}`)
  return notice
}

/** The statement after a click on a mend. */
export const mended = (text: string, intent: Intent | null): string =>
  (intent?.edits ?? []).reduce((now, edit) => rewritten(now, edit), text)

export const column = (outcome: Found, name: string): Column => {
  const part = outcome.found?.parts[name]
  if (part === undefined || !("type" in part)) throw new Error(`no column ${name} among ${outcome.found?.columns.join(", ")}`)
  return part
}

/** A column as plain entries: numbers, level texts, null for missing. */
export const entries = (outcome: Found, name: string): readonly (number | string | null)[] => {
  const of = column(outcome, name)
  return "codes" in of
    ? Array.from(of.codes, (code) => of.levels[code] ?? null)
    : Array.from(of.values, (value) => (Number.isNaN(value) ? null : value))
}
