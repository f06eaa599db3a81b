// Names for columns: what a file heads otherwise than a name gets one made here, always the same one for the same heads. Nothing is
// renamed silently: the head goes with the name, to be written out as `headed`.

import { isWord, reserved } from "../../runtime/tokens.ts"
import type { Name } from "../../runtime/value.ts"

/** A column as the file heads it. `head` is null where the file has no header line; `unit` is what stood in brackets at its end. */
export type Headed = { readonly name: Name; readonly head: string | null; readonly unit: string | null }

/** A head in one line, as a text of a clause can hold it. */
export const headText = (raw: string): string => raw.normalize("NFC").replace(/\s+/gu, " ").trim()

/** A name for each head, each name once; `taken` are names that are given already. */
export const namesFor = (heads: readonly (string | null)[], taken: ReadonlySet<Name> = new Set()): readonly Headed[] => {
  const used = new Set(taken)
  // Heads that are names already keep them, whatever stands before them.
  for (const head of heads) if (head !== null && isName(head)) used.add(head)
  const kept = new Set<Name>(taken)
  return heads.map((head, i): Headed => {
    if (head !== null && isName(head) && !kept.has(head)) {
      kept.add(head)
      return { name: head, head, unit: null }
    }
    const { words, unit } = parted(head ?? "")
    const name = free(nameFrom(words, `column_${i + 1}`), used)
    used.add(name)
    return { name, head, unit }
  })
}

/** A name made of any text, such as a file's name; `fallback` where nothing of it can stand in a name. */
export const nameFrom = (words: string, fallback: Name): Name => {
  const joined = words
    .normalize("NFC")
    .replace(/[^\p{L}\p{M}\p{Nd}_]+/gu, "_")
    .replace(/^[_\p{M}]+|_+$/gu, "")
  if (joined === "") return fallback
  return isName(joined) ? joined : `_${joined}`
}

const isName = (head: string): boolean => isWord(head) && !reserved.has(head)

/** `body mass (kg)` is words and a unit; a bracket that is long or says an assignment (`sex (1 = male)`) is no unit. */
const parted = (head: string): { readonly words: string; readonly unit: string | null } => {
  const parts = /^(.*\S)\s*[([]([^()[\]]+)[)\]]$/u.exec(head)
  const unit = parts?.[2]?.trim() ?? ""
  return parts === null || unit === "" || unit.length > 12 || /[=,;]/.test(unit)
    ? { words: head, unit: null }
    : { words: parts[1] as string, unit }
}

const free = (name: Name, used: ReadonlySet<Name>): Name => {
  if (!used.has(name)) return name
  let number = 2
  while (used.has(`${name}_${number}`)) number++
  return `${name}_${number}`
}
