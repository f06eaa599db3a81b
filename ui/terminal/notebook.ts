// A notebook opened from a path, in either form, with the bytes of its enclosures: those inside the file, else those beside it. A file
// beside a notebook that states a SHA-256 is used only if it has it.

import { readFile } from "node:fs/promises"
import { basename, dirname } from "node:path"

import { words } from "../../cells/words.ts"
import type { Cell, Enclosed, Notebook } from "../../runtime/document.ts"
import { createReader } from "../../runtime/reading.ts"
import { read } from "../../runtime/statement.ts"
import { type FileNotice, type Kept, type Opened, type PlainOpened, pieces, readNotebook, readPlain } from "../../storage/file/index.ts"
import { besideIn, contents, isMissing, messageOf } from "./beside.ts"

export interface OpenNotebook {
  /** As kept in the file; null for the plain form. */
  readonly kept: Kept | null
  readonly notebook: Notebook
  /** What to call it. */
  readonly title: string
  /** For the plain form: the line of the file each cell begins on, by cell. */
  readonly lines: ReadonlyMap<string, number>
  /** The bytes of an enclosure that `notebook` has. */
  bytes(sha256: string): AsyncIterable<Uint8Array>
  /** Where the enclosures that lie beside the notebook are, by SHA-256. */
  readonly paths: ReadonlyMap<string, string>
  /** Names of files that cells read and that are neither inside nor beside. */
  readonly missing: readonly string[]
  /** Whether the file is not as it was written, or not all of it could be read. */
  readonly broken: boolean
  /** Whether something of it could not be read, so that cells may be missing. */
  readonly partial: boolean
  /** What is to be said about the file, in sentences. */
  readonly remarks: readonly string[]
}

export type Opening =
  | { readonly ok: true; readonly open: OpenNotebook }
  | { readonly ok: false; readonly missing: boolean; readonly text: string }

/** Opens a notebook or its plain form. */
export async function openNotebook(path: string): Promise<Opening> {
  const name = basename(path)
  try {
    if (await isPlainForm(path)) {
      const plain = readPlain(await readFile(path))
      const [first] = plain.notices
      if (plain.cells.length === 0 && first !== undefined)
        return { ok: false, missing: false, text: sentences(`${name}: ${first.text}`, first.hint) }
      return { ok: true, open: await openPlain(path, plain) }
    }
    const opened = await readNotebook(contents(path))
    if (opened.kept === null) {
      return { ok: false, missing: false, text: opened.notices.map(({ text, hint }) => sentences(`${name}: ${text}`, hint)).join("\n") }
    }
    return { ok: true, open: await withBytes(path, opened.kept, opened) }
  } catch (error) {
    return { ok: false, missing: isMissing(error), text: `${path} cannot be read: ${messageOf(error)}.` }
  }
}

async function openPlain(path: string, plain: PlainOpened): Promise<OpenNotebook> {
  const cells = plain.cells.map(({ text, line }, i) => ({ cell: { id: `c${i + 1}`, text }, line }))
  const title = basename(path).replace(/\.cells$/, "")
  const bare: Notebook = { id: "", title, cells: cells.map(({ cell }) => cell), enclosures: [], rest: null }
  const { enclosures, remarks, ...beside } = await lookBeside(dirname(path), bare, new Set())
  return {
    ...beside,
    kept: null,
    notebook: { ...bare, enclosures },
    title,
    lines: new Map(cells.map(({ cell, line }) => [cell.id, line])),
    bytes: (sha256) => contents(beside.paths.get(sha256) ?? ""),
    broken: plain.notices.length > 0,
    partial: plain.notices.length > 0,
    remarks: [...plain.notices.map(remarkOf), ...remarks],
  }
}

async function withBytes(path: string, kept: Kept, opened: Opened): Promise<OpenNotebook> {
  const { notebook } = kept
  const has = (file: Enclosed): boolean => opened.bytes.has(file.sha256)
  const inside = new Set(notebook.enclosures.filter(has).map(({ name }) => name))
  const { enclosures, remarks, ...beside } = await lookBeside(dirname(path), notebook, inside)
  return {
    ...beside,
    kept,
    notebook: { ...notebook, enclosures: [...notebook.enclosures.filter(has), ...enclosures] },
    title: notebook.title === "" ? basename(path) : notebook.title,
    lines: new Map(),
    bytes(sha256) {
      const blob = opened.bytes.get(sha256)
      return blob === undefined ? contents(beside.paths.get(sha256) ?? "") : pieces(blob)
    },
    broken: opened.standing.status === "broken",
    partial: opened.notices.some(({ level, code }) => level === "fault" && !alterations.has(code)),
    remarks: [...opened.notices.map(remarkOf), ...remarks],
  }
}

/** Finds the files that the cells name and that are not inside, beside the notebook. */
async function lookBeside(
  folder: string,
  notebook: Notebook,
  inside: ReadonlySet<string>,
): Promise<{ enclosures: Enclosed[]; paths: Map<string, string>; missing: string[]; remarks: string[] }> {
  const enclosures: Enclosed[] = []
  const paths = new Map<string, string>()
  const missing: string[] = []
  const remarks: string[] = []
  for (const name of filesRead(notebook)) {
    if (inside.has(name)) continue
    const looked = await besideIn(folder, name)
    if (looked.found === "nothing") missing.push(name)
    if (looked.found === "unfit") remarks.push(looked.why)
    if (looked.found !== "file") continue
    const stated = notebook.enclosures.find((file) => file.name === name)
    const { enclosed, path } = looked.file
    if (stated !== undefined && stated.sha256 !== enclosed.sha256) {
      remarks.push(`The file ${name} beside the notebook is not the one it was made with: its SHA-256 differs, so it is not used.`)
      continue
    }
    enclosures.push(stated ?? enclosed)
    paths.set(enclosed.sha256, path)
  }
  return { enclosures, paths, missing, remarks }
}

/** The names of files that the cells of a notebook read, those that are switched off too: what is off may be switched on again. */
function filesRead(notebook: Notebook): readonly string[] {
  const reader = createReader(words)
  const awake = (cell: Cell): Cell => {
    const { off, heading } = read(cell.text)
    const [first] = heading
    return off && first !== undefined ? { id: cell.id, text: cell.text.slice(0, first.from) + cell.text.slice(first.to) } : cell
  }
  return [...new Set(notebook.cells.flatMap((cell) => reader(awake(cell)).files))]
}

/** By its name, or by how it begins: a notebook begins with a record. */
async function isPlainForm(path: string): Promise<boolean> {
  if (path.endsWith(".cells")) return true
  if (path.endsWith(".etamu")) return false
  for await (const piece of contents(path)) return piece[0] !== "{".charCodeAt(0)
  return true
}

/** Faults of a file that is read whole all the same: it is not as it was sealed. */
const alterations: ReadonlySet<string> = new Set([
  "file/altered-enclosure",
  "file/after-seal",
  "file/broken-seal",
  "file/broken-chain",
  "file/other-trail",
])

/** A notice about the file, with its line where the text does not say it. */
function remarkOf({ text, hint, line }: FileNotice): string {
  const said = sentences(text, hint)
  return line === null || new RegExp(`\\bline ${line}\\b`, "i").test(text) ? said : `line ${line}: ${said}`
}

const sentences = (text: string, hint: string | null): string => (hint === null ? text : `${text} ${hint}`)
