import { type Tree, TreeFragment } from "@lezer/common"
import fc from "fast-check"
import { describe, expect, it } from "vitest"
import type { ClauseEdit } from "../../runtime/notice.ts"
import { canonical, read, rewritten } from "../../runtime/statement.ts"
import { parser } from "../../runtime/statement-parser.ts"

/** Heading and clauses on lines of their own: what a statement comes to, in one text. */
const outline = (text: string): string => {
  const { off, kind, name, rest, clauses, prose } = read(text)
  const words = (tokens: readonly { readonly text: string }[]): string => tokens.map((token) => token.text).join("|")
  return [
    `${off ? "off " : ""}${kind ?? "?"} ${name ?? "?"}${rest.length > 0 ? ` [${words(rest)}]` : ""}`,
    ...clauses.map((clause) => `${clause.keyword}: ${words(clause.tokens)}`.trimEnd()),
    ...(prose === null ? [] : [`prose ${JSON.stringify(text.slice(prose.from, prose.to))}`]),
  ].join("\n")
}

/** Pieces of which a text made at random is likely to be nasty in the way people are. */
const piece = fc.constantFrom(
  ..."abxyz _ ( ) { } [ ] , . + - * / ^ = < > != <= >= | ~ : ; # \" ' \\ 0 1 .5 1. 95% 2e3 − “ ” × é ß ñ 名 前 😀 \ud800 \udc00 \u00a0 \ufeff \t \r \0".split(
    " ",
  ),
  " ",
  "  ",
  "and",
  "or",
  "not",
  "off",
  "note",
  "model",
  "link",
  '"a text"',
  '"open',
  "e\u0301",
)
const line = fc.array(piece, { maxLength: 12 }).map((pieces) => pieces.join(""))
const anyText = fc.array(fc.oneof(piece, fc.constant("\n"), fc.constant("\r\n"), fc.string({ unit: "binary", maxLength: 4 })), {
  maxLength: 60,
})

