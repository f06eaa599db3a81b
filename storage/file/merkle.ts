// The Merkle tree hash of RFC 9162 §2.1.1: one digest for a whole list of entries, made so that one entry can be shown to belong to it
// without showing the others. An entry is hashed with a leading 0, a pair of hashes with a leading 1, so neither can pass for the other.

import { sha256 } from "@noble/hashes/sha2.js"
import { bytesToHex } from "@noble/hashes/utils.js"

/** The Merkle tree hash of the entries, in lower-case hex. Of no entries it is the SHA-256 of nothing. */
export const treeHash = (entries: readonly Uint8Array[]): string => bytesToHex(hashOf(entries, 0, entries.length))

/** MTH(D[from:to]) in the words of the RFC. */
function hashOf(entries: readonly Uint8Array[], from: number, to: number): Uint8Array {
  const size = to - from
  const only = entries[from]
  if (size === 0 || only === undefined) return sha256(new Uint8Array())
  if (size === 1) return sha256.create().update(leafPrefix).update(only).digest()
  // The left side is the largest power of two below the size.
  let left = 1
  while (left * 2 < size) left *= 2
  return sha256
    .create()
    .update(nodePrefix)
    .update(hashOf(entries, from, from + left))
    .update(hashOf(entries, from + left, to))
    .digest()
}

const leafPrefix = Uint8Array.of(0)
const nodePrefix = Uint8Array.of(1)
