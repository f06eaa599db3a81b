// ModelSaid and a table → ModelFinding. Columns are looked up, rows with everything present are used, what no family or clause could mean is
// a fault that names the row, and the rest is one problem for cells/statistics. Every fault that can be said is said, not the first only.

import type { Input, Outcome, Work } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name, Value } from "../../runtime/value.ts"
import { variablesOf } from "../language/predictor.ts"
import { canonicalLink, families, legalLinks, links, parameterRange } from "../language/vocabulary.ts"
import { fitPart, type Label, type ModelFinding, type ModelFound, modelIn } from "../model-finding.ts"
import type { Fit } from "../statistics/fit.ts"
import { fit, isLegal, samplingWeights, whyNotReduced } from "../statistics/index.ts"
import type { FamilySpec, LinkSpec, Problem, Term, Variable } from "../statistics/problem.ts"
import type { Column } from "../table/column.ts"
import { isDiscrete } from "./family.ts"
import { withIntervals } from "./intervals.ts"
import { controlNotices, controlOf, controlRows, limitsOf, numberOf } from "./limits.ts"
import * as say from "./notices.ts"
import { offsetFinding, offsetOf } from "./offset.ts"
import { ownLinkOf } from "./own-link.ts"
import { fitNotices, remarks } from "./remarks.ts"
import { labelOf, numbersOf, responseOf } from "./response.ts"
import { rowsWhere } from "./response-rows.ts"
import { type TableHere, tableOf } from "./table.ts"
import { rowsUsed, weightFaults } from "./used-rows.ts"
import { clusterCodes, keptRows, numbersAt, variableOf } from "./variables.ts"
import { varianceOf } from "./variance.ts"
import { type CallSaid, columnsOf, isOwnName, type ModelSaid } from "./words.ts"

type Inputs = ReadonlyMap<Name, Input>
type Say = (notice: Notice) => void

