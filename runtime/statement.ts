// Statements: the text of a cell read into heading, clauses and tokens. Reading is total: it never throws and never loses a clause. It
// knows no kind but `note` and no clause keyword; what clauses mean is said by the kinds.

import type { ClauseEdit } from "./notice.ts"
import * as term from "./statement-parser.terms.ts"
import { parser } from "./statement-parser.ts"

export type TokenType = "word" | "number" | "percent" | "text" | "symbol" | "open-text" | "stray"

/** One token; `text` is as written, `from` and `to` are UTF-16 places in the cell's text. */
export interface Token {
  readonly type: TokenType
  readonly text: string
  readonly from: number
  readonly to: number
}

/** One clause: `tokens` are those after the keyword (so token k of a Place is the keyword for 0, `tokens[k - 1]` otherwise). */
export interface Clause {
  /** In NFC. */
  readonly keyword: string
  readonly from: number
  readonly to: number
  readonly tokens: readonly Token[]
}

export interface Statement {
  readonly text: string
  readonly off: boolean
  /** Kind and name are in NFC. */
  readonly kind: string | null
  readonly name: string | null
  /** Tokens of the heading: `off`, the kind, the name and the rest, as they stand. */
  readonly heading: readonly Token[]
  /** Tokens of the heading after the name. */
  readonly rest: readonly Token[]
  readonly clauses: readonly Clause[]
  /** The body of a note: all after its heading line; null in every other kind and where a note has one line only. */
  readonly prose: { readonly from: number; readonly to: number } | null
}

/** The text of a cell as a statement. Any text at all reads as one. */
export function read(text: string): Statement {
  let off = false
  let kind: string | null = null
  let name: string | null = null
  let prose: Statement["prose"] = null
  const heading: Token[] = []
  const rest: Token[] = []
  const clauses: { keyword: string; from: number; to: number; tokens: Token[] }[] = []
  let part: "heading" | "kind" | "name" | "rest" | "keyword" | "body" = "heading"

  parser.parse(text).iterate({
    enter: (node) => {
      const type = tokenTypes[node.type.id]
      if (type !== undefined) {
        const token: Token = { type, text: text.slice(node.from, node.to), from: node.from, to: node.to }
        const clause = clauses.at(-1)
        if (part === "body") clause?.tokens.push(token)
        else if (part !== "keyword") heading.push(token)
        if (part === "heading" && node.type.id === term.Off) off = true
        else if (part === "kind") kind = token.text.normalize("NFC")
        else if (part === "name") name = token.text.normalize("NFC")
        else if (part === "rest") rest.push(token)
        else if (part === "keyword" && clause !== undefined) clause.keyword = token.text.normalize("NFC")
        if (clause !== undefined) clause.to = node.to
        return
      }
      switch (node.name) {
        case "Note":
          kind = "note"
          break
        case "Kind":
          part = "kind"
          break
        case "CellName":
          part = "name"
          break
        case "Rest":
          part = "rest"
          break
        case "Clause":
          clauses.push({ keyword: "", from: node.from, to: node.to, tokens: [] })
          break
        case "Keyword":
          part = "keyword"
          break
        case "Body":
          part = "body"
          break
        case "Prose":
          prose = { from: node.from + 1, to: node.to }
          break
      }
    },
  })
  return { text, off, kind, name, heading, rest, clauses, prose }
}

/** What a key is made of: tokens joined by one space, a clause a line, words in NFC, everything else as written. Reads back as itself. */
export function canonical(statement: Statement): string {
  const line = (tokens: readonly Token[]): string => tokens.map(plain).join("").slice(0, -1)
  const lines = [line(statement.heading), ...statement.clauses.map((clause) => `${clause.keyword} ${line(clause.tokens)}`.trimEnd())]
  if (statement.prose !== null) lines.push(statement.text.slice(statement.prose.from, statement.prose.to))
  return lines.join("\n")
}

/**
 * The text with one clause said otherwise, everything else byte for byte. A new clause goes last, indented as the clause above, before
 * blank lines and comments at the end; a clause taken away takes its lines with it. A comment inside a clause of several lines that is
 * said anew moves to a line above it. A note and an empty cell have no clauses, and stay as they are. An edit of the clause "" is one of
 * the heading, which can be said otherwise but not taken away.
 */
