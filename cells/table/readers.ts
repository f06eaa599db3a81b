// One reader for each type of column: takes fields as bytes and gives a whole column at the end, with what did not fit. An empty field, a
// field of blanks and the texts of the `missing` clause are missing; blanks around a number, a truth or a date mean nothing.

import type { ColumnType } from "./column.ts"
import { dayOf } from "./date.ts"
import { meansMissing } from "./dialect.ts"
import { Dictionary } from "./dictionary.ts"
import { type Misfits, MisfitTally } from "./misfit.ts"
import { byteOf, exactBelow, hasLeadingZero, isRounded, numberIn } from "./number.ts"
import { GrowingCodes, GrowingNumbers } from "./segments.ts"
import { text } from "./utf8.ts"

/** Takes the fields of one column, record after record; `absent` stands for a field that a short record lacks. */
export interface Taker {
  take(bytes: Uint8Array, from: number, to: number, record: number): void
  absent(record: number): void
}

/** How often something was met, and in which record first. */
export type Met = { readonly count: number; readonly first: number }

/** A column as read: `values` for numbers, counts, truths and dates; `codes` and `levels` for categories and texts. */
export type ColumnRead = {
  readonly data:
    | { readonly type: "number" | "count" | "truth" | "date"; readonly values: Float64Array }
    | { readonly type: "category" | "text"; readonly codes: Int32Array; readonly levels: readonly string[] }
  readonly misfits: Misfits | null
  /** Numbers written with zeros in front, which as numbers they lose. */
  readonly leadingZeros: Met | null
  /** Two levels that differ only by blanks around them. */
  readonly blanks: readonly [string, string] | null
  /** Levels that commonly mean a missing value, such as "n/a". */
  readonly maybeMissing: readonly ({ readonly text: string } & Met)[]
}

export interface Reader extends Taker {
  taken(): ColumnRead
}

/** The texts of the `missing` clause, as bytes. */
export class MissingTexts {
  private readonly texts: readonly Uint8Array[]

  constructor(texts: readonly string[]) {
    this.texts = texts.map((text) => new TextEncoder().encode(text.trim()))
  }

  /** Between blanks: `from` and `to` are already trimmed. */
  has(bytes: Uint8Array, from: number, to: number): boolean {
    for (const missing of this.texts) {
      if (missing.length !== to - from) continue
      let same = 0
      while (same < missing.length && missing[same] === bytes[from + same]) same++
      if (same === missing.length) return true
    }
    return false
  }
}

export const readerFor = (type: ColumnType, decimal: "." | ",", missing: MissingTexts, levels: readonly string[] | null): Reader => {
  switch (type) {
    case "number":
    case "count":
      return new NumberReader(type, decimal, missing)
    case "truth":
      return new WordReader("truth", "not-a-truth", truthOf, missing)
    case "date":
      return new WordReader("date", "not-a-date", dayOf, missing)
    case "category":
    case "text":
      return new CodedReader(type, missing, levels)
  }
}

/** 1, 0 or NaN: `true` and `yes`, `false` and `no` in any case, and the digits 1 and 0. */
export const truthOf = (words: string): number => {
  const lower = words.toLowerCase()
  return lower === "true" || lower === "yes" || lower === "1" ? 1 : lower === "false" || lower === "no" || lower === "0" ? 0 : Number.NaN
}

/** The levels in the order that counts when none was said: whole numbers by value, else by UTF-16 code units. */
export const ordered = (levels: readonly string[]): readonly string[] => {
  const byUnits = [...levels].sort()
  return byUnits.every((level) => /^[+-]?\d+$/.test(level)) ? byUnits.sort(byValue) : byUnits
}

/** Where the field begins and ends without the blanks around it. */
export const trimmedFrom = (bytes: Uint8Array, from: number, to: number): number => {
  let at = from
  while (at < to && isBlank(bytes[at] as number)) at++
  return at
}
export const trimmedTo = (bytes: Uint8Array, from: number, to: number): number => {
  let at = to
  while (at > from && isBlank(bytes[at - 1] as number)) at--
  return at
}

class NumberReader implements Reader {
  private readonly type: "number" | "count"
  private readonly decimal: number
  private readonly missing: MissingTexts
  private readonly values = new GrowingNumbers()
  private readonly misfits = new MisfitTally()
  private zeros = 0
  private firstZero = -1

  constructor(type: "number" | "count", decimal: "." | ",", missing: MissingTexts) {
    this.type = type
    this.decimal = decimal === "." ? byteOf.point : byteOf.comma
    this.missing = missing
  }

  take(bytes: Uint8Array, begin: number, end: number, record: number): void {
    const from = trimmedFrom(bytes, begin, end)
    const to = trimmedTo(bytes, from, end)
    if (from === to || this.missing.has(bytes, from, to)) {
      this.values.push(Number.NaN)
      return
    }
    const value = numberIn(bytes, from, to, this.decimal)
    const reason = Number.isNaN(value)
      ? "not-a-number"
      : value - value !== 0
        ? "too-large"
        : (value >= exactBelow || value <= -exactBelow) && isRounded(bytes, from, to, value)
          ? "rounded"
          : this.type === "number"
            ? null
            : value < 0
              ? "negative"
              : value !== Math.floor(value)
                ? "not-whole"
                : null
    if (reason !== null) {
      this.misfits.add(record, text(bytes, from, to), reason)
      this.values.push(Number.NaN)
      return
    }
    if (hasLeadingZero(bytes, from, to) && this.zeros++ === 0) this.firstZero = record
    this.values.push(value)
  }