describe("reading a statement", () => {
  it.each([
    ["", "? ?"],
    ["# only a comment\n\n", "? ?"],
    ["model frost", "model frost"],
    ["\n\n  model frost # why\n  link log", "model frost\nlink: log"],
    ["model m\n  predictor a\n    + b\n    - c\n  link log", "model m\npredictor: a|+|b|-|c\nlink: log"],
    ["data d\n  where a = 1\n    and b = 2\n    or c\n  order x", "data d\nwhere: a|=|1|and|b|=|2|or|c\norder: x"],
    ["data d\n  where a = 1\n\n  # a remark\n    and b", "data d\nwhere: a|=|1|and|b"],
    ["data d\n  andy x", "data d\nandy: x"],
    ["value v = 1 + 2", "value v [=|1|+|2]"],
    ["value v\n  = 3", "value v [=|3]"],
    ["scales\n  model m", "scales ?\nmodel: m"],
    ["off model m\n  link log", "off model m\nlink: log"],
    ["off", "off ? ?"],
    ["off\n  link log", "off ? ?\nlink: log"],
    ["off off x", "off ? ? [off|x]"],
    ["model off\n  off note", "model off\noff: note"],
    ["(model) m\n  link log", "? ? [(|model|)|m]\nlink: log"],
    ["model 3 m\n  link log", "model ? [3|m]\nlink: log"],
    ['decision d\n  because "one\n  two"\n  over logit', 'decision d\nbecause: "one\ntwo: "\nover: logit'],
    ['decision d\n  because "one"\n    "two"', 'decision d\nbecause: "one"|"two"'],
    ["data d\n  where (a = 1\n  link log", "data d\nwhere: (|a|=|1\nlink: log"],
    ["data d\n  where a − b", "data d\nwhere: a|−|b"],
    ["data d\n  x 😀", "data d\nx: 😀"],
    ["data 名前\n  column été number", "data 名前\ncolumn: été|number"],
    ["data d\r\n  link log\r\n", "data d\nlink: log"],
    ["a.5 x.y 1. .5 1.5e-3 95%", "a ? [.|5|x|.|y|1|.|.|5|1.5e-3|95%]"],
    ["note\n# A heading\n\n---\n{x}", 'note ?\nprose "# A heading\\n\\n---\\n{x}"'],
    ["note intro # a comment\nbody", 'note intro\nprose "body"'],
    ["off note\n", 'off note ?\nprose ""'],
    ["note", "note ?"],
    ["note intro and more\nbody", 'note intro [and|more]\nprose "body"'],
    ['note "hm"\nbody', 'note ? ["hm"]\nprose "body"'],
  ])("takes %j apart", (text, expected) => {
    expect(outline(text)).toBe(expected)
  })

  it("gives names and keywords in NFC and tokens as written", () => {
    const statement = read("data e\u0301te\u0301\n  e\u0301 e\u0301")
    expect(statement.name).toBe("été")
    expect(statement.clauses[0]?.keyword).toBe("é")
    expect(statement.clauses[0]?.tokens[0]?.text).toBe("e\u0301")
  })

  it("tells an open text, a percentage and a stray character apart", () => {
    const types = read('d\n  x "open\n  y 95% “a”').clauses.map((clause) => clause.tokens.map((token) => token.type))
    expect(types).toEqual([["open-text"], ["percent", "stray", "word", "stray"]])
  })

  it("reads any text without an error in the tree, and keeps every character that is not blank or comment", () => {
    fc.assert(
      fc.property(anyText, (pieces) => {
        const text = pieces.join("")
        let errors = 0
        parser.parse(text).iterate({
          enter: (node) => {
            if (node.type.isError) errors++
          },
        })
        expect(errors).toBe(0)
        const statement = read(text)
        const tokens = [...statement.heading, ...statement.clauses.flatMap((clause) => clause.tokens)]
        for (const token of tokens) expect(text.slice(token.from, token.to)).toBe(token.text)
      }),
      { numRuns: 2_000 },
    )
  })

  it("never lets noise in one clause disturb another", () => {
    fc.assert(
      fc.property(line, line, (first, second) => {
        const text = `model m\n  before a\n  noise ${first}\n  middle b\n  noise ${second}\n  after c`
        const statement = read(text)
        const { clauses } = statement
        expect(clauses.map((clause) => clause.keyword)).toEqual(["before", "noise", "middle", "noise", "after"])
        expect(clauses[0]?.tokens.map((token) => token.text)).toEqual(["a"])
        expect(clauses[2]?.tokens.map((token) => token.text)).toEqual(["b"])
        expect(clauses[4]?.tokens.map((token) => token.text)).toEqual(["c"])
      }),
      { numRuns: 2_000 },
    )
  })

  it("gives the same tree for a text parsed anew and one parsed after an edit", () => {
    const shape = (tree: Tree): string => {
      const nodes: string[] = []
      tree.iterate({ enter: (node) => void nodes.push(`${node.name} ${node.from} ${node.to}`) })
      return nodes.join("\n")
    }
    fc.assert(
      fc.property(
        fc.array(line, { minLength: 1, maxLength: 8 }),
        fc.array(fc.tuple(fc.nat(), fc.nat({ max: 6 }), line), { minLength: 1, maxLength: 4 }),
        (lines, edits) => {
          let text = `model m\n${lines.map((each) => `  clause ${each}`).join("\n")}`
          let fragments = TreeFragment.addTree(parser.parse(text))
          for (const [place, removed, put] of edits) {
            const from = place % (text.length + 1)
            const to = Math.min(text.length, from + removed)
            text = text.slice(0, from) + put + text.slice(to)
            fragments = [...TreeFragment.applyChanges(fragments, [{ fromA: from, toA: to, fromB: from, toB: from + put.length }])]
            const tree = parser.parse(text, fragments)
            expect(shape(tree)).toBe(shape(parser.parse(text)))
            fragments = [...TreeFragment.addTree(tree, fragments)]
          }
        },
      ),
      { numRuns: 400 },
    )
  })
})

