// The contract over every kind in the list, and the cases and README examples of each. A kind that is added to the list is tested here
// without a line of its own.

import { existsSync, readdirSync, readFileSync } from "node:fs"
import { join } from "node:path"
import { fileURLToPath } from "node:url"
import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { kinds } from "../../cells/index.ts"
import { parsedForms } from "../../cells/language/form-pattern.ts"
import { words } from "../../cells/words.ts"
import { hash } from "../../runtime/hash.ts"
import type { AnyKind, AnyWords, Input, Json, Name, Outcome, Value, Work } from "../../runtime/index.ts"
import { createEngine, createEvaluator, read, textRange } from "../../runtime/index.ts"
import { caseFrom, examplesIn, expectCase, filesIn } from "./case.ts"

const folderOf = (word: string): string => fileURLToPath(new URL(`../../cells/${word}/`, import.meta.url))

/** The members of each summary, as the format of files states them. */
const members: Readonly<Record<string, readonly string[]>> = {
  data: ["rows_read", "rows_kept", "rows_dropped", "columns"],
  model: [
    "rows",
    "n",
    "rank",
    "parameters_counted",
    "family",
    "link",
    "parameters",
    "coefficients",
    "covariance",
    "fit",
    "intercept_only",
    "criteria",
    "pearson",
    "fit_test",
    "dispersion",
    "certificate",
    "standard_errors",
    "goodness_of_link",
    "mean_range",
  ],
  link: ["defined", "strictly_monotone", "differentiable", "slope", "reach", "canonical_for"],
  scales: ["across", "held", "curves", "points", "strip"],
  terms: ["rows"],
  dial: ["value"],
  value: ["value"],
  note: ["values"],
}

/** Texts that look like statements of a kind, with what people and accidents put into them. */
const textOf = (kind: AnyWords): fc.Arbitrary<string> => {
  const piece = fc.constantFrom(
    ...'a b lot x1 mu pi ( ) , . + - * / ^ = < >= | ~ : ; # 1 0.5 95% 1e999 .5 "t" "open − “ ” & {a} } { \\ estimate infinity true missing in and or not if(a log(a) to out of is by'.split(
      " ",
    ),
    "\n",
    "\r\n    ",
    "😀",
  )
  const words = Object.values(kind.clauses).flatMap((clause) =>
    parsedForms(clause).flatMap((form) => form.flatMap((item) => (item.type === "word" ? [item.word] : []))),
  )
  const body = fc.array(fc.oneof(piece, fc.constantFrom("a", ...words)), { maxLength: 8 }).map((pieces) => pieces.join(" "))
  const clause = fc.tuple(fc.constantFrom("odd", ...Object.keys(kind.clauses)), body).map(([keyword, says]) => `  ${keyword} ${says}`)
  return fc
    .tuple(fc.constantFrom("", " m", " m =", " 3", " mu"), body, fc.array(clause, { maxLength: 6 }))
    .map(([name, rest, clauses]) => [`${kind.word}${name} ${rest}`, ...clauses].join("\n"))
}

const allCases = (kind: AnyKind): readonly { readonly name: string; readonly text: () => ReturnType<typeof caseFrom> }[] => {
  const folder = folderOf(kind.words.word)
  const cases = existsSync(join(folder, "cases")) ? readdirSync(join(folder, "cases")).filter((name) => name.endsWith(".txt")) : []
  const readme = existsSync(join(folder, "README.md")) ? examplesIn(readFileSync(join(folder, "README.md"), "utf8")) : []
  return [
    ...cases.map((name) => ({ name: `cases/${name}`, text: () => caseFrom(readFileSync(join(folder, "cases", name), "utf8")) })),
    ...readme.map((example, k) => ({ name: `README example ${k + 1}: ${example.says}`, text: () => example })),
  ]
}

/** What one evaluation came to, and the same evaluation over again. */
interface Seen {
  readonly word: string
  readonly found: Value
  readonly again: Value
  readonly inputsBefore: string
  readonly inputsAfter: string
  readonly summary: Json
  readonly blocks: readonly { readonly type: string }[]
}

/** A kind that evaluates everything twice and keeps account. */
const watched = (kind: AnyKind, seen: Seen[]): AnyKind => ({
  ...kind,
  evaluate: async (said: unknown, inputs: ReadonlyMap<Name, Input>, work: Work): Promise<Outcome<Value>> => {
    const hashes = (): string => [...inputs].map(([name, input]) => `${name} ${hash(input.value)}`).join("\n")
    const saidBefore = JSON.stringify(said)
    const inputsBefore = hashes()
    const outcome: Outcome<Value> = await kind.evaluate(said, inputs, work)
    const alone: Work = { ...work, cancelled: false, publish: () => {}, checkpoint: async () => {}, near: null, late: async () => true }
    const again: Outcome<Value> = await kind.evaluate(said, inputs, alone)
    expect(JSON.stringify(said), "what was said is unchanged").toBe(saidBefore)
    expect(again.ok).toBe(outcome.ok)
    if (outcome.found !== null && again.found !== null)
      seen.push({
        word: kind.words.word,
        found: outcome.found,
        again: again.found,
        inputsBefore,
        inputsAfter: hashes(),
        summary: outcome.ok ? kind.summary(outcome.found) : null,
        blocks: kind.show(outcome.found, said),
      })
    return outcome
  },
})

