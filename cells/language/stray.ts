// Characters that no clause can use: a typographic minus, curly quotes, a multiplication sign. Word processors put them in unasked, so
// each is named, and where every one of a clause has one sure reading, a mend writes them all.

import { strayCharacter } from "./notices.ts"
import type { Put, Slip } from "./slip.ts"
import { placeAt, type Source } from "./source.ts"

/** The first stray character of a clause; null where there is none. */
export function strayIn(source: Source, predictor: boolean): Slip | null {
  const index = source.tokens.findIndex((token) => token.type === "stray")
  const token = source.tokens[index]
  if (token === undefined) return null
  return strayCharacter(placeAt(source, index), token.text, putsFor(source, predictor), predictor)
}

/** What each stray of the clause is to become; null where one of them could be anything. */
function putsFor(source: Source, predictor: boolean): readonly Put[] | null {
  // A clause with more of them is no slip of the hand, and no mend is worth the search for pairs.
  if (source.tokens.filter((token) => token.type === "stray").length > 100) return null
  const puts: Put[] = []
  for (let k = 0; k < source.tokens.length; k++) {
    const token = source.tokens[k]
    if (token?.type !== "stray") continue
    const here = source.first + k
    if (opening.has(token.text)) {
      const close = source.tokens.findIndex((other, j) => j > k && other.type === "stray" && closing.has(other.text))
      const last = source.tokens[close]
      if (last === undefined) return null
      const origin = source.tokens[0]?.from ?? 0
      const inside = source.text.slice(token.to - origin, last.from - origin)
      if (inside.includes('"') || inside.includes("\\")) return null
      puts.push({ from: here, to: source.first + close + 1, text: `"${inside}"` })
      k = close
      continue
    }
    const next = source.tokens[k + 1]
    if (token.text === "&") {
      const doubled = next?.text === "&" && next.from === token.to
      puts.push({ from: here, to: here + (doubled ? 2 : 1), text: "and" })
      if (doubled) k++
      continue
    }
    if (token.text === "!") {
      puts.push({ from: here, to: here + 1, text: "not " })
      continue
    }
    const text = predictor ? (predictorSigns[token.text] ?? signs[token.text]) : signs[token.text]
    if (text === undefined) return null
    puts.push({ from: here, to: here + 1, text })
  }
  return puts
}

const opening: ReadonlySet<string> = new Set(["“", "„", "”", "‘", "’", "'", "«", "»"])
const closing: ReadonlySet<string> = opening

const signs: Readonly<Record<string, string>> = {
  "−": "-",
  "–": "-",
  "—": "-",
  "×": "*",
  "·": "*",
  "∙": "*",
  "÷": "/",
  "≤": "<=",
  "≥": ">=",
  "≠": "!=",
  "²": "^2",
  "³": "^3",
  "∞": "infinity",
  "[": "(",
  "]": ")",
}

const predictorSigns: Readonly<Record<string, string>> = { "·": ".", "∙": ".", ":": "." }
