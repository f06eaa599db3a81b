// Laws of the two grammars that the editor lays over clauses: parsing after an edit gives what parsing anew gives.

import { type Tree, TreeFragment } from "@lezer/common"
import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { parser as expressionParser } from "../../../cells/language/expression-parser.ts"
import { parser as predictorParser } from "../../../cells/language/predictor-parser.ts"

const shape = (tree: Tree): string => {
  const nodes: string[] = []
  tree.iterate({
    enter: (node) => {
      nodes.push(`${node.name} ${node.from} ${node.to}`)
    },
  })
  return nodes.join("\n")
}

const pieces = fc
  .array(fc.constantFrom(...'a b été ( ) , . + - * / ^ = < and or not in 1 0.5 95% "t" log( # − 名'.split(" "), " ", "\n"), {
    maxLength: 30,
  })
  .map((all) => all.join(" "))

describe.each([
  ["expressions", expressionParser],
  ["predictors", predictorParser],
] as const)("the grammar of %s", (_, parser) => {
  it("gives the same tree for a text parsed anew and one parsed after an edit", () => {
    const edit = fc.tuple(fc.nat(), fc.nat({ max: 6 }), fc.constantFrom("", "a", " + b", "(", ")", "1", "and", '"', "."))
    fc.assert(
      fc.property(pieces, fc.array(edit, { minLength: 1, maxLength: 4 }), (start, edits) => {
        let text = start
        let fragments = TreeFragment.addTree(parser.parse(text))
        for (const [place, removed, put] of edits) {
          const from = place % (text.length + 1)
          const to = Math.min(text.length, from + removed)
          text = text.slice(0, from) + put + text.slice(to)
          fragments = TreeFragment.applyChanges(fragments, [{ fromA: from, toA: to, fromB: from, toB: from + put.length }])
          const tree = parser.parse(text, fragments)
          expect(shape(tree)).toBe(shape(parser.parse(text)))
          fragments = TreeFragment.addTree(tree, fragments)
        }
      }),
      { numRuns: 500 },
    )
  })
})
