// ModelSaid and a table → ModelFinding. Columns are looked up, rows with everything present are used, what no family or clause could mean is
// a fault that names the row, and the rest is one problem for cells/statistics. Every fault that can be said is said, not the first only.

import type { Input, Outcome, Work } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name, Value } from "../../runtime/value.ts"
import { evaluated } from "../language/evaluate.ts"
import { namesIn } from "../language/expression.ts"
import type { Bound } from "../language/form.ts"
import { variablesOf } from "../language/predictor.ts"
import { faultFrom } from "../language/slip.ts"
import { canonicalLink } from "../language/vocabulary.ts"
import type { Label, ModelFinding, OffsetFinding } from "../model-finding.ts"
import type { Fit, Fitted } from "../statistics/fit.ts"
import { fit, presentRows } from "../statistics/index.ts"
import type { LinkSpec, Problem, Term, Variable } from "../statistics/problem.ts"
import type { Column } from "../table/column.ts"
import * as say from "./notices.ts"
import { labelOf, numbersOf, type Response, responseOf, rowsWhere } from "./response.ts"
import { isMissing, scalarOf, type TableHere, tableOf, vectorOf } from "./table.ts"
import { type CallSaid, columnsOf, type ModelSaid, type Named } from "./words.ts"

type Inputs = ReadonlyMap<Name, Input>
type Say = (notice: Notice) => void

export async function found(said: ModelSaid, inputs: Inputs, work: Work): Promise<Outcome<ModelFinding>> {
  const notices: Notice[] = []
  const notice: Say = (one) => notices.push(one)
  const nothing = (): Outcome<ModelFinding> => ({ ok: false, found: null, notices })
  const { data, response: responseSaid, family: familySaid, predictor } = said
  // What is not said at all the parse has said.
  if (data === null || responseSaid === null || familySaid === null || predictor === null) return nothing()
  const table = tableOf(data.name, inputs.get(data.name))
  if (table === null) {
    notice(say.notATable(data.name, data.at))
    return nothing()
  }
  const family = familySaid.name
  missingColumns(said, table, notice)
  const link = linkOf(said.link, family, inputs, notice)
  const response = responseOf(responseSaid, family, table, notice)
  const terms = predictor.terms as readonly Term[]
  const predictors = predictorColumns(said, table, notice)
  const offset = offsetOf(said, table, inputs, notice)
  const exposure = said.exposure === null ? null : numbersOf(said.exposure, "an exposure", table, notice, "exposure")
  const repeat = said.repeat === null ? null : numbersOf(said.repeat, "repeat", table, notice, "repeat")
  const precision = said.precision === null ? null : numbersOf(said.precision, "a precision", table, notice, "precision")
  await work.checkpoint()
  if (response === null || link === null || hasFault(notices)) return nothing()

  const choice = rowsUsed(said, table, { response, terms, predictors, offset, repeat, precision }, notice)
  await work.checkpoint()
  for (const fault of response.faults(choice.used)) notice(fault)
  weightFaults(said, table, choice.used, { exposure, repeat, precision }, notice)
  const rows = choice.used.reduce((count, is) => count + is, 0)
  if (hasFault(notices)) return nothing()
  if (rows === 0) {
    notice(say.noRows(table.name, choice.unused))
    return nothing()
  }
  await work.checkpoint()

  const kept = keptRows(choice.used, rows)
  const only = (values: Float64Array | null): Float64Array | null => (values === null ? null : numbersAt(values, kept))
  const variables: Record<Name, Variable> = {}
  for (const { name, at } of variablesOf(predictor)) variables[name] = variableOf(name, predictors.get(name) as Column, kept, at, notice)
  const problem: Problem = {
    family: { name: family, parameters: [] },
    link: link.spec,
    intercept: predictor.intercept,
    terms: terms.map(({ pieces, says }) => ({ says, pieces: pieces.map(({ variable, as, setting }) => ({ variable, as, setting })) })),
    variables,
    rows,
    y: only(response.y) as Float64Array,
    trials: only(response.trials),
    repeat: only(repeat),
    precision: only(precision),
    offset: only(offset === null ? null : offset.values),
    exposure: only(exposure),
    cluster: said.cluster === null ? null : clusterCodes(table.columns.get(said.cluster.name) as Column, kept),
    dispersion: said.dispersion?.value ?? (family === "binomial" || family === "poisson" ? "one" : "pearson"),
    standardErrors: said.standardErrors,
    confidence: said.confidence,
  }
  remarks(said, problem, response, link, notice)
  const fitted = await fit(problem, () => work.checkpoint(), nearFit(work.near, problem))
  if (!fitted.ok) {
    notice(noFitNotice(fitted, table, choice.unused))
    return nothing()
  }
  fitNotices(said, problem, fitted.fit, (row) => table.rowName(kept[row] as number), notice)
  const finding: ModelFinding = {
    problem,
    fit: fitted.fit,
    link: link.says,
    response: response.finding,
    labels: labelsOf(table, [...Object.keys(variables), ...(offset === null ? [] : [...offset.columns])]),
    offset: offset === null ? null : offsetFinding(offset, table, kept),
    exposure:
      said.exposure === null
        ? null
        : { name: said.exposure.name, ...labelOf(said.exposure.name, table.columns.get(said.exposure.name) as Column) },
    records: Uint32Array.from(kept, (row) => table.records[row] as number),
    unused: choice.unused,
  }
  return { ok: true, found: finding, notices }
}

