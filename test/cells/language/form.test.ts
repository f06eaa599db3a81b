import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { printed } from "../../../cells/language/expression.ts"
import { type Bound, type Filled, readClauses } from "../../../cells/language/form.ts"
import type { AnyWords, ClauseWords } from "../../../runtime/kind.ts"
import { textRange } from "../../../runtime/place.ts"
import { read, rewritten } from "../../../runtime/statement.ts"

const clause = (...forms: string[]): ClauseWords => ({ forms, says: "" })

/** A kind of cell that has a clause of every shape in the language. */
const words: AnyWords = {
  word: "model",
  name: "needed",
  says: "",
  example: "",
  clauses: {
    data: clause("CELL:data"),
    response: clause("NAME:successes out of NAME:trials", "NAME:column is CHOICE:level", "NAME:response"),
    family: clause("CALL:family"),
    link: clause("CALL:link"),
    predictor: clause("TERMS:terms"),
    offset: clause("EXPR:offset"),
    dispersion: clause("one|pearson|deviance:by", "NUMBER:number"),
    confidence: clause("NUMBER:level"),
    column: { ...clause("NAME:column ( headed TEXT:heading )? ID:type ( unit TEXT:unit )? ( levels { TEXT:level }, )?"), again: true },
    make: { ...clause("ID:name = EXPR:value"), again: true },
    total: clause("{ NAME:sum }, by { NAME:by },"),
    reach: { ...clause("{ BOUND:mean }, along NAME:along", "extra { BOUND:extra }, along NAME:along"), again: true },
    from: clause("BOUND:from to BOUND:to"),
    hold: clause("{ NAME:held = CHOICE:value },"),
    show: clause("{ NAME:kind ( NAME:of )? },"),
    given: { ...clause("ID:name = BOUND+estimate:value"), again: true },
    eta: clause("= EXPR+mu:eta"),
    because: clause("TEXT:because"),
    limits: { ...clause("BOUND:low to BOUND:high"), later: true },
  },
  parse: () => ({ said: null, notices: [] }),
  names: () => ({ defines: null, uses: [], files: [] }),
}

const boundText = (bound: Bound): string => {
  switch (bound.type) {
    case "number":
      return `${bound.value}`
    case "infinity":
      return bound.sign > 0 ? "infinity" : "-infinity"
    case "cell":
      return `cell ${bound.name}`
    case "estimate":
      return "estimate"
  }
}

const filledText = (filled: Filled): string => {
  switch (filled.type) {
    case "NAME":
    case "CELL":
    case "ID":
      return filled.name
    case "TEXT":
      return JSON.stringify(filled.text)
    case "NUMBER":
      return `${filled.value}`
    case "BOUND":
      return boundText(filled.bound)
    case "CHOICE":
      return filled.choice.type === "text"
        ? JSON.stringify(filled.choice.text)
        : filled.choice.type === "truth"
          ? `${filled.choice.value}`
          : boundText(filled.choice)
    case "CALL":
      return `${filled.call.name}(${filled.call.bounds?.map(boundText).join(" ") ?? ""}${filled.call.expression === null ? "" : printed(filled.call.expression)})`
    case "EXPR":
      return printed(filled.expression)
    case "TERMS":
      return filled.terms.terms.map((term) => term.says).join(" ")
  }
}

/** What a clause says by its slots, in one text. */
const reading = (says: string): string => {
  const { clauses, notices } = readClauses(read(`model m\n  ${says}`), words)
  const [matched] = clauses
  if (matched === undefined) return notices.map((notice) => notice.code).join(" ")
  return Object.entries(matched.slots)
    .map(([label, filled]) => `${label}: ${filled.map(filledText).join(", ")}`)
    .concat(matched.words.length > 0 ? [`(${matched.words.join(" ")})`] : [])
    .join("; ")
}

