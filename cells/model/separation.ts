// Separation in the terms of the data: which rows an estimate at infinity sends to the end of their range, as values and levels of the columns
// that it belongs to, and what their responses are. Each sentence can be rechecked in the table by itself.

import type { ModelFinding } from "../model-finding.ts"
import { designAt } from "../statistics/index.ts"
import { combinationSays, type Part, scaledParts, writtenPlain } from "./combination.ts"
import { list } from "./notices.ts"

type Found = Pick<ModelFinding, "problem" | "fit">

/** A region of the rows in words, and what all its rows have for a response. */
type Region = { readonly where: string; readonly has: string }

const mostRegions = 4

/** With more rows, or more rows times columns, a sentence would hold up what waits for it. */
const mostRows = 20_000
const mostWork = 1e6

/** Such as `every row with dose up to 1.8 has no success, and every row with dose from 2.1 on only successes`; null where there are no words for it. */
export function separationSays({ problem, fit }: Found): string | null {
  if (fit.recession.length === 0 || problem.rows > mostRows) return null
  const kinds = kindsOf(problem, fit)
  if (kinds === null) return null
  const involved = fit.coefficients.filter((_, j) => fit.recession.some((direction) => direction[j] !== 0))
  const pieces = involved.flatMap(({ term }) => (term < 0 ? [] : (problem.terms[term]?.pieces ?? [])))
  const names = [...new Set(pieces.map(({ variable }) => variable))]
  if (names.length === 0) return sentence(wholeRegion(kinds))
  const isLevel = (name: string): boolean =>
    problem.variables[name]?.type === "factor" || pieces.every(({ variable, as }) => variable !== name || as === "category")
  if (names.every(isLevel)) return sentence(levelRegions({ problem, fit }, names, kinds))
  const [name] = names
  const variable = name === undefined ? undefined : problem.variables[name]
  if (names.length === 1 && name !== undefined && variable?.type === "number")
    return sentence(rangeRegions(kinds, variable.values, (range) => `with ${name} ${range}`))
  if (fit.recession.length > 1 || fit.rows * fit.coefficients.length > mostWork) return null
  return sentence(combinedRegions({ problem, fit }, kinds))
}

function sentence(regions: readonly Region[] | null): string | null {
  if (regions === null || regions.length === 0 || regions.length > mostRegions) return null
  const [first, ...rest] = regions as readonly [Region, ...Region[]]
  return list([`every row ${first.where} has ${first.has}`, ...rest.map(({ where, has }) => `every row ${where} ${has}`)])
}

/** What the response of each row that moves is; "" for rows that stay. Null where there is no common word for those that move. */
function kindsOf(problem: Found["problem"], fit: Found["fit"]): readonly string[] | null {
  const shares = problem.family.name === "binomial"
  const zero =
    { binomial: "no success", poisson: "a count of 0", negative_binomial: "a count of 0", normal: "a response of 0 or less" }[
      problem.family.name
    ] ?? "a response of 0"
  const kinds: string[] = []
  for (let i = 0; i < problem.rows; i++) {
    const eta = fit.eta[i] as number
    const y = problem.y[i] as number
    if (Number.isFinite(eta)) kinds.push("")
    else if (y === 0 || (problem.family.name === "normal" && y < 0 && fit.mu[i] === 0)) kinds.push(zero)
    else if (shares && y === 1) kinds.push("only successes")
    else return null
  }
  return kinds
}

/** The constant alone moves, and with it every row. */
function wholeRegion(kinds: readonly string[]): readonly Region[] | null {
  const [first] = kinds
  return first !== undefined && first !== "" && kinds.every((kind) => kind === first) ? [{ where: "used", has: first }] : null
}

