// SHA-256, three ways for three uses: at once for what is small, running for what comes in pieces, and by the platform where a whole Blob
// is at hand. All give the same 64 digits of lower-case hex.

import { sha256 } from "@noble/hashes/sha2.js"
import { bytesToHex, utf8ToBytes } from "@noble/hashes/utils.js"

import { pieces } from "./blob.ts"

/** The SHA-256 of bytes, or of a text's UTF-8. */
export const digest = (data: Uint8Array | string): string => bytesToHex(sha256(typeof data === "string" ? utf8ToBytes(data) : data))

/** A digest of bytes that come in pieces. It can be asked along the way. */
export interface RunningDigest {
  add(bytes: Uint8Array): void
  /** The SHA-256 of all bytes added so far. */
  value(): string
}

export function runningDigest(): RunningDigest {
  const hash = sha256.create()
  return {
    add(bytes) {
      hash.update(bytes)
    },
    value: () => bytesToHex(hash.clone().digest()),
  }
}

/** The SHA-256 of a Blob. */
export async function blobDigest(blob: Blob): Promise<string> {
  // The platform is several times faster but wants all bytes at once, and is absent from pages that came over plain http.
  if (blob.size <= mostBytesAtOnce && globalThis.crypto?.subtle !== undefined) {
    return bytesToHex(new Uint8Array(await crypto.subtle.digest("SHA-256", await blob.arrayBuffer())))
  }
  const running = runningDigest()
  for await (const piece of pieces(blob)) running.add(piece)
  return running.value()
}

/** Above this a Blob is hashed in pieces, so that it never lies in memory whole. */
const mostBytesAtOnce = 64 * 1024 * 1024
