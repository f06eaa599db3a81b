// A table as lines of text: words flush left, numbers with their points under one another, heads over their columns.

import { pointAligned } from "../drawing/number.ts"

export interface Column {
  readonly head: string
  readonly align: "text" | "number"
  readonly entries: readonly string[]
}

/** The head, then one line for each row. All columns have as many entries. */
export function textTable(columns: readonly Column[]): readonly string[] {
  const set = columns.map(({ head, align, entries }) => {
    const aligned = align === "number" ? numbers(entries) : entries
    const width = Math.max(signs(head), ...aligned.map(signs))
    const pad = (text: string): string =>
      align === "number" ? " ".repeat(width - signs(text)) + text : text + " ".repeat(width - signs(text))
    return { head: pad(head), entries: aligned.map(pad) }
  })
  const line = (texts: readonly string[]): string => texts.join(gap).trimEnd()
  const rows = Math.max(0, ...columns.map(({ entries }) => entries.length))
  return [line(set.map(({ head }) => head)), ...Array.from({ length: rows }, (_, i) => line(set.map(({ entries }) => entries[i] ?? "")))]
}

const gap = "   "

/** Numbers on their points; what is no single number (an interval, a word) stands at the right end. */
function numbers(entries: readonly string[]): readonly string[] {
  const single = entries.map((entry) => /^[−+]?[\d\u202f]+(\.\d+)?$/u.test(entry))
  const aligned = pointAligned(entries.filter((_, i) => single[i]))
  let taken = 0
  return entries.map((entry, i) => (single[i] ? (aligned[taken++] ?? entry) : entry))
}

const signs = (text: string): number => [...text].length
