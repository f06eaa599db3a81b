// A model cell evaluated by itself: its statement and a table in, the outcome out. Nothing of the engine is needed for that.

import { model } from "../../../cells/model/index.ts"
import { modelWords } from "../../../cells/model/words.ts"
import type { ModelFinding, ModelFound } from "../../../cells/model-finding.ts"
import type { Column, NumberColumn } from "../../../cells/table/column.ts"
import { rowsPart } from "../../../cells/table/column.ts"
import type { Input, Work } from "../../../runtime/kind.ts"
import type { Intent, Notice } from "../../../runtime/notice.ts"
import { textRange } from "../../../runtime/place.ts"
import { read, rewritten } from "../../../runtime/statement.ts"
import type { Json, Key, Value } from "../../../runtime/value.ts"

const work: Work = {
  cancelled: false,
  checkpoint: async () => {},
  publish: () => {},
  // biome-ignore lint/correctness/useYield: a model reads no file.
  async *file() {
    throw new Error("a model reads no file")
  },
  fileHash: () => null,
  near: null,
  late: async () => true,
}

type Entries = readonly (number | null)[]
export const number = (...values: Entries): NumberColumn => numbers("number", values)
export const count = (...values: Entries): NumberColumn => numbers("count", values)
export const truth = (...values: Entries): NumberColumn => numbers("truth", values)
export const date = (...values: Entries): NumberColumn => numbers("date", values)
const numbers = (type: NumberColumn["type"], values: Entries): NumberColumn => ({
  type,
  values: Float64Array.from(values, (value) => value ?? Number.NaN),
  unit: null,
  called: null,
})
/** A category by its entries; levels in the order of first appearance, then those that are only stated. */
export const category = (
  entries: readonly (string | null)[],
  stated: readonly string[] = [],
  type: "category" | "text" = "category",
): Column => {
  const levels = [...new Set([...stated, ...entries.flatMap((entry) => entry ?? [])])]
  const codes = Int32Array.from(entries, (entry) => (entry === null ? -1 : levels.indexOf(entry)))
  return { type, codes, levels, coding: "corner", unit: null, called: null }
}
export const text = (...entries: readonly string[]): Column => category(entries, [], "text")

export type Table = Readonly<Record<string, Column>>

export type Found = {
  readonly ok: boolean
  readonly found: ModelFound | null
  readonly notices: readonly Notice[]
  readonly text: string
}

/** What a model finds in a table whose first row is row 10 of terrace.csv; `near` is its last finding in a gesture. */
export async function finding(
  clauses: string,
  table: Table,
  cells: Readonly<Record<string, Value>> = {},
  near: Value | null = null,
): Promise<Found> {
  const statement = `model m\n  data d\n${clauses
    .trim()
    .split("\n")
    .map((line) => `  ${line.trim()}`)
    .join("\n")}`
  const { said, notices } = modelWords.parse(read(statement))
  if (notices.some(({ level }) => level === "fault")) return { ok: false, found: null, notices, text: statement }
  const rows = Object.values(table).map((column) => ("codes" in column ? column.codes.length : column.values.length))
  const records = Uint32Array.from({ length: rows[0] ?? 0 }, (_, row) => row + 9)
  const asked = modelWords.names(said).uses.find(({ name }) => name === "d")
  const parts = asked === undefined || asked.parts === "all" ? [] : asked.parts
  const offered = [...Object.keys(table), rowsPart]
  const identity: Value = { file: "terrace.csv", sha256: "0".repeat(64), records }
  const there = parts.filter((part) => Object.hasOwn(table, part)).map((part): [string, Value] => [part, table[part] as Column])
  const value: Value = Object.fromEntries([[rowsPart, identity], ...there])
  const key = "0".repeat(64) as Key
  const inputs = new Map<string, Input>(Object.entries(cells).map(([name, cell]) => [name, { value: cell, key, offers: null }]))
  if (!inputs.has("d")) inputs.set("d", { value, key, offers: parts.every((part) => Object.hasOwn(value, part)) ? null : offered })
  const outcome = await model.evaluate(said, inputs, { ...work, near })
  return { ...outcome, notices: [...notices, ...outcome.notices], text: statement }
}

/** The fit of a model that has one. */
export const fitOf = (outcome: Found): ModelFinding => wholeOf(outcome).parts.fit

/** All that a model that has a fit found. */
export const wholeOf = ({ found, notices }: Found): ModelFound => {
  if (found === null) throw new Error(notices.map(({ text: says }) => says).join("\n"))
  return found
}

export const summaryOf = (outcome: Found): { readonly [member: string]: Json } =>
  model.summary(wholeOf(outcome)) as { readonly [member: string]: Json }

/** `level code, at the words it stands on: what it says`. */
export const told = (outcome: Found): readonly string[] =>
  outcome.notices.map(({ level, code, at, text: says }) => {
    const { from, to } = textRange(read(outcome.text), at)
    const place = at.clause < 0 ? "" : ` at "${outcome.text.slice(from, to)}"`
    return `${level} ${code.replace("model/", "")}${place}: ${says}`
  })

export const codes = (outcome: Found): readonly string[] => outcome.notices.map(({ code }) => code.replace("model/", ""))

/** The clauses of the statement after a click on a mend. */
export const mended = (outcome: Found, intent: Intent | null): string =>
  (intent?.edits ?? []).reduce((now, edit) => rewritten(now, edit), outcome.text)
