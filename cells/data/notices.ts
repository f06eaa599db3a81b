// Every notice `data` can give. Rows are counted for the reader from 1, the row after the header; everywhere else from 0.

import type { ClauseEdit, Intent, Level, Notice, Place } from "../../runtime/notice.ts"
import { heading } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { writtenCount } from "../figure/number.ts"

/** A place in the file, as a person counts. */
export const rowText = (record: number): string => `row ${writtenCount(record + 1)}`

const rows = (count: number): string => (count === 1 ? "1 row" : `${writtenCount(count)} rows`)

const rowList = (records: readonly number[], count: number): string =>
  count === 1
    ? `Row ${writtenCount((records[0] ?? 0) + 1)}`
    : count <= records.length
      ? `Rows ${listed(records.map((record) => writtenCount(record + 1)))}`
      : `${rows(count)} (first: ${listed(records.map((record) => writtenCount(record + 1)))})`

const listed = (words: readonly string[], last = "and"): string =>
  words.length < 2 ? (words[0] ?? "") : `${words.slice(0, -1).join(", ")} ${last} ${words.at(-1)}`

const fieldCount = (count: number): string => (count === 1 ? "1 field" : `${writtenCount(count)} fields`)

const raggedRows = (file: string, records: readonly number[], count: number, fields: number, width: number): string =>
  count === 1
    ? `${rowList(records, count)} of ${file} has ${fieldCount(fields)} where the first line has ${writtenCount(width)}`
    : `${rowList(records, count)} of ${file} do not have the ${fieldCount(width)} of the first line (the first of them has ${writtenCount(fields)})`

/** An entry in quotes as a sentence can bear it. */
const entry = (text: string): string => {
  const line = text.replace(/\s+/gu, " ")
  return `"${line.length > 40 ? `${line.slice(0, 40)}…` : line}"`
}

const notice = (
  level: Level,
  code: string,
  clause: string | null,
  at: Place,
  text: string,
  hint: string | null,
  mend: Intent | null = null,
): Notice => ({ level, code: `data/${code}`, clause, at, text, hint, mend })

const mending = (label: string, ...edits: readonly ClauseEdit[]): Intent => ({ label, edits })

// The clauses, as text.

export const noFrom = (): Notice =>
  notice(
    "fault",
    "no-from",
    null,
    heading,
    "This data cell does not say which file it reads.",
    'Write a clause such as from "observations.csv".',
  )

export const formatNotYet = (file: string, format: string, at: Place): Notice =>
  notice(
    "fault",
    "not-available-yet",
    "from",
    at,
    `Reading ${format} is not available yet, so "${file}" cannot be read.`,
    "Save the table as CSV or TSV.",
  )

export const separatorSign = (text: string, at: Place): Notice =>
  notice(
    "fault",
    "separator-sign",
    "separator",
    at,
    `A separator is one sign, and ${entry(text)} is not.`,
    'Write one such as separator ";", or separator tab.',
  )

export const decimalSign = (text: string, at: Place): Notice =>
  notice(
    "fault",
    "decimal-sign",
    "decimal",
    at,
    `The decimal sign is a point or a comma, not ${entry(text)}.`,
    'Write decimal "," or take the clause out.',
  )

export const columnTwice = (clause: "column" | "make" | "total", name: Name, at: Place): Notice =>
  notice("fault", "column-twice", clause, at, `The column ${name} stands here a second time.`, "Give the other one another name.")

export const levelTwice = (name: Name, level: string, at: Place): Notice =>
  notice("fault", "level-twice", "column", at, `The level ${entry(level)} of ${name} stands here twice.`, "Keep one of the two.")

// The file.

export const fileNotHere = (file: string, at: Place): Notice =>
  notice(
    "fault",
    "file-not-here",
    "from",
    at,
    `There is no file called ${file} in this notebook.`,
    "Drop it on the page, or lay it beside the notebook.",
  )

