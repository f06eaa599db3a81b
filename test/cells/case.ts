// Cases: a little notebook as text, and what its cells are to find. The same form stands in a case file of a kind and in the examples of
// its README. Every member that is expected is compared; what is not named is free.

import { existsSync, readdirSync, readFileSync } from "node:fs"
import { join } from "node:path"
import { expect } from "vitest"
import { lineAndColumn, textRange } from "../../runtime/place.ts"
import { read } from "../../runtime/statement.ts"
import { settledBook } from "../book.ts"

export interface Expected {
  readonly status?: string
  /** Each as `code line:column`, all of them, in order. */
  readonly notices?: readonly string[]
  readonly summary?: unknown
  /** Significant digits to which numbers of the summary agree; 10 unless said otherwise. */
  readonly digits?: number
}

export interface Case {
  readonly says: string
  readonly cells: readonly string[]
  readonly finds: Readonly<Record<string, Expected>>
  /** Files that stand in the case itself, by name. */
  readonly files: Readonly<Record<string, string>>
}

/** Cells of the plain form: parted by lines of three hyphens. */
export const cellsIn = (text: string): readonly string[] =>
  text
    .replace(/\n$/, "")
    .split(/^---\n/m)
    .map((cell) => cell.replace(/\n$/, ""))

/** A case file: what it shows, cells, a line `===`, what they find. */
export function caseFrom(text: string): Case {
  const [head = "", ...lines] = text.split("\n")
  if (!head.startsWith("# ")) throw new Error("The first line of a case says what it shows: # …")
  const end = lines.indexOf("===")
  if (end < 0) throw new Error("A case has a line === before what its cells find")
  return {
    says: head.slice(2),
    cells: cellsIn(lines.slice(0, end).join("\n")),
    finds: JSON.parse(lines.slice(end + 1).join("\n")) as Case["finds"],
    files: {},
  }
}

/**
 * The examples of a README: blocks of `cells`, each with the block of `finds` that may follow. Without one, all its cells are ready; one
 * that is sentences and not JSON is for the kind's own test, and here only has to evaluate. Blocks such as `csv beds.csv` are files.
 */
export function examplesIn(text: string): readonly Case[] {
  const blocks = [...text.matchAll(/^```(cells|finds|csv (.+))\n([\s\S]*?)^```$/gm)]
  const files = Object.fromEntries(blocks.flatMap(([, , file, body = ""]) => (file === undefined ? [] : [[file, body] as const])))
  return blocks.flatMap(([, kind, , body = ""], k) => {
    if (kind !== "cells") return []
    const [, next, , finds = ""] = blocks[k + 1] ?? []
    const cells = cellsIn(body)
    const ready = Object.fromEntries(cells.map((cell) => [callName(cell), { status: "ready" }]))
    const expected = next !== "finds" ? ready : finds.startsWith("{") ? (JSON.parse(finds) as Case["finds"]) : {}
    return [{ says: cells[0]?.split("\n")[0] ?? "", cells, finds: expected, files }]
  })
}

/** The files beside the cases of a kind, by name. */
export function filesIn(folder: string): Readonly<Record<string, string>> {
  if (!existsSync(folder)) return {}
  const names = readdirSync(folder).filter((name) => /\.(csv|tsv)$/.test(name))
  return Object.fromEntries(names.map((name) => [name, readFileSync(join(folder, name), "utf8")]))
}

/** Evaluates the notebook and compares. A cell is called by its name, or by its kind where it has none. */
export async function expectCase({ cells, finds, files: own }: Case, beside: Readonly<Record<string, string>>): Promise<void> {
  const files = { ...beside, ...own }
  const used = Object.fromEntries(Object.entries(files).filter(([name]) => cells.some((cell) => cell.includes(`"${name}"`))))
  const book = await settledBook(cells, used)
  for (const [name, expected] of Object.entries(finds)) {
    const state = book.state(name)
    const text = book.engine.notebook.cells.find((cell) => callName(cell.text) === name)?.text ?? ""
    const statement = read(text)
    const notices = book.notices(name).map((notice) => {
      const { line, column } = lineAndColumn(text, textRange(statement, notice.at).from)
      return `${notice.code} ${line}:${column}`
    })
    const told = `${name}: ${book
      .notices(name)
      .map((notice) => notice.text)
      .join(" ")}${state.status === "crash" ? state.stack : ""}`
    if (expected.status !== undefined) expect(state.status, told).toBe(expected.status)
    if (expected.notices !== undefined) expect(notices, told).toEqual(expected.notices)
    if (expected.summary !== undefined) {
      expect(state.status === "ready" || state.status === "fault", told).toBe(true)
      const shown = "shown" in state ? state.shown : null
      expectPart(shown?.summary, expected.summary, expected.digits ?? 10, `${name}.summary`)
    }
  }
}

const callName = (text: string): string => {
  const { name, kind } = read(text)
  return name ?? kind ?? ""
}

/** Every member that is expected is there; numbers agree to so many significant digits. */
function expectPart(found: unknown, expected: unknown, digits: number, where: string): void {
  if (typeof expected === "number" && typeof found === "number") {
    const allowed = expected === 0 ? 10 ** -digits : Math.abs(expected) * 0.5 * 10 ** (1 - digits)
    expect(Math.abs(found - expected), `${where}: ${found} is not ${expected}`).toBeLessThanOrEqual(allowed)
  } else if (Array.isArray(expected)) {
    expect(Array.isArray(found) ? found.length : found, where).toBe(expected.length)
    expected.forEach((each, k) => {
      expectPart((found as readonly unknown[])[k], each, digits, `${where}[${k}]`)
    })
  } else if (typeof expected === "object" && expected !== null) {
    for (const [member, each] of Object.entries(expected))
      expectPart((found as Readonly<Record<string, unknown>> | null)?.[member], each, digits, `${where}.${member}`)
  } else {
    expect(found, where).toEqual(expected)
  }
}
