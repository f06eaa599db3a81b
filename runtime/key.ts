// Keys: the name of a piece of work, the same on every machine, for file and trail. A key says what was asked, never what came out, and
// holds no version of the program; the form is fixed by the file format, so it may never change.

import { sha256 } from "@noble/hashes/sha2.js"
import canonicalize from "canonicalize"

import type { Json, Key, Name } from "./value.ts"

export interface Keyed {
  readonly kind: string
  /** The kind's own version. */
  readonly version: number
  /** The statement in its canonical form. */
  readonly statement: string
  /** The key of each cell that is read, by its name. */
  readonly uses: Readonly<Record<Name, Key>>
  /** The SHA-256 of each enclosure that is read, by its name; null where the notebook has none of that name. */
  readonly files: Readonly<Record<string, string | null>>
}

/** SHA-256 of the canonical form (RFC 8785) of what names the work, as 64 lower-case hexadecimal digits. */
export function key({ kind, version, statement, uses, files }: Keyed): Key {
  return digits(sha256(utf8(canonicalForm({ kind, version, statement, uses, files })))) as Key
}

/** A text that JSON cannot hold (half of a surrogate pair) is keyed by its escapes, so that any text at all has a key. */
function canonicalForm(value: Json): string {
  return canonicalize(wellFormed(value)) ?? "null"
}

function wellFormed(value: Json): Json {
  if (typeof value === "string") return value.replace(loneSurrogate, (unit) => `\\u${unit.charCodeAt(0).toString(16)}`)
  if (Array.isArray(value)) return value.map(wellFormed)
  if (typeof value !== "object" || value === null) return value
  return Object.fromEntries(Object.entries(value).map(([member, inner]) => [wellFormed(member) as string, wellFormed(inner as Json)]))
}

const loneSurrogate = /[\uD800-\uDBFF](?![\uDC00-\uDFFF])|(?<![\uD800-\uDBFF])[\uDC00-\uDFFF]/g

/** UTF-8, written out because the runtime stands on the language alone and the encoder is the platform's. */
export function utf8(text: string): Uint8Array {
  const bytes = new Uint8Array(text.length * 3)
  let at = 0
  for (let i = 0; i < text.length; i++) {
    const code = text.codePointAt(i) as number
    if (code < 0x80) bytes[at++] = code
    else if (code < 0x800) {
      bytes[at++] = 0xc0 | (code >> 6)
      bytes[at++] = 0x80 | (code & 63)
    } else if (code < 0x10000) {
      bytes[at++] = 0xe0 | (code >> 12)
      bytes[at++] = 0x80 | ((code >> 6) & 63)
      bytes[at++] = 0x80 | (code & 63)
    } else {
      i++
      bytes[at++] = 0xf0 | (code >> 18)
      bytes[at++] = 0x80 | ((code >> 12) & 63)
      bytes[at++] = 0x80 | ((code >> 6) & 63)
      bytes[at++] = 0x80 | (code & 63)
    }
  }
  return bytes.slice(0, at)
}

const digits = (bytes: Uint8Array): string => Array.from(bytes, (byte) => byte.toString(16).padStart(2, "0")).join("")
