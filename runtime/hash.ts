// Hashes: 128 bits of what a value says, to decide whether readers run again and to address what is held. Two values have one hash when
// they hold the same: `Object.is` on numbers (so 0 and -0 differ) and one NaN for all; members of a record in any order. It is no
// cryptographic hash and never leaves the engine, so it assumes the byte order of the machine (little-endian) and may change with a version.
//
// A value is written as blocks of four 32-bit words, each beginning with a tag or standing after a length, and the blocks go through the
// block function of MurmurHash3 x86_128 (A. Appleby, public domain), which moves 16 bytes with twelve multiplications and no allocation.

import type { Hash, Value } from "./value.ts"

/** What is known of large arrays already, so that a column handed on from finding to finding is read once. */
export type Digests = WeakMap<object, Int32Array>

/** Arrays from this size on are worth remembering, and worth holding once. */
export const largeBytes = 1024

export function hash(value: Value, known?: Digests): Hash {
  return hex(digest(value, known))
}

/** The hash of each part of a finding that has a member `parts`; none for any other. */
export function partHashes(found: Value, known?: Digests): Readonly<Record<string, Hash>> {
  return Object.fromEntries(Object.entries(partsOf(found)).map(([part, value]) => [part, hash(value, known)]))
}

/** The parts of a finding: the entries of its member `parts`, where that is a record. */
export function partsOf(found: Value): Readonly<Record<string, Value>> {
  const parts = isRecord(found) && Object.hasOwn(found, "parts") ? found["parts"] : undefined
  return parts !== undefined && isRecord(parts) ? parts : {}
}

export type TypedArray = Float64Array | Uint32Array | Int32Array | Uint8Array

export const isTypedArray = (value: Value): value is TypedArray => ArrayBuffer.isView(value)

export const isRecord = (value: Value): value is { readonly [part: string]: Value } =>
  typeof value === "object" && value !== null && !Array.isArray(value) && !isTypedArray(value)

const tag = { null: 1, false: 2, true: 3, number: 4, string: 5, list: 6, record: 7, nested: 8, f64: 9, u32: 10, i32: 11, u8: 12 } as const

function digest(value: Value, known: Digests | undefined): Int32Array {
  const mixer = new Mixer()
  if (typeof value !== "object" || value === null) writeScalar(mixer, value)
  else if (isTypedArray(value)) return arrayDigest(value, known)
  else if (Array.isArray(value)) {
    mixer.block(tag.list, value.length, 0, 0)
    for (const item of value as readonly Value[]) writeMember(mixer, item, known)
  } else {
    const record = value as { readonly [part: string]: Value }
    // A member that is `undefined` is not there: so a value hashes the same before and after it was sent through a port.
    const members = Object.keys(record)
      .filter((member) => record[member] !== undefined)
      .sort()
    mixer.block(tag.record, members.length, 0, 0)
    for (const member of members) {
      writeScalar(mixer, member)
      writeMember(mixer, record[member] as Value, known)
    }
  }
  return mixer.digest()
}

/** Whatever has parts of its own goes in by its hash, so that a column is read once however many records hold it. */
function writeMember(mixer: Mixer, value: Value, known: Digests | undefined): void {
  if (typeof value !== "object" || value === null) {
    writeScalar(mixer, value)
    return
  }
  const inner = digest(value, known)
  mixer.block(tag.nested, 0, 0, 0)
  mixer.block(inner[0] as number, inner[1] as number, inner[2] as number, inner[3] as number)
}

const oneNumber = new Float64Array(1)
const itsWords = new Int32Array(oneNumber.buffer)