export function rewritten(text: string, edit: ClauseEdit): string {
  const statement = read(text)
  if (statement.kind === null || statement.kind === "note") return text
  if (edit.clause === "") return edit.says === null ? text : saidInHeading(statement, edit.says)
  const clause = statement.clauses.filter(({ keyword }) => keyword === edit.clause)[edit.nth]
  if (clause === undefined) return edit.says === null ? text : added(statement, edit.keyword ?? edit.clause, edit.says)
  return edit.says === null ? without(text, clause) : said(text, clause, edit.keyword ?? edit.clause, edit.says)
}

const tokenTypes: Readonly<Record<number, TokenType>> = {
  [term.Word]: "word",
  [term.Off]: "word",
  [term.NoteWord]: "word",
  [term.Number]: "number",
  [term.Percent]: "percent",
  [term.Text]: "text",
  [term.OpenText]: "open-text",
  [term.Symbol]: "symbol",
  [term.Stray]: "stray",
}

/** A token and what parts it from the next: an open text ends with its line only, so nothing may follow it there. */
const plain = (token: Token): string =>
  token.type === "word" ? `${token.text.normalize("NFC")} ` : `${token.text}${token.type === "open-text" ? "\n" : " "}`

/** Where the line that holds `at` begins. */
const lineStart = (text: string, at: number): number => text.lastIndexOf("\n", at - 1) + 1

/** Where the line that holds `at` ends: before its line feed, and before the carriage return that may stand there. */
function lineEnd(text: string, at: number): number {
  const feed = text.indexOf("\n", at)
  if (feed < 0) return text.length
  return feed > at && text[feed - 1] === "\r" ? feed - 1 : feed
}

const indentation = (text: string, clause: Clause): string => text.slice(lineStart(text, clause.from), clause.from)

/** The line feed of this text, so that a text from another system keeps its own. */
const feedOf = (text: string): string => (text.includes("\r\n") ? "\r\n" : "\n")

const phrase = (keyword: string, says: string): string => (says === "" ? keyword : `${keyword} ${says}`)

function added(statement: Statement, keyword: string, says: string): string {
  const { text, clauses, heading } = statement
  const last = clauses.at(-1)
  const indent = last === undefined ? "  " : indentation(text, last)
  const end = lineEnd(text, last?.to ?? heading.at(-1)?.to ?? 0)
  return `${text.slice(0, end)}${feedOf(text)}${indent}${phrase(keyword, says)}${text.slice(end)}`
}

function without(text: string, clause: Clause): string {
  const from = lineStart(text, clause.from)
  const feed = text.indexOf("\n", clause.to)
  if (feed >= 0) return text.slice(0, from) + text.slice(feed + 1)
  return text.slice(0, from > 0 && text[from - 2] === "\r" ? from - 2 : Math.max(0, from - 1))
}

function said(text: string, clause: Clause, keyword: string, says: string): string {
  const comments = commentsWithin(text, clause)
  const lead = comments.map((comment) => comment + feedOf(text) + indentation(text, clause)).join("")
  return text.slice(0, clause.from) + lead + phrase(keyword, says) + text.slice(clause.to)
}

function saidInHeading({ text, heading }: Statement, says: string): string {
  const from = heading[0]?.from ?? 0
  return text.slice(0, from) + says + text.slice(heading.at(-1)?.to ?? from)
}

/** Comments between the first and the last token of a clause: what is left over when its tokens are taken out. */
function commentsWithin(text: string, clause: Clause): readonly string[] {
  const comments: string[] = []
  let from = clause.from + firstWordLength(text, clause)
  for (const token of clause.tokens) {
    for (const line of text.slice(from, token.from).split("\n")) {
      const comment = line.trim()
      if (comment.startsWith("#")) comments.push(comment)
    }
    from = token.to
  }
  return comments
}

/** The keyword as written may be longer or shorter than in NFC. */
function firstWordLength(text: string, clause: Clause): number {
  const word = /^[\p{L}_][\p{L}\p{M}\p{Nd}_]*/u.exec(text.slice(clause.from, clause.to))
  return word === null ? 0 : word[0].length
}