  absent(): void {
    this.values.push(Number.NaN)
  }

  taken(): ColumnRead {
    return {
      data: { type: this.type, values: this.values.taken() },
      misfits: this.misfits.taken(),
      leadingZeros: this.zeros === 0 ? null : { count: this.zeros, first: this.firstZero },
      blanks: null,
      maybeMissing: [],
    }
  }
}

/** Truths and dates: few different texts, each read once and remembered by its bytes. */
class WordReader implements Reader {
  private readonly type: "truth" | "date"
  private readonly reason: "not-a-truth" | "not-a-date"
  private readonly meaning: (words: string) => number
  private readonly missing: MissingTexts
  private readonly dictionary = new Dictionary()
  private readonly known: number[] = []
  private readonly values = new GrowingNumbers()
  private readonly misfits = new MisfitTally()

  constructor(type: "truth" | "date", reason: "not-a-truth" | "not-a-date", meaning: (words: string) => number, missing: MissingTexts) {
    this.type = type
    this.reason = reason
    this.meaning = meaning
    this.missing = missing
  }

  take(bytes: Uint8Array, begin: number, end: number, record: number): void {
    const from = trimmedFrom(bytes, begin, end)
    const to = trimmedTo(bytes, from, end)
    if (from === to || this.missing.has(bytes, from, to)) {
      this.values.push(Number.NaN)
      return
    }
    const code = this.dictionary.code(bytes, from, to)
    const value = code < this.known.length ? (this.known[code] as number) : this.meaning(text(bytes, from, to))
    if (code === this.known.length) this.known.push(value)
    if (Number.isNaN(value)) this.misfits.add(record, text(bytes, from, to), this.reason)
    this.values.push(value)
  }

  absent(): void {
    this.values.push(Number.NaN)
  }

  taken(): ColumnRead {
    return {
      data: { type: this.type, values: this.values.taken() },
      misfits: this.misfits.taken(),
      leadingZeros: null,
      blanks: null,
      maybeMissing: [],
    }
  }
}

class CodedReader implements Reader {
  private readonly type: "category" | "text"
  private readonly missing: MissingTexts
  private readonly levels: readonly string[] | null
  private readonly dictionary = new Dictionary()
  private readonly codes = new GrowingCodes()

  constructor(type: "category" | "text", missing: MissingTexts, levels: readonly string[] | null) {
    this.type = type
    this.missing = missing
    this.levels = levels
  }

  take(bytes: Uint8Array, from: number, to: number): void {
    const begin = trimmedFrom(bytes, from, to)
    const end = trimmedTo(bytes, begin, to)
    // Blanks around a level are kept: two levels that differ by them are the data's affair, and are said.
    const isMissing = begin === end || this.missing.has(bytes, begin, end)
    this.codes.push(isMissing ? -1 : this.dictionary.code(bytes, from, to))
  }

  absent(): void {
    this.codes.push(-1)
  }

  taken(): ColumnRead {
    const found = this.dictionary.texts()
    const levels = this.levels ?? ordered(found)
    const place = new Map(levels.map((level, i) => [level, i]))
    const placed = found.map((level) => place.get(level) ?? -1)
    const codes = this.codes.taken()
    const misfits = new MisfitTally()
    const rows = new Float64Array(found.length)
    const first = new Float64Array(found.length).fill(-1)
    for (let row = 0; row < codes.length; row++) {
      const code = codes[row] as number
      if (code < 0) continue
      if (rows[code] === 0) first[code] = row
      rows[code] = (rows[code] as number) + 1
      const final = placed[code] as number
      if (final < 0) misfits.add(row, found[code] as string, "not-a-level")
      codes[row] = final
    }
    const maybeMissing = found.flatMap((level, code) =>
      meansMissing(level.trim()) && (placed[code] as number) >= 0 && this.levels === null
        ? [{ text: level.trim(), count: rows[code] as number, first: first[code] as number }]
        : [],
    )
    return {
      data: { type: this.type, codes, levels },
      misfits: misfits.taken(),
      leadingZeros: null,
      blanks: alikeButBlanks(levels),
      maybeMissing,
    }
  }
}

const isBlank = (byte: number): boolean => byte === byteOf.blank || byte === byteOf.tab

const byValue = (a: string, b: string): number => {
  const difference = BigInt(a.replace("+", "")) - BigInt(b.replace("+", ""))
  return difference < 0n ? -1 : difference > 0n ? 1 : 0
}

const alikeButBlanks = (levels: readonly string[]): readonly [string, string] | null => {
  const bare = new Map<string, string>()
  for (const level of levels) {
    const other = bare.get(level.trim())
    if (other !== undefined) return [other, level]
    bare.set(level.trim(), level)
  }
  return null
}
