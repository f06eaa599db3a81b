import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { nameFrom, namesFor } from "../../../cells/table/header.ts"
import { isWord, reserved } from "../../../runtime/tokens.ts"

describe("names made of heads", () => {
  it.each<[readonly (string | null)[], readonly string[], readonly (string | null)[]]>([
    [
      ["dose", "killed"],
      ["dose", "killed"],
      [null, null],
    ],
    [
      ["body mass (kg)", "speed [m/s]"],
      ["body_mass", "speed"],
      ["kg", "m/s"],
    ],
    [["sex (1 = male)"], ["sex_1_male"], [null]],
    [
      ["2020", "% moist"],
      ["_2020", "moist"],
      [null, null],
    ],
    [
      ["mu", "missing", "link"],
      ["_mu", "_missing", "link"],
      [null, null, null],
    ],
    [
      ["x", "x", "x_2"],
      ["x", "x_3", "x_2"],
      [null, null, null],
    ],
    [
      ["", "", "a"],
      ["column_1", "column_2", "a"],
      [null, null, null],
    ],
    [
      ["a b", "a_b"],
      ["a_b_2", "a_b"],
      [null, null],
    ],
    [
      [null, null],
      ["column_1", "column_2"],
      [null, null],
    ],
    [
      ["größe", "数"],
      ["größe", "数"],
      [null, null],
    ],
  ])("%j are called %j, with units %j", (heads, names, units) => {
    expect(namesFor(heads).map(({ name }) => name)).toEqual(names)
    expect(namesFor(heads).map(({ unit }) => unit)).toEqual(units)
  })

  it("are names, each once, and never one that is taken", () => {
    fc.assert(
      fc.property(
        fc.array(fc.oneof(fc.string({ unit: "grapheme" }), fc.constantFrom("a", "a_2", "mu", "1", "")), { maxLength: 12 }),
        (heads) => {
          const names = namesFor(heads, new Set(["a"])).map(({ name }) => name)
          expect(new Set(names).size).toBe(heads.length)
          for (const name of names) expect([isWord(name), reserved.has(name), name === "a"]).toEqual([true, false, false])
        },
      ),
    )
  })

  it("can be made for a cell of a file's name", () => {
    expect(["terrace", "bud counts 2024", "mu", "--"].map((text) => nameFrom(text, "observations"))).toEqual([
      "terrace",
      "bud_counts_2024",
      "_mu",
      "observations",
    ])
  })
})
