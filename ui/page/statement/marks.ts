// A statement in colours: which stretch of the text is what. The editor and the statements that stand still are coloured from the same
// marks, so that a statement does not change its looks when a hand goes into it. A word is a keyword where the forms of its clause say so.

import type { Clause, Token } from "../../../runtime/statement.ts"
import { formWords } from "./expected.ts"
import type { Reading } from "./reading.ts"

export type MarkKind =
  | "kind"
  | "name"
  | "off"
  | "keyword"
  | "word"
  | "call"
  | "number"
  | "text"
  | "sign"
  | "comment"
  | "stray"
  | "live"
  | "title"

/** One stretch of one kind; marks are in order and do not overlap. */
export interface Mark {
  readonly from: number
  readonly to: number
  readonly kind: MarkKind
}

/** All marks of a statement. */
export function marks(reading: Reading): readonly Mark[] {
  const { statement } = reading
  const found: Mark[] = []
  const named = statement.heading.findIndex((token, i) => token.text.normalize("NFC") === statement.name && i > (statement.off ? 1 : 0))
  statement.heading.forEach((token, i) => {
    if (statement.off && i === 0) found.push({ from: token.from, to: token.to, kind: "off" })
    else if (i === (statement.off ? 1 : 0)) found.push({ from: token.from, to: token.to, kind: "kind" })
    else if (i === named) found.push({ from: token.from, to: token.to, kind: "name" })
    else found.push(marked(token, statement.heading[i + 1]))
  })
  for (const clause of statement.clauses) {
    const said = reading.words?.clauses[clause.keyword]
    const words = said === undefined ? noWords : formWords(said)
    found.push({ from: clause.from, to: clause.from + keywordLength(statement.text, clause), kind: "keyword" })
    clause.tokens.forEach((token, i) => {
      const isWord = token.type === "word" && words.has(token.text) && !isFirstOfName(clause, i)
      found.push(isWord ? { from: token.from, to: token.to, kind: "word" } : marked(token, clause.tokens[i + 1]))
    })
  }
  if (statement.prose !== null) return [...found, ...proseMarks(statement.text, statement.prose.from)]
  return withComments(statement.text, found)
}

/** A column may be called as a word of the form is: what opens a clause whose forms open with a slot is a name. */
function isFirstOfName(clause: Clause, token: number): boolean {
  return token === 0 && clause.tokens.length > 1 && clause.keyword === "column"
}

function marked(token: Token, next: Token | undefined): Mark {
  const { from, to } = token
  switch (token.type) {
    case "number":
    case "percent":
      return { from, to, kind: "number" }
    case "text":
    case "open-text":
      return { from, to, kind: "text" }
    case "symbol":
      return { from, to, kind: "sign" }
    case "stray":
      return { from, to, kind: "stray" }
    case "word":
      if (operators.has(token.text)) return { from, to, kind: "sign" }
      return { from, to, kind: next?.text === "(" && next.from === to ? "call" : "name" }
  }
}

const noWords: ReadonlySet<string> = new Set()
const operators: ReadonlySet<string> = new Set(["and", "or", "not", "in"])

/** Comments are no tokens: they are what is left between the marks and begins with `#`. */
function withComments(text: string, found: readonly Mark[]): readonly Mark[] {
  const all: Mark[] = []
  let from = 0
  const gap = (to: number): void => {
    for (const match of text.slice(from, to).matchAll(/#[^\n]*/g)) {
      all.push({ from: from + match.index, to: from + match.index + match[0].length, kind: "comment" })
    }
  }
  for (const mark of found) {
    gap(mark.from)
    all.push(mark)
    from = mark.to
  }
  gap(text.length)
  return all
}

/** In a note: its titles, and the live values in braces. */
function proseMarks(text: string, start: number): readonly Mark[] {
  const found: Mark[] = []
  for (const match of text.slice(start).matchAll(/^#{1,6} [^\n]*|\\\{|\{[^{}\n]*\}/gm)) {
    const from = start + match.index
    if (match[0] !== "\\{") found.push({ from, to: from + match[0].length, kind: match[0].startsWith("#") ? "title" : "live" })
  }
  return found
}

function keywordLength(text: string, clause: Clause): number {
  return /^[\p{L}_][\p{L}\p{M}\p{Nd}_]*/u.exec(text.slice(clause.from))?.[0].length ?? 0
}
