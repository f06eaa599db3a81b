// Writing a notebook file, record by record, each in its canonical form, so that the same notebook always gives the same bytes. What goes
// out is in chunks of a line at most: no file is ever one string. The seal is made on the way and is the last line.

import { utf8ToBytes } from "@noble/hashes/utils.js"

import type { Enclosed } from "../../runtime/document.ts"
import { base64 } from "./base64.ts"
import { isText, type Part, slice } from "./blob.ts"
import { mostCells, mostChunkBytes, mostEnclosureBytes, mostLineBytes, mostNesting, mostTextBytes, nesting, textBytes } from "./bounds.ts"
import { canonical } from "./canonical.ts"
import { trailHead } from "./chain.ts"
import { runningDigest } from "./digest.ts"
import type { Kept } from "./kept.ts"
import { notebookMedia } from "./media.ts"
import { enclosureTooLarge, type FileNotice, tooManyCells, tooMuchText } from "./notices.ts"
import { type Anchor, type JsonObject, restOf } from "./rest.ts"

/** Finds the bytes of an enclosure by their SHA-256; null where they are not at hand, and the file then names it without its bytes. */
export type ByteStore = (sha256: string) => Promise<Blob | null>

/** What stands against writing this notebook: bounds of the format that it exceeds. To be asked before writing. */
export function obstacles(kept: Kept): readonly FileNotice[] {
  const { cells, enclosures } = kept.notebook
  return [
    ...(cells.length > mostCells ? [tooManyCells(mostCells + 2, mostCells)] : []),
    ...cells.filter((cell) => textBytes(cell.text) > mostTextBytes).map((cell) => tooMuchText(null, cell.id, mostTextBytes)),
    ...enclosures.filter((file) => file.size > mostEnclosureBytes).map((file) => enclosureTooLarge(null, file.name, mostEnclosureBytes)),
  ]
}

/**
 * The bytes of a notebook file, in chunks.
 * @throws RangeError if a bound of the format is exceeded: `obstacles` is to be asked first
 */
export async function* writeNotebook(kept: Kept, store: ByteStore): AsyncGenerator<Uint8Array<ArrayBuffer>> {
  const { notebook, trail } = kept
  const [first] = obstacles(kept)
  if (first !== undefined) throw new RangeError(first.text)
  const rest = new Unknown(kept)
  const digest = runningDigest()
  const line = (record: JsonObject): Uint8Array<ArrayBuffer> => {
    const text = canonical(record)
    const bytes = utf8ToBytes(`${text}\n`) as Uint8Array<ArrayBuffer>
    if (bytes.length - 1 > mostLineBytes) throw new RangeError(`A record of ${bytes.length - 1} bytes exceeds the bound of a line`)
    if (nesting(text) > mostNesting) throw new RangeError("A record nests deeper than the format allows")
    digest.add(bytes)
    return bytes
  }
  const record = function* (anchor: Anchor, members: JsonObject): Generator<Uint8Array<ArrayBuffer>> {
    yield line({ ...rest.members(anchor), ...members })
    for (const unknown of rest.after(anchor)) yield line(unknown)
  }
  /** Unknown records whose neighbour is gone stand at the end of their section. */
  const endOf = function* (...sections: readonly string[]): Generator<Uint8Array<ArrayBuffer>> {
    for (const unknown of rest.left(sections)) yield line(unknown)
  }

  yield* record("etamu", {
    "@record": "etamu",
    version: 1,
    id: notebook.id,
    title: notebook.title,
    made: kept.made,
    changed: kept.changed,
    writer: kept.writer,
  })
  for (const { id, text } of notebook.cells) yield* record(`cell ${id}`, { "@record": "cell", id, text })
  yield* endOf("etamu", "cell")

  const written = new Set<string>()
  for (const file of notebook.enclosures) {
    const { name, media, size, sha256 } = file
    yield* record(`enclosure ${name}`, { "@record": "enclosure", name, media, size, sha256 })
    if (written.has(sha256)) continue
    written.add(sha256)
    const blob = await store(sha256)
    if (blob === null) continue
    for await (const { at, as, data } of chunks(file, blob, rest.places(sha256))) {
      yield* record(`bytes ${sha256} ${at}`, { "@record": "bytes", sha256, at, data, as })
    }
    yield* endOf(`bytes ${sha256}`)
  }
  yield* endOf("enclosure", "bytes")

  for (const { cell, key, summary } of kept.findings) yield* record(`finding ${cell}`, { "@record": "finding", cell, key, summary })
  yield* endOf("finding")

  for (const entry of trail) yield* record(`trail ${entry.seq}`, entry)
  yield* endOf("trail")

  const head = trailHead(trail)
  const sha256 = digest.value()
  // A signature is over the seal: it goes where the seal is another.
  const same = kept.seal?.sha256 === sha256 && kept.seal.trailSize === head.size && kept.seal.trailRoot === head.root
  yield* record("seal", {
    "@record": "seal",
    sha256,
    trail_size: head.size,
    trail_root: head.root,
    signatures: same ? (kept.seal?.signatures ?? []) : [],
  })
}

