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

/** Numbers on their points, intervals with both ends on theirs; what is neither (a word, a power of ten) stands at the right end. */
function numbers(entries: readonly string[]): readonly string[] {
  const aligned = aligning(entries.filter(isNumber), pointAligned)
  const intervals = aligning(entries.filter(isInterval), (all) => {
    const ends = all.map((entry) => entry.split(" to "))
    const [low, high] = [pointAligned(ends.map(([from = ""]) => from)), pointAligned(ends.map(([, to = ""]) => to))]
    return all.map((_, i) => `${low[i]} to ${high[i]}`)
  })
  return entries.map((entry) => (isNumber(entry) ? aligned() : isInterval(entry) ? intervals() : entry))
}

/** Aligns some of the entries and hands them out in order. */
function aligning(some: readonly string[], align: (all: readonly string[]) => readonly string[]): () => string {
  const aligned = align(some)
  let taken = 0
  return () => aligned[taken++] ?? ""
}

const isNumber = (entry: string): boolean => /^[−+]?[\d\u202f]+(\.\d+)?$/u.test(entry)
const isInterval = (entry: string): boolean => entry.split(" to ").length === 2 && entry.split(" to ").every(isNumber)

const signs = (text: string): number => [...text].length
