// The memo: findings by what went in, which stays true whatever the notebook says by now. It is bounded in bytes: a column counts once, by
// its hash, however many findings hold it. What is pinned is shown at the moment and never dropped; of the rest the longest unused goes first.

import type { Found } from "./evaluator.ts"
import type { Hash } from "./value.ts"

/** What went in, as one text: statement, hashes of the parts used, files. */
export type WentIn = string

export interface Memo {
  get(wentIn: WentIn): Found | null
  put(wentIn: WentIn, found: Found): void
  /** Pins count: what was pinned twice has to be let go twice. Pinning what is not there yet holds once it is put. */
  pin(wentIn: WentIn): void
  unpin(wentIn: WentIn): void
  /** Drops every finding that holds one of these, pinned or not: the evaluator has lost them. */
  forget(hashes: Iterable<Hash>): void
  /** All that the findings hold. */
  hashes(): Iterable<Hash>
  readonly bytes: number
  readonly size: number
}

/** What an entry costs besides its values: the notices, sentences and hashes of a small finding. */
const bytesOfAnEntry = 2_000

export function createMemo(bound: number): Memo {
  const entries = new Map<WentIn, Found>() // In order of last use.
  const pins = new Map<WentIn, number>()
  const held = new Map<Hash, { findings: number; bytes: number }>()
  let bytes = 0

  const hold = (found: Found): void => {
    bytes += bytesOfAnEntry
    for (const [hash, size] of sizes(found)) {
      const entry = held.get(hash)
      if (entry === undefined) {
        held.set(hash, { findings: 1, bytes: size })
        bytes += size
      } else entry.findings++
    }
  }

  const drop = (wentIn: WentIn, found: Found): void => {
    entries.delete(wentIn)
    bytes -= bytesOfAnEntry
    for (const [hash] of sizes(found)) {
      const entry = held.get(hash)
      if (entry !== undefined && --entry.findings === 0) {
        held.delete(hash)
        bytes -= entry.bytes
      }
    }
  }

  const shrink = (): void => {
    if (bytes <= bound) return
    for (const [wentIn, found] of entries) {
      if (bytes <= bound) return
      if (!pins.has(wentIn)) drop(wentIn, found)
    }
  }

  return {
    get: (wentIn) => {
      const found = entries.get(wentIn)
      if (found === undefined) return null
      entries.delete(wentIn)
      entries.set(wentIn, found)
      return found
    },
    put: (wentIn, found) => {
      const former = entries.get(wentIn)
      if (former !== undefined) drop(wentIn, former)
      entries.set(wentIn, found)
      hold(found)
      shrink()
    },
    pin: (wentIn) => {
      pins.set(wentIn, (pins.get(wentIn) ?? 0) + 1)
    },
    unpin: (wentIn) => {
      const left = (pins.get(wentIn) ?? 0) - 1
      if (left > 0) pins.set(wentIn, left)
      else {
        pins.delete(wentIn)
        shrink()
      }
    },
    forget: (hashes) => {
      const lost = [...hashes].filter((hash) => held.has(hash))
      if (lost.length === 0) return
      for (const [wentIn, found] of entries) if (lost.some((hash) => hash in found.bytes)) drop(wentIn, found)
    },
    hashes: () => held.keys(),
    get bytes() {
      return bytes
    },
    get size() {
      return entries.size
    },
  }
}

const sizes = (found: Found): readonly (readonly [Hash, number])[] => Object.entries(found.bytes) as [Hash, number][]
