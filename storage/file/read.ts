// Reading a notebook file, line by line: total, so that whatever the bytes are, what could be made out comes back together with notices that
// name the line. Everything is checked before use and kept within the bounds of the format; a file that is cut short, altered or partly
// refused opens, is said to be broken, and names the first place.

import type { Cell, Enclosed } from "../../runtime/document.ts"
import type { Json } from "../../runtime/value.ts"
import { bytesOfBase64 } from "./base64.ts"
import type { Part } from "./blob.ts"
import { mostCells, mostEnclosureBytes, mostLineBytes, mostNesting, mostTextBytes, nesting, textBytes } from "./bounds.ts"
import { type Entry, firstBreak, trailHead } from "./chain.ts"
import { type RunningDigest, runningDigest } from "./digest.ts"
import type { Kept, KeptFinding, Seal } from "./kept.ts"
import { type Line, lines } from "./line.ts"
import type { FileNotice } from "./notices.ts"
import * as say from "./notices.ts"
import * as schema from "./record.ts"
import { type Anchor, isObject, type JsonObject, restAsJson } from "./rest.ts"

/** How a file stands: as it was sealed, never sealed, or not as it was written. What is broken opens read-only. */
export type Standing =
  | { readonly status: "sealed" }
  | { readonly status: "unsealed" }
  /** `first` is the first broken place. */
  | { readonly status: "broken"; readonly first: FileNotice }

export interface Opened {
  /** Null where nothing could be made out: the file is no notebook, or one of a newer version. */
  readonly kept: Kept | null
  /** The bytes of the enclosures by their SHA-256: only those that are what the file says they are. */
  readonly bytes: ReadonlyMap<string, Blob>
  readonly standing: Standing
  /** In the order of the lines. */
  readonly notices: readonly FileNotice[]
}

/** Reads a notebook file. It never rejects: whatever is wrong is in the notices. */
export async function readNotebook(source: Blob | AsyncIterable<Uint8Array>): Promise<Opened> {
  const reading = new Reading()
  let number = 1
  try {
    for await (const line of lines(source)) {
      number = line.number
      reading.take(line)
      if (reading.refused) break
    }
  } catch (error) {
    // The source gave out: a file was moved, a disk taken away.
    reading.stopped(number, error)
  }
  return reading.finish()
}

interface Arriving {
  readonly enclosed: Enclosed
  readonly line: number
  readonly digest: RunningDigest
  parts: Part[]
  partBytes: number
  at: number
  spoilt: boolean
}

/** The state of one reading. One class, since all of it changes with each line and nothing of it is seen before `finish`. */
class Reading {
  /** A newer version was met, or no record at all: nothing more is to be read. */
  refused = false

  readonly #notices: FileNotice[] = []
  /** Notices beyond those that are listed. */
  #more = 0
  #first: FileNotice | null = null
  #head: { id: string; title: string; made: string; changed: string; writer: string } | null = null
  #records = 0
  readonly #cells: Cell[] = []
  readonly #cellIds = new Set<string>()
  #manyCells = false
  readonly #enclosures = new Map<string, Arriving>()
  readonly #bytes = new Map<string, Arriving>()
  readonly #findings = new Map<string, KeptFinding>()
  readonly #trail: Entry[] = []
  readonly #trailLines: number[] = []
  #trailBroken = false
  #seal: { seal: Seal; line: number } | null = null
  readonly #members: [Anchor, JsonObject][] = []
  readonly #unknown: [Anchor, JsonObject][] = []
  #anchor: Anchor = "etamu"