/** A notebook file as a Blob, to be handed to whoever asked for it. */
export async function notebookFile(kept: Kept, store: ByteStore): Promise<Blob> {
  let parts: Part[] = []
  let held = 0
  for await (const chunk of writeNotebook(kept, store)) {
    parts.push(chunk)
    held += chunk.length
    // The platform may keep a Blob elsewhere than in memory.
    if (held >= mostHeldBytes) {
      parts = [new Blob(parts)]
      held = 0
    }
  }
  return new Blob(parts, { type: notebookMedia })
}

const mostHeldBytes = 16 * 1024 * 1024

/** The bytes of an enclosure as records carry them: at most 1 MiB each, cut between characters where they are text. */
async function* chunks(
  file: Enclosed,
  blob: Blob,
  places: readonly number[],
): AsyncGenerator<{ at: number; as: "text" | "base64"; data: string }> {
  const as = (await isText(blob)) ? "text" : "base64"
  const decoder = new TextDecoder("utf-8", { fatal: true, ignoreBOM: true })
  for (let at = 0; at < file.size; ) {
    const most = at + mostChunkBytes
    const end = places.find((place) => place > at && place < most) ?? most
    let bytes = await slice(blob, at, end)
    if (bytes.length === 0) throw new RangeError(`The bytes of ${file.name} end before its size`)
    if (as === "text" && at + bytes.length < file.size) bytes = bytes.subarray(0, await wholeCharacters(bytes, blob, at))
    yield { at, as, data: as === "text" ? decoder.decode(bytes) : base64(bytes) }
    at += bytes.length
  }
}

/** How many of the bytes may go before a cut that splits no character of UTF-8, whose later bytes all have the form 10xxxxxx. */
async function wholeCharacters(bytes: Uint8Array, blob: Blob, at: number): Promise<number> {
  const [next] = await slice(blob, at + bytes.length, at + bytes.length + 1)
  const goesOn = (byte: number | undefined): boolean => byte !== undefined && (byte & 0xc0) === 0x80
  if (!goesOn(next)) return bytes.length
  let length = bytes.length - 1
  while (length > 0 && goesOn(bytes[length])) length -= 1
  return length
}

/** The unknown members and records of a notebook, each given out once. */
class Unknown {
  readonly #members: ReadonlyMap<Anchor, JsonObject>
  readonly #records = new Map<Anchor, JsonObject[]>()

  constructor(kept: Kept) {
    const { members, records } = restOf(kept.notebook.rest)
    this.#members = new Map(members)
    for (const [anchor, record] of records) {
      const held = this.#records.get(anchor)
      if (held === undefined) this.#records.set(anchor, [record])
      else held.push(record)
    }
  }

  members(anchor: Anchor): JsonObject {
    return this.#members.get(anchor) ?? {}
  }

  after(anchor: Anchor): readonly JsonObject[] {
    const records = this.#records.get(anchor) ?? []
    this.#records.delete(anchor)
    return records
  }

  /** Those of whole sections that no record was there for. */
  left(sections: readonly string[]): readonly JsonObject[] {
    const anchors = [...this.#records.keys()].filter((anchor) =>
      sections.some((section) => anchor === section || anchor.startsWith(`${section} `)),
    )
    return anchors.flatMap((anchor) => this.after(anchor))
  }

  /** Where a record of these bytes had members of its own and must begin again. */
  places(sha256: string): readonly number[] {
    const start = `bytes ${sha256} `
    const places = [...this.#members.keys(), ...this.#records.keys()].filter((anchor) => anchor.startsWith(start))
    return places.map((anchor) => Number(anchor.slice(start.length))).toSorted((a, b) => a - b)
  }
}
