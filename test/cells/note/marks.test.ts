import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { found } from "../../../cells/note/find.ts"
import { marksIn } from "../../../cells/note/marks.ts"
import { noteWords } from "../../../cells/note/words.ts"
import type { Input } from "../../../runtime/kind.ts"
import { read } from "../../../runtime/statement.ts"
import type { Key, Value } from "../../../runtime/value.ts"

const marked = (body: string): readonly string[] =>
  marksIn(body).marks.map(({ from, to, digits }) => body.slice(from, to) + (digits === null ? "" : ` ${digits}`))

const inputs = (values: Readonly<Record<string, Value>>): ReadonlyMap<string, Input> =>
  new Map(Object.entries(values).map(([name, value]) => [name, { value, key: "" as Key, offers: null }]))

const filled = (body: string, values: Readonly<Record<string, Value>>): string => {
  const outcome = found(noteWords.parse(read(`note\n${body}`)).said, inputs(values))
  return outcome.found?.markdown ?? outcome.notices.map(({ code }) => code).join(" ")
}

describe("marks of a note", () => {
  it.each([
    ["{x}", ["{x}"]],
    ["{x; 3}", ["{x; 3} 3"]],
    ["{x;3} and {log(x) + 1}", ["{x;3} 3", "{log(x) + 1}"]],
    ['{coefficient(m, "a}b")}', ['{coefficient(m, "a}b")}']],
    ["\\{x}", []],
    ["\\\\{x}", ["{x}"]],
    ["`{x}` {y}", ["{y}"]],
    ["``{x} ` {y}`` {z}", ["{z}"]],
    ["` {x}", ["{x}"]],
    ["```\n{x}\n```\n{y}", ["{y}"]],
    ["~~~\n{x}\n```\n{y}\n~~~\n{z}", ["{z}"]],
    ["````\n```\n{x}\n````\n{y}", ["{y}"]],
    ["\n    {x}\n\n{y}", ["{y}"]],
    ["text\n    {x}", ["{x}"]],
    ["{x\n}", []],
    ["{}", []],
    ["{a, b}", []],
    ["{{x}}", []],
    ["{x # y}", []],
    ["{x; 0}", []],
    ["{x; 99}", []],
  ])("%j has %j", (body, expected) => {
    expect(marked(body)).toEqual(expected)
  })

  it("never throws, and each mark begins and ends with its brace", () => {
    const piece = fc.constantFrom(...'{ } ` `` ``` ~~~ \\ x ; 3 " + ( ) # − $ & | < > * _'.split(" "), "\n", "    ", "{x}", " ")
    fc.assert(
      fc.property(fc.array(piece, { maxLength: 30 }), (pieces) => {
        const body = pieces.join("")
        const { marks, odd } = marksIn(body)
        for (const { from, to } of [...marks, ...odd]) expect(`${body[from]}${body[to - 1]}`).toBe("{}")
      }),
      { numRuns: 1_000 },
    )
  })

  it.each([
    ["{x}", { x: 0.5 }, "0.5"],
    ["{x}", { x: 1 / 3 }, "0.333333"],
    ["{x; 3}", { x: 1 / 3 }, "0.333"],
    ["{x; 3}", { x: -2 }, "−2.00"],
    ["{x; 2}", { x: 1e-9 }, "1.0 × 10⁻⁹"],
    ["{t}", { t: "a*b_c" }, "a\\*b\\_c"],
    ["{x > 0}", { x: 1 }, "true"],
    ["a {x} b {x + 1} c", { x: 1 }, "a 1 b 2 c"],
    ["\\{x} `{x}`", {}, "\\{x} `{x}`"],
    ["{log(x)}", { x: 0 }, "—"],
    ["{x + true}", { x: 0 }, "expression/type"],
  ])("%j with %j reads %j", (body, values, expected) => {
    expect(filled(body, values)).toBe(expected)
  })

  it("warns of a missing value, and remarks on braces that nearly are a mark, at their places", () => {
    const text = "note\nso {log(x)} and {a b} and {a}"
    const { said, notices } = noteWords.parse(read(text))
    expect(notices).toMatchObject([{ level: "remark", code: "note/braces-are-text", at: { clause: 0, from: 16, to: 21 } }])
    const outcome = found(said, inputs({ x: 0, a: 1 }))
    expect(outcome.notices).toMatchObject([{ level: "warning", code: "note/missing", at: { clause: 0, from: 3, to: 11 } }])
    expect(outcome.found?.values).toEqual([null, 1])
  })

  it("uses each name once and defines nothing, though it may be called", () => {
    const names = noteWords.names(noteWords.parse(read("note intro\n{a + b} {a} `{c}`")).said)
    expect(names.defines).toBeNull()
    expect(names.uses.map(({ name }) => name)).toEqual(["a", "b"])
  })
})
