// A file taken apart into lines as its bytes come in, with a running SHA-256 of all that stands before the line at hand. A line longer than
// the bound is passed over without being held. Nothing here knows what a line says.

import { pieces } from "./blob.ts"
import { mostLineBytes } from "./bounds.ts"
import { runningDigest } from "./digest.ts"

export interface Line {
  /** From 1. */
  readonly number: number
  /** Without its line feed; null where it is longer than the bound. */
  readonly bytes: Uint8Array | null
  /** Whether a line feed ends it: the last line of a file may lack one. */
  readonly ended: boolean
  /** SHA-256 of all bytes of the file before this line. It can be asked for until the next line is taken. */
  digestBefore(): string
}

/** The lines of a file. What the source throws is thrown on. */
export async function* lines(source: Blob | AsyncIterable<Uint8Array>): AsyncGenerator<Line> {
  const before = runningDigest()
  let number = 1
  let held: Uint8Array[] = []
  let heldBytes = 0
  let overlong = false

  /** Holds a piece of the line, or only counts it in where the line is too long to be held. */
  const hold = (piece: Uint8Array): void => {
    heldBytes += piece.length
    if (!overlong && heldBytes > mostLineBytes) {
      overlong = true
      for (const earlier of held) before.add(earlier)
      held = []
    }
    if (overlong) before.add(piece)
    else held.push(piece)
  }
  const line = (ended: boolean): Line => ({ number, bytes: overlong ? null : joined(held, heldBytes), ended, digestBefore: before.value })
  const next = (taken: Line): void => {
    if (taken.bytes !== null) before.add(taken.bytes)
    before.add(lineFeedBytes)
    number += 1
    held = []
    heldBytes = 0
    overlong = false
  }

  for await (const piece of source instanceof Blob ? pieces(source) : source) {
    let from = 0
    for (let to = piece.indexOf(lineFeed); to !== -1; to = piece.indexOf(lineFeed, from)) {
      hold(piece.subarray(from, to))
      const taken = line(true)
      yield taken
      next(taken)
      from = to + 1
    }
    // Copied, since the source may use its buffer again.
    if (from < piece.length) hold(piece.slice(from))
  }
  if (heldBytes > 0) yield line(false)
}

const lineFeed = 0x0a
const lineFeedBytes = Uint8Array.of(lineFeed)

function joined(parts: readonly Uint8Array[], length: number): Uint8Array {
  const [only] = parts
  if (parts.length === 1 && only !== undefined) return only
  const whole = new Uint8Array(length)
  let at = 0
  for (const part of parts) {
    whole.set(part, at)
    at += part.length
  }
  return whole
}
