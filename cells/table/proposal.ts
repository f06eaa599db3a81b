// From evidence to proposals: a type for each column nobody declared, and for the file the decimal sign and the texts that stand for
// missing. Only what is sure is proposed; what is not is left as words and said, with the entries that stood in the way.

import type { ColumnType } from "./column.ts"
import type { Evidence, Example, NumberEvidence } from "./evidence.ts"
import type { Met } from "./readers.ts"

/** Why a column that looks like numbers was not proposed as such. */
export type Doubt =
  | { readonly type: "leading-zeros"; readonly example: Example }
  | { readonly type: "long"; readonly example: Example }
  /** At least half of the entries are numbers; `examples` are the first that are not. */
  | { readonly type: "mixed"; readonly numbers: number; readonly present: number; readonly examples: readonly Example[] }
  /** Every entry is a number under a decimal comma, but the comma may as well group thousands. */
  | { readonly type: "comma"; readonly example: Example }

export type ProposedColumn = { readonly type: ColumnType; readonly doubt: Doubt | null }

/** A text that commonly means missing, in a column that holds nothing else but its type; with the column's index. */
export type ProposedMissing = { readonly text: string; readonly in: readonly ({ readonly column: number } & Met)[] }

export type Proposal = {
  readonly decimal: "." | ","
  readonly missing: readonly ProposedMissing[]
  /** By index of the column; null where there was no evidence to weigh. */
  readonly columns: readonly (ProposedColumn | null)[]
}

/** @param decimal  what the statement says; null where it says nothing */
export const proposal = (evidence: readonly (Evidence | null)[], decimal: "." | "," | null): Proposal => {
  const sign = decimal ?? proposedDecimal(evidence)
  const columns = evidence.map((of) => (of === null ? null : proposedColumn(of, sign, decimal === null)))
  const missing = new Map<string, ({ readonly column: number } & Met)[]>()
  evidence.forEach((of, column) => {
    const type = columns[column]?.type
    if (of === null || type === undefined || type === "category" || type === "text") return
    for (const [text, met] of of.maybeMissing) {
      const places = missing.get(text) ?? []
      places.push({ column, count: met.count, first: met.first })
      missing.set(text, places)
    }
  })
  return { decimal: sign, missing: [...missing].map(([text, places]) => ({ text, in: places })), columns }
}

/** A comma, when some column is numbers under it alone and surely, and none is numbers under the point alone. */
const proposedDecimal = (evidence: readonly (Evidence | null)[]): "." | "," => {
  let sure = false
  for (const of of evidence) {
    if (of === null) continue
    const words = rest(of)
    if (words === 0) continue
    if (of.point.decimals > 0 && of.point.count === words) return "."
    if (of.comma.surelyDecimals > 0 && of.comma.count === words) sure = true
  }
  return sure ? "," : "."
}

const proposedColumn = (of: Evidence, decimal: "." | ",", commaIsOpen: boolean): ProposedColumn => {
  const numbers = decimal === "." ? of.point : of.comma
  const words = rest(of)
  if (words > 0) {
    if (numbers.count === words) return numberColumn(numbers)
    if (of.dates === words) return { type: "date", doubt: null }
    if (of.trueFalse === words || of.yesNo === words) return { type: "truth", doubt: null }
    const comma = of.comma.count === words ? of.point.others[0] : undefined
    if (commaIsOpen && decimal === "." && comma !== undefined) return { type: "category", doubt: { type: "comma", example: comma } }
    if (numbers.count * 2 >= words)
      return { type: "category", doubt: { type: "mixed", numbers: numbers.count, present: words, examples: numbers.others } }
  }
  return { type: "category", doubt: null }
}

const numberColumn = (numbers: NumberEvidence): ProposedColumn => {
  // A name that is long or begins with zeros is kept as it is written: as a number it would be another one.
  if (numbers.firstLong !== null) return { type: "text", doubt: { type: "long", example: numbers.firstLong } }
  if (numbers.firstLeadingZero !== null) return { type: "category", doubt: { type: "leading-zeros", example: numbers.firstLeadingZero } }
  return { type: numbers.whole === numbers.count && numbers.negative === 0 ? "count" : "number", doubt: null }
}

/** Entries that are there and do not commonly mean missing. */
const rest = (of: Evidence): number => {
  let count = of.present
  for (const met of of.maybeMissing.values()) count -= met.count
  return count
}

/** Columns of words: `text` where most entries differ, so that as a category it would say nothing. */
export const isRatherText = (levels: number, rows: number): boolean => levels > 20 && levels * 2 > rows
