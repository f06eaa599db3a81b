// Toy kinds for the tests of the runtime. Each finding carries the leaves it was computed from, by name and value, so that a cell that was
// given one old and one new input finds two values for one leaf and says so: that is how a glitch is caught.

import type { AnyKind, Input, Kind, Work } from "../../runtime/kind.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import { heading } from "../../runtime/notice.ts"
import type { Clause, Statement } from "../../runtime/statement.ts"
import type { Name, Value } from "../../runtime/value.ts"

type Leaves = { readonly [leaf: string]: number }
type Toy = { readonly value: number; readonly leaves: Leaves }

/** Two values seen for one leaf in one evaluation, over all tests of the process. */
export const glitches: string[] = []

const fault = (code: string, text: string, at: Place = heading): Notice => ({
  level: "fault",
  code,
  text,
  hint: null,
  clause: null,
  at,
  mend: null,
})

interface Said {
  readonly name: Name | null
  readonly clauses: readonly Clause[]
}

interface Named {
  readonly name: Name
  readonly at: Place
}

const parse = (statement: Statement): { said: Said; notices: readonly Notice[] } => {
  const notices = statement.clauses.flatMap(({ keyword }, clause) =>
    keyword === "wrong" ? [fault("toy/wrong", "This clause is wrong.", { clause, from: 0, to: 1 })] : [],
  )
  return { said: { name: statement.name, clauses: statement.clauses }, notices }
}

/** The words after every clause with this keyword, with their places. */
const named = ({ clauses }: Said, keyword: string): readonly Named[] =>
  clauses.flatMap((clause, i) =>
    clause.keyword !== keyword
      ? []
      : clause.tokens.flatMap((token, k) =>
          token.type === "word" ? [{ name: token.text, at: { clause: i, from: k + 1, to: k + 2 } }] : [],
        ),
  )

const numbers = ({ clauses }: Said, keyword: string): readonly number[] =>
  clauses
    .filter((clause) => clause.keyword === keyword)
    .flatMap(({ tokens }) => tokens.filter(({ type }) => type === "number").map(({ text }) => Number(text)))

const toyOf = (value: Value | undefined): Toy => {
  const toy = value as Partial<Toy> | undefined
  return { value: toy?.value ?? 0, leaves: toy?.leaves ?? {} }
}

function joined(leaves: readonly Leaves[]): Leaves {
  const all: Record<string, number> = {}
  for (const each of leaves) {
    for (const [leaf, value] of Object.entries(each)) {
      if (leaf in all && all[leaf] !== value) glitches.push(`${leaf} is ${all[leaf]} and ${value}`)
      all[leaf] = value
    }
  }
  return all
}

const found = <F extends Value>(found: F): { ok: true; found: F; notices: readonly Notice[] } => ({ ok: true, found, notices: [] })

const kind = <F extends Value>(
  word: string,
  uses: (said: Said) => ReturnType<Kind<Said, F>["words"]["names"]>["uses"],
  evaluate: Kind<Said, F>["evaluate"],
  files: (said: Said) => readonly string[] = () => [],
): AnyKind => ({
  words: {
    word,
    name: "optional",
    clauses: {},
    says: "",
    example: word,
    parse,
    names: (said) => ({ defines: said.name, uses: uses(said), files: files(said) }),
  },
  version: 1,
  evaluate,
  show: (finding) => [{ type: "sentence", text: JSON.stringify(finding) } as { type: string }],
  summary: (finding) => ({ value: toyOf(finding).value }),
  tried: () => [],
  answer: (finding, question) => ({ asked: question, value: toyOf(finding).value }),
})

const whole =
  (keyword: string, either = false) =>
  (said: Said) =>
    named(said, keyword).map(({ name, at }) => ({ name, parts: "all" as const, either, at }))

/** `number a` · `is 3`: a leaf. */
const number = kind(
  "number",
  () => [],
  async (said) => {
    const value = numbers(said, "is")[0] ?? 0
    return found({ value, leaves: { [said.name ?? ""]: value } })
  },
)

/** `sum s` · `of a, b`; with more than 40 it is at fault, with more than 60 it crashes. */
const sum = kind("sum", whole("of"), async (said, inputs) => {
  const toys = [...inputs.values()].map(({ value }) => toyOf(value))
  const value = toys.reduce((total, toy) => total + toy.value, 0)
  const toy = { value, leaves: joined(toys.map(({ leaves }) => leaves)) }
  if (value > 60) throw new RangeError(`${said.name} is more than 60`)
  if (value > 40) return { ok: false, found: toy, notices: [fault("toy/large", `${said.name} is more than 40.`)] }
  return found(toy)
})

