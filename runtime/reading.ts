// A reading: what a cell's text says as a member of its notebook, without knowing any other cell. It is made once for each cell object and
// remembered by it. Names are read from the text, so no cell chooses at run time what it reads.

import type { Cell } from "./document.ts"
import { hash } from "./hash.ts"
import type { AnyWords, Names, Use } from "./kind.ts"
import { nearest } from "./nearest.ts"
import type { Intent, Notice, Place } from "./notice.ts"
import { notAvailableYet, unknownKind } from "./notices.ts"
import type { Statement } from "./statement.ts"
import { canonical, read } from "./statement.ts"
import type { Hash, Name } from "./value.ts"

export interface Reading {
  readonly cell: Cell
  readonly statement: Statement
  /** The statement in its canonical form. */
  readonly canonical: string
  /** Its hash: stands for the statement in what went in. */
  readonly hash: Hash
  /** Empty cells and cells switched off define nothing and are not evaluated. */
  readonly idle: boolean
  /** Of an idle cell: the name it would define were it on. */
  readonly asleep: Name | null
  readonly defines: Name | null
  readonly uses: readonly Use[]
  /** What is read of each name, over all its uses: certain parts, in order of their names, or all of it. */
  readonly reads: ReadonlyMap<Name, readonly string[] | "all">
  /** Names of enclosures that are read. */
  readonly files: readonly string[]
  /** All notices of the statement itself. */
  readonly notices: readonly Notice[]
  /** Whether one of them is a fault: then the cell is not evaluated. */
  readonly faulty: boolean
  /** A kind that threw while reading: our mistake, shown as such. */
  readonly crash: { readonly text: string; readonly stack: string } | null
}

export type Reader = (cell: Cell) => Reading

/** Reads cells by these words, each cell object once. */
export function createReader(words: readonly AnyWords[]): Reader {
  const byWord = new Map(words.map((each) => [each.word, each]))
  const known = new WeakMap<Cell, Reading>()
  return (cell) => {
    let reading = known.get(cell)
    if (reading === undefined) {
      reading = readingOf(cell, byWord)
      known.set(cell, reading)
    }
    return reading
  }
}

/** Where the name stands in the heading, for notices about it. */
export function nameAt(statement: Statement): Place {
  const at = (statement.off ? 1 : 0) + 1
  return { clause: -1, from: at, to: at + 1 }
}

/** The kinds of version 1 of the language. One that has no words yet is not available yet, which is another thing than unknown. */
const kindsOfTheLanguage: ReadonlySet<string> = new Set([
  "data",
  "model",
  "link",
  "compare",
  "scales",
  "residuals",
  "misfit",
  "effects",
  "prediction",
  "terms",
  "dial",
  "value",
  "decision",
  "note",
])

function readingOf(cell: Cell, byWord: ReadonlyMap<string, AnyWords>): Reading {
  const statement = read(cell.text)
  const { kind, name, off } = statement
  const form = canonical(statement)
  const bare = {
    cell,
    statement,
    canonical: form,
    hash: hash(form),
    idle: false,
    asleep: null,
    ...readsNothing,
    faulty: false,
    crash: null,
  }
  if (kind === null || off) return { ...bare, idle: true, asleep: off ? name : null, defines: null, notices: [] }

  const words = byWord.get(kind)
  if (words === undefined) {
    return { ...bare, defines: name, notices: [kindNotice(statement, kind, byWord)], faulty: true }
  }
  try {
    const { said, notices } = words.parse(statement)
    const names: Names = words.names(said)
    const faulty = notices.some(({ level }) => level === "fault")
    const reads = partsByName(names.uses)
    return { ...bare, defines: names.defines, uses: names.uses, reads, files: names.files, notices, faulty }
  } catch (error) {
    return { ...bare, defines: name, notices: [], crash: crashOf(error) }
  }
}

const readsNothing = { uses: [], reads: new Map<Name, "all">(), files: [] } as const

function partsByName(uses: readonly Use[]): ReadonlyMap<Name, readonly string[] | "all"> {
  const reads = new Map<Name, readonly string[] | "all">()
  for (const { name, parts } of uses) {
    const former = reads.get(name) ?? []
    reads.set(name, parts === "all" || former === "all" ? "all" : [...new Set([...former, ...parts])].sort())
  }
  return reads
}

/** What was thrown, as the text and the stack to show. */
export function crashOf(error: unknown): { readonly text: string; readonly stack: string } {
  if (error instanceof Error) return { text: `${error.name}: ${error.message}`, stack: error.stack ?? "" }
  return { text: String(error), stack: "" }
}

function kindNotice(statement: Statement, kind: string, byWord: ReadonlyMap<string, AnyWords>): Notice {
  const token = statement.off ? 1 : 0
  const at: Place = { clause: -1, from: token, to: token + 1 }
  if (kindsOfTheLanguage.has(kind)) return notAvailableYet(kind, at)
  const kinds = [...byWord.keys()]
  const near = nearest(kind, kinds)
  return unknownKind(kind, near, kinds, at, near === null ? null : replacement(statement, at, near))
}

/** A mend that puts another word at a place, all else as it stands; null where there is no such place. */
export function replacement(statement: Statement, at: Place, word: string): Intent | null {
  const { text } = statement
  const clause = statement.clauses[at.clause]
  const tokens = clause === undefined ? statement.heading : clause.tokens
  const shift = clause === undefined ? 0 : 1
  const [first, last, old, end] = [tokens[0], tokens.at(-1), tokens[at.from - shift], tokens[at.to - 1 - shift]]
  if (first === undefined || last === undefined || old === undefined || end === undefined || statement.prose !== null) return null
  const nth = clause === undefined ? 0 : statement.clauses.slice(0, at.clause).filter(({ keyword }) => keyword === clause.keyword).length
  const says = text.slice(first.from, old.from) + word + text.slice(end.to, last.to)
  return { label: `Write ${word}`, edits: [{ cell: null, clause: clause?.keyword ?? "", nth, says }] }
}
