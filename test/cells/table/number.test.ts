import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { hasLeadingZero, isRounded, numberIn, shapeOf, written } from "../../../cells/table/number.ts"

const point = 46
const comma = 44
const bytes = (text: string): Uint8Array => new TextEncoder().encode(`x${text}y`)
const read = (text: string, decimal = point): number => numberIn(bytes(text), 1, text.length + 1, decimal)
const shape = (text: string, decimal = point): number => shapeOf(bytes(text), 1, text.length + 1, decimal)

describe("numbers from bytes", () => {
  it("are the nearest double, for any double in any way of writing it", () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), fc.integer({ min: 0, max: 20 }), (x, digits) => {
        for (const text of [String(x), x.toExponential(digits), Math.abs(x) < 1e21 ? x.toFixed(digits) : "0"]) {
          expect(read(text)).toBe(Number(text) === 0 ? 0 : Number(text))
          expect(read(text.replace(".", ","), comma)).toBe(Number(text) === 0 ? 0 : Number(text))
          expect(shape(text) & written.number).toBe(written.number)
        }
      }),
      { numRuns: 2000 },
    )
  })

  it.each<[string, number]>([
    [".5", 0.5],
    ["5.", 5],
    ["+3", 3],
    ["1E3", 1000],
    ["1e+3", 1000],
    ["-0", 0],
    ["000", 0],
    ["1e999", Number.POSITIVE_INFINITY],
    ["0.1", 0.1],
    ["123456789012345678", 123456789012345680],
    ["9007199254740993", 9007199254740992],
    ["4.35", 4.35],
    ["1e-23", 1e-23],
    ["8.5e22", 8.5e22],
  ])("reads %s as %d", (text, value) => {
    expect(read(text)).toBe(value)
  })

  it.each(["", "-", "+", ".", "e5", "1e", "1e+", "1 2", "1,5", "0x10", "Infinity", "NaN", "1_000", "--1", "1.2.3", "−5", "12%", "1e5.5"])(
    "does not take %j for a number",
    (text) => {
      expect(read(text)).toBeNaN()
      expect(shape(text)).toBe(0)
    },
  )

  it("say what anything at all is, both ways the same", () => {
    fc.assert(
      fc.property(fc.string({ unit: fc.constantFrom(..."0123456789+-.,eE ") }), (text) => {
        const isNumber = /^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?$/.test(text)
        expect(Number.isNaN(read(text))).toBe(!isNumber)
        expect(shape(text) !== 0).toBe(isNumber)
      }),
      { numRuns: 3000 },
    )
  })

  it.each<[string, number]>([
    ["12", written.number | written.whole],
    ["-12", written.number | written.whole | written.negative],
    ["007", written.number | written.whole | written.leadingZero],
    ["0", written.number | written.whole],
    ["0.5", written.number | written.decimals],
    ["1e3", written.number],
    ["9007199254740991", written.number | written.whole],
    ["9007199254740992", written.number | written.whole | written.long],
    ["1.234", written.number | written.decimals | written.threeDecimals],
    ["0.234", written.number | written.decimals],
    ["1234.567", written.number | written.decimals],
  ])("know how %s is written", (text, expected) => {
    expect(shape(text)).toBe(expected)
  })

  it("know what a double cannot hold", () => {
    const isChanged = (text: string): boolean => isRounded(bytes(text), 1, text.length + 1, read(text))
    expect(
      [
        "9007199254740991",
        "9007199254740992",
        "9007199254740993",
        "18014398509481984",
        "-9007199254740993",
        "50741488950617130",
        "50741488950617131",
        "1e300",
      ].map(isChanged),
    ).toEqual([false, false, true, false, true, false, true, false])
  })

  it("know a zero in front that a number would lose", () => {
    const loses = (text: string): boolean => hasLeadingZero(bytes(text), 1, text.length + 1)
    expect(["007", "-07", "0", "0.7", "70", "00"].map(loses)).toEqual([true, true, false, false, false, true])
  })
})