export const notUtf8 = (
  file: string,
  record: number,
  column: Name | null,
  byte: number,
  offset: number,
  as: string | null,
  at: Place,
): Notice =>
  notice(
    "fault",
    "not-utf-8",
    "from",
    at,
    `${file} is not UTF-8 text: byte ${writtenCount(offset + 1)}, in ${record < 0 ? "the header" : rowText(record)}${
      column === null ? "" : ` (${column})`
    }, is ${byte.toString(16).toUpperCase().padStart(2, "0")}${as === null ? "" : `, which many older files use for ${as}`}.`,
    "Save the file as UTF-8 and drop it on the page again.",
  )

export const otherFile = (file: string, what: "utf-16" | "zip" | "gzip" | "parquet" | "binary", at: Place): Notice => {
  const is = {
    "utf-16": "is UTF-16 text, not UTF-8",
    zip: "is a zip archive, such as a spreadsheet's, not text",
    gzip: "is compressed by gzip, not text",
    parquet: "is a Parquet file, which is not available yet",
    binary: "holds bytes of zero, so it is not text",
  }[what]
  return notice("fault", "not-text", "from", at, `${file} ${is}.`, "Save the table as CSV in UTF-8.")
}

export const openQuote = (file: string, record: number, column: Name | null, at: Place): Notice =>
  notice(
    "fault",
    "open-quote",
    "from",
    at,
    `A quote opened in ${record < 0 ? "the header" : rowText(record)} of ${file}${column === null ? "" : ` (${column})`} is never closed.`,
    "Close it in the file; a quote inside quotes is written twice.",
  )

export const emptyFile = (file: string, at: Place): Notice =>
  notice("fault", "empty-file", "from", at, `${file} holds nothing.`, "Drop a file with a header line and rows on the page.")

export const noRows = (file: string, at: Place): Notice =>
  notice("warning", "no-rows", "from", at, `${file} has a header and no rows.`, "If its only line is data, say header no.")

export const longRows = (file: string, records: readonly number[], count: number, fields: number, width: number, at: Place): Notice =>
  notice(
    "fault",
    "long-rows",
    "from",
    at,
    `${raggedRows(file, records, count, fields, width)}; which value belongs to which column cannot be told.`,
    "A field that holds the separator has to stand in quotes in the file; or another separator is meant.",
  )

export const shortRows = (file: string, records: readonly number[], count: number, fields: number, width: number, at: Place): Notice =>
  notice(
    "warning",
    "short-rows",
    "from",
    at,
    `${raggedRows(file, records, count, fields, width)}; what is not there is missing.`,
    "Look at these rows in the file: a value may stand in the wrong column.",
  )

export const trailingFields = (file: string, records: readonly number[], count: number, width: number, at: Place): Notice =>
  notice(
    "remark",
    "trailing-fields",
    "from",
    at,
    `${rowList(records, count)} of ${file} ${count === 1 ? "ends" : "end"} with empty fields beyond the ${width} of the first line; nothing was lost.`,
    null,
  )

export const emptyLines = (file: string, count: number, oneColumn: boolean, at: Place): Notice =>
  notice(
    "remark",
    "empty-lines",
    "from",
    at,
    `${count === 1 ? "1 line" : `${writtenCount(count)} lines`} of ${file} with nothing on ${count === 1 ? "it is" : "them are"} no row.`,
    oneColumn ? 'A row whose only value is missing is written "" in the file.' : null,
  )

export const strayQuotes = (file: string, record: number, count: number, at: Place): Notice =>
  notice(
    "warning",
    "stray-quotes",
    "from",
    at,
    `${count === 1 ? "1 field" : `${writtenCount(count)} fields`} of ${file} ${count === 1 ? "has" : "have"} a quote out of place (first: ${
      record < 0 ? "in the header" : rowText(record)
    }); ${count === 1 ? "it was" : "they were"} read as ${count === 1 ? "it stands" : "they stand"}.`,
    "A field with quotes in it is written in quotes, each quote inside twice.",
  )

export const headerLikeData = (file: string, at: Place, edit: ClauseEdit): Notice =>
  notice(
    "warning",
    "header-like-data",
    "from",
    at,
    `The first line of ${file} has numbers only, and was taken for the names of the columns.`,
    "If it is data, say header no.",
    mending("Write header no", edit),
  )

// What is proposed.

