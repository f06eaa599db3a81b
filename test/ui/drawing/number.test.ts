// Numbers written out: digits, signs, powers, and columns that line up.

import { describe, expect, it } from "vitest"
import {
  atPoint,
  decimalsOf,
  plain,
  pointAligned,
  written,
  writtenCount,
  writtenFixed,
  writtenInFull,
  writtenProbability,
  writtenRange,
  writtenShare,
} from "../../../ui/drawing/number.ts"

describe("a number to so many digits", () => {
  it.each([
    [-60.7174545, 5, "−60.717"],
    [0.48961, 3, "0.490"],
    [0, 4, "0"],
    [-0, 4, "0"],
    [1234.5, 2, "1235"],
    [123456.4, 4, "123\u202f456"],
    [9.9996, 4, "10.00"],
    [0.00012345, 3, "0.000123"],
    [0.000012345, 3, "1.23 × 10⁻⁵"],
    [-1.5e-300, 2, "−1.5 × 10⁻³⁰⁰"],
    [6.02214076e23, 4, "6.022 × 10²³"],
    [Number.NaN, 3, "—"],
    [Number.POSITIVE_INFINITY, 3, "∞"],
    [Number.NEGATIVE_INFINITY, 3, "−∞"],
  ])("%d to %i digits reads %s", (value, digits, text) => {
    expect(written(value, digits)).toBe(text)
  })

  it("never shows a minus before nothing", () => {
    expect(writtenFixed(-0.0004, 2)).toBe("0.00")
  })
})

describe("intervals, counts, probabilities, shares", () => {
  it.each([
    [0.7931, 0.86984, 3, "0.793 to 0.870"],
    [-2.7694, -2.1481, 4, "−2.769 to −2.148"],
    [9.8, 12.3, 3, "9.8 to 12.3"],
    [0.0123, 1.5312, 3, "0.012 to 1.531"],
    [Number.NEGATIVE_INFINITY, 2.5, 2, "−∞ to 2.5"],
    [0, 1.234, 3, "0.00 to 1.23"],
    [1e-7, 2, 2, "1.0 × 10⁻⁷ to 2.0"],
  ])("%d to %d reads %s", (from, to, digits, text) => {
    expect(writtenRange(from, to, digits)).toBe(text)
  })

  it.each([
    [0.00004, "below 0.0001"],
    [0.0042, "0.0042"],
    [0.372, "0.37"],
    [0.9984, "above 0.99"],
    [1, "1.00"],
  ])("the p-value %d reads %s", (p, text) => {
    expect(writtenProbability(p)).toBe(text)
  })

  it("groups thousands from ten thousand on", () => {
    expect([960, 9600, 96000, 1234567].map(writtenCount)).toEqual(["960", "9600", "96\u202f000", "1\u202f234\u202f567"])
  })

  it("writes a share as a percentage", () => {
    expect(writtenShare(0.463)).toBe("46\u202f%")
  })
})

describe("full values", () => {
  it("keep every digit, for people and for machines", () => {
    expect(writtenInFull(-0.1)).toBe("−0.1")
    expect(writtenInFull(1.5e-9)).toBe("1.5 × 10⁻⁹")
    for (const value of [0.1 + 0.2, -1 / 3, 5e-324, 1e21, 123456789.123]) expect(Number(plain(value))).toBe(value)
    expect(plain(Number.NaN)).toBe("")
  })
})

describe("columns", () => {
  it("stand with their points under each other", () => {
    expect(pointAligned(["−60.717", "34.27", "8", "—"])).toEqual(["−60.717", " 34.27 ", "  8    ", "  —    "])
  })

  it.each([
    [0.25, 2],
    [5, 0],
    [0.1, 1],
    [1e-7, 7],
    [20000, 0],
  ])("a step of %d needs %i decimals", (step, decimals) => {
    expect(decimalsOf(step)).toBe(decimals)
  })
})

describe("a text in a column of numbers", () => {
  it.each([
    ["−4.23", "−4", ".23"],
    ["1\u202f234.5", "1\u202f234", ".5"],
    ["120", "120", ""],
    ["below 0.0001", "below 0", ".0001"],
    ["1.2 × 10⁻⁷", "1", ".2 × 10⁻⁷"],
    ["−0.103 to 0.42", "−0", ".103 to 0.42"],
    ["not available", "not available", ""],
  ])("%s stands by its point", (text, before, after) => {
    expect(atPoint(text)).toEqual({ before, after })
  })
})
