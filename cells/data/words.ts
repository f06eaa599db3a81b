// The words of `data`: a file read into a table, and what is made, kept and totalled of it. Reading the clauses says what is wrong with
// them as text; whether the file agrees is found out by find.ts.

import type { Names, Use, Words } from "../../runtime/kind.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Clause, Statement } from "../../runtime/statement.ts"
import type { Name } from "../../runtime/value.ts"
import { type Expression, namesIn } from "../language/expression.ts"
import { type Filled, type Matched, readClauses } from "../language/form.ts"
import type { ColumnType } from "../table/column.ts"
import * as say from "./notices.ts"

export type Named = { readonly name: Name; readonly at: Place }

/** A `column` clause. `nth` counts the column clauses, so that a click can rewrite this one. */
export type ColumnSaid = {
  readonly name: Name
  readonly headed: string | null
  readonly type: ColumnType
  readonly unit: string | null
  readonly called: string | null
  readonly levels: readonly string[] | null
  readonly coding: "corner" | "sum_to_zero"
  readonly at: Place
  readonly nth: number
}

/** A `make` or a `where`, in the order written. */
export type Step = { readonly expression: Expression; readonly clause: Clause; readonly nth: number; readonly at: Place } & (
  | { readonly type: "make"; readonly name: Name }
  | { readonly type: "where" }
)

export type Total = { readonly columns: readonly Named[]; readonly by: readonly Named[]; readonly says: string; readonly at: Place }

export type DataSaid = {
  readonly name: Name | null
  readonly from: { readonly file: string; readonly format: "csv" | "tsv"; readonly at: Place } | null
  readonly separator: string | null
  readonly decimal: "." | "," | null
  readonly header: boolean
  /** Null where there is no clause. */
  readonly missing: readonly string[] | null
  readonly columns: readonly ColumnSaid[]
  readonly steps: readonly Step[]
  readonly total: Total | null
}

const numberForm = (type: string): string => `NAME:column ( headed TEXT:head )? ${type} ( unit TEXT:unit )? ( called TEXT:called )?`
const plainForm = (type: string): string => `NAME:column ( headed TEXT:head )? ${type} ( called TEXT:called )?`
const categoryForm =
  "NAME:column ( headed TEXT:head )? category ( called TEXT:called )? ( levels { TEXT:levels }, )? ( coding sum_to_zero )?"

/** In the order of `columnForms`, so that the form that fitted says the type. */
const columnTypes: readonly ColumnType[] = ["number", "count", "category", "truth", "date", "text"]
const columnForms: readonly string[] = [
  numberForm("number"),
  numberForm("count"),
  categoryForm,
  plainForm("truth"),
  plainForm("date"),
  plainForm("text"),
]

const fromForms = ["TEXT:file", "TEXT:file as csv", "TEXT:file as tsv", "TEXT:file as json", "TEXT:file as parquet"] as const

export const dataWords: Words<DataSaid> = {
  word: "data",
  name: "needed",
  says: "A file read into a table; columns made, rows kept and totals, in the order written",
  example: 'data observations\n  from "observations.csv"',
  clauses: {
    from: { forms: fromForms, says: "The enclosed file, and how it is written where its name does not tell" },
    separator: { forms: ["TEXT:sign", "tab"], says: "The sign between two fields, where it is not a comma" },
    decimal: { forms: ["TEXT:sign"], says: "The decimal sign in the file, where it is not a point" },
    header: { forms: ["no", "yes"], says: "Whether the first line names the columns (yes unless said otherwise)" },
    missing: { forms: ["{ TEXT:texts },"], says: "Texts read as missing values; an empty field always is" },
    column: {
      forms: columnForms,
      again: true,
      says: "A column: its type, and how the file heads it, its unit, what it is called, its levels (the first is the reference)",
    },
    make: { forms: ["ID:column = EXPR:expression"], again: true, says: "A new column, computed from the others" },
    where: { forms: ["EXPR:expression"], again: true, says: "Keep only the rows where this is true" },
    total: {
      forms: ["{ NAME:columns }, by { NAME:by },"],
      says: "One row for each pattern of some columns, with totals of others, and `rows`, how many rows went into it",
    },
  },
  parse(statement) {
    const { clauses, notices } = readClauses(statement, dataWords)
    const found: Notice[] = []
    const nths = ordinals(statement)
    const one = (keyword: string): Matched | null => clauses.find((clause) => clause.keyword === keyword) ?? null
    const said: DataSaid = {
      name: statement.name,
      from: fromSaid(one("from"), statement, found),
      separator: separatorSaid(one("separator"), found),
      decimal: decimalSaid(one("decimal"), found),
      header: !(one("header")?.words.includes("no") ?? false),
      missing: one("missing") === null ? null : textsIn(one("missing"), "texts").map(({ text }) => text),
      columns: clauses.flatMap((clause) => columnSaid(clause, nths)),
      steps: clauses.flatMap((clause) => step(clause, statement, nths)),
      total: totalSaid(one("total"), statement),
    }
    twice(said, found)
    return { said, notices: [...notices, ...found] }
  },
  names(said): Names {
    const uses = new Map<Name, Use>()
    for (const { expression } of said.steps) {
      for (const { name, at } of namesIn(expression)) {
        // A cell cannot read itself, so its own name can only be a column here.
        if (name !== said.name && !uses.has(name)) uses.set(name, { name, parts: "all", either: true, at })
      }
    }
    return { defines: said.name, uses: [...uses.values()], files: said.from === null ? [] : [said.from.file] }
  },
}

