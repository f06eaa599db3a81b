// Completion: a statement with the caret at `|`, and what is offered there.

import { describe, expect, it } from "vitest"
import { words } from "../../../../cells/words.ts"
import { completion, type Surroundings } from "../../../../ui/page/statement/completion.ts"

const around: Surroundings = {
  kinds: words,
  cells: [
    { name: "frost", kind: "data", says: "" },
    { name: "kill", kind: "model", says: "" },
    { name: "shift", kind: "dial", says: "" },
  ],
  columns: [
    { name: "night", type: "number", unit: "°C", called: "night minimum", levels: [] },
    { name: "lot", type: "category", unit: null, called: null, levels: ["north", "south"] },
  ],
  files: ["terrace.csv"],
  families: [{ name: "binomial", says: "shares" }],
  links: (family) => [
    { name: family === "binomial" ? "cloglog" : "log", says: "", takes: false },
    { name: "power", says: "", takes: true },
  ],
  functions: [{ name: "log10", says: "" }],
  predictorCalls: [{ name: "polynomial", says: "" }],
  family: null,
}

/** Labels offered at `|`. */
function offers(text: string): string[] {
  const caret = text.indexOf("|")
  return completion(text.replace("|", ""), caret, around)?.options.map(({ label }) => label) ?? []
}

describe("completion", () => {
  it("offers the kinds where a cell begins", () => {
    expect(offers("|")).toEqual(words.map(({ word }) => word))
    expect(offers("sca|")).toContain("scales")
  })

  it("offers the clauses of the kind, those that may stand once only once, and none that is not there yet", () => {
    const offered = offers("scales\n  model kill\n  |")
    expect(offered).toContain("across")
    expect(offered).not.toContain("model")
    expect(offered).not.toContain("compare")
  })

  it("offers a clause again where it may stand again", () => {
    expect(offers('data d\n  from "terrace.csv"\n  column night number\n  |')).toContain("column")
  })

  it.each([
    ["cells of the kind that is wanted", "scales\n  model |", ["kill"]],
    ["columns", "scales\n  across |", ["night", "lot"]],
    ["dials where a bound is wanted", "scales\n  from |", ["shift"]],
    ["files", "data d\n  from |", ['"terrace.csv"']],
    ["links beside", "scales\n  beside |", ["log", "power"]],
    ["the levels of the column that is held", "scales\n  hold lot = |", ['"north"', '"south"', "shift"]],
    ["columns, cells and functions in an expression", "data d\n  make x = |", ["night", "lot", "kill", "shift", "log10"]],
  ])("offers %s", (_, text, wanted) => {
    expect(offers(text)).toEqual(wanted)
  })

  it("says type, unit and what a column is called", () => {
    const option = completion("scales\n  across ", 16, around)?.options[0]
    expect(option?.says).toBe("number · °C · night minimum")
  })

  it("opens the bracket of what takes a parameter", () => {
    const options = completion("scales\n  beside ", 16, around)?.options ?? []
    expect(options.map(({ apply, label }) => apply ?? label)).toEqual(["log", "power("])
  })

  it("offers nothing in a comment, in a text, or after what does not read", () => {
    expect(offers("scales # |")).toEqual([])
    expect(offers('data d\n  from "|')).toEqual([])
    expect(offers("scales\n  from shift of |")).toEqual([])
  })

  it("in a note offers names only between braces", () => {
    expect(offers("note\nThe fit is |")).toEqual([])
    expect(offers("note\nThe fit is {|")).toContain("kill")
    expect(offers("note\nAn escaped \\{|")).toEqual([])
  })
})
