// Completion: what could stand at the caret, each with one line of help. Pure: a text, a place and what is around the cell go in, and a
// list comes out; the editor only draws it. It offers what the forms of the clause expect, and never what could not be read there.

import type { Clause, Statement, Token } from "../../../runtime/statement.ts"
import { type Expected, expected } from "./expected.ts"
import { type Reading, readingOf } from "./reading.ts"

export interface Option {
  readonly label: string
  /** What is put in place of the word at the caret; the label where left out. */
  readonly apply?: string
  readonly says: string
  readonly sort: "kind" | "clause" | "word" | "cell" | "column" | "file" | "family" | "link" | "function" | "level"
  /** More is to be chosen right after it. */
  readonly more?: true
}

export interface Options {
  readonly from: number
  readonly options: readonly Option[]
}

export interface KnownColumn {
  readonly name: string
  readonly type: string
  readonly unit: string | null
  readonly called: string | null
  readonly levels: readonly string[]
}

/** What a statement can name, as far as the page knows. */
export interface Surroundings {
  readonly kinds: readonly { readonly word: string; readonly says: string }[]
  readonly cells: readonly { readonly name: string; readonly kind: string; readonly says: string }[]
  readonly columns: readonly KnownColumn[]
  readonly files: readonly string[]
  readonly families: readonly { readonly name: string; readonly says: string }[]
  /** Links, those that are legal for the family where one is said. */
  links(
    family: string | null,
  ): readonly { readonly name: string; readonly says: string /** A parameter in brackets. */; readonly takes: boolean }[]
  readonly functions: readonly { readonly name: string; readonly says: string }[]
  readonly predictorCalls: readonly { readonly name: string; readonly says: string }[]
  /** The family said in the cell, or in the model it shows. */
  readonly family: string | null
}

/** What could stand at `caret`; null where nothing is offered. */
export function completion(text: string, caret: number, around: Surroundings): Options | null {
  const word = /[\p{L}_][\p{L}\p{M}\p{Nd}_]*$/u.exec(text.slice(0, caret))
  const from = word === null ? caret : word.index
  const reading = readingOf(text)
  const options = optionsAt(reading, from, around)
  const unique = [...new Map(options.map((option) => [option.label, option])).values()]
  return unique.length === 0 ? null : { from, options: unique }
}

function optionsAt(reading: Reading, from: number, around: Surroundings): readonly Option[] {
  const { statement } = reading
  const { text } = statement
  const lineStart = text.lastIndexOf("\n", from - 1) + 1
  const lead = text.slice(lineStart, from)
  if (lead.includes("#") && statement.prose === null) return []
  if (statement.prose !== null && from >= statement.prose.from) return inProse(text, from, around)
  const first = statement.heading[0]
  if (first === undefined || from <= first.from) return kinds(around)
  if (statement.off && statement.heading[1] !== undefined && from <= statement.heading[1].from) return kinds(around)
  if (lead.trim() === "" && lineStart > 0) return clauses(reading, from)
  const clause = statement.clauses.findLast((each) => each.from < from)
  if (clause !== undefined) return inClause(reading, clause, from, around)
  return statement.rest.length > 0 && statement.rest.some((token) => token.text === "=" && token.to <= from) ? expressions(around) : []
}

const kinds = (around: Surroundings): readonly Option[] =>
  around.kinds.map(({ word, says }) => ({ label: word, apply: `${word} `, says, sort: "kind" }))

/** The clauses of the kind that may still be said; those already there come only where they may stand again. */
function clauses({ statement, words }: Reading, from: number): readonly Option[] {
  const said = new Set(statement.clauses.filter((clause) => clause.from !== from).map(({ keyword }) => keyword))
  return Object.entries(words?.clauses ?? {})
    .filter(([keyword, clause]) => clause.later !== true && (clause.again === true || !said.has(keyword)))
    .map(([keyword, { says, forms }]) => ({
      label: keyword,
      apply: forms[0] === "" ? keyword : `${keyword} `,
      says,
      sort: "clause",
      more: true,
    }))
}