const hasFault = (notices: readonly Notice[]): boolean => notices.some(({ level }) => level === "fault")

/** Columns that the table does not have, each said once in each clause. */
function missingColumns(said: ModelSaid, table: TableHere, notice: Say): void {
  const done = new Set<string>()
  for (const { name, at, clause } of columnsOf(said)) {
    if (table.columns.has(name) || done.has(`${clause} ${name}`)) continue
    done.add(`${clause} ${name}`)
    notice(say.noSuchColumn(name, table.name, clause, at, nearest(name, table.offered), table.offered, said.clauses[clause]))
  }
}

type LinkHere = { readonly spec: LinkSpec; readonly says: string; readonly chosen: boolean }

/** The link with numbers for its dials; null once a fault was said. */
function linkOf(said: CallSaid | null, family: string, inputs: Inputs, notice: Say): LinkHere | null {
  if (said === null) {
    const name = canonicalLink(family)
    return name === null ? null : { spec: { name, parameters: [] }, says: name, chosen: false }
  }
  const parameters = said.parameters.map((bound) => parameterOf(bound, inputs, notice))
  if (parameters.includes(null)) return null
  const numbers = parameters as readonly number[]
  const says = numbers.length === 0 ? said.name : `${said.name}(${numbers.join(", ")})`
  return { spec: { name: said.name, parameters: numbers }, says, chosen: true }
}

function parameterOf(bound: Bound, inputs: Inputs, notice: Say): number | null {
  if (bound.type === "number") return bound.value
  if (bound.type !== "cell") return null
  const value = inputs.get(bound.name)?.value
  if (typeof value === "number" && Number.isFinite(value)) return value
  notice(say.notANumber(bound.name, "link", bound.at))
  return null
}

/** The columns of the predictor that can stand in one; texts, and calls of categories, are faults. */
function predictorColumns(said: ModelSaid, table: TableHere, notice: Say): ReadonlyMap<Name, Column> {
  const found = new Map<Name, Column>()
  const texts = new Set<Name>()
  for (const { variable, as, at } of said.predictor?.terms.flatMap(({ pieces }) => pieces) ?? []) {
    const column = table.columns.get(variable)
    if (column === undefined) continue
    if (column.type === "text") {
      if (!texts.has(variable)) notice(say.textColumn(variable, "predictor", at))
      texts.add(variable)
    } else if ((column.type === "category" || column.type === "truth") && as !== "itself" && as !== "category") {
      notice(say.callOfCategory(variable, column.type, as, at))
    } else found.set(variable, column)
  }
  return found
}

type OffsetHere = {
  readonly values: Float64Array
  readonly said: NonNullable<ModelSaid["offset"]>
  readonly columns: ReadonlySet<Name>
  readonly numbers: Readonly<Record<Name, number>>
}

