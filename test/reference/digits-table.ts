// How many digits the program reaches against the values in this folder, set by set, and that as the table of README.md. Every figure is the
// least over the models and the coefficients of a set, rounded down; what is asked for, and why less has to do, stands here as well.

import type { Fit } from "../../cells/statistics/fit.ts"
import { fit } from "../../cells/statistics/index.ts"
import type { Problem } from "../../cells/statistics/problem.ts"
import { profileIntervals } from "../../cells/statistics/profile.ts"
import { digits } from "./printed.ts"
import { problemOf, type ReferenceFit, type ReferenceModel, referenceSets } from "./reference-models.ts"

/** Files of reference fits. */
export const files = ["published-glm.json", "generated-glm.json", "link-grid.json", "nist-linear.json", "nist-nonlinear.json"] as const

/** What is measured, with the digits asked for. */
export const asked = {
  coefficients: 11,
  errors: 10,
  deviance: 12,
  "log-likelihood": 12,
  score: 9,
  profile: 8,
  dispersion: 8,
} as const
export type Measure = keyof typeof asked
export const measures = Object.keys(asked) as readonly Measure[]

export type Reached = {
  readonly set: string
  readonly models: number
  /** The largest condition of columns of length one. */
  readonly condition: number
  /** Null where there is no value to compare with. */
  readonly digits: Readonly<Record<Measure, number | null>>
}

/** Where fewer digits are to be had, and why: the data as doubles have lost the others before any fitting. */
export const fewer: Readonly<Record<string, { readonly measure: Measure; readonly digits: number; readonly why: string }>> = {
  g10: { measure: "deviance", digits: 11, why: "shares of 1e-9 are rounded to doubles, and so is what they differ by from their means" },
  MGH10: { measure: "score", digits: 2, why: "all but a billionth of η² lies in the span of the columns" },
}

/** A double has a digit more, but its last bits are moved by the order of sums. */
const most = 14

/** So much of a digit is given away before rounding down, for the same reason. */
const spare = 0.5

/** Above this condition three digits less are asked of coefficients and errors. */
export const illConditioned = 1e4

/** The digits that one file's sets are fitted to. */
export async function reachedIn(file: string): Promise<readonly Reached[]> {
  const found: Reached[] = []
  for (const set of referenceSets(file)) {
    const least: Record<Measure, number | null> = {
      coefficients: null,
      errors: null,
      deviance: null,
      "log-likelihood": null,
      score: null,
      profile: null,
      dispersion: null,
    }
    let condition = 1
    let models = 0
    for (const model of set.models) {
      const problem = problemOf(set, model)
      if (problem === null) continue
      models++
      condition = Math.max(condition, await measured(problem, model, least))
    }
    if (models > 0) found.push({ set: set.id, models, condition, digits: least })
  }
  return found
}

/** The digits asked of a measure of a set. */
export function askedOf({ set, condition }: Reached, measure: Measure): number {
  const less = fewer[set]
  if (less?.measure === measure) return less.digits
  return asked[measure] - (condition > illConditioned && (measure === "coefficients" || measure === "errors") ? 3 : 0)
}

const heads: Readonly<Record<Measure, string>> = {
  coefficients: "coefficients",
  errors: "standard errors",
  deviance: "deviance",
  "log-likelihood": "log-likelihood",
  score: "score of η²",
  profile: "profile bounds",
  dispersion: "dispersion, k",
}

/** The table as it stands in the README: digits rounded down, `–` where there is nothing to compare with. */
export function tableOf(reached: readonly (readonly [string, readonly Reached[]])[]): readonly string[] {
  const head = ["set", "models", "condition", ...measures.map((measure) => heads[measure])]
  const wanted = ["_asked for_", "", "", ...measures.map((measure) => `_${asked[measure]}_`)]
  const lines = reached.flatMap(([file, sets]) => [
    [`**${file}**`, ...head.slice(1).map(() => "")],
    ...sets.map(({ set, models, condition, digits: of }) => [
      set,
      String(models),
      condition.toExponential(0).replace("+", ""),
      ...measures.map((measure) => (of[measure] === null ? "–" : String(Math.min(most, Math.floor(of[measure] - spare))))),
    ]),
  ])
  const all = [head, wanted, ...lines]
  const widths = head.map((_, k) => Math.max(...all.map((line) => (line[k] ?? "").length)))
  const row = (line: readonly string[]): string => `| ${line.map((entry, k) => entry.padEnd(widths[k] ?? 0)).join(" | ")} |`
  return [row(head), `| ${widths.map((width) => "-".repeat(width)).join(" | ")} |`, ...[wanted, ...lines].map(row)]
}