describe("the canonical text", () => {
  it.each([
    ["model  m # x\n\n link   log", "model m\nlink log"],
    ["model m\n  predictor a\n    +b", "model m\npredictor a + b"],
    ["model m\n  aliased", "model m\naliased"],
    ['data e\u0301\n  from "e\u0301.csv"', 'data é\nfrom "e\u0301.csv"'],
    ["note  n\nbody  stays\n  so", "note n\nbody  stays\n  so"],
  ])("of %j forgets spacing and comments only", (text, expected) => {
    expect(canonical(read(text))).toBe(expected)
  })

  it("reads back as itself", () => {
    fc.assert(
      fc.property(anyText, (pieces) => {
        const once = canonical(read(pieces.join("")))
        expect(canonical(read(once))).toBe(once)
      }),
      { numRuns: 1_000 },
    )
  })
})

describe("a clause said otherwise", () => {
  const edit = (clause: string, says: string | null, nth = 0): ClauseEdit => ({ cell: null, clause, nth, says })
  it.each([
    ["model m\n  link log # why\n  data d\n", edit("link", "logit"), "model m\n  link logit # why\n  data d\n"],
    ["model m\n  data d\n\n# the end\n", edit("link", "logit"), "model m\n  data d\n  link logit\n\n# the end\n"],
    ["model m\n\tdata d # all", edit("link", "logit"), "model m\n\tdata d # all\n\tlink logit"],
    ["model m # why", edit("link", "logit"), "model m # why\n  link logit"],
    ["model m\r\n  data d\r\n", edit("link", "logit"), "model m\r\n  data d\r\n  link logit\r\n"],
    ["model m\n  predictor a\n    + b # both\n  data d", edit("predictor", null), "model m\n  data d"],
    ["model m\n  data d\n  link log", edit("link", null), "model m\n  data d"],
    ["model m\r\n  data d\r\n  link log", edit("link", null), "model m\r\n  data d"],
    ["model m\n  link log", edit("family", null), "model m\n  link log"],
    ["data d\n  make a = 1\n  make b = 2", edit("make", "b = 3", 1), "data d\n  make a = 1\n  make b = 3"],
    ["data d\n  make a = 1", edit("make", "b = 3", 1), "data d\n  make a = 1\n  make b = 3"],
    ["model m\n  predictor a # one\n    + b # two\n  data d", edit("predictor", "a"), "model m\n  # one\n  predictor a # two\n  data d"],
    ["model m\n  predictor a\n  # one\n    + b", edit("predictor", "a"), "model m\n  # one\n  predictor a"],
    ["model m\n  e\u0301 a", edit("é", "b"), "model m\n  é b"],
    ["model m\n  lnk log\n  data d", { ...edit("lnk", "log"), keyword: "link" }, "model m\n  link log\n  data d"],
    ["", edit("link", "log"), ""],
    ["note n\nlink", edit("link", "log"), "note n\nlink"],
  ])("turns %j by %j into %j", (text, change, expected) => {
    expect(rewritten(text, change)).toBe(expected)
  })

  it("leaves every other clause as it was, whatever stands in them", () => {
    fc.assert(
      fc.property(line, line, fc.constantFrom("logit", null), (first, second, says) => {
        const text = `model m\n  one ${first}\n  link log\n  two ${second}`
        const before = read(text)
        const after = read(rewritten(text, edit("link", says)))
        const others = (statement: typeof before): string[] =>
          statement.clauses.filter((clause) => clause.keyword !== "link").map((clause) => statement.text.slice(clause.from, clause.to))
        expect(others(after)).toEqual(others(before))
        expect(after.clauses.filter((clause) => clause.keyword === "link").map((clause) => clause.tokens[0]?.text)).toEqual(
          says === null ? [] : [says],
        )
      }),
      { numRuns: 1_000 },
    )
  })
})