/** The offset over all rows; null where there is none, and once a fault was said. */
function offsetOf(said: ModelSaid, table: TableHere, inputs: Inputs, notice: Say): OffsetHere | null {
  if (said.offset === null) return null
  const { expression, at } = said.offset
  const columns = new Set<Name>()
  const numbers: Record<Name, number> = {}
  const cells = new Map<Name, Value>()
  let fault = false
  for (const { name, at: place } of namesIn(expression)) {
    const isColumn = table.columns.has(name)
    const cell = name === table.name || name === said.name ? undefined : inputs.get(name)
    if (isColumn && cell !== undefined) notice(say.columnAndCell(name, table.name, place))
    else if (isColumn) columns.add(name)
    else if (cell !== undefined) cells.set(name, cell.value)
    else notice(say.noSuchColumn(name, table.name, "offset", place, nearest(name, table.offered), table.offered, said.clauses["offset"]))
    fault ||= isColumn === (cell !== undefined)
  }
  if (fault) return null
  for (const [name, value] of cells) if (typeof value === "number") numbers[name] = value
  const result = evaluated(expression, table.rows, (name) => {
    const column = table.columns.get(name)
    return column === undefined ? scalarOf(cells.get(name)) : vectorOf(column)
  })
  if (!result.ok) {
    for (const trouble of result.troubles) notice(faultFrom(trouble, "offset"))
    return null
  }
  for (const doubt of result.doubts) notice({ ...faultFrom(doubt, "offset"), level: "warning" })
  const { vector } = result
  if (vector.type === "category" || vector.type === "text") {
    notice(say.offsetWantsNumber(vector.type, at))
    return null
  }
  if (result.lost > 0) notice(say.offsetLost(result.lost, at))
  const values =
    "values" in vector ? vector.values : new Float64Array(table.rows).fill(vector.type === "missing" ? Number.NaN : vector.value)
  return { values, said: said.offset, columns, numbers }
}

type Read = {
  readonly response: Response
  readonly terms: readonly Term[]
  readonly predictors: ReadonlyMap<Name, Column>
  readonly offset: OffsetHere | null
  readonly repeat: Float64Array | null
  readonly precision: Float64Array | null
}

/** Which rows have everything and weigh something (1), and why the others do not; each row goes by the first reason that holds. */
function rowsUsed(
  said: ModelSaid,
  table: TableHere,
  read: Read,
  notice: Say,
): { readonly used: Uint8Array; readonly unused: ModelFinding["unused"] } {
  const used = new Uint8Array(table.rows).fill(1)
  const unused: { by: string; rows: number }[] = []
  const without = (by: string, is: (row: number) => boolean): void => {
    let count = 0
    for (let row = 0; row < table.rows; row++) {
      if (used[row] !== 1 || !is(row)) continue
      used[row] = 0
      count++
    }
    if (count > 0) unused.push({ by, rows: count })
  }
  const missing = new Set<Name>()
  for (const { name } of columnsOf(said)) {
    const column = table.columns.get(name)
    if (column === undefined || missing.has(name)) continue
    missing.add(name)
    without(`${name} is missing`, (row) => isMissing(column, row))
  }
  const { offset, repeat, precision, response } = read
  if (offset !== null) without("the offset is missing", (row) => !Number.isFinite(offset.values[row] as number))
  for (const { pieces } of read.terms) {
    for (const piece of pieces) {
      const column = read.predictors.get(piece.variable)
      if (piece.as === "itself" || piece.as === "category" || column === undefined || "codes" in column) continue
      const variables = { [piece.variable]: { type: "number" as const, values: column.values } }
      const present = presentRows([{ pieces: [piece], says: "" }], variables, table.rows)
      const says = `${piece.as}(${piece.variable})`
      const lost = rowsWhere(column.values, used, (_, row) => present[row] === 0)
      if (lost === null) continue
      notice(say.pieceLost(says, lost, table.rowName, pieceAt(said, piece.variable)))
      without(`${says} has no value`, (row) => present[row] === 0)
    }
  }
  if (response.trials !== null) without("there are no trials", (row) => response.trials?.[row] === 0)
  if (repeat !== null) without("repeat is 0", (row) => repeat[row] === 0)
  if (precision !== null) without("precision is 0", (row) => precision[row] === 0)
  return { used, unused }
}

const pieceAt = (said: ModelSaid, name: Name): Place =>
  said.predictor === null
    ? { clause: -1, from: 0, to: 0 }
    : (variablesOf(said.predictor).find((of) => of.name === name)?.at ?? { clause: -1, from: 0, to: 0 })

