// What may come next in a clause, by its forms.

import { describe, expect, it } from "vitest"
import type { ClauseWords } from "../../../../runtime/kind.ts"
import { read } from "../../../../runtime/statement.ts"
import { expected, formWords } from "../../../../ui/page/statement/expected.ts"

const clause = (...forms: string[]): ClauseWords => ({ forms, says: "" })

/** What is expected after this much of a clause. */
function following(body: string, ...forms: string[]): string[] {
  const tokens = read(`kind k\n  word ${body}`).clauses[0]?.tokens ?? []
  return expected(clause(...forms), tokens).map((next) => (next.type === "word" ? next.text : `${next.slot}:${next.label}`))
}

describe("what may come next", () => {
  it.each<[string, string, string[], string[]]>([
    ["a slot at the start", "", ["NAME:y", "NAME:k out of NAME:n"], ["NAME:y", "NAME:k"]],
    ["a word of the form", "killed", ["NAME:y", "NAME:k out of NAME:n"], ["out"]],
    ["the slot after the words", "killed out of", ["NAME:k out of NAME:n"], ["NAME:n"]],
    ["nothing past the end", "killed out of n", ["NAME:k out of NAME:n"], []],
    ["an optional part, and what follows it", "x", ["NAME:c ( headed TEXT:h )? number"], ["headed", "number"]],
    ["both ends of a range", "-1", ["BOUND:from to BOUND:to"], ["to"]],
    ["the next of a list", "a = 1,", ["{ NAME:c = CHOICE:v },"], ["NAME:c"]],
    ["what stands in a bracket", "power(", ["CALL:link"], ["ARGUMENT:link"]],
    ["the next call of a list", "logit,", ["{ CALL:link },"], ["CALL:link"]],
    ["more of an expression", "log(area) +", ["EXPR:e"], ["EXPR:e"]],
    ["nothing after a misfit", "killed of", ["NAME:k out of NAME:n"], []],
  ])("is %s", (_, body, forms, wanted) => {
    expect(following(body, ...forms)).toEqual(wanted)
  })

  it("offers the words of a choice", () => {
    expect(following("", "yes|no:answer")).toEqual(["yes", "no"])
  })
})

it("the words of a form are those outside its slots", () => {
  expect([...formWords(clause("NAME:c ( headed TEXT:h )? number"))]).toEqual(["headed", "number"])
})
