// The statement that a dropped file starts with: everything its beginning speaks for written out as clauses, to be looked over. Free of
// statistics and of expressions, so that the page can load it.

import { type Dialect, isRatherText, nameFrom, namesFor, proposal, readBytes, suggestedSeparator } from "../table/index.ts"
import { columnSays, quoted, separatorEdit, textsSay } from "./clauses.ts"
import { headedFor } from "./layout.ts"

/** As much of a file as is worth looking at: pass this many bytes, or all there are. */
export const startBytes = 1 << 18

/**
 * The text of a data cell for a file.
 *
 * @param head  the first `startBytes` bytes, or the whole of a smaller file
 */
export const startFor = (fileName: string, head: Uint8Array): string => {
  const name = nameFrom(fileName.replace(/\.[^.]*$/, ""), "observations")
  const isTabbed = /\.(tsv|tab)$/i.test(fileName)
  const lines = [`data ${name}`, `from ${quoted(fileName)}`]
  const whole = head.length < startBytes ? head : cut(head)
  const expected = isTabbed ? "\t" : ","
  const separator = suggestedSeparator(whole, expected)
  const stated: Dialect = { separator, decimal: ".", header: true, missing: [] }
  const weighed = readBytes(whole, stated, (heads) => heads.map(() => ({ do: "weigh" })))
  // What cannot be read is said by the cell itself, with its place; a cut inside quotes only looks as if it could not.
  const broken = weighed.broken !== null && !(weighed.broken.type === "open-quote" && head.length >= startBytes)
  if (broken || weighed.heads.length === 0) return written(lines)
  const proposed = proposal(
    weighed.columns.map((column) => (column.did === "weigh" ? column.evidence : null)),
    null,
  )
  if (separator !== expected) {
    const edit = separatorEdit(separator, fileName)
    if (edit.clause === "from") lines[1] = `from ${edit.says}`
    else lines.push(`${edit.clause} ${edit.says}`)
  }
  if (proposed.decimal === ",") lines.push(`decimal ${quoted(",")}`)
  const missing = proposed.missing.map(({ text }) => text)
  if (missing.length > 0) lines.push(`missing ${textsSay(missing)}`)
  const read = readBytes(whole, { ...stated, decimal: proposed.decimal, missing }, (heads) =>
    heads.map((_, i) => ({ do: "read", type: proposed.columns[i]?.type ?? "category", levels: null })),
  )
  const columns = namesFor(read.heads)
  read.columns.forEach((column, i) => {
    const headed = columns[i]
    if (column.did !== "read" || headed === undefined) return
    const { data } = column.read
    const rather = data.type === "category" && proposed.columns[i]?.doubt === null && isRatherText(data.levels.length, data.codes.length)
    lines.push(
      `column ${columnSays({ name: headed.name, headed: headedFor(headed), type: rather ? "text" : data.type, unit: headed.unit })}`,
    )
  })
  return written(lines)
}

const written = ([heading, ...clauses]: readonly string[]): string => [heading, ...clauses.map((clause) => `  ${clause}`)].join("\n")

/** Up to its last line end: the rest is a row cut short. */
const cut = (head: Uint8Array): Uint8Array => {
  const last = Math.max(head.lastIndexOf(10), head.lastIndexOf(13))
  return last < 0 ? head : head.subarray(0, last + 1)
}