/** Exposures and weights that cannot be, in rows that are used or would be but for them. */
function weightFaults(
  said: ModelSaid,
  table: TableHere,
  used: Uint8Array,
  of: { readonly exposure: Float64Array | null; readonly repeat: Float64Array | null; readonly precision: Float64Array | null },
  notice: Say,
): void {
  const check = (
    named: Named | null,
    values: Float64Array | null,
    is: (value: number) => boolean,
    made: (named: Named, at: say.RowsAt) => Notice,
  ): void => {
    if (named === null || values === null) return
    const at = rowsWhere(values, used, is)
    if (at !== null) notice(made(named, at))
  }
  check(
    said.exposure,
    of.exposure,
    (value) => value <= 0,
    ({ name, at }, rows) => say.exposureNotPositive(name, rows, table.rowName, at),
  )
  check(
    said.repeat,
    of.repeat,
    (value) => value < 0,
    ({ name, at }, rows) => say.weightNegative("repeat", name, rows, table.rowName, at),
  )
  check(
    said.repeat,
    of.repeat,
    (value) => !Number.isInteger(value),
    ({ name, at }, rows) => say.repeatNotWhole(name, rows, table.rowName, at),
  )
  check(
    said.precision,
    of.precision,
    (value) => value < 0,
    ({ name, at }, rows) => say.weightNegative("precision", name, rows, table.rowName, at),
  )
}

function keptRows(used: Uint8Array, count: number): Uint32Array {
  const kept = new Uint32Array(count)
  let at = 0
  for (let row = 0; row < used.length; row++) if (used[row] === 1) kept[at++] = row
  return kept
}

/** The values in the rows kept: the same array where all are, so that a column is held once. */
function numbersAt(values: Float64Array, kept: Uint32Array): Float64Array {
  if (kept.length === values.length) return values
  const some = new Float64Array(kept.length)
  for (let i = 0; i < kept.length; i++) some[i] = values[kept[i] as number] as number
  return some
}

function codesAt(codes: Int32Array | Float64Array, kept: Uint32Array): Int32Array {
  if (codes instanceof Int32Array && kept.length === codes.length) return codes
  const some = new Int32Array(kept.length)
  for (let i = 0; i < kept.length; i++) some[i] = codes[kept[i] as number] as number
  return some
}

/** A column over the rows used. Levels that are in none of them are left out, and said. */
function variableOf(name: Name, column: Column, kept: Uint32Array, at: Place, notice: Say): Variable {
  if (column.type === "truth") return factorOf(name, codesAt(column.values, kept), ["false", "true"], "corner", at, notice)
  if ("codes" in column) return factorOf(name, codesAt(column.codes, kept), column.levels, column.coding, at, notice)
  return { type: "number", values: numbersAt(column.values, kept) }
}

function factorOf(
  name: Name,
  codes: Int32Array,
  levels: readonly string[],
  coding: "corner" | "sum_to_zero",
  at: Place,
  notice: Say,
): Variable {
  const there = new Uint8Array(levels.length)
  for (const code of codes) there[code] = 1
  const left = levels.filter((_, code) => there[code] === 1)
  const out = levels.filter((_, code) => there[code] !== 1)
  if (out.length > 0 && left.length > 1) notice(say.levelsDropped(name, out, at))
  if (left.length === 1) notice(say.oneLevel(name, left[0] as string, at))
  if (out.length === 0) return { type: "factor", codes, levels, coding }
  const next = new Int32Array(levels.length)
  let count = 0
  for (let code = 0; code < levels.length; code++) if (there[code] === 1) next[code] = count++
  return { type: "factor", codes: codes.map((code) => next[code] as number), levels: left, coding }
}

/** Each different value of the column is a cluster, numbered as they come. */
function clusterCodes(column: Column, kept: Uint32Array): Int32Array {
  const numbers = new Map<number, number>()
  return Int32Array.from(kept, (row) => {
    const value = "codes" in column ? (column.codes[row] as number) : (column.values[row] as number)
    const known = numbers.get(value)
    if (known !== undefined) return known
    numbers.set(value, numbers.size)
    return numbers.size - 1
  })
}

