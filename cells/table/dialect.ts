// How a separated text is written: the sign between fields, the decimal sign, the header, the texts that stand for missing. What the
// first line suggests is proposed, never taken without a word.

/** What reading needs to know. `separator` is one character. */
export type Dialect = {
  readonly separator: string
  readonly decimal: "." | ","
  readonly header: boolean
  /** Texts read as missing; an empty field always is. */
  readonly missing: readonly string[]
}

/** The signs looked for in a first line that has none of those expected, in order of preference. */
const candidates = [",", ";", "\t", "|"] as const

/**
 * The separator that the first record speaks for: `expected` where it has one; else the candidate it has most of; `expected` too where
 * it has none.
 *
 * @param head  the beginning of the file, at least its first record or 64 KiB
 */
export const suggestedSeparator = (head: Uint8Array, expected: string): string => {
  const counts = new Map<number, number>()
  let quoted = false
  for (const byte of head) {
    if (byte === 34) quoted = !quoted
    else if (!quoted && (byte === 10 || byte === 13)) {
      if (counts.size > 0) break
    } else if (!quoted) counts.set(byte, (counts.get(byte) ?? 0) + 1)
  }
  const count = (sign: string): number => counts.get(sign.charCodeAt(0)) ?? 0
  if (count(expected) > 0) return expected
  let best = expected
  for (const sign of candidates) if (count(sign) > count(best)) best = sign
  return best
}

/** Texts that commonly stand for a missing value; compared in lower case. None of them is a number. */
const commonlyMissing: ReadonlySet<string> = new Set([
  "na",
  "n/a",
  "#n/a",
  "nan",
  "null",
  "nil",
  "none",
  "missing",
  "-",
  "--",
  "\u2013",
  "\u2014",
  ".",
  "?",
  "*",
])

export const meansMissing = (text: string): boolean => text.length <= 8 && commonlyMissing.has(text.toLowerCase())