export async function found(said: ModelSaid, inputs: Inputs, work: Work): Promise<Outcome<ModelFound>> {
  const notices: Notice[] = []
  const notice: Say = (one) => notices.push(one)
  const nothing = (): Outcome<ModelFound> => ({ ok: false, found: null, notices })
  const { data, response: responseSaid, family: familySaid, predictor } = said
  // What is not said at all the parse has said.
  if (data === null || responseSaid === null || familySaid === null || predictor === null) return nothing()
  const table = tableOf(data.name, inputs.get(data.name))
  if (table === null) {
    notice(say.notATable(data.name, data.at))
    return nothing()
  }
  const family = familySaid.name
  const familySpec = familyOf(familySaid, inputs, notice)
  missingColumns(said, table, notice)
  const link = linkOf(said, family, inputs, notice)
  const response = responseOf(responseSaid, family, table, notice)
  const terms = predictor.terms as readonly Term[]
  const predictors = predictorColumns(said, table, notice)
  const offset = offsetOf(said, table, inputs, notice)
  const limits = limitsOf(said, inputs, notice)
  const isControl = controlOf(said, table, inputs, notice)
  const exposure = said.exposure === null ? null : numbersOf(said.exposure, "an exposure", table, notice, "exposure")
  const repeat = said.repeat === null ? null : numbersOf(said.repeat, "repeat", table, notice, "repeat")
  const precision = said.precision === null ? null : numbersOf(said.precision, "a precision", table, notice, "precision")
  const sampling = said.sampling === null ? null : numbersOf(said.sampling, "a sampling weight", table, notice, "sampling")
  await work.checkpoint()
  if (familySpec?.variance !== undefined && link !== null) varianceFaults(said, familySpec, link.spec, notice)
  if (response === null || link === null || familySpec === null || hasFault(notices)) return nothing()

  const choice = await rowsUsed(said, table, { response, terms, predictors, offset, repeat, precision, sampling, isControl }, notice, work)
  await work.checkpoint()
  // A row of no dose has a response and weights like any other.
  const either = choice.control === null ? choice.used : choice.used.map((is, row) => is | ((choice.control as Uint8Array)[row] as number))
  for (const fault of response.faults(either)) notice(fault)
  if (familySpec.variance !== undefined && responseSaid.type === "column") {
    const [low, high] = familySpec.variance.range
    const outside = rowsWhere(response.y, either, (y) => y < low || y > high)
    if (outside !== null)
      notice(say.outsideVariance(responseSaid.column.name, familySpec.variance, outside, table.rowName, responseSaid.column.at))
  }
  weightFaults(said, table, either, { exposure, repeat, precision, sampling }, notice)
  const rows = choice.used.reduce((count, is) => count + is, 0)
  if (hasFault(notices)) return nothing()
  if (rows === 0) {
    notice(say.noRows(table.name, choice.unused, data.at))
    return nothing()
  }
  await work.checkpoint()

  const kept = keptRows(choice.used, rows)
  const only = (values: Float64Array | null): Float64Array | null => (values === null ? null : numbersAt(values, kept))
  // From entries, since a column may bear a name that assigning to an object would take otherwise, such as __proto__.
  const variables: Readonly<Record<Name, Variable>> = Object.fromEntries(
    variablesOf(predictor).map(({ name, at }) => [name, variableOf(name, predictors.get(name) as Column, kept, at, notice)]),
  )
  const control = choice.control === null ? null : controlRows(choice.control, response, repeat, precision)
  if (control !== null && said.control !== null) controlNotices(control, limits, said.control.at, notice)
  if (hasFault(notices)) return nothing()
  const problem: Problem = {
    family: familySpec,
    link: limits === null ? link.spec : { ...link.spec, limits },
    intercept: predictor.intercept,
    terms: terms.map(({ pieces, says }) => ({ says, pieces: pieces.map(({ variable, as, setting }) => ({ variable, as, setting })) })),
    variables,
    rows,
    y: only(response.y) as Float64Array,
    trials: only(response.trials),
    repeat: only(repeat),
    precision: sampling === null ? only(precision) : samplingWeights(numbersAt(sampling, kept)),
    ...(sampling === null ? {} : { sampling: true }),
    offset: only(offset === null ? null : offset.values),
    exposure: only(exposure),
    cluster: said.cluster === null ? null : clusterCodes(table.columns.get(said.cluster.name) as Column, kept),
    control,
    dispersion: said.dispersion?.value ?? (isDiscrete(family) ? "one" : "pearson"),
    standardErrors: sampling === null ? said.standardErrors : "sandwich",
    ...(said.estimate?.by === "bias_reduced" ? { estimate: "bias_reduced" } : {}),
    confidence: said.confidence,
  }
  const why = said.estimate?.by === "bias_reduced" ? whyNotReduced(problem) : null
  if (why !== null && said.estimate !== null) {
    notice(say.biasNotReduced(why, problem.family.name, link.says, said.estimate.at))
    return nothing()
  }
  remarks(said, problem, response, link, notice)
  const fitted = await fit(problem, () => work.checkpoint(), nearFit(work.near, problem))
  if (!fitted.ok) {
    notice(fitted.why === "no_rows" ? say.noRows(table.name, choice.unused, data.at) : say.noFit(fitted.why, fitted.detail))
    return nothing()
  }
  // From here on estimated parameters have their values.
  const settled: Problem = { ...problem, family: fitted.fit.family, link: fitted.fit.link }
  fitNotices(said, settled, fitted.fit, (row) => table.rowName(kept[row] as number), notice)
  const finding: ModelFinding = {
    problem: settled,
    fit: fitted.fit,
    link: (settled.link.estimated?.length ?? 0) > 0 ? estimatedSays(settled.link) : link.says,
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
  work.publish(fitPart, finding)
  return withIntervals(said, finding, notices, work)
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

/** What cannot be beside a variance: a link that is not defined wherever it is above 0, a rate whose mean may be below 0, a likelihood. */
function varianceFaults(said: ModelSaid, family: FamilySpec, link: LinkSpec, notice: Say): void {
  const { range, says } = family.variance as NonNullable<FamilySpec["variance"]>
  if (!isLegal(family, link)) {
    const legal = legalLinks(family.name).filter(
      (name) => links[name]?.parameters.length === 0 && isLegal(family, { name, parameters: [] }),
    )
    notice(say.linkNotOfVariance(link.name, says, range, legal, said.link?.at ?? said.family?.at ?? { clause: -1, from: 0, to: 0 }))
  }
  if (said.exposure !== null && !(range[0] === 0 && range[1] === Infinity)) notice(say.exposureNotOfFamily(family.name, said.exposure.at))
  if (said.dispersion?.value === "likelihood") notice(say.dispersionWithoutLikelihood(said.dispersion.at))
}

type LinkHere = { readonly spec: LinkSpec; readonly says: string; readonly chosen: boolean }

/** The link with numbers for its dials; null once a fault was said. */
function linkOf(model: ModelSaid, family: string, inputs: Inputs, notice: Say): LinkHere | null {
  const said = model.link
  if (said === null) {
    const name = canonicalLink(family)
    return name === null ? null : { spec: { name, parameters: [] }, says: name, chosen: false }
  }
  if (isOwnName(said.name)) {
    const spec = ownLinkOf(said, family, model, inputs, notice)
    return spec === null ? null : { spec, says: said.name, chosen: true }
  }
  const spec = parametersOf(said, "link", inputs, notice)
  if (spec === null) return null
  const says = spec.parameters.length === 0 ? said.name : `${said.name}(${spec.parameters.join(", ")})`
  return { spec, says, chosen: true }
}

/** An estimated link as a clause would say it, its numbers to four digits. */
const estimatedSays = ({ name, parameters, estimated }: LinkSpec): string =>
  `${name}(${parameters.map((value, k) => (estimated?.includes(k) ? Number(value.toPrecision(4)) : value)).join(", ")})`

/** The family with numbers for its dials; null once a fault was said. */
function familyOf(said: CallSaid, inputs: Inputs, notice: Say): FamilySpec | null {
  if (said.name !== "quasi_likelihood") return parametersOf(said, "family", inputs, notice)
  const variance = varianceOf(said, inputs, notice)
  return variance === null ? null : { name: said.name, parameters: [], variance }
}

/** Numbers for what stands in the brackets, and the places of what is estimated; null once a fault was said. */
function parametersOf(said: CallSaid, clause: "family" | "link", inputs: Inputs, notice: Say): FamilySpec | null {
  const words = clause === "family" ? families[said.name]?.parameters : links[said.name]?.parameters
  const numbers: number[] = []
  const estimated: number[] = []
  said.parameters.forEach((bound, k) => {
    if (bound.type === "estimate") {
      // Where its search starts is for the fit to say.
      estimated.push(k)
      numbers.push(said.name === "tweedie" ? 1.5 : 1)
      return
    }
    const number = numberOf(bound, clause, inputs, notice)
    if (number === null) return
    if (parameterRange(said.name).holds(number)) numbers.push(number)
    else notice(say.parameterOutside(clause, said.name, words?.[k] ?? "the parameter", number, bound.type === "cell" ? bound.at : said.at))
  })
  if (numbers.length !== said.parameters.length) return null
  return estimated.length === 0 ? { name: said.name, parameters: numbers } : { name: said.name, parameters: numbers, estimated }
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

/** The last fit as a start: only where it has the same coefficients. */
function nearFit(near: Value | null, problem: Problem): Fit | null {
  const last = modelIn(near)
  if (last === null) return null
  const shape = (of: Problem): string =>
    JSON.stringify([
      of.intercept,
      of.terms,
      Object.values(of.variables).map((variable) => (variable.type === "factor" ? variable.levels : null)),
    ])
  return shape(last.problem) === shape(problem) ? last.fit : null
}

const labelsOf = (table: TableHere, names: readonly Name[]): { readonly [name: Name]: Label } =>
  Object.fromEntries(names.map((name) => [name, labelOf(name, table.columns.get(name) as Column)]))
