import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { type Broken, type Oddities, Scanner } from "../../../cells/table/csv.ts"

type Scanned = { records: string[][]; oddities: Oddities; broken: Broken | null }

/** The records of a text that comes in pieces of so many bytes. */
const scanned = (text: string | Uint8Array, separator = ",", pieces = 1_000_000): Scanned => {
  const records: string[][] = []
  let fields: string[] = []
  const scanner = new Scanner(separator, {
    field: (index, bytes, from, to) => {
      expect(index).toBe(fields.length)
      fields.push(new TextDecoder("utf-8", { ignoreBOM: true }).decode(bytes.subarray(from, to)))
    },
    record: (count) => {
      expect(count).toBe(fields.length)
      records.push(fields)
      fields = []
    },
  })
  const bytes = typeof text === "string" ? new TextEncoder().encode(text) : text
  for (let from = 0; from < bytes.length; from += pieces) scanner.push(bytes.subarray(from, from + pieces))
  scanner.end()
  return { records, oddities: scanner.oddities, broken: scanner.broken }
}

describe("reading separated text by RFC 4180", () => {
  it.each<[string, string, string[][]]>([
    [
      "lines ended by line feeds",
      "a,b\n1,2\n",
      [
        ["a", "b"],
        ["1", "2"],
      ],
    ],
    [
      "lines ended by carriage return and line feed",
      "a,b\r\n1,2\r\n",
      [
        ["a", "b"],
        ["1", "2"],
      ],
    ],
    [
      "lines ended by carriage returns",
      "a,b\r1,2\r",
      [
        ["a", "b"],
        ["1", "2"],
      ],
    ],
    [
      "no line end at the end",
      "a,b\n1,2",
      [
        ["a", "b"],
        ["1", "2"],
      ],
    ],
    [
      "an empty field at the end of the file",
      "a,b\n1,",
      [
        ["a", "b"],
        ["1", ""],
      ],
    ],
    [
      "an empty field at the end of a line",
      "a,b\n1,\n2,3",
      [
        ["a", "b"],
        ["1", ""],
        ["2", "3"],
      ],
    ],
    ["separators and line ends in quotes", 'a\n"x,y\r\nz"\n', [["a"], ["x,y\r\nz"]]],
    ["a quote written twice", 'a\n"say ""so"""\n', [["a"], ['say "so"']]],
    ["an empty field in quotes, as the only one", 'a\n""\n', [["a"], [""]]],
    [
      "a byte-order mark",
      "\ufeffa,b\n1,2",
      [
        ["a", "b"],
        ["1", "2"],
      ],
    ],
    ["a quoted head after a byte-order mark", '\ufeff"a b",c\n', [["a b", "c"]]],
    ["a file shorter than a byte-order mark", "a", [["a"]]],
    ["quotes closed at the end of the file", 'a,"b"', [["a", "b"]]],
    ["nothing at all", "", []],
  ])("reads %s, in one piece or byte by byte", (_, text, records) => {
    expect(scanned(text).records).toEqual(records)
    expect(scanned(text, ",", 1).records).toEqual(records)
    expect(scanned(text).broken).toBeNull()
  })

  it("takes lines with nothing on them for no records, and counts those that are not at the end", () => {
    const { records, oddities } = scanned("a\n\n  \n1\n\n\n")
    expect(records).toEqual([["a"], ["1"]])
    expect(oddities.emptyLines).toBe(2)
  })

  it.each([";", "\t", "|", "¦", "🜃"])("parts fields by %s, also where a piece ends inside it", (separator) => {
    const text = `a${separator}b c\n1${separator}"x${separator}y"`
    for (const pieces of [1, 2, 3, 1000]) {
      expect(scanned(text, separator, pieces).records).toEqual([
        ["a", "b c"],
        ["1", `x${separator}y`],
      ])
    }
  })

  it("takes a character that only begins like the separator for what it is", () => {
    // ¦ is C2 A6 and £ is C2 A3.
    expect(scanned("a£b¦c\n", "¦", 1).records).toEqual([["a£b", "c"]])
  })

  it("reads a quote out of place as it stands, and counts it", () => {
    const { records, oddities } = scanned('a,b\n5" pipe,x\n"y"z,w\n', ",", 1)
    expect(records).toEqual([
      ["a", "b"],
      ['5" pipe', "x"],
      ['"y"z', "w"],
    ])
    expect(oddities.strayQuotes).toEqual({ count: 2, first: 1 })
  })

  it("says in which record and field a quote was opened that is never closed", () => {
    for (const pieces of [1, 1000])
      expect(scanned('a,b\n1,"x\n2,y\n', ",", pieces).broken).toEqual({ type: "open-quote", record: 1, field: 1 })
  })

  it("does not take in the whole of a large file after a quote left open", () => {
    const text = `a,b\n1,"x\n${"2,y\n".repeat(600_000)}`
    expect(scanned(text, ",", 65_536).broken).toEqual({ type: "open-quote", record: 1, field: 1 })
  })

  it.each<[string, number[], number, number]>([
    ["a letter of an older code", [0xe9, 0x2c], 0xe9, 6],
    ["a byte that can begin nothing", [0xff], 0xff, 6],
    ["a second byte without a first", [0x80], 0x80, 6],
    ["an overlong form", [0xc0, 0xaf], 0xc0, 6],
    ["half of a surrogate pair", [0xed, 0xa0, 0x80], 0xed, 6],
    ["a character cut short by the end", [0xe2, 0x82], 0xe2, 6],
  ])("names the place of %s", (_, bad, byte, offset) => {
    for (const pieces of [1, 4, 1000]) {
      const bytes = Uint8Array.of(...new TextEncoder().encode("a,b\n1,"), ...bad)
      expect(scanned(bytes, ",", pieces).broken).toEqual({ type: "not-utf-8", bad: { byte, offset }, record: 1, field: 1 })
    }
  })

  it("counts the byte-order mark in the place of a bad byte", () => {
    const bytes = Uint8Array.of(0xef, 0xbb, 0xbf, 0x61, 0x0a, 0xe9, 0x0a)
    expect(scanned(bytes).broken).toMatchObject({ type: "not-utf-8", bad: { offset: 5 }, record: 1, field: 0 })
  })

  it.each<[string, number[]]>([
    ["utf-16", [0xff, 0xfe, 0x61, 0]],
    ["utf-16", [0xfe, 0xff, 0, 0x61]],
    ["zip", [0x50, 0x4b, 3, 4, 0]],
    ["gzip", [0x1f, 0x8b, 8, 0]],
    ["parquet", [0x50, 0x41, 0x52, 0x31, 0x15]],
    ["binary", [0x61, 0x2c, 0, 0x62, 0x0a]],
  ])("knows what is no text: %s", (what, bytes) => {
    expect(scanned(Uint8Array.of(...bytes), ",", 1).broken).toEqual({ type: "other-file", what })
  })

  it("gives back any records that were written by the rules, however the text is cut", () => {
    const field = fc.oneof(fc.string(), fc.string({ unit: "binary" }), fc.constantFrom("", '"', ",", "\n", "\r\n", " ", 'a""b', "é€🜃"))
    const record = fc.array(field, { minLength: 1, maxLength: 5 })
    fc.assert(
      fc.property(
        fc.array(record, { minLength: 1, maxLength: 6 }),
        fc.constantFrom("\n", "\r\n", "\r"),
        fc.constantFrom(",", ";", "\t", "¦"),
        fc.integer({ min: 1, max: 40 }),
        (records, lineEnd, separator, pieces) => {
          const whole = records.map((fields) => fields.map((text) => text.replaceAll("\0", "")))
          const text = whole.map((fields) => fields.map((one) => `"${one.replaceAll('"', '""')}"`).join(separator)).join(lineEnd)
          expect(scanned(text, separator, pieces).records).toEqual(whole)
        },
      ),
      { numRuns: 400 },
    )
  })
})