export const separatorProposed = (file: string, separator: string, expected: string, at: Place, edit: ClauseEdit): Notice => {
  const sign = (text: string): string => (text === "\t" ? "a tab" : text === "," ? "a comma" : text === ";" ? "a semicolon" : entry(text))
  return notice(
    "warning",
    "separator-proposed",
    "from",
    at,
    `The first line of ${file} has no ${sign(expected).replace("a ", "")}, so it was read with ${sign(separator)} between fields.`,
    `Write it out as a clause, or say another separator.`,
    mending(`Write ${edit.clause} ${edit.says}`, edit),
  )
}

export const decimalProposed = (column: Name, at: Place, edit: ClauseEdit): Notice =>
  notice(
    "warning",
    "decimal-proposed",
    "from",
    at,
    `Numbers such as those of ${column} are written with a decimal comma, and were read so.`,
    "Write it out as a clause.",
    mending('Write decimal ","', edit),
  )

export const missingProposed = (
  texts: readonly {
    readonly text: string
    readonly in: readonly { readonly name: Name; readonly count: number; readonly first: number }[]
  }[],
  at: Place,
  edit: ClauseEdit,
): Notice =>
  notice(
    "warning",
    "missing-proposed",
    "from",
    at,
    `Read as missing: ${listed(
      texts.map(
        ({ text, in: places }) =>
          `${entry(text)} in ${listed(places.map(({ name, count, first }) => `${name} (${rows(count)}, first: ${rowText(first)})`))}`,
      ),
    )}.`,
    "Write it out as a clause, or mend the file.",
    mending(`Write missing ${edit.says}`, edit),
  )

export const typesProposed = (columns: readonly string[], at: Place, edits: readonly ClauseEdit[]): Notice =>
  notice(
    "remark",
    "types-proposed",
    null,
    at,
    `Nobody said what ${columns.length === 1 ? "this column is" : "these columns are"}, so it was read off the entries: ${listed(columns)}.`,
    "Write the clauses out and look them over.",
    mending(columns.length === 1 ? "Write the clause out" : "Write the clauses out", ...edits),
  )

export const namesMade = (
  made: readonly { readonly name: Name; readonly head: string | null; readonly place: number }[],
  at: Place,
): Notice =>
  notice(
    "remark",
    "names-made",
    "from",
    at,
    `${listed(
      made.map(({ name, head, place }) =>
        head === null || head === "" ? `Column ${place} has no head and is called ${name} here` : `${entry(head)} is called ${name} here`,
      ),
    )}.`,
    "A name has letters, digits and _ only; another one can be given in a column clause, with headed.",
  )

export const headTwice = (head: string, names: readonly Name[], at: Place): Notice =>
  notice(
    "warning",
    "head-twice",
    "from",
    at,
    `${names.length} columns of the file are headed ${entry(head)}; here they are ${listed(names)}, from left to right.`,
    "Make sure which is which.",
  )

export const keptZeros = (column: Name, record: number, text: string, at: Place): Notice =>
  notice(
    "remark",
    "leading-zeros",
    null,
    at,
    `${column} was taken as a category, since as a number ${entry(text)} (${rowText(record)}) would lose its zeros.`,
    `If it is a number, say column ${column} number.`,
  )

export const keptLong = (column: Name, record: number, text: string, at: Place): Notice =>
  notice(
    "remark",
    "long-identifier",
    null,
    at,
    `${column} was taken as text, since ${entry(text)} (${rowText(record)}) has more digits than a number can keep apart.`,
    null,
  )

export const mixed = (
  column: Name,
  numbers: number,
  present: number,
  examples: readonly { readonly record: number; readonly text: string }[],
  at: Place,
): Notice =>
  notice(
    "warning",
    "mixed",
    null,
    at,
    `${column} was taken as a category: ${writtenCount(numbers)} of its ${writtenCount(present)} entries are numbers, but not ${listed(
      examples.map(({ record, text }) => `${entry(text)} (${rowText(record)})`),
    )}.`,
    `Mend these entries in the file, or say in a missing clause which texts stand for a missing value.`,
  )

