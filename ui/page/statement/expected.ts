// What may come next in a clause, by the forms of its kind: the forms are walked along the tokens that are there, and what the walk
// would take after the last of them is what is expected. Completion and help come from here; faults do not (they are form.ts's).

import { type Item, parsedForms, type SlotType } from "../../../cells/language/form-pattern.ts"
import type { ClauseWords } from "../../../runtime/kind.ts"
import type { Token } from "../../../runtime/statement.ts"

/** A word or sign of the form, or a slot; `ARGUMENT` is what stands in the brackets of a call. */
export type Expected =
  | { readonly type: "word"; readonly text: string }
  | { readonly type: "slot"; readonly slot: SlotType | "ARGUMENT"; readonly label: string }

/** Everything that may stand after `tokens` (the clause without its keyword), each once. */
export function expected(words: ClauseWords, tokens: readonly Token[]): readonly Expected[] {
  const found = new Map<string, Expected>()
  const tell = (next: Expected): void => {
    found.set(next.type === "word" ? next.text : `${next.slot}:${next.label}`, next)
  }
  for (const form of parsedForms(words)) walk(form, tokens, 0, tell)
  return [...found.values()]
}

/** Every word that stands in some form of the clause, outside its slots. */
export function formWords(words: ClauseWords): ReadonlySet<string> {
  const found = new Set<string>()
  const gather = (items: readonly Item[]): void => {
    for (const item of items) {
      if (item.type === "word") found.add(item.word)
      else if (item.type === "one-of") for (const word of item.words) found.add(word)
      else if (item.type !== "slot") gather(item.of)
    }
  }
  for (const form of parsedForms(words)) gather(form)
  return found
}

/** Walks the parts from token `at` and gives every token the walk can end before; what would be taken past the last one is handed to `tell`. */
function walk(all: readonly Item[], tokens: readonly Token[], at: number, tell: (next: Expected) => void): ReadonlySet<number> {
  let ends: ReadonlySet<number> = new Set([at])
  for (const part of all) {
    const after = new Set<number>()
    for (const from of ends) {
      for (const end of endings(part, tokens, from, tell)) after.add(end)
    }
    ends = after
  }
  return ends
}

function endings(part: Item, tokens: readonly Token[], from: number, tell: (next: Expected) => void): Iterable<number> {
  switch (part.type) {
    case "optional":
    case "list":
      return part.type === "list" ? list(part.of, tokens, from, tell) : [from, ...walk(part.of, tokens, from, tell)]
    case "word":
    case "one-of":
    case "slot":
      return taken(part, tokens, from, tell)
  }
}

function list(of: readonly Item[], tokens: readonly Token[], from: number, tell: (next: Expected) => void): ReadonlySet<number> {
  const after = new Set<number>()
  const due = [from]
  for (let start = due.pop(); start !== undefined; start = due.pop()) {
    for (const end of walk(of, tokens, start, tell)) {
      if (after.has(end)) continue
      after.add(end)
      if (tokens[end]?.text === ",") due.push(end + 1)
    }
  }
  return after
}

/** Where one word or slot that begins at `from` can end. */
function taken(
  part: Extract<Item, { type: "word" | "one-of" | "slot" }>,
  tokens: readonly Token[],
  from: number,
  tell: (next: Expected) => void,
): readonly number[] {
  const token = tokens[from]
  if (part.type !== "slot") {
    const words = part.type === "word" ? [part.word] : part.words
    if (token === undefined) for (const text of words) tell({ type: "word", text })
    return token !== undefined && words.includes(token.text) ? [from + 1] : []
  }
  const { slot, label } = part
  if (token === undefined) {
    tell({ type: "slot", slot, label })
    return []
  }
  const signed = token.text === "-" || token.text === "+" ? from + 1 : from
  const value = tokens[signed]
  const isNumber = value?.type === "number" || value?.type === "percent"
  switch (slot) {
    case "NAME":
    case "CELL":
    case "ID":
      return token.type === "word" ? [from + 1] : []
    case "TEXT": {
      let end = from
      while (tokens[end]?.type === "text") end++
      return end > from ? [end] : []
    }
    case "NUMBER":
      return isNumber ? [signed + 1] : []
    case "BOUND":
      return isNumber || value?.type === "word" ? [signed + 1] : []
    case "CHOICE":
      return isNumber || value?.type === "word" || token.type === "text" ? [signed + 1] : []
    case "CALL":
      return call(label, tokens, from, tell)
    case "EXPR":
    case "TERMS":
      tell({ type: "slot", slot, label })
      return [tokens.length]
  }
}

function call(label: string, tokens: readonly Token[], from: number, tell: (next: Expected) => void): readonly number[] {
  if (tokens[from]?.type !== "word") return []
  if (tokens[from + 1]?.text !== "(") return [from + 1]
  const close = tokens.findIndex((token, i) => i > from + 1 && token.text === ")")
  if (close >= 0) return [close + 1]
  const last = tokens.at(-1)?.text
  if (last === "(" || last === "," || last === "-") tell({ type: "slot", slot: "ARGUMENT", label })
  return []
}
