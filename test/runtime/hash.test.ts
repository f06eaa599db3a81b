import { describe, expect, it } from "vitest"

import type { Digests } from "../../runtime/hash.ts"
import { hash, partHashes } from "../../runtime/hash.ts"
import type { Value } from "../../runtime/value.ts"

/** A NaN with another payload than the usual one. */
function otherNan(): Float64Array {
  const numbers = new Float64Array(3)
  new DataView(numbers.buffer).setBigUint64(8, 0x7ff0_0000_0000_0001n, true)
  new DataView(numbers.buffer).setBigUint64(16, 0xfff8_0000_0000_0000n, true)
  return numbers
}

const same: readonly (readonly [string, Value, Value])[] = [
  ["members in any order", { a: 1, b: [2] }, { b: [2], a: 1 }],
  ["equal arrays", new Float64Array([1, 2, 3]), new Float64Array([1, 2, 3])],
  ["a view and a copy of what it sees", new Float64Array([9, 1, 2]).subarray(1), new Float64Array([1, 2])],
  ["bytes that stand across words", new Uint8Array([9, 1, 2, 3, 4, 5]).subarray(1), new Uint8Array([1, 2, 3, 4, 5])],
  ["every NaN in a column", new Float64Array([0, Number.NaN, Number.NaN]), otherNan()],
  ["NaN as a number", Number.NaN, otherNan()[1] as number],
  ["a member that is undefined, and none", { a: 1, b: undefined as unknown as Value }, { a: 1 }],
]

const different: readonly Value[] = [
  null,
  false,
  true,
  0,
  -0,
  1,
  Number.NaN,
  Number.POSITIVE_INFINITY,
  Number.MIN_VALUE,
  "",
  "0",
  "a",
  "a\u0000",
  "aaaaaaaa",
  "aaaaaaaaa",
  "\u0000a",
  [],
  [[]],
  [null],
  [0],
  ["a", "b"],
  ["ab"],
  [["a"], "b"],
  [["a", "b"]],
  {},
  { a: null },
  { a: {} },
  { a: 1, b: 2 },
  { a: 2, b: 1 },
  { "a\u0000b": 1 },
  { parts: {} },
  new Float64Array(0),
  new Float64Array(1),
  new Float64Array([-0]),
  new Float64Array([1, 2, 3]),
  new Float64Array([1, 3, 2]),
  new Float64Array([2, 1, 3]),
  new Float64Array([1, 2, 3, 0]),
  new Float64Array([Number.NaN, 2, 3]),
  new Float64Array([1, 2, Number.NaN]),
  new Int32Array([1, 2, 3]),
  new Uint32Array([1, 2, 3]),
  new Uint8Array([1, 2, 3]),
  new Uint8Array([1, 2, 3, 0]),
  [1, 2, 3],
]

describe("a hash", () => {
  it.each(same)("is one for %s", (_, a, b) => {
    expect(hash(a)).toBe(hash(b))
  })

  it("differs for values that differ, and is 32 hexadecimal digits", () => {
    const hashes = different.map((value) => hash(value))
    expect(new Set(hashes).size).toBe(different.length)
    for (const each of hashes) expect(each).toMatch(/^[0-9a-f]{32}$/)
  })

  it("changes with every single bit of a column, in half of its own bits", () => {
    const bytes = new Uint8Array(new Float64Array([0.1, 250, -3e-7, 12, 1e300]).buffer)
    const plain = hash(new Float64Array(bytes.buffer))
    const seen = new Set([plain])
    let flips = 0
    for (let bit = 0; bit < bytes.length * 8; bit++) {
      const flipped = bytes.slice()
      flipped[bit >> 3] = (flipped[bit >> 3] as number) ^ (1 << (bit & 7))
      const its = hash(new Float64Array(flipped.buffer))
      seen.add(its)
      flips += ones(BigInt(`0x${its}`) ^ BigInt(`0x${plain}`))
    }
    expect(seen.size).toBe(bytes.length * 8 + 1)
    expect(flips / (bytes.length * 8)).toBeGreaterThan(60)
    expect(flips / (bytes.length * 8)).toBeLessThan(68)
  })

  it("meets no other among forty thousand small values", () => {
    const hashes = new Set<string>()
    for (let i = 0; i < 20_000; i++) {
      hashes.add(hash(i))
      hashes.add(hash(`${i}`))
    }
    expect(hashes.size).toBe(40_000)
  })

  it("reads a large array once when it is known already", () => {
    const known: Digests = new WeakMap()
    const column = new Float64Array(1000).fill(7)
    const before = hash({ parts: { x: column } }, known)
    column[0] = 8 // Which no value may do: it shows here that the array is not read again.
    expect(hash({ parts: { x: column } }, known)).toBe(before)
    expect(hash({ parts: { x: column } })).not.toBe(before)
  })

  it("of a part is that of the part alone", () => {
    const x = { type: "number", values: new Float64Array([1, 2]) }
    expect(partHashes({ rows: 2, parts: { x, y: null } })).toEqual({ x: hash(x), y: hash(null) })
    expect(partHashes({ rows: 2 })).toEqual({})
    expect(partHashes([x])).toEqual({})
    expect(partHashes({ parts: [x] })).toEqual({})
  })

  it("is refused to what is no value", () => {
    expect(() => hash({ f: (() => 1) as unknown as Value })).toThrow(TypeError)
  })
})

const ones = (bits: bigint): number => bits.toString(2).replaceAll("0", "").length