  take(line: Line): void {
    if (this.#records === 0 && line.number > mostLinesBeforeHead) {
      this.refused = true
      return
    }
    if (line.bytes === null) {
      this.#broken(say.tooLong(line.number, mostLineBytes))
      return
    }
    const record = this.#record(line, line.bytes)
    if (record === null) return
    if (this.#seal !== null) this.#broken(say.afterSeal(line.number))
    const name = record["@record"]
    if (typeof name !== "string") {
      this.#broken(say.notARecord(line.number))
      return
    }
    this.#records += 1
    if (this.#records === 1 && name !== "etamu") this.#broken(say.noHead())
    if (schema.isRecordName(name)) this.#known(name, record, line)
    else this.#unknown.push([this.#anchor, record])
  }

  stopped(line: number, error: unknown): void {
    this.#broken(say.unreadable(line, error instanceof Error ? error.message.replace(/\.$/, "") : String(error)))
  }

  finish(): Opened {
    if (this.refused || (this.#head === null && !this.#hasKnown())) {
      const first = this.#refusal()
      return { kept: null, bytes: new Map(), standing: { status: "broken", first }, notices: [first] }
    }
    const bytes = this.#finishEnclosures()
    this.#finishTrail()
    if (this.#seal === null && this.#first === null) this.#notices.push(say.unsealed())
    const head = this.#head ?? { id: noId, title: "", made: noTime, changed: noTime, writer: "" }
    return {
      kept: {
        notebook: {
          id: head.id,
          title: head.title,
          cells: this.#cells,
          enclosures: [...this.#enclosures.values()].map((arriving) => arriving.enclosed),
          rest: restAsJson({ members: this.#members, records: this.#unknown }),
        },
        made: head.made,
        changed: head.changed,
        writer: head.writer,
        findings: [...this.#findings.values()],
        trail: this.#trail,
        seal: this.#seal?.seal ?? null,
        doubt: this.#first === null ? null : [this.#first.text, this.#first.hint].join(" ").trim(),
      },
      bytes,
      standing: this.#first !== null ? { status: "broken", first: this.#first } : { status: this.#seal === null ? "unsealed" : "sealed" },
      notices: [
        ...this.#notices.toSorted((a, b) => (a.line ?? 0) - (b.line ?? 0)),
        ...(this.#more > 0 ? [say.moreNotices(this.#more)] : []),
      ],
    }
  }

  /** The object a line holds; null, with a notice, where it holds none. */
  #record(line: Line, bytes: Uint8Array): JsonObject | null {
    let text: string
    try {
      text = new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes)
    } catch {
      // A cut may fall inside a character.
      this.#broken(line.ended ? say.notText(line.number) : say.cutShort(line.number))
      return null
    }
    if (line.number === 1) text = text.replace(/^\uFEFF/, "")
    if (text.trim() === "") return null
    if (nesting(text) > mostNesting) {
      this.#broken(say.tooDeep(line.number, mostNesting))
      return null
    }
    let value: Json
    try {
      value = JSON.parse(text) as Json
    } catch {
      this.#broken(line.ended ? say.notARecord(line.number) : say.cutShort(line.number))
      return null
    }
    if (isObject(value)) return value
    this.#broken(say.notARecord(line.number))
    return null
  }

  #known(name: schema.RecordName, record: JsonObject, line: Line): void {
    const anchor = this.#read(name, record, line)
    if (anchor === null) return
    this.#anchor = anchor
    // An entry of the trail is kept whole, since its hash goes over all of it.
    const unknown = name === "trail" ? null : schema.unknownMembers(schema.membersOf(name), record)
    if (unknown !== null) this.#members.push([anchor, unknown])
  }

  /** Reads a record of a known type into its place, and says what it is called; null where it is refused. */
  #read(name: schema.RecordName, record: JsonObject, line: Line): Anchor | null {
    switch (name) {
      case "etamu":
        return this.#readHead(record, line.number)
      case "cell":
        return this.#readCell(record, line.number)
      case "enclosure":
        return this.#readEnclosure(record, line.number)
      case "bytes":
        return this.#readBytes(record, line.number)
      case "finding":
        return this.#readFinding(record, line.number)
      case "trail":
        return this.#readEntry(record, line.number)
      case "seal":
        return this.#readSeal(record, line)
    }
  }

  #readHead(record: JsonObject, line: number): Anchor | null {
    const version = record["version"]
    if (typeof version === "number" && version > 1) {
      this.refused = true
      this.#broken(say.newerVersion(line, version))
      return null
    }
    if (this.#head !== null) {
      this.#broken(say.secondHead(line))
      return null
    }
    const { wrong } = this.#wrong(schema.checked(schema.head, record), "etamu", line)
    const said = <T extends Json>(member: string, none: T): T => (wrong.has(member) ? none : (record[member] as T))
    this.#head = {
      id: said("id", noId),
      title: said("title", ""),
      made: said("made", noTime),
      changed: said("changed", noTime),
      writer: said("writer", ""),
    }
    return "etamu"
  }

  #readCell(record: JsonObject, line: number): Anchor | null {
    const { said } = this.#wrong(schema.checked(schema.cell, record), "cell", line)
    if (said === null) return null
    if (this.#cells.length >= mostCells) {
      if (!this.#manyCells) this.#broken(say.tooManyCells(line, mostCells))
      this.#manyCells = true
      return null
    }
    if (textBytes(said.text) > mostTextBytes) {
      this.#broken(say.tooMuchText(line, said.id, mostTextBytes))
      return null
    }
    let id = said.id
    for (let n = 2; this.#cellIds.has(id); n += 1) id = `${said.id.slice(0, 56)}-${n}`
    if (id !== said.id) this.#broken(say.sameCellId(line, said.id, id))
    this.#cellIds.add(id)
    this.#cells.push({ id, text: said.text })
    return `cell ${id}`
  }

  #readEnclosure(record: JsonObject, line: number): Anchor | null {
    const { said } = this.#wrong(schema.checked(schema.enclosure, record), "enclosure", line)
    if (said === null) return null
    if (this.#enclosures.has(said.name)) {
      this.#broken(say.sameEnclosure(line, said.name))
      return null
    }
    if (said.size > mostEnclosureBytes) {
      this.#broken(say.enclosureTooLarge(line, said.name, mostEnclosureBytes))
      return null
    }
    const arriving: Arriving = { enclosed: said, line, digest: runningDigest(), parts: [], partBytes: 0, at: 0, spoilt: false }
    this.#enclosures.set(said.name, arriving)
    // Two enclosures with the same bytes share them; the bytes follow the first.
    if (!this.#bytes.has(said.sha256)) this.#bytes.set(said.sha256, arriving)
    return `enclosure ${said.name}`
  }

  #readBytes(record: JsonObject, line: number): Anchor | null {
    const { said } = this.#wrong(schema.checked(schema.bytes, record), "bytes", line)
    if (said === null) return null
    const arriving = this.#bytes.get(said.sha256)
    if (arriving === undefined) {
      this.#broken(say.strayBytes(line))
      return null
    }
    const anchor = `bytes ${said.sha256} ${said.at}`
    if (arriving.spoilt) return anchor
    const { name } = arriving.enclosed
    if (said.at !== arriving.at) {
      this.#spoil(arriving, say.misplacedBytes(line, name, said.at, arriving.at))
      return anchor
    }
    const decoded = said.as === "text" ? new TextEncoder().encode(said.data) : bytesOfBase64(said.data)
    if (decoded === null) {
      this.#spoil(arriving, say.undecodable(line, name))
      return anchor
    }
    if (arriving.at + decoded.length > arriving.enclosed.size) {
      this.#spoil(arriving, say.alteredEnclosure(line, name))
      return anchor
    }
    arriving.digest.add(decoded)
    arriving.parts.push(decoded)
    arriving.partBytes += decoded.length
    arriving.at += decoded.length
    // What has come is handed to the platform from time to time, which may keep a Blob elsewhere than in memory.
    if (arriving.partBytes >= mostHeldBytes) {
      arriving.parts = [new Blob(arriving.parts)]
      arriving.partBytes = 0
    }
    return anchor
  }

  #readFinding(record: JsonObject, line: number): Anchor | null {
    const { said } = this.#wrong(schema.checked(schema.finding, record), "finding", line)
    if (said === null) return null
    if (this.#findings.has(said.cell)) {
      this.#broken(say.sameFinding(line, said.cell))
      return null
    }
    this.#findings.set(said.cell, said)
    return `finding ${said.cell}`
  }

  #readEntry(record: JsonObject, line: number): Anchor | null {
    const { said } = this.#wrong(schema.checked(schema.trail, record), "trail", line)
    if (said === null) {
      if (!this.#trailBroken) this.#broken(say.brokenChain(line, this.#trail.length + 1, "hash"))
      this.#trailBroken = true
      return null
    }
    this.#trail.push(record as Entry)
    this.#trailLines.push(line)
    return `trail ${said.seq}`
  }

  #readSeal(record: JsonObject, line: Line): Anchor | null {
    const { said } = this.#wrong(schema.checked(schema.seal, record), "seal", line.number)
    if (said === null || this.#seal !== null) return null
    this.#seal = {
      seal: { sha256: said.sha256, trailSize: said.trail_size, trailRoot: said.trail_root, signatures: said.signatures },
      line: line.number,
    }
    if (said.sha256 !== line.digestBefore()) this.#broken(say.brokenSeal(line.number))
    return "seal"
  }

  #finishEnclosures(): ReadonlyMap<string, Blob> {
    const bytes = new Map<string, Blob>()
    for (const [sha256, arriving] of this.#bytes) {
      const { name, size } = arriving.enclosed
      if (arriving.spoilt) continue
      if (arriving.at === 0 && size > 0) this.#notices.push(say.missingBytes(arriving.line, name))
      else if (arriving.at !== size || arriving.digest.value() !== sha256) this.#broken(say.alteredEnclosure(arriving.line, name))
      else bytes.set(sha256, new Blob(arriving.parts))
    }
    return bytes
  }

