// A file read into columns, in one pass and in pieces: each column is read as the type it is said to have, or weighed for the type it might
// have. Memory is that of the columns; nothing is kept of the text. What went against the rules is reported with record numbers, which
// count from 0 after the header.

import type { ColumnType } from "./column.ts"
import { type Broken, type Oddities, type RecordSink, Scanner } from "./csv.ts"
import type { Dialect } from "./dialect.ts"
import { type Evidence, EvidenceTaker } from "./evidence.ts"
import { headText } from "./header.ts"
import { type ColumnRead, MissingTexts, type Reader, readerFor, type Taker } from "./readers.ts"
import { text } from "./utf8.ts"

/** What to do with one column of the file. */
export type ColumnTask =
  | { readonly do: "read"; readonly type: ColumnType; readonly levels: readonly string[] | null }
  | { readonly do: "weigh" }
  | { readonly do: "skip" }

export type ColumnResult =
  | { readonly did: "read"; readonly read: ColumnRead }
  | { readonly did: "weigh"; readonly evidence: Evidence }
  | { readonly did: "skip" }

/** Records that have fewer or more fields than the first: the first few of them, and how many fields the very first has. */
export type Ragged = { readonly count: number; readonly first: readonly number[]; readonly fields: number }

export type Reading = {
  /** One for each column; null where there is no header line. Empty for a file without any record. */
  readonly heads: readonly (string | null)[]
  readonly records: number
  readonly columns: readonly ColumnResult[]
  readonly oddities: Oddities
  /** Records with fewer fields: what they lack is missing. */
  readonly short: Ragged | null
  /** Records with more fields, something being in them: there is no right reading of these. */
  readonly long: Ragged | null
  /** Records with more fields, all of them empty. */
  readonly trailing: Ragged | null
  readonly broken: Broken | null
}

/** A piece of work between two checkpoints: some 10 ms on a slow machine. */
const bytesBetweenPauses = 1 << 19

/** What to do with each column of a file, asked once, when the heads are known. */
export type Plan = (heads: readonly (string | null)[]) => readonly ColumnTask[]

/** Reads a file in pieces. `pause` is awaited between pieces of work; when it rejects, so does the reading. */
export async function readTable(
  file: AsyncIterable<Uint8Array>,
  dialect: Dialect,
  plan: Plan,
  pause: () => Promise<void>,
): Promise<Reading> {
  const sink = new TableSink(dialect, plan)
  const scanner = new Scanner(dialect.separator, sink)
  let since = 0
  pieces: for await (const chunk of file) {
    for (let from = 0; from < chunk.length; from += bytesBetweenPauses) {
      const piece = chunk.subarray(from, Math.min(chunk.length, from + bytesBetweenPauses))
      if (!scanner.push(piece)) break pieces
      since += piece.length
      if (since >= bytesBetweenPauses) {
        since = 0
        await pause()
      }
    }
  }
  scanner.end()
  const columns: ColumnResult[] = []
  for (const taker of sink.takers) {
    columns.push(resultOf(taker))
    await pause()
  }
  return reading(sink, scanner, columns)
}

/** Reads bytes that are all there, at once: for the beginning of a file. */
export function readBytes(bytes: Uint8Array, dialect: Dialect, plan: Plan): Reading {
  const sink = new TableSink(dialect, plan)
  const scanner = new Scanner(dialect.separator, sink)
  scanner.push(bytes)
  scanner.end()
  return reading(sink, scanner, sink.takers.map(resultOf))
}

const reading = (sink: TableSink, scanner: Scanner, columns: readonly ColumnResult[]): Reading => ({
  heads: sink.heads,
  records: sink.records,
  columns,
  oddities: shifted(scanner.oddities, sink.dialect),
  ...sink.ragged(),
  broken: shiftedBroken(scanner.broken, sink.dialect),
})

const resultOf = (taker: Taker): ColumnResult =>
  taker instanceof EvidenceTaker
    ? { did: "weigh", evidence: taker.taken() }
    : taker === skipper
      ? { did: "skip" }
      : { did: "read", read: (taker as Reader).taken() }

const skipper: Taker = { take: () => {}, absent: () => {} }

const recordsKept = 3

class TableSink implements RecordSink {
  takers: readonly Taker[] = []
  heads: readonly (string | null)[] = []
  records = 0
  readonly dialect: Dialect
  private readonly plan: Plan
  private readonly opening: Uint8Array[] = []
  private begun = false
  private surplus = false
  private readonly shortTally = new RaggedTally()
  private readonly longTally = new RaggedTally()
  private readonly trailingTally = new RaggedTally()

  constructor(dialect: Dialect, plan: Plan) {
    this.dialect = dialect
    this.plan = plan
  }

  field(index: number, bytes: Uint8Array, from: number, to: number): void {
    if (!this.begun) this.opening.push(bytes.slice(from, to))
    else if (index < this.takers.length) (this.takers[index] as Taker).take(bytes, from, to, this.records)
    else if (to > from) this.surplus = true
  }

  record(fields: number): void {
    if (!this.begun) {
      this.begin()
      return
    }
    const width = this.takers.length
    if (fields !== width) {
      for (let index = fields; index < width; index++) (this.takers[index] as Taker).absent(this.records)
      const tally = fields < width ? this.shortTally : this.surplus ? this.longTally : this.trailingTally
      tally.add(this.records, fields)
      this.surplus = false
    }
    this.records++
  }

  ragged(): { readonly short: Ragged | null; readonly long: Ragged | null; readonly trailing: Ragged | null } {
    return { short: this.shortTally.taken(), long: this.longTally.taken(), trailing: this.trailingTally.taken() }
  }

  private begin(): void {
    const { header, decimal } = this.dialect
    this.heads = this.opening.map((field) => (header ? headText(text(field, 0, field.length)) : null))
    const missing = new MissingTexts(this.dialect.missing)
    this.takers = this.plan(this.heads).map((task) => takerFor(task, decimal, missing))
    this.begun = true
    if (header) return
    // Without a header the first record is data: it is read again now that the columns are there.
    this.opening.forEach((field, index) => {
      this.field(index, field, 0, field.length)
    })
    this.record(this.opening.length)
  }
}

const takerFor = (task: ColumnTask, decimal: "." | ",", missing: MissingTexts): Taker => {
  switch (task.do) {
    case "read":
      return readerFor(task.type, decimal, missing, task.levels)
    case "weigh":
      return new EvidenceTaker(missing)
    case "skip":
      return skipper
  }
}

class RaggedTally {
  private count = 0
  private fields = 0
  private readonly first: number[] = []

  add(record: number, fields: number): void {
    if (this.count++ === 0) this.fields = fields
    if (this.first.length < recordsKept) this.first.push(record)
  }

  taken(): Ragged | null {
    return this.count === 0 ? null : { count: this.count, first: this.first, fields: this.fields }
  }
}

const shifted = (oddities: Oddities, dialect: Dialect): Oddities => {
  const { strayQuotes } = oddities
  return dialect.header && strayQuotes !== null
    ? { ...oddities, strayQuotes: { count: strayQuotes.count, first: strayQuotes.first - 1 } }
    : oddities
}

const shiftedBroken = (broken: Broken | null, dialect: Dialect): Broken | null =>
  broken === null || broken.type === "other-file" || !dialect.header ? broken : { ...broken, record: broken.record - 1 }