function inClause({ words, statement }: Reading, clause: Clause, from: number, around: Surroundings): readonly Option[] {
  const forms = words?.clauses[clause.keyword]
  if (forms === undefined) return []
  const before = clause.tokens.filter((token) => token.to <= from)
  if (before.at(-1)?.type === "open-text") return []
  return expected(forms, before).flatMap((next) => offered(next, clause.keyword, before, statement, around))
}

function offered(next: Expected, keyword: string, before: readonly Token[], statement: Statement, around: Surroundings): readonly Option[] {
  if (next.type === "word") return /^\w+$/.test(next.text) ? [{ label: next.text, says: "", sort: "word" }] : []
  switch (next.slot) {
    case "NAME":
      return columns(around)
    case "CELL":
      return cells(around, (kind) => kind === next.label || (kind === keyword && !around.kinds.some(({ word }) => word === next.label)))
    case "TEXT":
      return /file/i.test(next.label) || (keyword === "from" && statement.kind === "data") ? files(around) : []
    case "BOUND":
    case "ARGUMENT":
      return cells(around, isNumber)
    case "CHOICE":
      return [...levels(before, around), ...cells(around, isNumber)]
    case "CALL":
      return calls(next.label, statement, around)
    case "EXPR":
      return expressions(around)
    case "TERMS":
      return [
        ...columns(around),
        ...around.predictorCalls.map(({ name, says }): Option => ({ label: name, apply: `${name}(`, says, sort: "function" })),
        { label: "intercept", says: "The constant: present unless it is taken away", sort: "word" },
      ]
    case "ID":
    case "NUMBER":
      return []
  }
}

const isNumber = (kind: string): boolean => kind === "dial" || kind === "value"

function cells(around: Surroundings, fits: (kind: string) => boolean): readonly Option[] {
  return around.cells.filter(({ kind }) => fits(kind)).map(({ name, says }) => ({ label: name, says, sort: "cell" }))
}

function columns(around: Surroundings): readonly Option[] {
  return around.columns.map(({ name, type, unit, called }) => ({
    label: name,
    says: [type, ...(unit === null ? [] : [unit]), ...(called === null ? [] : [called])].join(" · "),
    sort: "column",
  }))
}

const files = (around: Surroundings): readonly Option[] =>
  around.files.map((name) => ({ label: `"${name}"`, says: "An enclosed file", sort: "file" }))

function calls(label: string, statement: Statement, around: Surroundings): readonly Option[] {
  if (label === "family") return around.families.map(({ name, says }) => ({ label: name, says, sort: "family" }))
  const own = statement.clauses.find(({ keyword }) => keyword === "family")?.tokens[0]?.text ?? around.family
  return around.links(own).map(({ name, says, takes }) => ({ label: name, says, sort: "link", ...(takes ? { apply: `${name}(` } : {}) }))
}

/** The levels of the column that is being given a value: `hold lot = `. */
function levels(before: readonly Token[], around: Surroundings): readonly Option[] {
  const name = before.at(-1)?.text === "=" ? before.at(-2)?.text : undefined
  const column = around.columns.find((each) => each.name === name)
  return (column?.levels ?? []).map((level) => ({ label: JSON.stringify(level), says: `A level of ${name}`, sort: "level" }))
}

function expressions(around: Surroundings): readonly Option[] {
  return [
    ...columns(around),
    ...cells(around, (kind) => isNumber(kind) || kind === "model"),
    ...around.functions.map(({ name, says }): Option => ({ label: name, apply: `${name}(`, says, sort: "function" })),
  ]
}

/** In a note only what stands in braces is an expression. */
function inProse(text: string, from: number, around: Surroundings): readonly Option[] {
  const open = text.lastIndexOf("{", from - 1)
  if (open < 0 || text[open - 1] === "\\" || /[}\n;]/.test(text.slice(open, from))) return []
  return [
    ...cells(around, (kind) => isNumber(kind) || kind === "model"),
    ...around.functions.map(({ name, says }): Option => ({ label: name, apply: `${name}(`, says, sort: "function" })),
  ]
}
