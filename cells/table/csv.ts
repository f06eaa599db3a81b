// Separated text, read by RFC 4180 from bytes that arrive in pieces: fields are handed on as stretches of bytes, so that a column of
// numbers never makes a string. What the text does against the rules is counted with record numbers and never mended silently; what the
// fields mean is left to whoever takes them.

import { type BadByte, Utf8Check } from "./utf8.ts"

/** Takes the fields as they are found. `bytes` is only lent: whoever keeps a field copies it. */
export interface RecordSink {
  field(index: number, bytes: Uint8Array, from: number, to: number): void
  /** The record is whole; it had this many fields. */
  record(fields: number): void
}

/** Records (all counted from 0, header included) that are not as RFC 4180 has them. */
export type Oddities = {
  /** Lines with nothing on them, other than at the end; they are no records. */
  readonly emptyLines: number
  /** Records with a quote in a field that does not begin with one, or with text after the closing quote; read as they stand. */
  readonly strayQuotes: { readonly count: number; readonly first: number } | null
}

/** Why the text could not be read to its end. `record` counts from 0, header included; `field` too. */
export type Broken =
  | { readonly type: "not-utf-8"; readonly bad: BadByte; readonly record: number; readonly field: number }
  | { readonly type: "other-file"; readonly what: "utf-16" | "zip" | "gzip" | "parquet" | "binary" }
  | { readonly type: "open-quote"; readonly record: number; readonly field: number }

/** No field is longer; a quote that nobody closed would else take in all the rest of the file. */
export const longestField = 1 << 20

export class Scanner {
  private readonly sink: RecordSink
  private readonly separator: Uint8Array
  private readonly special = new Uint8Array(256)
  private readonly check = new Utf8Check()
  private begun = false
  /** The beginning of a field that is not finished, and how far into it the reading had come. */
  private rest = new Uint8Array(0)
  private resume = 0
  private scratch = new Uint8Array(256)
  private state: State = fieldStart
  /** Whether the field that is being read has a doubled quote, or a quote out of place. */
  private doubled = false
  private stray = false
  private afterReturn = false
  private index = 0
  private records = 0
  private emptyLines = 0
  private emptyPending = 0
  private strayCount = 0
  private strayFirst = -1
  private trouble: Broken | null = null

  /** @param separator  one character, of any script; not a quote, not a line end */
  constructor(separator: string, sink: RecordSink) {
    this.sink = sink
    this.separator = new TextEncoder().encode(separator)
    for (const byte of [this.separator[0] as number, lineFeed, carriageReturn, quote]) this.special[byte] = 1
  }

  get broken(): Broken | null {
    return this.trouble
  }

  get oddities(): Oddities {
    return {
      emptyLines: this.emptyLines,
      strayQuotes: this.strayCount === 0 ? null : { count: this.strayCount, first: this.strayFirst },
    }
  }

  /** Reads on. False when the text is broken and there is no use in more. */
  push(chunk: Uint8Array): boolean {
    if (this.trouble !== null) return false
    let bytes = chunk
    if (!this.begun) {
      // The signature of a file and a byte-order mark are at most 4 bytes, which the first pieces may have to be put together for.
      bytes = joined(this.rest, chunk)
      this.rest = new Uint8Array(0)
      if (bytes.length < 4) {
        this.rest = bytes.slice()
        return true
      }
      bytes = this.beginning(bytes)
      if (this.trouble !== null) return false
    }
    return this.take(bytes, false)
  }

  /** The text is at its end: its last record may go without a line end. */
  end(): void {
    if (this.trouble !== null) return
    if (!this.begun) {
      const bytes = this.beginning(this.rest)
      this.rest = new Uint8Array(0)
      if (this.trouble !== null || !this.take(bytes, false)) return
    }
    const cut = this.check.end()
    if (cut !== null) this.trouble = { type: "not-utf-8", bad: cut, record: this.records, field: this.index }
    else this.take(new Uint8Array(0), true)
  }