/** Where the sets are from, a line each; sets made up for these tests say so. */
export const sources: readonly string[] = files.flatMap((file) => {
  const sets = referenceSets(file)
  return sets.every(({ source }) => source !== undefined)
    ? sets.map(({ id, source = "" }) => `- ${id}: ${source}`)
    : [`- ${file}: made up for these tests, and fitted with 80 digits by \`oracle.py\``]
})

/** The figures of a table in the README, by file and set. */
export function figuresIn(lines: readonly string[]): ReadonlyMap<string, readonly string[]> {
  const found = new Map<string, readonly string[]>()
  let file = ""
  for (const line of lines.filter((each) => each.startsWith("|"))) {
    const [first = "", ...rest] = line
      .split("|")
      .slice(1, -1)
      .map((entry) => entry.trim())
    const heading = /^\*\*(.+)\*\*$/.exec(first)?.[1]
    if (heading !== undefined) file = heading
    else if (file !== "") found.set(`${file} ${first}`, [rest[0] ?? "", ...rest.slice(2)])
  }
  return found
}

type Ends = { readonly lower: readonly string[]; readonly upper: readonly string[] }
type WithMore = ReferenceFit & { readonly k?: string; readonly profile_95_chi2?: Ends; readonly profile_95_f?: Ends }

/** Lowers the digits to those of one model; returns the condition of its columns. */
async function measured(problem: Problem, model: ReferenceModel, least: Record<Measure, number | null>): Promise<number> {
  const reference = model.reference as WithMore
  const perfect = Number(reference.deviance) === 0
  const note = (measure: Measure, reached: number): void => {
    least[measure] = Math.min(least[measure] ?? Number.POSITIVE_INFINITY, reached)
  }
  const found = await fitted(problem)
  const observed = perfect ? null : await fitted({ ...problem, standardErrors: "observed" })
  found.coefficients.forEach(({ beta, standardError }, j) => {
    const error = reference.se_expected[j] as string
    note("coefficients", digits(beta, reference.coefficients[j] as string, Number(error)))
    // A perfect fit has no errors where the dispersion is estimated.
    if (!perfect || problem.dispersion === "one") note("errors", digits(standardError, error))
    if (observed) note("errors", digits(observed.coefficients[j]?.standardError, reference.se_observed[j] as string))
  })
  if (perfect) return found.certificate.condition
  note("deviance", digits(found.deviance, reference.deviance))
  note("log-likelihood", digits(found.logLikelihood, reference.loglik))
  if (reference.link_test && found.goodnessOfLink) note("score", digits(found.goodnessOfLink.statistic, reference.link_test.score_chi2))
  if (reference.k !== undefined && found.parameters[0]) note("dispersion", digits(found.parameters[0].value, reference.k))
  for (const by of ["pearson", "deviance", "likelihood"] as const) {
    const exact = reference[({ pearson: "dispersion_pearson", deviance: "dispersion_deviance", likelihood: "dispersion_ml" } as const)[by]]
    if (exact !== null && exact !== undefined)
      note("dispersion", digits((await fitted({ ...problem, dispersion: by })).dispersion.value, exact))
  }
  const held = problem.dispersion === "pearson" ? { ...problem, dispersion: Number(reference.dispersion_used) } : problem
  for (const [by, ends] of [[held, reference.profile_95_chi2] as const, [problem, reference.profile_95_f] as const]) {
    if (!ends) continue
    const intervals = await profileIntervals(by, await fitted(by), pause)
    intervals.forEach((interval, j) => {
      const error = Number(reference.se_expected[j])
      for (const [end, exact] of [[interval?.low, ends.lower[j]] as const, [interval?.high, ends.upper[j]] as const])
        note("profile", digits(typeof end === "number" ? end : null, exact as string, error))
    })
  }
  return found.certificate.condition
}

const pause = async (): Promise<void> => {}

async function fitted(problem: Problem): Promise<Fit> {
  const found = await fit(problem, pause)
  if (!found.ok) throw new Error(found.detail)
  return found.fit
}