/** `rounded r` · `of a`: to tens, without leaves, so that its readers are cut off where it stays the same. */
const rounded = kind("rounded", whole("of"), async (_, inputs) => {
  const value = [...inputs.values()].reduce((total, input) => total + toyOf(input.value).value, 0)
  return found({ value: Math.round(value / 10) * 10, leaves: {} })
})

/** `table t` · `column x 1, 2` again · `of a`, added to every value: publishes each column before the end. */
const table = kind("table", whole("of"), async (said, inputs, work) => {
  const shift = joined([...inputs.values()].map(({ value }) => toyOf(value).leaves))
  const total = [...inputs.values()].reduce((sum, { value }) => sum + toyOf(value).value, 0)
  const parts: Record<string, Value> = {}
  for (const clause of said.clauses) {
    const column = clause.keyword === "column" ? clause.tokens.find(({ type }) => type === "word")?.text : undefined
    if (column === undefined || column in parts) continue
    const values = Float64Array.from(clause.tokens.filter(({ type }) => type === "number").map(({ text }) => Number(text) + total))
    const sum = values.reduce((a, b) => a + b, 0)
    parts[column] = { values, leaves: { ...shift, [`${said.name}.${column}`]: sum } }
    await work.checkpoint()
    if (clause.tokens.some(({ text }) => text === "early")) work.publish(column, parts[column])
  }
  await work.checkpoint()
  if (said.clauses.some(({ keyword }) => keyword === "spoilt")) {
    return { ok: false, found: null, notices: [fault("toy/spoilt", "The table is spoilt.")] }
  }
  return found({ value: Object.keys(parts).length, parts })
})

/** `mean m` · `column x in t`, or with a cell `weighed` by: reads one column, and perhaps a cell of a name that may be a column. */
const mean = kind(
  "mean",
  (said) => {
    const [column, , source] = named(said, "column")
    return [
      ...(column === undefined || source === undefined ? [] : [{ name: source.name, parts: [column.name], either: false, at: source.at }]),
      ...named(said, "by").map(({ name, at }) => ({ name, parts: "all" as const, either: true, at })),
    ]
  },
  async (said, inputs) => {
    const [column, , source] = named(said, "column")
    const input: Input | undefined = inputs.get(source?.name ?? "")
    const part = (input?.value as Record<string, { values: Float64Array; leaves: Leaves }> | undefined)?.[column?.name ?? ""]
    if (part === undefined) {
      return { ok: false, found: null, notices: [fault("toy/no-column", `Columns: ${(input?.offers ?? []).join(", ")}.`)] }
    }
    const others = named(said, "by").flatMap(({ name }) => {
      const other = inputs.get(name)
      return other === undefined || name === source?.name ? [] : [toyOf(other.value)]
    })
    const value = part.values.reduce((a, b) => a + b, 0) + others.reduce((total, toy) => total + toy.value, 0)
    return found({ value, leaves: joined([part.leaves, ...others.map(({ leaves }) => leaves)]) })
  },
)

/** `tardy t` · `of a`: a late part; in a gesture its value depends on where it started, as a warm fit's last digits do. */
const tardy = kind("tardy", whole("of"), async (_, inputs, work: Work) => {
  const toys = [...inputs.values()].map(({ value }) => toyOf(value))
  const started = work.near === null ? 0 : toyOf(work.near).value / 1000
  const first = {
    value: toys.reduce((total, toy) => total + toy.value, 0) + started,
    leaves: joined(toys.map(({ leaves }) => leaves)),
    tail: 0,
  }
  await work.checkpoint()
  if (!(await work.late(found(first)))) return found(first)
  await work.checkpoint()
  return found({ ...first, tail: first.value * 2 })
})

/** `file f` · `from "x"`: the sum of the bytes. */
const file = kind(
  "file",
  () => [],
  async (said, _, work) => {
    let value = 0
    for (const name of filesOf(said)) for await (const piece of work.file(name)) value = piece.reduce((a, b) => a + b, value)
    return found({ value, leaves: { [said.name ?? ""]: value } })
  },
  (said) => filesOf(said),
)

const filesOf = ({ clauses }: Said): readonly string[] =>
  clauses.filter(({ keyword }) => keyword === "from").flatMap(({ tokens }) => tokens.map(({ text }) => text.slice(1, -1)))

export const kinds: readonly AnyKind[] = [number, sum, rounded, table, mean, tardy, file]
export const words = kinds.map((each) => each.words)