/** Rows of a level, or of a combination of levels: a level by itself where all its rows are of one kind. */
function levelRegions({ problem }: Found, names: readonly string[], kinds: readonly string[]): readonly Region[] | null {
  const levelOf = (name: string, row: number): string => {
    const variable = problem.variables[name]
    if (variable === undefined) return ""
    return variable.type === "factor"
      ? (variable.levels[variable.codes[row] as number] ?? "")
      : writtenPlain(variable.values[row] as number)
  }
  const covered = new Set<number>()
  const regions = new Map<string, string[]>()
  const take = (of: readonly string[]): boolean => {
    const groups = new Map<string, number[]>()
    kinds.forEach((_, row) => {
      const key = JSON.stringify(of.map((name) => levelOf(name, row)))
      const group = groups.get(key)
      if (group === undefined) groups.set(key, [row])
      else group.push(row)
    })
    if (groups.size > mostGroups) return false
    for (const [key, rows] of groups) {
      const kind = kinds[rows[0] as number] as string
      if (kind === "" || rows.some((row) => kinds[row] !== kind) || rows.every((row) => covered.has(row))) continue
      for (const row of rows) covered.add(row)
      const levels = JSON.parse(key) as readonly string[]
      regions.set(kind, [...(regions.get(kind) ?? []), of.map((name, k) => `${name} is ${levels[k]}`).join(" and ")])
    }
    return true
  }
  for (const name of names) if (!take([name])) return null
  if (names.length > 1 && !take(names)) return null
  if (kinds.some((kind, row) => kind !== "" && !covered.has(row))) return null
  const all = [...regions].flatMap(([has, wheres]) => [{ where: `where ${list(wheres, "or")}`, has, count: wheres.length }])
  return all.some(({ count }) => count > mostRegions) ? null : all
}

const mostGroups = 500

/** Stretches of a number in which all rows are of one kind, from the lowest up. */
function rangeRegions(kinds: readonly string[], values: ArrayLike<number>, where: (range: string) => string): readonly Region[] | null {
  const order = kinds.map((_, row) => row).sort((a, b) => (values[a] as number) - (values[b] as number))
  const runs: { readonly kind: string; readonly from: number; to: number }[] = []
  for (const row of order) {
    const value = values[row] as number
    const last = runs.at(-1)
    if (last !== undefined && last.kind === kinds[row]) last.to = value
    else if (last !== undefined && last.to === value) return null
    else runs.push({ kind: kinds[row] as string, from: value, to: value })
  }
  return runs.flatMap(({ kind, from, to }, k) => {
    if (kind === "") return []
    const [low, high] = [writtenPlain(from), writtenPlain(to)]
    const range =
      runs.length === 1
        ? `from ${low} to ${high}`
        : k === 0
          ? `up to ${high}`
          : k === runs.length - 1
            ? `from ${low} on`
            : from === to
              ? `at ${low}`
              : `from ${low} to ${high}`
    return [{ where: where(range), has: kind }]
  })
}

/** Where several columns move together: stretches of their combination. */
function combinedRegions({ problem, fit }: Found, kinds: readonly string[]): readonly Region[] | null {
  const direction = fit.recession[0] as Float64Array
  const parts: readonly Part[] = scaledParts(
    fit.coefficients.flatMap(({ of }, j) => (direction[j] === 0 ? [] : [{ column: of, times: direction[j] as number }])),
  )
  const moving = parts.filter(({ column }) => column !== "intercept")
  const columns = designAt(fit, problem.variables, problem.rows)
  const values = new Float64Array(problem.rows)
  for (const { column, times } of moving) {
    const x = columns[fit.coefficients.findIndex(({ of }) => of === column)] as Float64Array
    for (let i = 0; i < values.length; i++) values[i] = (values[i] as number) + times * (x[i] as number)
  }
  // Sums that differ by rounding alone are one value.
  const size = values.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
  const rounded = values.map((value) => Math.round((value / size) * 1e10) * size * 1e-10)
  return size > 0 ? rangeRegions(kinds, rounded, (range) => `where ${combinationSays(moving)} is ${range}`) : null
}
