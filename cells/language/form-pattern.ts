// The notation of forms, read into patterns. Forms are written by us, so a form that does not read is our mistake and throws, at the
// first use of the clause.

import type { ClauseWords } from "../../runtime/kind.ts"

export type SlotType = "NAME" | "CELL" | "ID" | "TEXT" | "NUMBER" | "BOUND" | "CHOICE" | "CALL" | "EXPR" | "TERMS"

export type Item =
  | { readonly type: "word"; readonly word: string }
  | { readonly type: "slot"; readonly slot: SlotType; readonly more: ReadonlySet<string>; readonly label: string }
  | { readonly type: "one-of"; readonly words: readonly string[]; readonly label: string }
  | { readonly type: "optional" | "list"; readonly of: readonly Item[] }

/** The forms of a clause as patterns, read once for each clause. */
export function parsedForms(words: ClauseWords): readonly (readonly Item[])[] {
  const known = remembered.get(words)
  if (known !== undefined) return known
  const forms = words.forms.map((form) => parsed(form))
  remembered.set(words, forms)
  return forms
}

/** The forms as a person would write the clause: labels in capitals, where something of the user's own stands. */
export const writtenForms = (keyword: string, words: ClauseWords): readonly string[] =>
  parsedForms(words).map((items) => (items.length === 0 ? keyword : `${keyword} ${writtenItems(items)}`))

const remembered = new WeakMap<ClauseWords, readonly (readonly Item[])[]>()

const slotTypes: ReadonlySet<string> = new Set(["NAME", "CELL", "ID", "TEXT", "NUMBER", "BOUND", "CHOICE", "CALL", "EXPR", "TERMS"])
const isSlotType = (text: string): text is SlotType => slotTypes.has(text)

function parsed(form: string): readonly Item[] {
  const pieces = form
    .trim()
    .split(/\s+/)
    .filter((piece) => piece !== "")
  let at = 0
  const items = (close: string | null): readonly Item[] => {
    const found: Item[] = []
    while (at < pieces.length) {
      const piece = pieces[at++] ?? ""
      if (piece === close) return found
      if (piece === "(") found.push({ type: "optional", of: items(")?") })
      else if (piece === "{") found.push({ type: "list", of: items("},") })
      else found.push(item(piece, form))
    }
    if (close !== null) throw new RangeError(`The form "${form}" lacks ${close}`)
    return found
  }
  return items(null)
}

function item(piece: string, form: string): Item {
  const [head = "", label, ...rest] = piece.split(":")
  if (rest.length > 0 || label === "") throw new RangeError(`The form "${form}" has a slot that does not read: ${piece}`)
  const [type = "", ...more] = head.split("+")
  if (isSlotType(type)) return { type: "slot", slot: type, more: new Set(more), label: label ?? type.toLowerCase() }
  if (head.includes("|")) return { type: "one-of", words: head.split("|"), label: label ?? "word" }
  if (label !== undefined) return { type: "one-of", words: [head], label }
  return { type: "word", word: piece }
}

const writtenItems = (items: readonly Item[]): string => items.map(writtenItem).join(" ")

function writtenItem(item: Item): string {
  switch (item.type) {
    case "word":
      return item.word
    case "slot":
      return item.slot === "TEXT" ? `"${item.label.toUpperCase()}"` : item.label.toUpperCase()
    case "one-of":
      return item.words.join("|")
    case "optional":
      return `[${writtenItems(item.of)}]`
    case "list":
      return `${writtenItems(item.of)}, …`
  }
}
