// The file read as the statement says, and where it says nothing as the file itself suggests: what is suggested is read so and said, with
// the clauses that would write it out, so that a click changes no number. Pass one reads what was declared and weighs the rest; pass two
// reads what was weighed.

import type { Work } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { ClauseEdit, Intent, Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import {
  type Broken,
  type Column,
  type ColumnRead,
  type ColumnTask,
  type Dialect,
  isRatherText,
  type Misfits,
  meansMissing,
  type Proposal,
  proposal,
  type Reading,
  readTable,
  suggestedSeparator,
} from "../table/index.ts"
import { canBeText, columnSays, edit, quoted, separatorEdit, textsSay } from "./clauses.ts"
import { headedFor, type Layout, layout, type Placed } from "./layout.ts"
import * as say from "./notices.ts"
import type { ColumnSaid, DataSaid } from "./words.ts"

/** The table as the file holds it, before anything is made, kept or totalled. */
export type FileTable = {
  readonly columns: readonly { readonly name: Name; readonly column: Column }[]
  /** Columns with a fault of their own, which are not among `columns`. */
  readonly unread: ReadonlySet<Name>
  readonly rows: number
}

type File = NonNullable<DataSaid["from"]>

/** Null where nothing of the file could be read; faults of single columns leave the rest of the table there. */
export async function fileTable(
  said: DataSaid,
  from: File,
  work: Work,
): Promise<{ readonly table: FileTable | null; readonly notices: readonly Notice[] }> {
  const { file, at } = from
  const notices: Notice[] = []
  const expected = from.format === "tsv" ? "\t" : ","
  const separator = said.separator ?? suggestedSeparator(await beginning(work.file(file)), expected)
  const stated: Dialect = { separator, decimal: said.decimal ?? ".", header: said.header, missing: said.missing ?? [] }

  let placed: Layout = { columns: [], absent: [] }
  const pause = (): Promise<void> => work.checkpoint()
  const first = await readTable(
    work.file(file),
    stated,
    (heads) => {
      placed = layout(heads, said.columns)
      return placed.columns.map(({ said: clause }): ColumnTask => (clause === null ? { do: "weigh" } : declared(clause)))
    },
    pause,
  )
  // Sniffing is said even where the file is broken, since a wrong separator may be what broke it.
  const separatorMend = separator !== expected && said.separator === null ? separatorEdit(separator, file) : null
  if (separatorMend !== null) notices.push(say.separatorProposed(file, separator, expected, at, separatorMend))
  if (first.broken !== null) return { table: null, notices: [...notices, brokenNotice(file, first.broken, placed, at)] }
  if (first.heads.length === 0) return { table: null, notices: [...notices, say.emptyFile(file, at)] }

  const proposed = proposal(
    first.columns.map((column) => (column.did === "weigh" ? column.evidence : null)),
    said.decimal,
  )
  const texts = proposed.missing.map(({ text }) => text).filter((text) => !stated.missing.includes(text))
  const dialect: Dialect = { ...stated, decimal: proposed.decimal, missing: [...stated.missing, ...texts] }
  const changed = dialect.decimal !== stated.decimal || texts.length > 0
  const second = placed.columns.some(({ said: clause }) => clause === null)
    ? await readTable(work.file(file), dialect, () => placed.columns.map((column, i) => secondTask(column, proposed, i, changed)), pause)
    : first
  const reads = placed.columns.map((_, i) => readOf(second, i) ?? readOf(first, i))

  const edits = new Edits(said, separatorMend, dialect, texts)
  fileNotices(notices, said, from, second, placed)
  const table = columnsFrom(reads, placed, proposed, said, from, edits, notices)
  proposalNotices(notices, placed, proposed, table.types, texts, edits, at)
  return { table: { columns: table.columns, unread: table.unread, rows: second.records }, notices }
}

/** The clauses that would write out what was proposed, each as one edit. */
class Edits {
  readonly separator: ClauseEdit | null
  readonly decimal: ClauseEdit | null
  readonly missing: ClauseEdit | null
  private readonly said: DataSaid
  private readonly texts: readonly string[]

  constructor(said: DataSaid, separator: ClauseEdit | null, dialect: Dialect, texts: readonly string[]) {
    this.said = said
    this.texts = texts
    this.separator = separator
    this.decimal = said.decimal === null && dialect.decimal === "," ? edit("decimal", 0, quoted(",")) : null
    this.missing = texts.length === 0 ? null : this.missingWith([])
  }

  /** The `missing` clause with what it says, what is proposed and these. */
  missingWith(texts: readonly string[]): ClauseEdit {
    return edit("missing", 0, textsSay([...new Set([...(this.said.missing ?? []), ...this.texts, ...texts])]))
  }

  /** Everything that a column's proposed type rests on comes with it. */
  all(columns: readonly string[]): readonly ClauseEdit[] {
    const { length } = this.said.columns
    return [this.separator, this.decimal, this.missing, ...columns.map((says, i) => edit("column", length + i, says))].filter(
      (one) => one !== null,
    )
  }
}

const declared = (clause: ColumnSaid): ColumnTask => ({ do: "read", type: clause.type, levels: clause.levels })

const secondTask = (column: Placed, proposed: Proposal, index: number, changed: boolean): ColumnTask =>
  column.said === null
    ? { do: "read", type: proposed.columns[index]?.type ?? "category", levels: null }
    : changed
      ? declared(column.said)
      : { do: "skip" }

const readOf = (reading: Reading, index: number): ColumnRead | null => {
  const column = reading.columns[index]
  return column?.did === "read" ? column.read : null
}

/** The beginning of a file, as much as one needs to see its first line. */
async function beginning(file: AsyncIterable<Uint8Array>): Promise<Uint8Array> {
  const enough = 1 << 16
  let head = new Uint8Array(0)
  for await (const chunk of file) {
    const both = new Uint8Array(Math.min(enough, head.length + chunk.length))
    both.set(head)
    both.set(chunk.subarray(0, both.length - head.length), head.length)
    head = both
    if (head.length >= enough) break
  }
  return head
}

function brokenNotice(file: string, broken: Broken, placed: Layout, at: Place): Notice {
  switch (broken.type) {
    case "other-file":
      return say.otherFile(file, broken.what, at)
    case "open-quote":
      return say.openQuote(file, broken.record, placed.columns[broken.field]?.name ?? null, at)
    case "not-utf-8": {
      const { bad, record, field } = broken
      const letter = new TextDecoder("windows-1252").decode(Uint8Array.of(bad.byte))
      return say.notUtf8(
        file,
        record,
        placed.columns[field]?.name ?? null,
        bad.byte,
        bad.offset,
        /\p{L}|[€°µ±²³]/u.test(letter) ? letter : null,
        at,
      )
    }
  }
}

/** What the file does against the rules, and what it heads its columns. */
function fileNotices(notices: Notice[], said: DataSaid, from: File, reading: Reading, placed: Layout): void {
  const { file, at } = from
  const width = reading.heads.length
  const { long, short, trailing, oddities } = reading
  if (long !== null) notices.push(say.longRows(file, long.first, long.count, long.fields, width, at))
  if (short !== null) notices.push(say.shortRows(file, short.first, short.count, short.fields, width, at))
  if (trailing !== null) notices.push(say.trailingFields(file, trailing.first, trailing.count, width, at))
  if (oddities.emptyLines > 0) notices.push(say.emptyLines(file, oddities.emptyLines, width === 1, at))
  if (oddities.strayQuotes !== null) notices.push(say.strayQuotes(file, oddities.strayQuotes.first, oddities.strayQuotes.count, at))
  if (reading.records === 0) notices.push(say.noRows(file, at))
  const { heads } = reading
  if (said.header && heads.every((head) => head !== null && /^[+-]?\d+([.,]\d+)?$/.test(head)))
    notices.push(say.headerLikeData(file, at, edit("header", 0, "no")))
  for (const clause of placed.absent) {
    const head = clause.headed ?? clause.name
    const claimed = placed.columns.find((column) => column.said !== null && column.head === head)
    if (claimed !== undefined) {
      notices.push(say.columnClaimed(clause.name, claimed.name, head, clause.at))
      continue
    }
    const unclaimed = placed.columns.filter((column) => column.said === null)
    const near = nearest(
      head,
      unclaimed.map(({ head, name }) => head ?? name),
    )
    const better =
      near === null
        ? null
        : columnSays({ ...clause, name: clause.headed === null ? near : clause.name, headed: clause.headed === null ? null : near })
    const there = unclaimed.map(({ head, name }) => head ?? name)
    notices.push(
      say.noSuchColumn(
        clause.name,
        clause.headed,
        file,
        there,
        near,
        clause.at,
        better === null ? null : edit("column", clause.nth, better),
      ),
    )
  }
  const byHead = new Map<string, Name[]>()
  for (const { head, name } of placed.columns) if (head !== null && head !== "") byHead.set(head, [...(byHead.get(head) ?? []), name])
  for (const [head, names] of byHead) if (names.length > 1) notices.push(say.headTwice(head, names, at))
  const made = placed.columns.flatMap(({ said: clause, head, name }, i) =>
    clause === null && said.header && head !== name ? [{ name, head, place: i + 1 }] : [],
  )
  if (made.length > 0) notices.push(say.namesMade(made, at))
}

type ColumnsFound = {
  readonly columns: FileTable["columns"]
  readonly unread: ReadonlySet<Name>
  /** As read: a proposed category may turn out to be text. Null for a column that was not read. */
  readonly types: readonly (Column["type"] | null)[]
}

function columnsFrom(
  reads: readonly (ColumnRead | null)[],
  placed: Layout,
  proposed: Proposal,
  said: DataSaid,
  from: File,
  edits: Edits,
  notices: Notice[],
): ColumnsFound {
  const columns: { name: Name; column: Column }[] = []
  const unread = new Set<Name>(placed.absent.map(({ name }) => name))
  const types: (Column["type"] | null)[] = []
  placed.columns.forEach((place, i) => {
    const read = reads[i]
    if (read === null || read === undefined) return
    const { name, said: clause } = place
    const at = clause?.at ?? from.at
    if (read.misfits !== null && clause !== null) {
      unread.add(name)
      types[i] = null
      notices.push(misfitNotice(read.misfits, place, clause, from.file, edits))
      return
    }
    const column = columnOf(read, place, proposed.columns[i]?.doubt ?? null)
    columns.push({ name, column })
    types[i] = column.type
    if (read.leadingZeros !== null && clause !== null) {
      const says = columnSays({ ...clause, type: "category", unit: null })
      notices.push(say.lostZeros(name, read.leadingZeros.count, read.leadingZeros.first, at, edit("column", clause.nth, says)))
    }
    if (read.blanks !== null) notices.push(say.blankLevels(name, ...read.blanks, at))
    for (const { text, count, first } of read.maybeMissing)
      notices.push(say.maybeMissing(name, text, count, first, at, edits.missingWith([text])))
    if (isEmpty(column) && said.header) notices.push(say.nothingPresent(name, at))
  })
  return { columns, unread, types }
}

const isEmpty = (column: Column): boolean =>
  "values" in column
    ? column.values.length > 0 && column.values.every((value) => Number.isNaN(value))
    : column.codes.length > 0 && column.codes.every((code) => code < 0)

function columnOf(read: ColumnRead, place: Placed, doubt: unknown): Column {
  const { said: clause, unit } = place
  const { data } = read
  const called = clause?.called ?? null
  if ("values" in data) {
    const isNumber = data.type === "number" || data.type === "count"
    return { type: data.type, values: data.values, unit: clause === null ? (isNumber ? unit : null) : clause.unit, called }
  }
  // Only what nobody doubts and nobody said may turn into text: a category with zeros in front is one however many levels it has.
  const rather = clause === null && doubt === null && data.type === "category" && isRatherText(data.levels.length, data.codes.length)
  return {
    type: rather ? "text" : data.type,
    codes: data.codes,
    levels: data.levels,
    coding: clause?.coding ?? "corner",
    unit: null,
    called,
  }
}

function misfitNotice(misfits: Misfits, place: Placed, clause: ColumnSaid, file: string, edits: Edits): Notice {
  const [first, ...others] = misfits.first as [Misfits["first"][number], ...Misfits["first"][number][]]
  const levels = clause.levels ?? []
  const near = first.reason === "not-a-level" ? nearest(first.text, levels) : null
  return say.misfit(place.name, file, first, others, misfits.count, clause.at, near, misfitMend(misfits, clause, edits))
}

/** Only where it is sure: texts that commonly mean missing, numbers that are no counts, identifiers that are no numbers. */
function misfitMend(misfits: Misfits, clause: ColumnSaid, edits: Edits): Intent | null {
  const texts = misfits.texts === null ? [] : [...misfits.texts.keys()]
  const write = (one: ClauseEdit): Intent => ({ label: `Write ${one.clause} ${one.says}`, edits: [one] })
  if (texts.length > 0 && texts.every((text) => meansMissing(text.trim()) && canBeText(text)))
    return write(edits.missingWith(texts.map((text) => text.trim())))
  const only = (...reasons: readonly string[]): boolean => [...misfits.reasons].every((reason) => reasons.includes(reason))
  if (only("negative", "not-whole")) return write(edit("column", clause.nth, columnSays({ ...clause, type: "number" })))
  if (only("rounded")) return write(edit("column", clause.nth, columnSays({ ...clause, type: "text", unit: null })))
  return null
}

function proposalNotices(
  notices: Notice[],
  placed: Layout,
  proposed: Proposal,
  types: ColumnsFound["types"],
  texts: readonly string[],
  edits: Edits,
  at: Place,
): void {
  const nameAt = (index: number): Name => placed.columns[index]?.name ?? ""
  if (edits.decimal !== null) {
    const index = types.findIndex((type, i) => type === "number" && placed.columns[i]?.said === null)
    notices.push(say.decimalProposed(nameAt(index), at, edits.decimal))
  }
  if (edits.missing !== null) {
    const places = proposed.missing
      .filter(({ text }) => texts.includes(text))
      .map(({ text, in: columns }) => ({ text, in: columns.map(({ column, count, first }) => ({ name: nameAt(column), count, first })) }))
    notices.push(say.missingProposed(places, at, edits.missing))
  }
  proposed.columns.forEach((column, i) => {
    const doubt = column?.doubt
    if (doubt === null || doubt === undefined) return
    const name = nameAt(i)
    if (doubt.type === "mixed") notices.push(say.mixed(name, doubt.numbers, doubt.present, doubt.examples, at))
    else {
      const { record, text } = doubt.example
      if (doubt.type === "leading-zeros") notices.push(say.keptZeros(name, record, text, at))
      else if (doubt.type === "long") notices.push(say.keptLong(name, record, text, at))
      else notices.push(say.commaDoubt(name, record, text, at, edit("decimal", 0, quoted(","))))
    }
  })
  const clauses: string[] = []
  const words: string[] = []
  placed.columns.forEach((place, i) => {
    const type = types[i]
    if (place.said !== null || type === null || type === undefined) return
    clauses.push(columnSays({ name: place.name, headed: headedFor(place), type, unit: place.unit }))
    words.push(`${place.name} ${type}`)
  })
  if (clauses.length === 0) return
  const shown = words.length > 24 ? [...words.slice(0, 24), `${words.length - 24} more`] : words
  notices.push(say.typesProposed(shown, at, edits.all(clauses)))
}