/** Of each clause, which of those with its keyword it is, counted from 0. */
function ordinals(statement: Statement): readonly number[] {
  const seen = new Map<string, number>()
  return statement.clauses.map(({ keyword }) => {
    const nth = seen.get(keyword) ?? 0
    seen.set(keyword, nth + 1)
    return nth
  })
}

const textsIn = (matched: Matched | null, label: string): readonly { readonly text: string; readonly at: Place }[] =>
  (matched?.slots[label] ?? []).flatMap((filled) => (filled.type === "TEXT" ? [{ text: filled.text, at: filled.at }] : []))

const namesOf = (filled: readonly Filled[] | undefined): readonly Named[] =>
  (filled ?? []).flatMap((slot) => (slot.type === "NAME" || slot.type === "ID" ? [{ name: slot.name, at: slot.at }] : []))

function fromSaid(matched: Matched | null, statement: Statement, notices: Notice[]): DataSaid["from"] {
  const file = textsIn(matched, "file")[0]
  if (matched === null || file === undefined) {
    if (!statement.clauses.some(({ keyword }) => keyword === "from")) notices.push(say.noFrom())
    return null
  }
  const named = /\.([^.]+)$/.exec(file.text)?.[1]?.toLowerCase() ?? ""
  const stated = (["csv", "tsv", "json", "parquet"] as const).find((format) => matched.words.includes(format))
  const format = stated ?? (named === "json" || named === "parquet" ? named : named === "tsv" || named === "tab" ? "tsv" : "csv")
  if (format === "json" || format === "parquet") {
    notices.push(say.formatNotYet(file.text, format, file.at))
    return null
  }
  return { file: file.text, format, at: file.at }
}

function separatorSaid(matched: Matched | null, notices: Notice[]): string | null {
  if (matched === null) return null
  const sign = textsIn(matched, "sign")[0]
  if (sign === undefined) return "\t"
  if ([...sign.text].length === 1 && !/["\n\r]/.test(sign.text)) return sign.text
  notices.push(say.separatorSign(sign.text, sign.at))
  return null
}

function decimalSaid(matched: Matched | null, notices: Notice[]): "." | "," | null {
  const sign = textsIn(matched, "sign")[0]
  if (sign === undefined) return null
  if (sign.text === "." || sign.text === ",") return sign.text
  notices.push(say.decimalSign(sign.text, sign.at))
  return null
}

function columnSaid(matched: Matched, nths: readonly number[]): readonly ColumnSaid[] {
  const column = matched.keyword === "column" ? namesOf(matched.slots["column"])[0] : undefined
  const type = columnTypes[matched.form]
  if (column === undefined || type === undefined) return []
  const levels = textsIn(matched, "levels").map(({ text }) => text)
  return [
    {
      name: column.name,
      headed: textsIn(matched, "head")[0]?.text ?? null,
      type,
      unit: textsIn(matched, "unit")[0]?.text ?? null,
      called: textsIn(matched, "called")[0]?.text ?? null,
      levels: levels.length === 0 ? null : levels,
      coding: matched.words.includes("sum_to_zero") ? "sum_to_zero" : "corner",
      at: column.at,
      nth: nths[matched.clause] ?? 0,
    },
  ]
}

function step(matched: Matched, statement: Statement, nths: readonly number[]): readonly Step[] {
  const filled = matched.slots["expression"]?.[0]
  const clause = statement.clauses[matched.clause]
  if (filled?.type !== "EXPR" || clause === undefined) return []
  const { expression } = filled
  const nth = nths[matched.clause] ?? 0
  if (matched.keyword === "where") return [{ type: "where", expression, clause, nth, at: { clause: matched.clause, from: 0, to: 1 } }]
  const column = namesOf(matched.slots["column"])[0]
  return column === undefined ? [] : [{ type: "make", name: column.name, expression, clause, nth, at: column.at }]
}

function totalSaid(matched: Matched | null, statement: Statement): Total | null {
  if (matched === null) return null
  const columns = namesOf(matched.slots["columns"])
  const by = namesOf(matched.slots["by"])
  const says = `total ${columns.map(({ name }) => name).join(", ")} by ${by.map(({ name }) => name).join(", ")}`
  return { columns, by, says, at: { clause: matched.clause, from: 0, to: (statement.clauses[matched.clause]?.tokens.length ?? 0) + 1 } }
}

/** Names, levels and columns of a total that stand twice where they can stand once. */
function twice(said: DataSaid, notices: Notice[]): void {
  const names = new Set<Name>()
  for (const { name, at } of said.columns) {
    if (names.has(name)) notices.push(say.columnTwice("column", name, at))
    names.add(name)
  }
  for (const made of said.steps) {
    if (made.type !== "make") continue
    if (names.has(made.name)) notices.push(say.columnTwice("make", made.name, made.at))
    names.add(made.name)
  }
  for (const { name, levels, at } of said.columns) {
    const seen = new Set<string>()
    const level = levels?.find((text) => seen.size === seen.add(text).size)
    if (level !== undefined) notices.push(say.levelTwice(name, level, at))
  }
  const totalled = new Set<Name>()
  for (const { name, at } of [...(said.total?.columns ?? []), ...(said.total?.by ?? [])]) {
    if (totalled.has(name)) notices.push(say.columnTwice("total", name, at))
    totalled.add(name)
  }
}
