import { describe, expect, it } from "vitest"

import type { Cell } from "../../runtime/document.ts"
import type { Graph } from "../../runtime/graph.ts"
import { graph } from "../../runtime/graph.ts"
import { membershipFaults } from "../../runtime/membership.ts"
import { textRange } from "../../runtime/place.ts"
import type { Reading } from "../../runtime/reading.ts"
import { createReader } from "../../runtime/reading.ts"
import { rewritten } from "../../runtime/statement.ts"
import { words } from "./kinds.ts"

const reader = createReader(words)

/** Cells by id, which is their place from 0. */
const read = (texts: readonly string[]): Map<string, Reading> =>
  new Map(texts.map((text, i): [string, Reading] => [String(i), reader({ id: String(i), text } satisfies Cell)]))

const graphOf = (...texts: readonly string[]): Graph => graph(read(texts), null, null)

/** Every fault as `cell: what it says (where)`. */
const faultsOf = (...texts: readonly string[]): readonly string[] => {
  const readings = read(texts)
  const whole = graph(readings, null, null)
  return [...readings.entries()].flatMap(([id, reading]) =>
    membershipFaults(reading, whole).map(({ text, at }) => {
      const { from, to } = textRange(reading.statement, at)
      return `${id}: ${text} (${reading.statement.text.slice(from, to)})`
    }),
  )
}

const waits = (name: string, ...others: string[]): string => `sum ${name}\n  of ${others.join(", ")}`

describe("the graph", () => {
  it("knows who reads whom, in the order of the statement, each once", () => {
    const { inputs, readers } = graphOf(waits("s", "b", "a", "b"), "number a", "number b")
    expect(inputs.get("0")).toEqual(["2", "1"])
    expect(readers.get("1")).toEqual(["0"])
    expect(readers.get("0")).toEqual([])
  })

  it("ranks a cell above all that it reads, whatever the reading order", () => {
    const { rank } = graphOf(waits("d", "a", "c"), waits("c", "b"), waits("b", "a"), "number a")
    expect(["3", "2", "1", "0"].map((id) => rank.get(id))).toEqual([0, 1, 2, 3])
  })

  it("takes a name that may be a column for a cell only where there is one, and never for the cell itself", () => {
    const mean = "mean m\n  column x in t\n  by k, m"
    expect(graphOf(mean, "table t").inputs.get("0")).toEqual(["1"])
    expect(graphOf(mean, "table t", "number k").inputs.get("0")).toEqual(["1", "2"])
  })

  it("has no arrow to a cell that is switched off, and knows whom it would be", () => {
    const { inputs, asleep, makers } = graphOf(waits("s", "a"), "off number a")
    expect(inputs.get("0")).toEqual([])
    expect(asleep.get("a")).toBe("1")
    expect(makers.has("a")).toBe(false)
  })

  it("stays the same object while who reads whom is unchanged", () => {
    const before = read([waits("s", "a"), "number a\n  is 1", "table t"])
    const first = graph(before, null, null)
    const now = read([waits("s", "a"), "number a\n  is 2", "table t\n  column x 1"])
    const changed = [...now].map(([id, reading]) => ({ before: before.get(id) as Reading, now: reading }))
    expect(graph(now, first, changed)).toBe(first)
    expect(graph(now, first, null)).toBe(first)
    const renamed = read([waits("s", "a"), "number a\n  is 2", "table u"])
    expect(graph(renamed, first, null)).not.toBe(first)
    const rewired = read([waits("s", "t"), "number a\n  is 2", "table t"])
    expect(graph(rewired, first, [{ before: before.get("0") as Reading, now: rewired.get("0") as Reading }])).not.toBe(first)
  })

  it("of a chain of 20,000 cells is made without recursion, and so is the ring that closes it", () => {
    const chain = Array.from({ length: 20_000 }, (_, i) => (i === 0 ? "number n0" : waits(`n${i}`, `n${i - 1}`)))
    expect(graphOf(...chain).rank.get("19999")).toBe(19_999)
    const ring = graphOf(...chain.with(0, waits("n0", "n19999")))
    expect(ring.cycles.size).toBe(20_000)
    expect(ring.cycles.get("7")).toEqual({ names: ["n7", "n6", "n8"], cells: 20_000 })
  })
})

