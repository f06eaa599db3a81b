// The table of sources in README.md: every set with where it is from, how many of its models are fitted here, and the whole digits in which
// the worst of them agrees. The table is written by this file (SOURCES=write npx vitest run …/sources.test.ts) and held by it ever after:
// more models may be fitted, and closer, than the table says, never fewer or less close.

import { readFileSync, writeFileSync } from "node:fs"
import { describe, expect, it } from "vitest"
import { fit } from "../../cells/statistics/index.ts"
import { digits } from "./printed.ts"
import { problemOf, type ReferenceSet, referenceSets } from "./reference-models.ts"

const readme = new URL("README.md", import.meta.url)
const files = ["published-glm.json", "nist-linear.json", "nist-nonlinear.json", "generated-glm.json", "link-grid.json"]
const [begin, end] = ["<!-- sources: written by sources.test.ts -->", "<!-- end of sources -->"]

type Row = {
  readonly set: string
  readonly models: number
  /** Digits of coefficients, standard errors and sums (deviance, Pearson's X², log-likelihood). */
  readonly reached: readonly number[]
  readonly source: string
}

/** Sets that somebody published stand for themselves; those made up here are one row a file. */
const groups: readonly { readonly set: string; readonly source: string; readonly of: readonly ReferenceSet[] }[] = files.flatMap((file) => {
  const sets = referenceSets(file)
  if (sets.every(({ source }) => source !== undefined)) return sets.map((set) => ({ set: set.id, source: set.source ?? "", of: [set] }))
  return [{ set: file, source: `Made up here: ${sets.length} sets, fitted at 80 digits by oracle.py.`, of: sets }]
})

async function rowOf({ set, source, of }: (typeof groups)[number]): Promise<Row | null> {
  const least = [16, 16, 16]
  const keep = (k: number, found: number): void => {
    least[k] = Math.min(least[k] as number, found)
  }
  let models = 0
  for (const each of of) {
    for (const model of each.models) {
      const { reference } = model
      const problem = problemOf(each, model)
      if (problem === null || problem === undefined || reference.coefficients === undefined) continue
      const found = await fit(problem, async () => {})
      if (!found.ok) throw new Error(`${each.id}, ${model.id}: ${found.detail}`)
      models++
      // A perfect fit has neither errors nor likelihood, and a saturated one no deviance but rounding.
      const perfect = Number(reference.deviance) === 0
      found.fit.coefficients.forEach(({ beta, standardError }, j) => {
        keep(0, digits(beta, reference.coefficients[j] as string, Number(reference.se_expected?.[j] ?? 0)))
        if (!perfect) keep(1, digits(standardError, reference.se_expected[j] as string))
      })
      if (perfect) continue
      keep(2, digits(found.fit.deviance, reference.deviance))
      keep(2, digits(found.fit.pearson, reference.pearson_chi2))
      keep(2, digits(found.fit.logLikelihood, reference.loglik))
    }
  }
  return models === 0 ? null : { set, models, reached: least.map(Math.floor), source }
}

const cells = (row: Row): readonly string[] => [row.set, String(row.models), ...row.reached.map(String), row.source.replaceAll("|", "\\|")]

function tableIn(text: string): ReadonlyMap<string, readonly string[]> {
  const between = text.slice(text.indexOf(begin), text.indexOf(end))
  const lines = between.split("\n").filter((line) => line.startsWith("|"))
  const rows = lines.slice(2).map((line) =>
    line
      .slice(1, line.lastIndexOf("|"))
      .split(/(?<!\\)\|/)
      .map((cell) => cell.trim()),
  )
  return new Map(rows.map((row) => [row[0] as string, row]))
}

function written(text: string, rows: readonly Row[]): string {
  const heads = ["set", "models", "coefficients", "errors", "sums", "source"]
  const lines = [heads, ["---", "--:", "--:", "--:", "--:", "---"], ...rows.map(cells)].map((row) => `| ${row.join(" | ")} |`)
  return `${text.slice(0, text.indexOf(begin))}${begin}\n\n${lines.join("\n")}\n\n${text.slice(text.indexOf(end))}`
}

describe("the table of sources", async () => {
  const rows = (await Promise.all(groups.map(rowOf))).filter((row) => row !== null)
  if (process.env["SOURCES"] === "write") writeFileSync(readme, written(readFileSync(readme, "utf8"), rows))
  const table = tableIn(readFileSync(readme, "utf8"))

  it("has a row for every set that is fitted, and no other", () => {
    expect([...table.keys()]).toEqual(rows.map(({ set }) => set))
  })

  it.each(rows.map((row) => [row.set, row] as const))("tells the truth about %s", (set, row) => {
    const [, models, coefficients, errors, sums, source] = table.get(set) ?? []
    expect(source).toBe(cells(row)[5])
    expect(row.models).toBeGreaterThanOrEqual(Number(models))
    for (const [k, claimed] of [coefficients, errors, sums].entries()) expect(row.reached[k]).toBeGreaterThanOrEqual(Number(claimed))
  })
})
