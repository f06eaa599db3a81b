// What may come next in a clause, by the forms of its kind: the forms are walked along the tokens that are there, and what the walk
// would take after the last of them is what is expected. Completion and help come from here; faults do not (they are form.ts's).

import type { Token } from "../../../runtime/statement.ts"

export type SlotType = "NAME" | "CELL" | "ID" | "TEXT" | "NUMBER" | "BOUND" | "CHOICE" | "CALL" | "EXPR" | "TERMS"

/** A word or sign of the form, or a slot; `argument` is what stands in the brackets of a call. */
export type Expected =
  | { readonly type: "word"; readonly text: string }
  | { readonly type: "slot"; readonly slot: SlotType | "ARGUMENT"; readonly label: string }

/** Everything that may stand after `tokens` (the clause without its keyword), each once. */
export function expected(forms: readonly string[], tokens: readonly Token[]): readonly Expected[] {
  const found = new Map<string, Expected>()
  for (const form of forms) {
    walk(parts(form), tokens, 0, (next) => found.set(next.type === "word" ? next.text : `${next.slot}:${next.label}`, next))
  }
  return [...found.values()]
}

type Part =
  | { readonly type: "word"; readonly text: string }
  | { readonly type: "slot"; readonly slot: SlotType; readonly label: string }
  | { readonly type: "optional"; readonly of: readonly Part[] }
  | { readonly type: "list"; readonly of: readonly Part[] }

const known = new Map<string, readonly Part[]>()

/** A form as parts: `{ … },` is a list, `( … )?` may be left out. */
function parts(form: string): readonly Part[] {
  const remembered = known.get(form)
  if (remembered !== undefined) return remembered
  const stack: Part[][] = [[]]
  for (const word of form.split(/\s+/).filter((each) => each !== "")) {
    const top = stack.at(-1) ?? []
    if (word === "{" || word === "(") stack.push([])
    else if (word === "}," || word === ")?") {
      stack.pop()
      stack.at(-1)?.push({ type: word === ")?" ? "optional" : "list", of: top })
    } else {
      const slot = /^([A-Z]+):(\w+)$/.exec(word)
      top.push(slot === null ? { type: "word", text: word } : { type: "slot", slot: slot[1] as SlotType, label: slot[2] ?? "" })
    }
  }
  const made = stack[0] ?? []
  known.set(form, made)
  return made
}

/** Walks the parts from token `at` and gives every token the walk can end before; what would be taken past the last one is handed to `tell`. */
function walk(all: readonly Part[], tokens: readonly Token[], at: number, tell: (next: Expected) => void): ReadonlySet<number> {
  let ends: ReadonlySet<number> = new Set([at])
  for (const part of all) {
    const after = new Set<number>()
    for (const from of ends) {
      if (part.type === "optional") {
        after.add(from)
        for (const end of walk(part.of, tokens, from, tell)) after.add(end)
      } else if (part.type === "list") {
        for (const end of list(part.of, tokens, from, tell)) after.add(end)
      } else for (const end of taken(part, tokens, from, tell)) after.add(end)
    }
    ends = after
  }
  return ends
}

function list(of: readonly Part[], tokens: readonly Token[], from: number, tell: (next: Expected) => void): ReadonlySet<number> {
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
  part: Extract<Part, { type: "word" | "slot" }>,
  tokens: readonly Token[],
  from: number,
  tell: (next: Expected) => void,
): readonly number[] {
  const token = tokens[from]
  if (token === undefined) {
    tell(part)
    return []
  }
  if (part.type === "word") return token.text === part.text ? [from + 1] : []
  const signed = token.text === "-" || token.text === "+" ? from + 1 : from
  const value = tokens[signed]
  const isNumber = value?.type === "number" || value?.type === "percent"
  switch (part.slot) {
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
      return call(part.label, tokens, from, tell)
    case "EXPR":
    case "TERMS":
      tell(part)
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
