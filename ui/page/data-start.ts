// The data cell that is proposed for a file that was dropped: what the data kind makes of its first rows, for the person to review.

import type { Notebook } from "../../runtime/document.ts"
import { reading } from "./statement/reading.ts"

/** The text of a cell that reads the file; null where some cell reads a file of this name already. */
export async function dataStart(file: File, notebook: Notebook): Promise<string | null> {
  const cells = notebook.cells.map((cell) => reading(cell))
  if (cells.some(({ names }) => names.files.includes(file.name))) return null
  const taken = new Set(cells.map(({ statement }) => statement.name))
  return `data ${freeName(file.name, taken)}\n  from ${JSON.stringify(file.name)}\n`
}

/** A name for the cell, made of the file's. */
function freeName(file: string, taken: ReadonlySet<string | null>): string {
  const stem = file.replace(/\.[^.]+$/, "").normalize("NFC")
  const plain = stem.replace(/[^\p{L}\p{M}\p{Nd}_]+/gu, "_").replace(/^[^\p{L}_]+|_+$/gu, "")
  const name = plain === "" ? "table" : plain
  for (let i = 1; ; i++) {
    const candidate = i === 1 ? name : `${name}${i}`
    if (!taken.has(candidate)) return candidate
  }
}
