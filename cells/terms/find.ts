// What `terms` finds: for each set of terms that may go, the fit without them, on the same rows, and the test of what is lost.

import type { Input, Outcome, Work } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { type ModelFinding, modelIn } from "../model-finding.ts"
import { containing, fitWithout, type NestedTest, nestedTest, without } from "../statistics/index.ts"
import type { Piece, Problem, Term } from "../statistics/problem.ts"
import * as say from "./notices.ts"
import type { TermsSaid, WithoutSaid } from "./words.ts"

export type TermsRow = {
  readonly without: string
  /** The predictor that is left, as a clause would say it. */
  readonly left: string
  /** Of the fit without these terms; null where there is none. */
  readonly deviance: number | null
  readonly df: number | null
  readonly aic: number | null
  readonly test: NestedTest | null
}

export type TermsFinding = {
  readonly model: Name
  readonly family: string
  readonly link: string
  readonly n: number
  readonly deviance: number | null
  readonly df: number
  /** Degrees of freedom under F; null for the χ² law. */
  readonly lawDf: number | null
  readonly rows: readonly TermsRow[]
  /** Terms that do not go by themselves, with those that contain them. */
  readonly held: readonly { readonly term: string; readonly by: readonly string[] }[]
}

export async function found(said: TermsSaid, inputs: ReadonlyMap<Name, Input>, work: Work): Promise<Outcome<TermsFinding>> {
  const notices: Notice[] = []
  const nothing: Outcome<TermsFinding> = { ok: false, found: null, notices }
  if (said.model === null) return nothing
  const { name, at } = said.model
  const model = modelIn(inputs.get(name)?.value)
  if (model === null) {
    notices.push(say.notAModel(name, at))
    return nothing
  }
  const { problem, fit } = model
  const { terms } = problem
  if (terms.length === 0) {
    notices.push(say.noTerms(name, at))
    return nothing
  }
  const above = containing(terms)
  const sets =
    said.without.length === 0
      ? terms.flatMap((_, t) => (above[t]?.length === 0 ? [[t]] : []))
      : setsSaid(said.without, name, terms, above, notices)
  if (sets === null) return nothing
  const rows: TermsRow[] = []
  for (const set of sets) {
    await work.checkpoint()
    const says = sum(set, terms)
    const smaller = without(problem, set)
    const left = predictorSays(smaller)
    const fitted = await fitWithout(problem, set, () => work.checkpoint())
    if (!fitted.ok) {
      notices.push(say.noFit(says, fitted.detail))
      rows.push({ without: says, left, deviance: null, df: null, aic: null, test: null })
      continue
    }
    const test = await nestedTest(problem, fit, { problem: smaller, fit: fitted.fit }, () => work.checkpoint())
    if (test === null) notices.push(fitted.fit.rank === fit.rank ? say.nothingApart(says) : say.noTest(says))
    rows.push({ without: says, left, deviance: fitted.fit.deviance, df: fitted.fit.df, aic: fitted.fit.aic, test })
  }
  return { ok: true, found: finding(name, model, rows, said.without.length === 0 ? above : []), notices }
}

const finding = (
  name: Name,
  { problem, fit, link }: ModelFinding,
  rows: readonly TermsRow[],
  above: readonly (readonly number[])[],
): TermsFinding => ({
  model: name,
  family: problem.family.name,
  link,
  n: fit.n,
  deviance: fit.deviance,
  df: fit.df,
  lawDf: problem.standardErrors === "sandwich" ? fit.lawDf : fit.dispersion.estimated ? fit.df : null,
  rows,
  held: above.flatMap((by, t) =>
    by.length === 0 ? [] : [{ term: problem.terms[t]?.says ?? "", by: by.map((other) => problem.terms[other]?.says ?? "") }],
  ),
})

/** The places of the terms of each clause; null once a fault was said. */
function setsSaid(
  said: readonly WithoutSaid[],
  model: Name,
  terms: readonly Term[],
  above: readonly (readonly number[])[],
  notices: Notice[],
): readonly (readonly number[])[] | null {
  const places = new Map(terms.map((term, t) => [setOf(term.pieces), t]))
  const names = terms.map(({ says }) => says)
  const sets = said.map(({ terms: out, at, nth }) => {
    const set: number[] = []
    for (const term of out.terms) {
      const place = places.get(setOf(term.pieces))
      if (place !== undefined) set.push(place)
      else notices.push(say.notInPredictor(term.says, model, names, nearest(term.says, names), nth, out.terms.length === 1, at))
    }
    for (const t of set) {
      const left = above[t]?.filter((other) => !set.includes(other)) ?? []
      if (left.length === 0) continue
      const whole = [...new Set([...set, ...left])].sort((a, b) => a - b)
      notices.push(
        say.contained(
          names[t] as string,
          left.map((other) => names[other] as string),
          sum(whole, terms),
          nth,
          at,
        ),
      )
      break
    }
    return set.sort((a, b) => a - b)
  })
  return notices.length > 0 ? null : sets
}

const setOf = (pieces: readonly Pick<Piece, "variable" | "as" | "setting">[]): string =>
  pieces
    .map(({ variable, as, setting }) => `${as}(${variable}, ${setting})`)
    .sort()
    .join(" . ")

function predictorSays({ terms, intercept }: Problem): string {
  const says = terms.map((term) => term.says).join(" + ")
  return says === "" ? "intercept" : intercept ? says : `${says} - intercept`
}

const sum = (set: readonly number[], terms: readonly Term[]): string => set.map((t) => terms[t]?.says ?? "").join(" + ")