describe.each(kinds.map((kind) => ({ word: kind.words.word, kind })))("the kind $word", ({ word, kind }) => {
  const cases = allCases(kind)

  it("has its words in the list that the page loads, and a README with examples", () => {
    expect(words.find((each) => each.word === word)).toBe(kind.words)
    expect(cases.some(({ name }) => name.startsWith("README"))).toBe(true)
  })

  it("has forms that read, a line of help for each clause, and an example of its own kind", () => {
    const clauses = [...Object.values(kind.words.clauses), ...(kind.words.heading === undefined ? [] : [kind.words.heading])]
    for (const clause of clauses) {
      expect(parsedForms(clause).length).toBe(clause.forms.length)
      expect(clause.says.length).toBeGreaterThan(0)
      expect(clause.says).not.toContain("\n")
    }
    expect(read(kind.words.example).kind).toBe(word)
  })

  it("reads any text, names what it uses without evaluating, and puts every notice on the text", () => {
    fc.assert(
      fc.property(textOf(kind.words), (text) => {
        const statement = read(text)
        const { said, notices } = kind.words.parse(statement)
        const names = kind.words.names(said)
        for (const at of [...notices.map((notice) => notice.at), ...names.uses.map((use) => use.at)]) {
          const { from, to } = textRange(statement, at)
          expect(from).toBeGreaterThanOrEqual(0)
          expect(from).toBeLessThanOrEqual(to)
          expect(to).toBeLessThanOrEqual(text.length)
        }
        for (const notice of notices) {
          expect(notice.code).toMatch(/^[a-z]+\/[a-z0-9-]+$/)
          expect(notice.text.trim()).not.toBe("")
        }
        expect(kind.words.parse(read(text))).toEqual({ said, notices })
      }),
      { numRuns: 400 },
    )
  })

  it.each(cases)("finds what is written: $name", async ({ text }) => {
    await expectCase(text(), filesIn(join(folderOf(word), "cases")))
  })

  it("finds the same twice, leaves its inputs alone, and its finding survives being copied", async () => {
    const seen: Seen[] = []
    for (const { text } of cases) {
      const { cells, files } = text()
      await evaluateAll(cells, { ...filesIn(join(folderOf(word), "cases")), ...files }, seen)
    }
    const own = seen.filter((each) => each.word === word)
    expect(own.length).toBeGreaterThan(0)
    for (const { found, again, inputsBefore, inputsAfter, summary, blocks } of own) {
      expect(hash(again)).toBe(hash(found))
      expect(inputsAfter).toBe(inputsBefore)
      expect(hash(structuredClone(found))).toBe(hash(found))
      expect(() => structuredClone(blocks)).not.toThrow()
      if (summary === null) continue
      expect(Object.keys(summary).sort()).toEqual([...(members[word] ?? [])].sort())
      // JSON has no NaN: what is not available is null.
      expect(JSON.parse(JSON.stringify(summary))).toEqual(summary)
    }
  })
})

/** Evaluates a notebook with every kind watched. */
async function evaluateAll(cells: readonly string[], files: Readonly<Record<string, string>>, seen: Seen[]): Promise<void> {
  const used = Object.entries(files).filter(([name]) => cells.some((cell) => cell.includes(`"${name}"`)))
  const bytes = new Map(used.map(([name, text], k) => [`${k}`.padStart(64, "0"), { name, bytes: new TextEncoder().encode(text) }]))
  const engine = createEngine({
    words,
    evaluator: createEvaluator({
      kinds: kinds.map((kind) => watched(kind, seen)),
      bytes: async function* (sha256) {
        yield bytes.get(sha256)?.bytes ?? new Uint8Array()
      },
      pause: async () => {},
    }),
    notebook: {
      id: "contract",
      title: "",
      cells: cells.map((text, k) => ({ id: `c${k}`, text })),
      enclosures: [...bytes].map(([sha256, file]) => ({ name: file.name, media: "text/csv", size: file.bytes.length, sha256 })),
      rest: null,
    },
  })
  engine.rest()
  await engine.settled()
  for (const cell of engine.notebook.cells) {
    const state = engine.state(cell.id)
    expect(state.status, state.status === "crash" ? `${state.text}\n${state.stack}` : "").not.toBe("crash")
  }
}
