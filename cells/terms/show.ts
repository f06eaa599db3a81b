// What is shown of terms: what leaving each out costs, as a sentence and as a table.

import type { Block, TableEntry } from "../block.ts"
import { writtenCount, writtenProbability } from "../figure/number.ts"
import type { TermsFinding, TermsRow } from "./find.ts"

export function shown(found: TermsFinding): readonly Block[] {
  const blocks: Block[] = [{ type: "sentence", tone: "lead", text: sentence(found) }]
  blocks.push({
    type: "table",
    caption: null,
    columns: [
      { head: "without", says: "The terms taken out together", align: "text" },
      { head: "deviance", says: "Of the fit without them, on the same rows", align: "number" },
      { head: "df", says: "Degrees of freedom of that fit", align: "number" },
      { head: headOf(found), says: statisticSays(found), align: "number" },
      { head: "on", says: "Degrees of freedom of the test", align: "number" },
      { head: "p", says: "How often chance alone would cost as much", align: "number" },
    ],
    rows: [
      ["nothing", entry(found.deviance, 5), { value: found.df, digits: 1 }, null, null, null],
      ...found.rows.map((row) => tableRow(row, found.lawDf)),
    ],
    folded: false,
  })
  const held = found.held.map(({ term, by }) => `${term} is contained in ${list(by)} and does not go by itself`)
  if (held.length > 0) blocks.push({ type: "sentence", tone: "quiet", text: `${held.join("; ")}.` })
  return blocks
}

function sentence({ rows, model }: TermsFinding): string {
  const tested = rows.flatMap(({ without, test }) => (test === null ? [] : [{ without, p: test.p }]))
  if (tested.length === 0) return `No term of ${model} could be tested.`
  const says = tested.slice(0, mostNamed).map(({ without, p }) => `without ${without} p ${pSays(p)}`)
  const more = tested.length > mostNamed ? `, and ${writtenCount(tested.length - mostNamed)} more` : ""
  return `Taken out of ${model}: ${says.join(", ")}${more}.`
}

/** At most so many are said in a sentence. */
const mostNamed = 6

const pSays = (p: number): string => {
  const says = writtenProbability(p)
  return /^[a-z]/.test(says) ? says : `= ${says}`
}

const by = ({ rows }: TermsFinding): "likelihood_ratio" | "F" | "wald" | "score" | null =>
  rows.find(({ test }) => test !== null)?.test?.by ?? null

const heads = { likelihood_ratio: "likelihood ratio", F: "F", wald: "Wald", score: "score" } as const

const headOf = (found: TermsFinding): string => {
  const test = by(found)
  return test === null ? "test" : heads[test]
}

function statisticSays(found: TermsFinding): string {
  switch (by(found)) {
    case "F":
      return "The rise of the deviance for each coefficient taken out, over the dispersion of the larger fit"
    case "wald":
      return "How far the coefficients taken out are from 0, in the sandwich errors of the larger fit"
    default:
      return "The rise of the deviance, over the dispersion"
  }
}

const tableRow = ({ without, deviance, df, test }: TermsRow, lawDf: number | null): readonly TableEntry[] => [
  without,
  entry(deviance, 5),
  df === null ? null : { value: df, digits: 1 },
  entry(test?.statistic ?? null, 4),
  test === null ? null : lawDf === null ? writtenCount(test.terms) : `${writtenCount(test.terms)} and ${writtenCount(lawDf)}`,
  test === null ? null : writtenProbability(test.p),
]

const entry = (value: number | null, digits: number): TableEntry => (value === null ? null : { value, digits })

const list = (names: readonly string[]): string =>
  names.length < 2 ? (names[0] ?? "") : `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`
