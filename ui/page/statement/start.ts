// How a new cell of some kind begins: its heading with a name that is free, and those clauses that only name another cell, filled with the
// nearest such cell above. The rest is left to the hand and to completion.

import { words } from "../../../cells/words.ts"
import type { Cell, Notebook } from "../../../runtime/document.ts"
import { reading } from "./reading.ts"

export interface Start {
  readonly text: string
  /** Where the caret goes. */
  readonly caret: number
}

/** The start of a cell of this kind at this place in the reading order. */
export function startOf(kind: string, notebook: Notebook, at: number): Start {
  const known = words.find(({ word }) => word === kind)
  if (known === undefined) return { text: "", caret: 0 }
  if (kind === "note") return { text: "note\n", caret: 5 }
  const taken = new Set(notebook.cells.map((cell) => reading(cell).statement.name))
  const name = known.name === "needed" ? free(exampleName(known.example) ?? kind, taken) : null
  const heading = name === null ? kind : `${kind} ${name}`
  // A kind that stands in its heading alone (value = …) begins as its example does.
  if (Object.keys(known.clauses).length === 0) {
    const rest = known.example.split("\n")[0]?.split("=")[1]
    const text = rest === undefined ? `${heading}\n  ` : `${heading} = `
    return { text, caret: text.length }
  }
  const lines = Object.entries(known.clauses).flatMap(([keyword, { forms, later }]) => {
    const wanted = later === true ? null : (/^CELL:(\w+)$/.exec(forms[0] ?? "")?.[1] ?? null)
    const cell = wanted === null ? null : nearest(notebook.cells, at, wanted === "cell" ? keyword : wanted)
    return cell === null ? [] : [`  ${keyword} ${reading(cell).statement.name}`]
  })
  const text = [heading, ...lines, "  "].join("\n")
  return { text, caret: text.length }
}

function exampleName(example: string): string | null {
  return /^\w+[ \t]+(\w+)/.exec(example)?.[1] ?? null
}

/** The name itself, or with the first number that makes it free. */
function free(name: string, taken: ReadonlySet<string | null>): string {
  for (let i = 1; ; i++) {
    const candidate = i === 1 ? name : `${name}${i}`
    if (!taken.has(candidate)) return candidate
  }
}

/** The last cell of a kind above a place, else the first below it. */
function nearest(cells: readonly Cell[], at: number, kind: string): Cell | null {
  const fits = (cell: Cell): boolean => reading(cell).words?.word === kind && reading(cell).names.defines !== null
  return cells.slice(0, at).findLast(fits) ?? cells.slice(at).find(fits) ?? null
}
