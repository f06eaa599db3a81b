// The data cell that is proposed for a file that was dropped: what the data kind makes of its beginning, for the person to look over.

import type { Notebook } from "../../runtime/document.ts"
import { reading, readingOf } from "./statement/reading.ts"

/** The text of a cell that reads the file; null where some cell reads a file of this name already. */
export async function dataStart(file: File, notebook: Notebook): Promise<string | null> {
  const cells = notebook.cells.map((cell) => reading(cell))
  if (cells.some(({ names }) => names.files.includes(file.name))) return null
  // Reading tables is wanted only now and then, so it is not part of the first load.
  const { startBytes, startFor } = await import("../../cells/data/start.ts")
  const head = new Uint8Array(await file.slice(0, startBytes).arrayBuffer())
  return withFreeName(startFor(file.name, head), new Set(cells.map(({ statement }) => statement.name)))
}

/** The statement under a name that no other cell has. */
function withFreeName(text: string, taken: ReadonlySet<string | null>): string {
  const { name, heading } = readingOf(text).statement
  const token = heading[1]
  if (name === null || token === undefined || !taken.has(name)) return text
  let i = 2
  while (taken.has(`${name}${i}`)) i++
  return `${text.slice(0, token.from)}${name}${i}${text.slice(token.to)}`
}
