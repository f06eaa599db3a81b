// Where a notebook on the page can come from: a file of either form, a sample, or nothing yet. Each gives a notebook as it is kept, with the
// bytes at hand and what there is to say about it. Nothing here knows the shelf or the engine.

import type { Cell, Enclosed } from "../../runtime/document.ts"
import type { Notice } from "../../runtime/notice.ts"
import { blobDigest, type Kept, mediaOf, newlyKept, plainCells, readNotebook, readPlain, writer } from "../../storage/file/index.ts"
import { readingOf } from "./statement/reading.ts"

export interface Book {
  readonly kept: Kept
  readonly bytes: ReadonlyMap<string, Blob>
  /** About the file as a whole, the gravest first. */
  readonly notices: readonly Notice[]
}

/** A sample as the list of samples has it. */
export interface Sample {
  readonly file: string
  readonly title: string
  readonly about: string
}

/** Now, as the format writes it. */
export const now = (): string => new Date().toISOString()

/** Reads a notebook file of either form. Null with a reason where it is none. */
export async function bookOfFile(file: File): Promise<{ readonly book: Book | null; readonly notices: readonly Notice[] }> {
  if (file.name.toLowerCase().endsWith(".cells")) {
    const { cells, notices } = readPlain(new Uint8Array(await file.arrayBuffer()))
    if (cells.length === 0 && notices.length > 0) return { book: null, notices }
    const texts = cells.map(({ text }) => text)
    return { book: { ...(await bookOfTexts(titleOf(texts, file.name), texts, new Map())), notices }, notices }
  }
  const { kept, bytes, notices } = await readNotebook(file)
  if (kept === null) return { book: null, notices }
  return { book: { kept, bytes, notices: notices.filter(({ level }) => level !== "remark") }, notices }
}

/** The samples that come with the program. */
export async function samples(): Promise<readonly Sample[]> {
  const answer = await fetch("samples/index.json")
  if (!answer.ok) return []
  return (await answer.json()) as readonly Sample[]
}

/** A sample as a notebook of one's own. Each opening begins a new one. */
export async function bookOfSample({ file, title }: Sample): Promise<Book> {
  const texts = cellTexts(await (await fetched(file)).text())
  const names = new Set(texts.flatMap((text) => readingOf(text).names.files))
  const files = new Map<string, Blob>()
  for (const name of names) files.set(name, await fetched(name))
  return bookOfTexts(title, texts, files)
}

/** What a notebook is called that nobody has named. */
export const untitled = "Untitled"

/** A notebook with nothing in it yet. */
export const blankBook = (): Promise<Book> => bookOfTexts(untitled, [], new Map())

const cellTexts = (file: string): readonly string[] => plainCells(file).map(({ text }) => text)

async function fetched(file: string): Promise<Blob> {
  const answer = await fetch(`samples/${encodeURIComponent(file)}`)
  if (!answer.ok) throw new Error(`The sample ${file} could not be read (${answer.status}).`)
  return answer.blob()
}

async function bookOfTexts(title: string, texts: readonly string[], files: ReadonlyMap<string, Blob>): Promise<Book> {
  const bytes = new Map<string, Blob>()
  const enclosures: Enclosed[] = []
  for (const [name, blob] of files) {
    const sha256 = await blobDigest(blob)
    bytes.set(sha256, blob)
    enclosures.push({ name, media: mediaOf(name), size: blob.size, sha256 })
  }
  const cells = texts.map((text): Cell => ({ id: randomId(), text }))
  const kept = newlyKept({ id: crypto.randomUUID(), title, cells, enclosures, time: now(), by: "this browser", writer })
  return { kept, bytes, notices: [] }
}

/** What a note's first title says, else the name of the file. */
function titleOf(texts: readonly string[], file: string): string {
  const headed = texts.find((text) => readingOf(text).statement.kind === "note")?.match(/^# (.+)$/m)?.[1]
  return headed?.trim() ?? file.replace(/\.[^.]+$/, "")
}

/** Short, unlike any other; those of one notebook are checked where they are added. */
const randomId = (): string => Array.from(crypto.getRandomValues(new Uint8Array(8)), (byte) => (byte % 36).toString(36)).join("")