  #finishTrail(): void {
    const broken = this.#trailBroken ? null : firstBreak(this.#trail)
    if (broken !== null) this.#broken(say.brokenChain(this.#trailLines[broken.index] ?? null, broken.index + 1, broken.why))
    if (this.#seal === null) return
    const head = trailHead(this.#trail)
    if (head.size !== this.#seal.seal.trailSize || head.root !== this.#seal.seal.trailRoot) this.#broken(say.otherTrail(this.#seal.line))
  }

  /** Why nothing was made out: one notice, since the rest would only say that each line of some other file is no record. */
  #refusal(): FileNotice {
    if (this.#first === null) return say.empty()
    const telling = this.#notices.find(({ code }) => code === "file/newer-version" || code === "file/unreadable")
    return telling ?? say.notANotebook()
  }

  #hasKnown(): boolean {
    return this.#cells.length + this.#enclosures.size + this.#findings.size + this.#trail.length > 0
  }

  /** What a record says, or a notice about its members. */
  #wrong<Said>(result: schema.Checked<Said>, name: string, line: number): { said: Said | null; wrong: ReadonlySet<string> } {
    if (result.ok) return { said: result.said, wrong: new Set() }
    this.#broken(say.wrongMembers(line, name, result.wrong))
    return { said: null, wrong: new Set(result.wrong.map(({ member }) => member)) }
  }

  #spoil(arriving: Arriving, notice: FileNotice): void {
    arriving.spoilt = true
    arriving.parts = []
    this.#broken(notice)
  }

  #broken(notice: FileNotice): void {
    if (this.#notices.length < mostNotices) this.#notices.push(notice)
    else this.#more += 1
    if (this.#first === null || (notice.line ?? 0) < (this.#first.line ?? 0)) this.#first = notice
  }
}

/** Some other file is known for one after so many lines, however long it is. */
const mostLinesBeforeHead = 100
/** What a person may still want to read; a file made of wrong lines must not fill the memory with notices. */
const mostNotices = 200
const mostHeldBytes = 16 * 1024 * 1024
const noId = "00000000-0000-0000-0000-000000000000"
const noTime = "1970-01-01T00:00:00Z"