export const commaDoubt = (column: Name, record: number, text: string, at: Place, edit: ClauseEdit): Notice =>
  notice(
    "warning",
    "comma-doubt",
    null,
    at,
    `${column} was taken as a category: in ${entry(text)} (${rowText(record)}) the comma may be a decimal comma or group thousands.`,
    'If it is a decimal comma, say decimal ","; grouped thousands have to be written without the comma in the file.',
    mending('Write decimal ","', edit),
  )

export const maybeMissing = (column: Name, text: string, count: number, record: number, at: Place, edit: ClauseEdit): Notice =>
  notice(
    "remark",
    "maybe-missing",
    null,
    at,
    `${column} has the level ${entry(text)} in ${rows(count)} (first: ${rowText(record)}).`,
    "If it stands for a missing value, say so in a missing clause.",
    mending(`Write missing ${edit.says}`, edit),
  )

export const blankLevels = (column: Name, one: string, other: string, at: Place): Notice =>
  notice(
    "warning",
    "blank-levels",
    null,
    at,
    `${column} has levels that differ only by blanks: "${one}" and "${other}".`,
    "Take the blanks out in the file where they mean nothing.",
  )

// Columns that were said.

export const noSuchColumn = (
  name: Name,
  head: string | null,
  file: string,
  there: readonly string[],
  near: string | null,
  at: Place,
  edit: ClauseEdit | null,
): Notice =>
  notice(
    "fault",
    "no-such-column",
    "column",
    at,
    head === null ? `${file} has no column headed ${name}.` : `${file} has no column headed ${entry(head)} for ${name}.`,
    near !== null
      ? `The nearest is ${near}.`
      : there.length === 0
        ? "Every column of the file has a clause already."
        : `Its columns are ${listed(there.slice(0, 20))}${there.length > 20 ? " and more" : ""}.`,
    edit === null ? null : mending(`Write column ${edit.says}`, edit),
  )

/** A second column clause for one column of the file. */
export const columnClaimed = (name: Name, by: Name, head: string, at: Place): Notice =>
  notice(
    "fault",
    "column-claimed",
    "column",
    at,
    `The column headed ${entry(head)} is called ${by} already, so it cannot be ${name} too.`,
    `A second one like it is made by make ${name} = ${by}.`,
  )

const unfit = {
  "not-a-number": "which is not a number",
  "too-large": "which is beyond the largest number there is",
  rounded: "which has more digits than a number can keep apart",
  negative: "which is below 0 and no count",
  "not-whole": "which is not whole and no count",
  "not-a-truth": "which is neither true nor false",
  "not-a-date": "which is not a date such as 2024-05-31",
  "not-a-level": "which is not among its levels",
} as const

/** Entries that are not what the column clause says. The column cannot be used until this is mended. */
export const misfit = (
  column: Name,
  file: string,
  first: { readonly record: number; readonly text: string; readonly reason: keyof typeof unfit },
  others: readonly { readonly record: number; readonly text: string }[],
  count: number,
  at: Place,
  near: string | null,
  mend: Intent | null,
): Notice => {
  const more = count - 1
  const rest =
    more === 0
      ? ""
      : `; so do ${writtenCount(more)} more (${others.map(({ record, text }) => `${entry(text)} in ${rowText(record)}`).join(", ")}${more > others.length ? ", …" : ""})`
  return notice(
    "fault",
    "misfit",
    "column",
    at,
    `${rowText(first.record).replace("row", "Row")} of ${file} says ${entry(first.text)} in ${column}, ${unfit[first.reason]}${rest}.`,
    near !== null
      ? `The nearest level is ${entry(near)}.`
      : (mend?.label.replace("Write", "Say") ??
          `Mend the entry in the file, give the column another type, or write missing ${entry(first.text)} if it stands for a missing value`) +
          ".",
    mend,
  )
}

export const lostZeros = (column: Name, count: number, record: number, at: Place, edit: ClauseEdit): Notice =>
  notice(
    "warning",
    "lost-zeros",
    "column",
    at,
    `As a number, ${column} loses the zeros in front of ${count === 1 ? "1 entry" : `${writtenCount(count)} entries`} (first: ${rowText(record)}).`,
    "If the zeros mean something, as in a postal code, it is a category.",
    mending(`Write column ${edit.says}`, edit),
  )