function writeScalar(mixer: Mixer, value: null | boolean | number | string): void {
  if (value === null) mixer.block(tag.null, 0, 0, 0)
  else if (typeof value === "boolean") mixer.block(value ? tag.true : tag.false, 0, 0, 0)
  else if (typeof value === "number") {
    oneNumber[0] = value
    if (Number.isNaN(value)) mixer.block(tag.number, 0, nanHigh, 0)
    else mixer.block(tag.number, itsWords[0] as number, itsWords[1] as number, 0)
  } else if (typeof value === "string") {
    mixer.block(tag.string, value.length, 0, 0)
    for (let i = 0; i < value.length; i += 8) {
      mixer.block(twoUnits(value, i), twoUnits(value, i + 2), twoUnits(value, i + 4), twoUnits(value, i + 6))
    }
  } else throw new TypeError(`A value cannot hold a ${typeof value}`)
}

/** Past the end a string gives NaN, which the bit operations take for 0; the length stands before, so nothing is confused. */
const twoUnits = (text: string, at: number): number => text.charCodeAt(at) | (text.charCodeAt(at + 1) << 16)

function arrayDigest(array: TypedArray, known: Digests | undefined): Int32Array {
  const large = array.byteLength >= largeBytes
  const former = large ? known?.get(array) : undefined
  if (former !== undefined) return former
  const mixer = new Mixer()
  if (array instanceof Float64Array) {
    mixer.block(tag.f64, array.length, 0, 0)
    mixer.numbers(new Int32Array(array.buffer, array.byteOffset, array.length * 2))
  } else {
    const type = array instanceof Uint32Array ? tag.u32 : array instanceof Int32Array ? tag.i32 : tag.u8
    mixer.block(type, array.length, 0, 0)
    mixer.words(asWords(array))
  }
  const result = mixer.digest()
  if (large) known?.set(array, result)
  return result
}

/** Whole words of an array; bytes are copied where they stand across words or do not fill the last one. */
function asWords(array: Uint32Array | Int32Array | Uint8Array): Int32Array {
  if (array.byteOffset % 4 === 0 && array.byteLength % 4 === 0) return new Int32Array(array.buffer, array.byteOffset, array.byteLength / 4)
  const padded = new Uint8Array(Math.ceil(array.byteLength / 4) * 4)
  padded.set(new Uint8Array(array.buffer, array.byteOffset, array.byteLength))
  return new Int32Array(padded.buffer)
}

const nanHigh = 0x7ff80000

/** The state of one hash: four words, and how many blocks went in. */
class Mixer {
  #a = 0x6d75
  #b = 0x657461
  #c = 0x6c696e6b
  #d = 0x6c6f67
  #blocks = 0

  block(k1: number, k2: number, k3: number, k4: number): void {
    // Constants stand inside, where the compiler takes them for what they are: as variables of the file they cost half the speed.
    const c1 = 0x239b961b
    const c2 = 0xab0e9789
    const c3 = 0x38b34ae5
    const c4 = 0xa1e38b93
    const n1 = 0x561ccd1b
    const n2 = 0x0bcaa747
    const n3 = 0x96cd1c35
    const n4 = 0x32ac3b17
    let a = this.#a
    let b = this.#b
    let c = this.#c
    let d = this.#d
    let k = Math.imul(k1, c1)
    a ^= Math.imul((k << 15) | (k >>> 17), c2)
    a = (Math.imul((((a << 19) | (a >>> 13)) + b) | 0, 5) + n1) | 0
    k = Math.imul(k2, c2)
    b ^= Math.imul((k << 16) | (k >>> 16), c3)
    b = (Math.imul((((b << 17) | (b >>> 15)) + c) | 0, 5) + n2) | 0
    k = Math.imul(k3, c3)
    c ^= Math.imul((k << 17) | (k >>> 15), c4)
    c = (Math.imul((((c << 15) | (c >>> 17)) + d) | 0, 5) + n3) | 0
    k = Math.imul(k4, c4)
    d ^= Math.imul((k << 18) | (k >>> 14), c1)
    d = (Math.imul((((d << 13) | (d >>> 19)) + a) | 0, 5) + n4) | 0
    this.#a = a
    this.#b = b
    this.#c = c
    this.#d = d
    this.#blocks++
  }