/** What was taken without being said, or means something else than may be thought. */
function remarks(said: ModelSaid, problem: Problem, response: Response, link: LinkHere, notice: Say): void {
  const family = problem.family.name
  if (!link.chosen) notice(say.linkNotChosen(link.says, family))
  if (said.precision !== null && (family === "binomial" || family === "poisson"))
    notice(say.precisionCounts(family, said.precision.name, said.precision.at))
  if (said.exposure !== null && family === "gamma" && said.response?.type === "column")
    notice(say.exposureAsAmount(said.exposure.name, said.response.column.name, said.exposure.at))
  const [first] = problem.y
  if (said.response !== null && problem.rows > 1 && first !== undefined && problem.y.every((value) => value === first))
    notice(say.constantResponse(response.finding.label, constantSays(first, response), responsePlace(said)))
  if (said.interval?.by === "profile") notice(say.profileNotYet(said.interval.at))
}

const constantSays = (value: number, response: Response): string =>
  response.finding.measured === "truth"
    ? value === 1
      ? "true"
      : "false"
    : response.finding.measured === "share"
      ? `a share of ${value}`
      : String(value)

const responsePlace = (said: ModelSaid): Place =>
  said.response?.type === "successes" ? said.response.successes.at : (said.response?.column.at ?? { clause: -1, from: 0, to: 0 })

/** The last fit as a start: only where it has the same coefficients. */
function nearFit(near: Value | null, problem: Problem): Fit | null {
  if (typeof near !== "object" || near === null || !("fit" in near) || !("problem" in near)) return null
  const last = near as unknown as ModelFinding
  const shape = (of: Problem): string =>
    JSON.stringify([
      of.intercept,
      of.terms,
      Object.values(of.variables).map((variable) => (variable.type === "factor" ? variable.levels : null)),
    ])
  return shape(last.problem) === shape(problem) ? last.fit : null
}

function noFitNotice(fitted: Extract<Fitted, { ok: false }>, table: TableHere, unused: ModelFinding["unused"]): Notice {
  return fitted.why === "no_rows" ? say.noRows(table.name, unused) : say.noFit(fitted.why, fitted.detail)
}

/** At most so many dependent columns are named one by one. */
const namedDependences = 4

/** What was hard about the fit. */
function fitNotices(said: ModelSaid, problem: Problem, of: Fit, rowName: say.RowName, notice: Say): void {
  const { certificate } = of
  const at: Place = { clause: said.predictorAt, from: 0, to: 1 }
  const dependent = certificate.evidence?.dependent ?? []
  for (const { column, on } of dependent.slice(0, namedDependences)) {
    notice(
      say.dependentTerm(
        column,
        on.map((part) => part.column),
        at,
      ),
    )
  }
  if (dependent.length > namedDependences)
    notice(
      say.moreDependentTerms(
        dependent.slice(namedDependences).map(({ column }) => column),
        at,
      ),
    )
  if (certificate.class === "gave_up") notice(say.gaveUp(certificate.iterations, certificate.scaledScore))
  if (certificate.class === "boundary") {
    notice(
      say.atBoundary(
        (certificate.evidence?.edge ?? []).map(({ row }) => row),
        rowName,
      ),
    )
  }
  if (certificate.class === "infinite") {
    const moved = of.coefficients.flatMap(({ of: term, toward }) => (toward === null ? [] : [{ of: term, toward }]))
    notice(say.atInfinity(moved, problem.family.name))
  }
  if (certificate.class === "several_maxima") notice(say.severalMaxima())
  if (of.df === 0 && of.dispersion.estimated && of.dispersion.value === null) notice(say.nothingLeft())
  if (of.clusters === 1 && said.cluster !== null) notice(say.oneCluster(said.cluster.name, said.cluster.at))
}

const labelsOf = (table: TableHere, names: readonly Name[]): { readonly [name: Name]: Label } =>
  Object.fromEntries(names.map((name) => [name, labelOf(name, table.columns.get(name) as Column)]))

/** The offset with its columns over the rows used. */
function offsetFinding(offset: OffsetHere, table: TableHere, kept: Uint32Array): OffsetFinding {
  const variables: Record<Name, Variable> = {}
  for (const name of offset.columns) {
    const column = table.columns.get(name) as Column
    variables[name] =
      "codes" in column
        ? { type: "factor", codes: codesAt(column.codes, kept), levels: column.levels, coding: column.coding }
        : { type: "number", values: numbersAt(column.values, kept) }
  }
  return { expression: offset.said.expression, variables, numbers: offset.numbers }
}