export const nothingPresent = (column: Name, at: Place): Notice =>
  notice("warning", "nothing-present", null, at, `Every entry of ${column} is missing.`, null)

// Make, where and total.

export const bothColumnAndCell = (clause: "make" | "where", name: Name, data: Name | null, at: Place): Notice =>
  notice(
    "fault",
    "column-and-cell",
    clause,
    at,
    `${name} is a column of ${data ?? "this table"} and a cell as well, so it cannot be told which is meant.`,
    `Give the cell ${name} another name, or the column, with headed.`,
  )

export const unknownName = (
  clause: "make" | "where",
  name: Name,
  columns: readonly Name[],
  near: Name | null,
  at: Place,
  edit: ClauseEdit | null,
): Notice =>
  notice(
    "fault",
    "unknown-name",
    clause,
    at,
    `There is no column and no cell called ${name}.`,
    near !== null
      ? `The nearest name is ${near}.`
      : `The columns here are ${listed(columns.slice(0, 20))}${columns.length > 20 ? " and more" : ""}.`,
    edit === null ? null : mending(`Write ${near}`, edit),
  )

export const notAValue = (clause: "make" | "where", name: Name, at: Place): Notice =>
  notice(
    "fault",
    "not-a-value",
    clause,
    at,
    `The cell ${name} is not a single value.`,
    "Only columns, dials and values can stand in an expression here.",
  )

export const columnExists = (name: Name, at: Place): Notice =>
  notice("fault", "column-exists", "make", at, `There is a column ${name} already.`, "Give the new column another name.")

export const notATruth = (is: string, at: Place): Notice =>
  notice(
    "fault",
    "not-a-truth",
    "where",
    at,
    `A where clause needs something true or false, and this is ${is}.`,
    "Compare it with something, as in where x > 0.",
  )

export const lostValues = (name: Name, count: number, at: Place): Notice =>
  notice(
    "warning",
    "lost-values",
    "make",
    at,
    `${name} has no value in ${rows(count)} where what it is made of has one: the result is no finite number; it is missing there.`,
    "Leave these rows out, or say with if(…) what holds there.",
  )

export const comparisonLost = (count: number, at: Place): Notice =>
  notice(
    "warning",
    "lost-values",
    "where",
    at,
    `In ${rows(count)} a part of this is no finite number, and the row was dropped.`,
    "Say with if(…) what holds there.",
  )

/** A step that reads a column with a fault of its own. */
export const stepWaits = (clause: "make" | "where" | "total", column: Name, at: Place): Notice =>
  notice("fault", "waits-for-column", clause, at, `This waits for the column ${column}, which could not be read.`, null)

export const nothingKept = (says: string, at: Place): Notice =>
  notice("warning", "nothing-kept", "where", at, `No row is left: ${says} is true in none.`, null)

export const noSuchTotalColumn = (name: Name, columns: readonly Name[], near: Name | null, at: Place): Notice =>
  notice(
    "fault",
    "no-such-column",
    "total",
    at,
    `There is no column called ${name}.`,
    near === null
      ? `The columns here are ${listed(columns.slice(0, 20))}${columns.length > 20 ? " and more" : ""}.`
      : `The nearest is ${near}.`,
  )

export const notSummable = (name: Name, type: string, at: Place): Notice =>
  notice(
    "fault",
    "not-summable",
    "total",
    at,
    `${name} is a ${type}, and only numbers, counts and truths have a total.`,
    `Put ${name} after by, or leave it out.`,
  )

export const rowsTaken = (at: Place): Notice =>
  notice(
    "fault",
    "rows-taken",
    "total",
    at,
    "A total makes a column rows, and there is one already.",
    "Give that column another name, with headed.",
  )

export const totalMissing = (name: Name, totals: number, missing: number, at: Place, edit: ClauseEdit): Notice =>
  notice(
    "warning",
    "total-missing",
    "total",
    at,
    `${totals === 1 ? "1 total" : `${writtenCount(totals)} totals`} of ${name} ${totals === 1 ? "is" : "are"} missing, because ${name} is missing in ${rows(missing)} that went in.`,
    `Leave these rows out with where known(${name}).`,
    mending(`Write where known(${name})`, edit),
  )
