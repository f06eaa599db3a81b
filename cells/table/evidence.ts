// What the entries of a column speak for, gathered over the whole file before any type is proposed: a proposal made from the first rows
// would be a guess about the rest. Numbers are recognised without being read; a string is made only for what is no number.

import { dayOf } from "./date.ts"
import { meansMissing } from "./dialect.ts"
import { Dictionary } from "./dictionary.ts"
import { byteOf, shapeOf, written } from "./number.ts"
import { type Met, type MissingTexts, type Taker, trimmedFrom, trimmedTo } from "./readers.ts"
import { text } from "./utf8.ts"

export type Example = { readonly record: number; readonly text: string }

/** The entries written as numbers under one decimal sign. */
export type NumberEvidence = {
  readonly count: number
  readonly whole: number
  readonly negative: number
  readonly leadingZeros: number
  readonly firstLeadingZero: Example | null
  readonly long: number
  readonly firstLong: Example | null
  /** Entries with the decimal sign in them, and those of them that cannot be a grouping of thousands. */
  readonly decimals: number
  readonly surelyDecimals: number
  /** The first entries that are neither numbers nor texts that commonly mean missing. */
  readonly others: readonly Example[]
}

export type Evidence = {
  /** Entries that are not missing. */
  readonly present: number
  readonly point: NumberEvidence
  readonly comma: NumberEvidence
  readonly dates: number
  readonly trueFalse: number
  readonly yesNo: number
  /** Texts that commonly mean missing, as written. */
  readonly maybeMissing: ReadonlyMap<string, Met>
}

const examplesKept = 3
/** After this many entries that are no number, date, truth or common text for missing, the column is words, whatever follows. */
const settledAfter = 1000

export class EvidenceTaker implements Taker {
  private readonly missing: MissingTexts
  private present = 0
  private readonly point = new NumberTally()
  private readonly comma = new NumberTally()
  private dates = 0
  private trueFalse = 0
  private yesNo = 0
  private plain = 0
  private readonly maybeMissing = new Map<string, { count: number; first: number }>()
  private readonly dictionary = new Dictionary()
  private readonly sorts: Sort[] = []

  constructor(missing: MissingTexts) {
    this.missing = missing
  }

  take(bytes: Uint8Array, begin: number, end: number, record: number): void {
    const from = trimmedFrom(bytes, begin, end)
    const to = trimmedTo(bytes, from, end)
    if (from === to || this.missing.has(bytes, from, to)) return
    this.present++
    const underPoint = this.point.add(shapeOf(bytes, from, to, byteOf.point), bytes, from, to, record)
    if (underPoint !== 0) {
      // Without a decimal sign a number is the same under both; with a point in it it is none under the comma.
      if ((underPoint & written.decimals) === 0) this.comma.add(underPoint, bytes, from, to, record)
      else this.comma.other(bytes, from, to, record)
      return
    }
    const underComma = this.comma.add(shapeOf(bytes, from, to, byteOf.comma), bytes, from, to, record)
    if (underComma !== 0) {
      this.point.other(bytes, from, to, record)
      return
    }
    if (this.plain >= settledAfter) return
    const code = this.dictionary.code(bytes, from, to)
    const sort = this.sorts[code] ?? sortOf(text(bytes, from, to))
    if (code === this.sorts.length) this.sorts.push(sort)
    if (sort === "missing") {
      const words = text(bytes, from, to)
      const met = this.maybeMissing.get(words)
      if (met === undefined) this.maybeMissing.set(words, { count: 1, first: record })
      else met.count++
      return
    }
    this.point.other(bytes, from, to, record)
    this.comma.other(bytes, from, to, record)
    if (sort === "date") this.dates++
    else if (sort === "true-false") this.trueFalse++
    else if (sort === "yes-no") this.yesNo++
    else this.plain++
  }

  absent(): void {
    // A field that is not there says nothing about the type.
  }

  taken(): Evidence {
    return {
      present: this.present,
      point: this.point.taken(),
      comma: this.comma.taken(),
      dates: this.dates,
      trueFalse: this.trueFalse,
      yesNo: this.yesNo,
      maybeMissing: this.maybeMissing,
    }
  }
}

type Sort = "missing" | "date" | "true-false" | "yes-no" | "plain"

const sortOf = (words: string): Sort => {
  if (meansMissing(words)) return "missing"
  const lower = words.length <= 5 ? words.toLowerCase() : ""
  if (lower === "true" || lower === "false") return "true-false"
  if (lower === "yes" || lower === "no") return "yes-no"
  return Number.isNaN(dayOf(words)) ? "plain" : "date"
}

class NumberTally {
  private count = 0
  private whole = 0
  private negative = 0
  private leadingZeros = 0
  private firstLeadingZero: Example | null = null
  private long = 0
  private firstLong: Example | null = null
  private decimals = 0
  private surelyDecimals = 0
  private readonly others: Example[] = []

  add(shape: number, bytes: Uint8Array, from: number, to: number, record: number): number {
    if (shape === 0) return 0
    this.count++
    if ((shape & written.whole) !== 0) this.whole++
    if ((shape & written.negative) !== 0) this.negative++
    if ((shape & written.decimals) !== 0) {
      this.decimals++
      if ((shape & written.threeDecimals) === 0) this.surelyDecimals++
    }
    if ((shape & written.leadingZero) !== 0) {
      this.leadingZeros++
      this.firstLeadingZero ??= { record, text: text(bytes, from, to) }
    }
    if ((shape & written.long) !== 0) {
      this.long++
      this.firstLong ??= { record, text: text(bytes, from, to) }
    }
    return shape
  }

  other(bytes: Uint8Array, from: number, to: number, record: number): void {
    if (this.others.length < examplesKept) this.others.push({ record, text: text(bytes, from, to) })
  }

  taken(): NumberEvidence {
    return {
      count: this.count,
      whole: this.whole,
      negative: this.negative,
      leadingZeros: this.leadingZeros,
      firstLeadingZero: this.firstLeadingZero,
      long: this.long,
      firstLong: this.firstLong,
      decimals: this.decimals,
      surelyDecimals: this.surelyDecimals,
      others: this.others,
    }
  }
}