describe("a clause that fits", () => {
  it.each([
    ["response killed out of n", "successes: killed; trials: n; (out of)"],
    ['response state is "dead"', 'column: state; level: "dead"; (is)'],
    ["response is is is", "column: is; level: cell is; (is)"],
    ["response out out of of", "successes: out; trials: of; (out of)"],
    ["response killed is true", "column: killed; level: true; (is)"],
    ["response y", "response: y"],
    ["family binomial", "family: binomial()"],
    ["link power(-0.5)", "link: power(-0.5)"],
    ["link stukel(a, estimate)", "link: stukel(cell a estimate)"],
    ["family quasi_likelihood(mu*(1 - mu))", "family: quasi_likelihood(mu*(1 - mu))"],
    ["predictor a*b - a", "terms: b a.b"],
    ["offset log(area) + k", "offset: log(area) + k"],
    ["dispersion pearson", "by: pearson"],
    ["dispersion 1.5", "number: 1.5"],
    ["confidence 95%", "level: 0.95"],
    ["confidence 99.9%", "level: 0.999"],
    ["column number number", "column: number; type: number"],
    ['column unit number unit "kg"', 'column: unit; type: number; unit: "kg"; (unit)'],
    ["column link number", "column: link; type: number"],
    ["column headed count", "column: headed; type: count"],
    [
      'column mass headed "body mass (kg)" number unit "kg"',
      'column: mass; heading: "body mass (kg)"; type: number; unit: "kg"; (headed unit)',
    ],
    ['column lot category levels "a", "b"', 'column: lot; type: category; level: "a", "b"; (levels)'],
    ["make a = b = 2", "name: a; value: b = 2; (=)"],
    ["total n by by", "sum: n; by: by; (by)"],
    ["total c, d by a, b", "sum: c, d; by: a, b; (by)"],
    ["reach 0.1, 0.5 along dose", "mean: 0.1, 0.5; along: dose; (along)"],
    ["reach extra 0.1 along dose", "extra: 0.1; along: dose; (extra along)"],
    ["reach along along along", "mean: cell along; along: along; (along)"],
    ["from -1 to 2", "from: -1; to: 2; (to)"],
    ["from to to to", "from: cell to; to: cell to; (to)"],
    ["from -infinity to +infinity", "from: -infinity; to: infinity; (to)"],
    ["from -0 to 1", "from: 0; to: 1; (to)"],
    ['hold x = 2, lot = "b", wet = true, t = d', 'held: x, lot, wet, t; value: 2, "b", true, cell d; (= = = =)'],
    ["show quantile, partial dose, counts", "kind: quantile, partial, counts; of: dose"],
    ["given k = estimate", "name: k; value: estimate; (=)"],
    ["eta = log(mu)", "eta: log(mu); (=)"],
    ['because "one"\n    "two \\"three\\" \\\\"', 'because: "one two \\"three\\" \\\\"'],
  ])("%s reads", (says, expected) => {
    expect(reading(says)).toBe(expected)
  })

  it("gives places that hold their tokens", () => {
    const text = 'model m\n  column mass headed "body mass" number'
    const statement = read(text)
    const filled = readClauses(statement, words).clauses[0]?.slots["heading"]?.[0]
    const range = filled === undefined ? { from: 0, to: 0 } : textRange(statement, filled.at)
    expect(text.slice(range.from, range.to)).toBe('"body mass"')
  })
})

/** The notices of a statement, each with the text it underlines. */
const noticed = (text: string): readonly string[] => {
  const statement = read(text)
  return readClauses(statement, words).notices.map((notice) => {
    const { from, to } = textRange(statement, notice.at)
    return `${notice.code} <${text.slice(from, to)}>`
  })
}

/** The text after the first mend is taken. */
const mended = (text: string): string | null => {
  const mend = readClauses(read(text), words).notices.find((notice) => notice.mend !== null)?.mend
  return mend === undefined || mend === null ? null : mend.edits.reduce(rewritten, text)
}

