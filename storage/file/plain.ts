// The plain form of a notebook: the texts of its cells alone, parted by lines of exactly three hyphens, for writing by hand and for version
// control. A line inside a cell that would part it carries a backslash more; a cell's text is all that stands between two such lines, so
// reading what was written gives the same texts back, blank ones too.

import { mostCells, mostTextBytes, textBytes } from "./bounds.ts"
import { type FileNotice, plainNotText, tooManyCells, tooMuchText } from "./notices.ts"

/** What could be made out of a file of the plain form. It never throws: what is wrong is in the notices, with its line. */
export interface PlainOpened {
  readonly cells: readonly PlainCell[]
  readonly notices: readonly FileNotice[]
}

/** A cell of the plain form and the line of the file it begins on, counted from 1. */
export interface PlainCell {
  readonly text: string
  readonly line: number
}

/** Reads a file of the plain form, within the bounds of the format. */
export function readPlain(bytes: Uint8Array): PlainOpened {
  const text = textIn(bytes)
  if (text === null) return { cells: [], notices: [plainNotText()] }
  const notices: FileNotice[] = []
  const cells = plainCells(text).filter((cell, i) => {
    if (i === mostCells) notices.push(tooManyCells(cell.line, mostCells))
    const fits = textBytes(cell.text) <= mostTextBytes
    if (i < mostCells && !fits) notices.push(tooMuchText(cell.line, `on line ${cell.line}`, mostTextBytes))
    return i < mostCells && fits
  })
  return { cells, notices }
}

/** The cells of a text in the plain form, with their places. Line ends of other systems and a byte-order mark are taken as those of this one. */
export function plainCells(file: string): PlainCell[] {
  const lines = file
    .replace(/^\uFEFF/, "")
    .replaceAll("\r\n", "\n")
    .split("\n")
  // The file's last line feed ends its last line and begins none.
  if (lines.at(-1) === "") lines.pop()
  const cells: PlainCell[] = []
  let held: string[] = []
  let first = 1
  const finish = (): void => {
    if (held.length > 0) cells.push({ text: held.join("\n"), line: first })
    held = []
  }
  for (const [i, line] of lines.entries()) {
    if (line === parting) {
      finish()
      first = i + 2
    } else held.push(escapedParting.test(line) ? line.slice(1) : line)
  }
  finish()
  return cells
}

/** The plain form of cells with these texts. */
export const plainForm = (texts: readonly string[]): string =>
  texts
    .map((text) => {
      const lines = text.replaceAll("\r\n", "\n").split("\n")
      return lines.map((line) => (anyParting.test(line) ? `\\${line}` : line)).join("\n")
    })
    .map((text) => `${text}\n`)
    .join(`${parting}\n`)

const parting = "---"
const anyParting = /^\\*---$/
const escapedParting = /^\\+---$/

function textIn(bytes: Uint8Array): string | null {
  try {
    return new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes)
  } catch {
    return null
  }
}
