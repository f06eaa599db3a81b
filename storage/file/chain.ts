// The trail's chain: each entry holds the hash of the one before, so that none can be changed, taken out or put in without showing. Entries
// are appended and never edited; a chain that does not hold is shown as broken from there on and never repaired.

import { utf8ToBytes } from "@noble/hashes/utils.js"

import type { Json } from "../../runtime/value.ts"
import { canonical, plain } from "./canonical.ts"
import { digest } from "./digest.ts"
import { treeHash } from "./merkle.ts"

/**
 * One entry, which is a record of the file as it stands there. Members that this version does not know are part of it: they are hashed with
 * the rest and written back.
 */
export interface Entry {
  readonly [member: string]: Json
  readonly "@record": "trail"
  /** From 1. */
  readonly seq: number
  /** By the local clock. */
  readonly time: string
  readonly by: string
  readonly kind: string
  readonly body: Json
  /** The hash of the entry before, 64 zeros for the first. */
  readonly previous: string
  /** SHA-256 of the canonical form of the entry without this member. */
  readonly hash: string
}

/** What is said of an event; its place in the chain is found here. */
export interface Event {
  readonly time: string
  readonly by: string
  readonly kind: string
  readonly body: Json
}

/** The trail with one entry more. */
export function appended(trail: readonly Entry[], event: Event): readonly Entry[] {
  const last = trail.at(-1)
  const open = {
    "@record": "trail" as const,
    seq: (last?.seq ?? 0) + 1,
    time: event.time,
    by: event.by,
    kind: event.kind,
    // As it will read back, so that the hash holds after reading too.
    body: plain(event.body),
    previous: last?.hash ?? nothingBefore,
  }
  return [...trail, { ...open, hash: entryHash(open) }]
}

/** SHA-256 of the canonical form of an entry without its own hash. */
export function entryHash(entry: { readonly [member: string]: Json }): string {
  const { hash: _, ...open } = entry
  return digest(canonical(open))
}

/** The first entry at which the chain does not hold, and what does not; null where all of it does. */
export function firstBreak(trail: readonly Entry[]): { readonly index: number; readonly why: "order" | "previous" | "hash" } | null {
  let previous = nothingBefore
  for (const [index, entry] of trail.entries()) {
    if (entry.seq !== index + 1) return { index, why: "order" }
    if (entry.previous !== previous) return { index, why: "previous" }
    if (entry.hash !== entryHash(entry)) return { index, why: "hash" }
    previous = entry.hash
  }
  return null
}

/** The head of a trail: what must be kept elsewhere to notice later that the trail was cut short or written anew. */
export interface TrailHead {
  readonly size: number
  readonly root: string
}

/** The Merkle tree hash goes over the lines of the entries as the file holds them, each without its line feed. */
export const trailHead = (trail: readonly Entry[]): TrailHead => ({
  size: trail.length,
  root: treeHash(trail.map((entry) => utf8ToBytes(canonical(entry)))),
})

const nothingBefore = "0".repeat(64)
