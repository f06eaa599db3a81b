// Files beside a notebook: found by the name a cell gives, and only in the notebook's own folder or below, so that a notebook from
// elsewhere can neither read nor write anything that does not lie with it.

import { createReadStream } from "node:fs"
import { stat } from "node:fs/promises"
import { isAbsolute, join, normalize, sep } from "node:path"

import type { Enclosed } from "../../runtime/document.ts"
import { mediaOf, mostEnclosureBytes, runningDigest } from "../../storage/file/index.ts"

export interface Beside {
  readonly enclosed: Enclosed
  readonly path: string
}

export type Looked =
  | { readonly found: "file"; readonly file: Beside }
  | { readonly found: "nothing" }
  /** The name leads elsewhere, or what lies there cannot be an enclosure. */
  | { readonly found: "unfit"; readonly why: string }

/** Looks for a file of this name in the folder. */
export async function besideIn(folder: string, name: string): Promise<Looked> {
  const place = placeIn(folder, name)
  if (place === null)
    return { found: "unfit", why: `${name} does not lie with the notebook: files are looked for in its folder and below.` }
  try {
    const file = await stat(place)
    if (!file.isFile()) return { found: "unfit", why: `${name} is not a file.` }
    if (file.size > mostEnclosureBytes) {
      return { found: "unfit", why: `${name} is larger than ${mostEnclosureBytes / 2 ** 20} MiB, the most a notebook encloses.` }
    }
    const digest = runningDigest()
    let size = 0
    for await (const piece of contents(place)) {
      digest.add(piece)
      size += piece.length
    }
    return { found: "file", file: { enclosed: { name, media: mediaOf(name), size, sha256: digest.value() }, path: place } }
  } catch (error) {
    if (isMissing(error)) return { found: "nothing" }
    return { found: "unfit", why: `${name} cannot be read: ${messageOf(error)}.` }
  }
}

/** The path of a file of this name in the folder or below it; null where the name leads elsewhere or is none on every system. */
export function placeIn(folder: string, name: string): string | null {
  // A backslash and a colon part a path on one system and are plain signs on another; a notebook has to mean the same on both.
  const hasControl = [...name].some((sign) => sign < " ")
  if (name === "" || hasControl || isAbsolute(name) || /[\\:]/.test(name)) return null
  const way = normalize(name)
  if (way === "." || way === ".." || way.startsWith(`..${sep}`) || way.endsWith(sep)) return null
  return join(folder, way)
}

/** The bytes of a file, a piece at a time. */
export const contents = (path: string): AsyncIterable<Uint8Array> =>
  createReadStream(path, { highWaterMark: 1024 * 1024 }) as AsyncIterable<Uint8Array>

/** Whether an exception says that there is no such file. */
export const isMissing = (error: unknown): boolean => codeOf(error) === "ENOENT" || codeOf(error) === "ENOTDIR"

/** What went wrong with a file, for a sentence. */
export function messageOf(error: unknown): string {
  const said: Readonly<Record<string, string>> = {
    ENOENT: "it is not there",
    ENOTDIR: "part of its path is not a folder",
    EISDIR: "it is a folder",
    EACCES: "access is not allowed",
    EPERM: "access is not allowed",
    ENOSPC: "the disk is full",
    EROFS: "the disk can only be read",
  }
  const code = codeOf(error)
  return (code === null ? undefined : said[code]) ?? (error instanceof Error ? error.message : String(error))
}

const codeOf = (error: unknown): string | null =>
  error instanceof Error && "code" in error && typeof error.code === "string" ? error.code : null