  private beginning(bytes: Uint8Array): Uint8Array {
    this.begun = true
    if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) {
      this.check.skip(3)
      return bytes.subarray(3)
    }
    const [a, b, c, d] = bytes
    const what =
      (a === 0xff && b === 0xfe) || (a === 0xfe && b === 0xff)
        ? "utf-16"
        : a === 0x50 && b === 0x4b && c === 3 && d === 4
          ? "zip"
          : a === 0x1f && b === 0x8b
            ? "gzip"
            : a === 0x50 && b === 0x41 && c === 0x52 && d === 0x31
              ? "parquet"
              : null
    if (what !== null) this.trouble = { type: "other-file", what }
    return bytes
  }

  private take(chunk: Uint8Array, last: boolean): boolean {
    const before = this.check.offset
    const bad = this.check.push(chunk)
    if (bad === null && chunk.includes(0)) {
      this.trouble = { type: "other-file", what: "binary" }
      return false
    }
    // What stands before the bad byte is read first, so that the place can be said in records and fields. When the lead byte came with
    // the piece before, the character is in the field that is being read.
    const bytes = joined(this.rest, chunk)
    const length = bad === null ? bytes.length : this.rest.length + Math.max(0, bad.offset - before)
    const start = this.scan(bytes, this.rest.length === 0 ? 0 : this.resume, length, last && bad === null)
    this.rest = new Uint8Array(0)
    if (bad !== null) {
      this.trouble = { type: "not-utf-8", bad, record: this.records, field: this.index }
      return false
    }
    if (this.trouble !== null) return false
    if (start < length) {
      if (length - start > longestField) {
        this.trouble = { type: "open-quote", record: this.records, field: this.index }
        return false
      }
      // A buffer with room to spare would save copies of a long field; a copy a piece is bounded by `longestField`.
      this.rest = bytes.slice(start, length)
    }
    return true
  }

  /** Reads fields from `at` to `end`; gives where the field begins that was not finished. */
  private scan(bytes: Uint8Array, from: number, end: number, last: boolean): number {
    let at = from
    let start = 0
    const special = this.special
    for (;;) {
      if (this.state === fieldStart) {
        if (at >= end) break
        if (this.afterReturn) {
          this.afterReturn = false
          if (bytes[at] === lineFeed) {
            at++
            start = at
            continue
          }
        }
        start = at
        this.doubled = false
        this.stray = false
        this.state = bytes[at] === quote ? inQuotes : inField
        if (this.state === inQuotes) at++
      }
      if (this.state === inQuotes) {
        const next = bytes.indexOf(quote, at)
        if (next < 0 || next >= end) {
          at = end
          if (!last) break
          this.trouble = { type: "open-quote", record: this.records, field: this.index }
          return end
        }
        at = next + 1
        this.state = afterQuote
      }
      if (this.state === afterQuote) {
        if (at >= end && !last) break
        const byte = at < end ? bytes[at] : lineFeed
        if (byte === quote && at < end) {
          this.doubled = true
          this.state = inQuotes
          at++
          continue
        }
        const split = this.separatorAt(bytes, at, end, last)
        if (split === unknown) break
        if (split === yes || byte === lineFeed || byte === carriageReturn) {
          this.quotedField(bytes, start + 1, at - 1)
          at = this.closed(bytes, at, end, split === yes)
          start = at
          continue
        }
        this.stray = true
        this.state = inField
      }
      // In a field without quotes, or after a quote out of place.
      while (at < end && special[bytes[at] as number] === 0) at++
      if (at >= end) {
        if (!last) break
        if (this.state === inField) this.plainField(bytes, start, end, false)
        this.recordEnd()
        return end
      }
      const byte = bytes[at] as number
      if (byte === quote) {
        this.stray = true
        at++
        continue
      }
      const split = this.separatorAt(bytes, at, end, last)
      if (split === unknown) break
      if (split === no && byte !== lineFeed && byte !== carriageReturn) {
        at++
        continue
      }
      this.plainField(bytes, start, at, split === yes)
      at = this.closed(bytes, at, end, split === yes)
      start = at
    }
    if (last && this.state === fieldStart) {
      // After a separator an empty field is still owed; after a line end nothing is.
      if (this.index > 0) {
        this.sink.field(this.index++, bytes, end, end)
        this.recordEnd()
      }
      return end
    }
    this.resume = at - start
    return this.state === fieldStart ? end : start
  }

  /** Whether the separator stands at `at`; a separator of several bytes may be cut by the end of the piece. */
  private separatorAt(bytes: Uint8Array, at: number, end: number, last: boolean): Found {
    const { separator } = this
    for (let i = 0; i < separator.length; i++) {
      if (at + i >= end) return last || i === 0 ? no : unknown
      if (bytes[at + i] !== separator[i]) return no
    }
    return yes
  }

  private closed(bytes: Uint8Array, at: number, end: number, separated: boolean): number {
    this.state = fieldStart
    if (separated) return at + this.separator.length
    this.recordEnd()
    if (at < end && bytes[at] === carriageReturn) this.afterReturn = true
    return at + 1
  }

  private plainField(bytes: Uint8Array, from: number, to: number, separated: boolean): void {
    if (this.stray) {
      if (this.strayCount === 0) this.strayFirst = this.records
      this.strayCount++
    }
    if (this.index === 0 && !separated && isBlank(bytes, from, to)) {
      this.emptyPending++
      return
    }
    this.hand(bytes, from, to)
  }

  private quotedField(bytes: Uint8Array, from: number, to: number): void {
    if (!this.doubled) {
      this.hand(bytes, from, to)
      return
    }
    if (this.scratch.length < to - from) this.scratch = new Uint8Array((to - from) * 2)
    let length = 0
    for (let at = from; at < to; at++) {
      const byte = bytes[at] as number
      this.scratch[length++] = byte
      if (byte === quote) at++
    }
    this.hand(this.scratch, 0, length)
  }

  private hand(bytes: Uint8Array, from: number, to: number): void {
    this.emptyLines += this.emptyPending
    this.emptyPending = 0
    this.sink.field(this.index++, bytes, from, to)
  }

  private recordEnd(): void {
    if (this.index === 0) return
    const fields = this.index
    this.index = 0
    this.records++
    this.sink.record(fields)
  }
}

type State = 0 | 1 | 2 | 3
const fieldStart = 0
const inField = 1
const inQuotes = 2
const afterQuote = 3

type Found = 0 | 1 | 2
const no = 0
const yes = 1
const unknown = 2

const lineFeed = 10
const carriageReturn = 13
const quote = 34

const isBlank = (bytes: Uint8Array, from: number, to: number): boolean => {
  for (let at = from; at < to; at++) if (bytes[at] !== 32 && bytes[at] !== 9) return false
  return true
}

const joined = (first: Uint8Array, second: Uint8Array): Uint8Array => {
  if (first.length === 0) return second
  const both = new Uint8Array(first.length + second.length)
  both.set(first)
  both.set(second, first.length)
  return both
}