describe("cells that wait for each other are named in order", () => {
  it.each<readonly [string, readonly string[], readonly string[]]>([
    ["one for itself", [waits("a", "a")], ["0: a waits for itself. (a)"]],
    [
      "two",
      [waits("frost", "kill"), waits("kill", "frost")],
      ["0: frost and kill wait for each other. (kill)", "1: kill and frost wait for each other. (frost)"],
    ],
    [
      "three, and one that only reads them",
      [waits("a", "b"), waits("b", "c"), waits("c", "a"), waits("d", "a")],
      [
        "0: a waits for b, b for c, and c for a. (b)",
        "1: b waits for c, c for a, and a for b. (c)",
        "2: c waits for a, a for b, and b for c. (a)",
      ],
    ],
    [
      "two rounds through one cell",
      [waits("a", "b", "c"), waits("b", "a"), waits("c", "a")],
      ["0: a and b wait for each other. (b)", "1: b and a wait for each other. (a)", "2: c and a wait for each other. (a)"],
    ],
  ])("%s", (_, texts, faults) => {
    expect(faultsOf(...texts)).toEqual(faults)
    // The order of the cells decides nothing but the ids.
    const said = faults.map((fault) => fault.slice(3)).sort()
    expect(
      faultsOf(...texts.toReversed())
        .map((fault) => fault.slice(3))
        .sort(),
    ).toEqual(said)
  })

  it("and a long round is told by its ends", () => {
    const ring = Array.from({ length: 12 }, (_, i) => waits(`n${i}`, `n${(i + 1) % 12}`))
    expect(faultsOf(...ring)[0]).toBe("0: n0 waits for n1, and so on through 9 more cells to n11, which waits for n0. (n1)")
  })
})

describe("a name", () => {
  it("of two cells is a fault in both, at the name", () => {
    expect(faultsOf("number a", "table a", "number b")).toEqual(["0: Two cells are called a. (a)", "1: Two cells are called a. (a)"])
    expect(faultsOf("number a", "table a", "number a")[0]).toBe("0: 3 cells are called a. (a)")
  })

  it("that is also that of a cell switched off is free", () => {
    expect(faultsOf("number a", "off table a")).toEqual([])
  })

  it("of no cell is a fault at its place in the reader, and so is each other use", () => {
    expect(faultsOf(waits("s", "plot", "plot"), "number kill")).toEqual([
      "0: There is no cell called plot. (plot)",
      "0: There is no cell called plot. (plot)",
    ])
  })

  it("that is misspelt gets the nearest, and a mend where one name alone is near", () => {
    const text = "sum s\n  of kill,  frots   # both\n  of kill"
    const [fault] = membershipFaults(reader({ id: "0", text }), graphOf("number kill", "number frost", text))
    expect(fault).toMatchObject({ code: "cell/missing-cell", clause: "of", hint: "The nearest name is frost." })
    const edit = fault?.mend?.edits[0]
    expect(edit && rewritten(text, edit)).toBe("sum s\n  of kill,  frost   # both\n  of kill")
    const [unsure] = membershipFaults(reader({ id: "0", text }), graphOf("number kill", "number frost", "number frotz", text))
    expect(unsure?.hint).toMatch(/^The nearest name is fro/)
    expect(unsure?.mend).toBeNull()
  })
})

describe("a kind", () => {
  const noticesOf = (text: string) => reader({ id: "0", text }).notices

  it("that is misspelt gets the nearest and a mend, also where the cell is off", () => {
    const text = "tabel t  # mine\n  column x 1"
    const [notice] = noticesOf(text)
    expect(notice).toMatchObject({ code: "cell/unknown-kind", hint: "The nearest kind is table.", at: { clause: -1, from: 0, to: 1 } })
    const edit = notice?.mend?.edits[0]
    expect(edit && rewritten(text, edit)).toBe("table t  # mine\n  column x 1")
    expect(noticesOf(`off ${text}`)).toEqual([])
  })

  it("that nothing is near to is told which kinds there are", () => {
    expect(noticesOf("zygote z")[0]?.hint).toBe("A cell begins with one of number, sum, rounded, table, mean, tardy or file.")
  })

  it("of the language that is not there yet is not called unknown", () => {
    expect(noticesOf("compare k").map(({ code }) => code)).toEqual(["cell/not-available-yet"])
    expect(noticesOf("decision d").map(({ code }) => code)).toEqual(["cell/not-available-yet"])
  })

  it("that is unknown still defines its name, so that readers wait for it instead of missing it", () => {
    expect(faultsOf("tabel t", waits("s", "t"))).toEqual([])
  })
})
