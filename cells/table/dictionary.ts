// A dictionary of texts by their bytes: gives each text it meets a code, in order of meeting, and makes a string only when asked for the
// texts at the end. It keeps the bytes of every text once.

import { text } from "./utf8.ts"

export class Dictionary {
  private arena = new Uint8Array(4096)
  private used = 0
  private starts = new Uint32Array(256)
  private hashes = new Int32Array(256)
  private slots = new Int32Array(512).fill(-1)
  private count = 0
  private latest = -1

  get size(): number {
    return this.count
  }

  /** The code of this text: a new one where it was not met before. */
  code(bytes: Uint8Array, from: number, to: number): number {
    // Runs of one level are common in data that were sorted before they were written.
    if (this.latest >= 0 && this.isAt(this.latest, bytes, from, to)) return this.latest
    let hash = 0x811c9dc5 | 0
    for (let at = from; at < to; at++) hash = Math.imul(hash ^ (bytes[at] as number), 0x01000193)
    hash ^= hash >>> 15
    const mask = this.slots.length - 1
    let slot = hash & mask
    for (let code = this.slots[slot] as number; code >= 0; code = this.slots[slot] as number) {
      if (this.hashes[code] === hash && this.isAt(code, bytes, from, to)) {
        this.latest = code
        return code
      }
      slot = (slot + 1) & mask
    }
    this.slots[slot] = this.count
    this.latest = this.count
    return this.add(bytes, from, to, hash)
  }

  /** The texts in order of their codes. */
  texts(): string[] {
    const texts: string[] = []
    for (let code = 0; code < this.count; code++) texts.push(text(this.arena, this.starts[code] as number, this.endOf(code)))
    return texts
  }

  private endOf(code: number): number {
    return code + 1 < this.count ? (this.starts[code + 1] as number) : this.used
  }

  private isAt(code: number, bytes: Uint8Array, from: number, to: number): boolean {
    const start = this.starts[code] as number
    const length = to - from
    if (this.endOf(code) - start !== length) return false
    for (let i = 0; i < length; i++) if (this.arena[start + i] !== bytes[from + i]) return false
    return true
  }

  private add(bytes: Uint8Array, from: number, to: number, hash: number): number {
    if (this.count === this.starts.length) {
      const starts = new Uint32Array(this.count * 2)
      starts.set(this.starts)
      this.starts = starts
      const hashes = new Int32Array(this.count * 2)
      hashes.set(this.hashes)
      this.hashes = hashes
    }
    const length = to - from
    if (this.used + length > this.arena.length) {
      const arena = new Uint8Array(Math.max(this.arena.length * 2, this.used + length))
      arena.set(this.arena)
      this.arena = arena
    }
    for (let i = 0; i < length; i++) this.arena[this.used + i] = bytes[from + i] as number
    this.starts[this.count] = this.used
    this.hashes[this.count] = hash
    this.used += length
    const code = this.count++
    if (this.count * 2 > this.slots.length) this.widen()
    return code
  }

  private widen(): void {
    const slots = new Int32Array(this.slots.length * 2).fill(-1)
    const mask = slots.length - 1
    for (let code = 0; code < this.count; code++) {
      let slot = (this.hashes[code] as number) & mask
      while ((slots[slot] as number) >= 0) slot = (slot + 1) & mask
      slots[slot] = code
    }
    this.slots = slots
  }
}