  /** The words of doubles, every NaN as one. The loop repeats `block`, because a call for every 16 bytes takes twice the time. */
  numbers(words: Int32Array): void {
    const c1 = 0x239b961b
    const c2 = 0xab0e9789
    const c3 = 0x38b34ae5
    const c4 = 0xa1e38b93
    const n1 = 0x561ccd1b
    const n2 = 0x0bcaa747
    const n3 = 0x96cd1c35
    const n4 = 0x32ac3b17
    const exponent = 0x7ff00000
    const nanHigh = 0x7ff80000
    const whole = words.length - (words.length % 4)
    let a = this.#a
    let b = this.#b
    let c = this.#c
    let d = this.#d
    for (let i = 0; i < whole; i += 4) {
      let k1 = words[i] as number
      let k2 = words[i + 1] as number
      let k3 = words[i + 2] as number
      let k4 = words[i + 3] as number
      if ((k2 & exponent) === exponent && (k1 | (k2 & 0xfffff)) !== 0) {
        k1 = 0
        k2 = nanHigh
      }
      if ((k4 & exponent) === exponent && (k3 | (k4 & 0xfffff)) !== 0) {
        k3 = 0
        k4 = nanHigh
      }
      let k = Math.imul(k1, c1)
      a ^= Math.imul((k << 15) | (k >>> 17), c2)
      a = (Math.imul((((a << 19) | (a >>> 13)) + b) | 0, 5) + n1) | 0
      k = Math.imul(k2, c2)
      b ^= Math.imul((k << 16) | (k >>> 16), c3)
      b = (Math.imul((((b << 17) | (b >>> 15)) + c) | 0, 5) + n2) | 0
      k = Math.imul(k3, c3)
      c ^= Math.imul((k << 17) | (k >>> 15), c4)
      c = (Math.imul((((c << 15) | (c >>> 17)) + d) | 0, 5) + n3) | 0
      k = Math.imul(k4, c4)
      d ^= Math.imul((k << 18) | (k >>> 14), c1)
      d = (Math.imul((((d << 13) | (d >>> 19)) + a) | 0, 5) + n4) | 0
    }
    this.#a = a
    this.#b = b
    this.#c = c
    this.#d = d
    this.#blocks += whole / 4
    if (whole < words.length) {
      const low = words[whole] as number
      const high = words[whole + 1] as number
      const isNan = (high & exponent) === exponent && (low | (high & 0xfffff)) !== 0
      this.block(isNan ? 0 : low, isNan ? nanHigh : high, 0, 0)
    }
  }

  words(words: Int32Array): void {
    const whole = words.length - (words.length % 4)
    for (let i = 0; i < whole; i += 4)
      this.block(words[i] as number, words[i + 1] as number, words[i + 2] as number, words[i + 3] as number)
    if (whole < words.length) this.block(words[whole] ?? 0, words[whole + 1] ?? 0, words[whole + 2] ?? 0, 0)
  }

  digest(): Int32Array {
    const out = new Int32Array(4)
    let a = this.#a ^ this.#blocks
    let b = this.#b ^ this.#blocks
    let c = this.#c ^ this.#blocks
    let d = this.#d ^ this.#blocks
    a = (a + b + c + d) | 0
    b = finished((b + a) | 0)
    c = finished((c + a) | 0)
    d = finished((d + a) | 0)
    a = finished(a)
    a = (a + b + c + d) | 0
    out[0] = a
    out[1] = b + a
    out[2] = c + a
    out[3] = d + a
    return out
  }
}

/** Every bit of the word moves every other (the finalizer of the same source). */
function finished(word: number): number {
  let h = Math.imul(word ^ (word >>> 16), 0x85ebca6b)
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35)
  return h ^ (h >>> 16)
}

const hex = (digest: Int32Array): Hash => {
  let text = ""
  for (const word of digest) text += (word >>> 0).toString(16).padStart(8, "0")
  return text as Hash
}