describe("a statement that does not read", () => {
  it.each([
    ["model m\n  lnk log", ["clause/unknown <lnk>"]],
    ["model m\n  colour red", ["clause/unknown <colour>"]],
    ["model m\n  constructor red", ["clause/unknown <constructor>"]],
    ["model m\n  link log\n  link logit", ["clause/twice <link>"]],
    ["model m\n  limits 0 to 1", ["clause/not-available-yet <limits>"]],
    ["model m\n  limits and so on (", ["clause/not-available-yet <limits>"]],
    ["model", ["heading/name-missing <>"]],
    ["model 3", ["heading/name-missing <3>"]],
    ["model mu", ["name/reserved <mu>"]],
    ["model m from here", ["heading/more <from>"]],
    ["model m\n  response", ["clause/unexpected <>"]],
    ["model m\n  response killed of n", ["clause/unexpected <of>"]],
    ["model m\n  response killed out of", ["clause/unexpected <>"]],
    ["model m\n  response pi", ["name/reserved <pi>"]],
    ["model m\n  link power(", ["clause/unexpected <>"]],
    ["model m\n  link power(a b)", ["clause/unexpected <b>"]],
    ["model m\n  confidence 1e999", ["number/too-large <1e999>"]],
    ["model m\n  confidence .5", ["number/fraction <.5>"]],
    ["model m\n  confidence 1.", ["number/fraction <1.>"]],
    ["model m\n  confidence 0,95", ["number/decimal-comma <0,95>"]],
    ["model m\n  offset 1,5*a", ["number/decimal-comma <1,5>"]],
    ["model m\n  offset 1 000*a", ["number/blank <1 000>"]],
    ["model m\n  offset a !== b", ["expression/foreign-sign <!==>"]],
    ["model m\n  offset a < < b", ["expression/unexpected <<>"]],
    ["model m\n  offset log a", ["expression/call-brackets <a>"]],
    ["model m\n  family quasi_likelihood()", ["expression/empty <>"]],
    ["model m\n  offset .5 + a", ["number/fraction <.5>"]],
    ["model m\n  offset 1. + a", ["number/fraction <1.>"]],
    ["model m\n  offset a − b", ["clause/stray-character <−>"]],
    ["model m\n  because “so it is”", ["clause/stray-character <“>"]],
    ['model m\n  because "so it is\n  link log', ['clause/open-text <"so it is>']],
    ['model m\n  because "a \\n b"', ['text/escape <"a \\n b">']],
    ["model m\n  offset a < b < c", ["expression/comparison-chain <<>"]],
    ["model m\n  offset x != missing", ["expression/compared-with-missing <x != missing>"]],
    ["model m\n  offset eta + 1", ["name/reserved <eta>"]],
    ["model m\n  offset lgo(x)", ["expression/unknown-function <lgo>"]],
    ["model m\n  offset aic(m)", ["expression/unknown-function <aic>"]],
    ["model m\n  offset log(x, 2)", ["expression/arguments <log(x, 2)>"]],
    ["model m\n  offset", ["clause/unexpected <>"]],
    ["model m\n  offset (a + b", ["expression/open-bracket <(>"]],
    ["model m\n  offset a +", ["expression/ends-too-soon <>"]],
    ["model m\n  offset a b", ["expression/unexpected <b>"]],
    ["model m\n  offset 2x", ["expression/product-sign <x>"]],
    ["model m\n  offset a == b", ["expression/foreign-sign <==>"]],
    ["model m\n  offset a ** b", ["expression/foreign-sign <**>"]],
    ["model m\n  offset a <> b", ["expression/foreign-sign <<>>"]],
    ["model m\n  offset a || b", ["expression/foreign-sign <||>"]],
    ["model m\n  offset a.b", ["expression/point <.>"]],
    ["model m\n  offset x in a", ["expression/list <a>"]],
    ["model m\n  predictor y ~ a", ["clause/stray-character <~>"]],
    ["model m\n  predictor a:b", ["clause/stray-character <:>"]],
    ["model m\n  predictor a^2", ["predictor/sign <^>"]],
    ["model m\n  predictor a + (1 | g)", ["predictor/number <1>"]],
    ["model m\n  predictor a | g", ["predictor/sign <|>"]],
    ["model m\n  predictor a - 1", ["predictor/number <1>"]],
    ["model m\n  predictor log(a + 1)", ["predictor/arithmetic <+>"]],
    ["model m\n  predictor exp(a)", ["predictor/unknown-call <exp>"]],
    ["model m\n  predictor polynomail(a, degree 2)", ["predictor/unknown-call <polynomail>"]],
    ["model m\n  predictor polynomial(a, 2)", ["predictor/setting <2>"]],
    ["model m\n  predictor power(a)", ["predictor/setting <power(a)>"]],
    ["model m\n  predictor log(a, 2)", ["predictor/setting <2>"]],
    ["model m\n  predictor polynomial(a, degree 0)", ["predictor/setting <degree 0>"]],
    ["model m\n  predictor a.intercept", ["predictor/intercept-inside <intercept>"]],
    ["model m\n  predictor a - b", ["predictor/nothing-to-take-away <b>"]],
    ["model m\n  predictor a // b", ["predictor/unexpected </>"]],
    ["model m\n  predictor mu", ["name/reserved <mu>"]],
    ["model m\n  predictor a +", ["expression/ends-too-soon <>"]],
    ["model m\n  predictor", ["clause/unexpected <>"]],
    [`model m\n  offset ${"(".repeat(1_200)}a${")".repeat(1_200)}`, [`expression/too-deep <${"(".repeat(1_200)}a${")".repeat(1_200)}>`]],
    [`model m\n  offset a${" + a".repeat(2_000)}`, ["expression/too-long"]],
    [`model m\n  offset a in (${"1, ".repeat(30_000)}1)`, ["expression/too-long"]],
    [`model m\n  offset ${"-".repeat(2_000)}a`, ["expression/too-deep"]],
    [`model m\n  offset a${"^a".repeat(2_000)}`, ["expression/too-deep"]],
    [`model m\n  offset ${"(".repeat(50_000)}`, ["expression/too-deep"]],
    [`model m\n  predictor ${"(".repeat(2_000)}a`, ["expression/too-deep"]],
    [`model m\n  predictor ${Array.from({ length: 20 }, (_, k) => `x${k}`).join("*")}`, ["predictor/too-many-terms"]],
  ])("%s is noticed", (text, expected) => {
    expect(noticed(text).map((each, k) => (expected[k]?.includes("<") === false ? each.split(" ")[0] : each))).toEqual(expected)
  })

  it("keeps the clauses that do read", () => {
    const { clauses, notices } = readClauses(read("model m\n  lnk log\n  response (\n  family binomial\n  data d"), words)
    expect(clauses.map((each) => each.keyword)).toEqual(["family", "data"])
    expect(notices.length).toBe(2)
  })

  it.each([
    ["model m\n  lnk  log # why\n  data d", "model m\n  link log # why\n  data d"],
    ["model m\n  link log\n  link logit", "model m\n  link log"],
    ["model m\n  response killed out off n", "model m\n  response killed out of n"],
    ["model m\n  dispersion pearsn", "model m\n  dispersion pearson"],
    ["model m\n  offset a − b × c", "model m\n  offset a - b * c"],
    ["model m\n  because “so  it is”", 'model m\n  because "so  it is"'],
    ["model m\n  offset a ≥ 2 && b", "model m\n  offset a >= 2 and b"],
    ["model m\n  predictor a:b + a·c", "model m\n  predictor a.b + a.c"],
    ['model m\n  because "so it is \n  data d', 'model m\n  because "so it is"\n  data d'],
    ['model m\n  because "a \\n \\" b"', 'model m\n  because "a \\\\n \\" b"'],
    ["model m\n  offset x != missing", "model m\n  offset known(x)"],
    ["model m\n  offset x = missing", "model m\n  offset not known(x)"],
    ["model m\n  offset a < b < c", "model m\n  offset a < b and b < c"],
    ["model m\n  offset if(a = b + 1 = c, 1, 2)", "model m\n  offset if(a = b + 1 and b + 1 = c, 1, 2)"],
    ["model m\n  offset .5*a", "model m\n  offset 0.5*a"],
    ["model m\n  confidence 0,95", "model m\n  confidence 0.95"],
    ["model m\n  offset 1,5*a", "model m\n  offset 1.5*a"],
    ["model m\n  offset 1 000*a", "model m\n  offset 1000*a"],
    ["model m\n  offset a !== b", "model m\n  offset a != b"],
    ["model m\n  offset 1.*a", "model m\n  offset 1*a"],
    ["model m\n  offset 2x", "model m\n  offset 2*x"],
    ["model m\n  offset a == b", "model m\n  offset a = b"],
    ["model m\n  offset (a + b", "model m\n  offset (a + b)"],
    ["model m\n  offset lgo(x)", "model m\n  offset log(x)"],
    ["model m\n  predictor polynomial(a, 2)", "model m\n  predictor polynomial(a, degree 2)"],
    ["model m\n  predictor a - 1", "model m\n  predictor a - intercept"],
  ])("%s has a mend", (text, expected) => {
    expect(mended(text)).toBe(expected)
    expect(noticed(expected)).toEqual([])
  })

  it("says what is wrong and what would be right in the user's words", () => {
    const sentences = (text: string): string => {
      const [notice] = readClauses(read(text), words).notices
      return `${notice?.text} ${notice?.hint}`
    }
    expect(sentences("model m\n  lnk log")).toBe("A model has no clause lnk. The nearest of its clauses is link.")
    expect(sentences("model m\n  response killed of n")).toBe(
      'After killed, of does not fit. What fits here is "out", "is" or the end of the clause; the clause is written response SUCCESSES out of TRIALS, response COLUMN is LEVEL or response RESPONSE.',
    )
    expect(sentences("model m\n  limits 0 to 1")).toBe(
      "The clause limits is not available yet. It belongs to the language and comes with a later version; until then this cell needs to do without it.",
    )
    expect(sentences("model m\n  offset a < b < c")).toBe(
      "A comparison compares two values, not three. As two it is written a < b and b < ….",
    )
  })

  it("never throws, and every place and mend holds, whatever stands in the clauses", () => {
    const piece = fc.constantFrom(
      ...'a b x1 mu eta pi ( ) , . + - * / ^ = < >= != | ~ : 1 0.5 95% "t" "t − “ ” & ! true missing in and or not if log power intercept degree out of is to by along'.split(
        " ",
      ),
      "if(",
      "log(",
      "polynomial(",
      "1.",
      ".5",
      '"a\\n"',
    )
    const body = fc.array(piece, { maxLength: 14 }).map((pieces) => pieces.join(" "))
    fc.assert(
      fc.property(fc.array(fc.tuple(fc.constantFrom(...Object.keys(words.clauses), "odd"), body), { maxLength: 5 }), (lines) => {
        const text = ["model m", ...lines.map(([keyword, says]) => `  ${keyword} ${says}`)].join("\n")
        const statement = read(text)
        for (const notice of readClauses(statement, words).notices) {
          const { from, to } = textRange(statement, notice.at)
          expect(from).toBeLessThanOrEqual(to)
          expect(to).toBeLessThanOrEqual(text.length)
          expect(notice.text).toMatch(/^[^\n]+\.$/)
          expect(notice.hint ?? ".").toMatch(/^[^\n]+\.$/)
          for (const edit of notice.mend?.edits ?? []) expect(rewritten(text, edit)).not.toBe(text)
        }
      }),
      { numRuns: 1_500 },
    )
  })
})
