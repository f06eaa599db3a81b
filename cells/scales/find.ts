// What `scales` finds: the model's own link at once from the fit that is there, then the other candidates, each fitted from its own cold
// start, as a late part. Links differ in nothing but the link: rows, response, weights and predictor stay.

import type { Input, Outcome, Work } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import type { ScalesCurve } from "../block.ts"
import { written } from "../figure/number.ts"
import type { Bound, Choice } from "../language/form.ts"
import { families, legalLinks, linkFormula, links } from "../language/vocabulary.ts"
import type { ModelFinding } from "../model-finding.ts"
import type { Fit } from "../statistics/fit.ts"
import { criticalValue, familyOf, fit, linkOf } from "../statistics/index.ts"
import type { LinkSpec, Variable } from "../statistics/problem.ts"
import { averagedLine, curveOf, heldLine, type Line } from "./curve.ts"
import type { CandidateFound, ScalesFinding } from "./finding.ts"
import * as say from "./notices.ts"
import { pointsOf } from "./points.ts"
import { gridOf, gridPoints, meanOf, type Setting, variablesOf } from "./setting.ts"
import { troubleOf } from "./trouble.ts"
import type { Named, ScalesSaid } from "./words.ts"

/** Averaging costs grid points × rows; this bounds their product, and the grid gives way first. */
const averagedWork = 20_000_000
const leastGrid = 25

type Inputs = ReadonlyMap<Name, Input>

export async function found(said: ScalesSaid, inputs: Inputs, work: Work): Promise<Outcome<ScalesFinding>> {
  const notices: Notice[] = []
  const fault = (notice: Notice): null => {
    notices.push(notice)
    return null
  }
  const model = said.model === null ? null : modelIn(inputs, said.model.name)
  if (said.model === null) return { ok: false, found: null, notices }
  if (model === null) return { ok: false, found: null, notices: [say.notAModel(said.model.name, said.model.at)] }
  const setting = settingOf(said, said.model.name, model, inputs, fault)
  const candidates = candidateLinks(said, model, inputs, fault)
  if (setting === null || candidates === null || notices.length > 0) return { ok: false, found: null, notices }

  const plot = new Plot(model, setting, work)
  const own = await plot.candidate(model.problem.link, model.link, true, model.fit)
  const others = candidates.filter(({ says }) => says !== model.link)
  const finding = (rest: readonly CandidateFound[], complete: boolean): ScalesFinding => ({
    model: (said.model as Named).name,
    family: model.problem.family.name,
    predictor: model.problem.terms.map(({ says }) => says).join(" + ") || "intercept",
    n: model.fit.n,
    across: setting.axis,
    response: { label: model.response.label, unit: model.response.unit },
    split: setting.levels === null ? null : { name: setting.of.split as Name, levels: setting.levels.map(({ level }) => level) },
    possible: [familyOf(model.problem.family).range.low, familyOf(model.problem.family).range.high],
    range: setting.range,
    data: setting.data,
    held: setting.heldValues,
    heldSays: setting.heldSays,
    averaged: said.averaged,
    aligned: said.aligned,
    confidence: model.problem.confidence,
    candidates: [own, ...rest],
    complete,
  })
  const left = leaving(own, setting.axis.label)
  if (left !== null) notices.push(say.leavesRange(own.link, left))
  const drawn = (of: CandidateFound): CandidateFound => (said.points ? of : { ...of, points: [] })
  const soFar: Outcome<ScalesFinding> = {
    ok: true,
    found: finding(
      others.map(({ spec, says }) => plot.unfitted(spec, says)),
      others.length === 0,
    ),
    notices,
  }
  if (others.length === 0 || !(await work.late(soFar))) return soFar
  const rest: CandidateFound[] = []
  for (const { spec, says } of others) {
    await work.checkpoint()
    const fitted = await fit({ ...model.problem, link: spec }, () => work.checkpoint())
    rest.push(
      fitted.ok ? drawn(await plot.candidate(spec, says, false, fitted.fit)) : { ...plot.unfitted(spec, says), trouble: troubleOf(fitted) },
    )
  }
  return { ok: true, found: { ...finding(rest, true) }, notices }
}

/** A model's finding among the inputs, null where the cell is of another kind. */
function modelIn(inputs: Inputs, name: Name): ModelFinding | null {
  const value = inputs.get(name)?.value
  const is = typeof value === "object" && value !== null && "fit" in value && "problem" in value
  return is ? (value as unknown as ModelFinding) : null
}

type Plan = {
  readonly of: Setting
  readonly axis: ScalesFinding["across"]
  /** x of each row of the problem. */
  readonly x: Float64Array
  readonly range: readonly [number, number]
  readonly data: readonly [number, number]
  readonly levels: readonly { readonly level: string; readonly code: number }[] | null
  readonly codes: Int32Array | null
  readonly heldValues: { readonly [name: Name]: number | string }
  readonly heldSays: string | null
  readonly points: boolean
  readonly averaged: boolean
}

/** Reads across, split, hold and from against the model; null once a fault was said. */
function settingOf(said: ScalesSaid, name: Name, model: ModelFinding, inputs: Inputs, fault: (notice: Notice) => null): Plan | null {
  const variables = variablesOf(model)
  const names = Object.keys(variables)
  const read = (clause: "across" | "split" | "hold", named: Named): Variable | null =>
    variables[named.name] ?? fault(say.notInPredictor(clause, named.name, name, names, nearest(named.name, names), named.at))
  const first = names[0]
  if (first === undefined) return fault(say.nothingAcross(name))
  const acrossName = said.across?.name ?? first
  const across = said.across === null ? (variables[first] as Variable) : read("across", said.across)
  const splitBy = said.split === null ? null : read("split", said.split)
  if (said.split !== null && splitBy?.type === "number") return fault(say.splitNumber(said.split.name, said.split.at))
  if (said.split !== null && said.split.name === acrossName) return fault(say.splitAcross(said.split.name, said.split.at))

  const held = new Map<Name, number>()
  const stated = new Set<Name>()
  for (const { column, value, at } of said.hold) {
    const variable = read("hold", column)
    if (variable === null) continue
    if (column.name === acrossName || column.name === said.split?.name) {
      fault(say.holdDrawn(column.name, column.at))
      continue
    }
    const code = heldAt(column.name, variable, value, at, inputs, fault)
    if (code !== null) held.set(column.name, code)
    stated.add(column.name)
  }
  if (across === null || (said.split !== null && splitBy === null)) return null
  for (const other of names) {
    const variable = variables[other] as Variable
    if (said.averaged || held.has(other) || other === acrossName || other === said.split?.name) continue
    held.set(other, variable.type === "number" ? meanOf(model, variable.values) : 0)
  }

  const label = model.labels[acrossName] ?? { label: acrossName, unit: null }
  const x = across.type === "number" ? across.values : Float64Array.from(across.codes)
  const data = ends(x)
  let range = data
  if (said.range !== null) {
    if (across.type === "factor") return fault(say.rangeOfLevels(acrossName, said.range.at))
    const [from, to] = [
      numberOf(said.range.from, said.range.at, "from", inputs, fault),
      numberOf(said.range.to, said.range.at, "from", inputs, fault),
    ]
    if (from === null || to === null) return null
    if (from >= to) return fault(say.emptyRange(from, to, said.range.at))
    range = [from, to]
  } else if (data[0] === data[1] && across.type === "number") range = [data[0] - 1, data[1] + 1]

  const heldValues: Record<Name, number | string> = {}
  const parts: string[] = []
  for (const [column, at] of held) {
    const variable = variables[column] as Variable
    const value = variable.type === "number" ? at : (variable.levels[at] as string)
    heldValues[column] = value
    const { label: called, unit } = model.labels[column] ?? { label: column, unit: null }
    const mean = variable.type === "number" && !stated.has(column) ? " (its mean)" : ""
    parts.push(`${called} at ${typeof value === "number" ? rounded(value) : value}${unit === null ? "" : ` ${unit}`}${mean}`)
  }
  if (model.exposure !== null) parts.push(`a unit of ${model.exposure.label}`)
  if (said.averaged) parts.unshift("averaged over the rows used")
  return {
    of: { across: acrossName, split: said.split?.name ?? null, held, averaged: said.averaged },
    axis: { name: acrossName, ...label, levels: across.type === "factor" ? across.levels : null },
    x,
    range,
    data,
    levels: splitBy?.type === "factor" ? splitBy.levels.map((level, code) => ({ level, code })) : null,
    codes: splitBy?.type === "factor" ? splitBy.codes : null,
    heldValues,
    heldSays: parts.length === 0 ? null : parts.join(", "),
    points: said.points,
    averaged: said.averaged,
  }
}

/** Four significant digits without needless zeros, for a sentence. */
const rounded = (value: number): string => written(Number(value.toPrecision(4)), Number.isInteger(value) ? 1 : 4)

/** What a stated value means for a column: the number, or the code of the level; null once a fault was said. */
function heldAt(name: Name, variable: Variable, choice: Choice, at: Place, inputs: Inputs, fault: (notice: Notice) => null): number | null {
  let value: number | string | null = null
  if (choice.type === "text") value = choice.text
  else if (choice.type === "truth") value = String(choice.value)
  else if (choice.type === "number") value = choice.value
  else if (choice.type === "cell") {
    const given = inputs.get(choice.name)?.value
    if (typeof given === "number" || typeof given === "string") value = given
  }
  if (variable.type === "number") {
    return typeof value === "number" && Number.isFinite(value) ? value : fault(say.heldWrongly(name, "a number", at))
  }
  if (value === null) return fault(say.heldWrongly(name, "a level", at))
  const code = variable.levels.indexOf(String(value))
  return code >= 0 ? code : fault(say.noSuchLevel(name, String(value), variable.levels, at))
}

/** The number a bound stands for; null once a fault was said, at the bound or, for a bare word, at the `whole` it stands in. */
function numberOf(bound: Bound, whole: Place, clause: string, inputs: Inputs, fault: (notice: Notice) => null): number | null {
  if (bound.type === "number") return bound.value
  if (bound.type === "cell") {
    const value = inputs.get(bound.name)?.value
    return typeof value === "number" && Number.isFinite(value) ? value : fault(say.notANumber(bound.name, clause, bound.at))
  }
  return fault(say.notANumber(bound.type === "estimate" ? "estimate" : "infinity", clause, whole))
}

/** The candidates on the strip: those stated, else the named links legal for the family; null once a fault was said. */
function candidateLinks(
  said: ScalesSaid,
  model: ModelFinding,
  inputs: Inputs,
  fault: (notice: Notice) => null,
): readonly { readonly spec: LinkSpec; readonly says: string }[] | null {
  const family = model.problem.family.name
  const legal = legalLinks(family)
  if (said.beside === null) {
    // Links made for the family's own means first: on a share, those that reach every share and nothing else.
    const made = (name: string): number => (links[name]?.mean === families[family]?.mean ? 0 : 1)
    return legal
      .toSorted((a, b) => made(a) - made(b))
      .filter((name) => links[name]?.parameters.length === 0 && links[name]?.later !== true)
      .map((name) => ({ spec: { name, parameters: [] }, says: name }))
  }
  const made: { spec: LinkSpec; says: string }[] = []
  for (const { call, at } of said.beside) {
    const known = links[call.name]
    if (known === undefined) fault(say.noSuchLink(call.name, nearest(call.name, Object.keys(links)), at))
    else if (known.later) fault(say.linkNotYet(call.name, at))
    else if (!legal.includes(call.name)) fault(say.linkNotLegal(call.name, families[family]?.name ?? family, legal, at))
    else if ((call.bounds?.length ?? 0) !== known.parameters.length) fault(say.linkParameters(call.name, known.parameters.length, at))
    else {
      const parameters: number[] = []
      for (const bound of call.bounds ?? []) {
        const number = numberOf(bound, at, "beside", inputs, fault)
        if (number !== null) parameters.push(number)
      }
      const says = parameters.length === 0 ? call.name : `${call.name}(${parameters.join(", ")})`
      if (!made.some((other) => other.says === says)) made.push({ spec: { name: call.name, parameters }, says })
    }
  }
  return made
}

function ends(values: Float64Array): readonly [number, number] {
  let [low, high] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]
  for (const value of values) {
    if (value < low) low = value
    if (value > high) high = value
  }
  return [low, high]
}

/** Where the own curve is cut, in words; null where it is not. */
function leaving(own: CandidateFound, label: string): string | null {
  for (const { x, mu } of own.curves) {
    const gap = mu.findIndex(Number.isNaN)
    if (gap < 0) continue
    return gap > 0
      ? `above ${label} ${rounded(x[gap - 1] as number)}`
      : `below ${label} ${rounded(x[mu.findLastIndex(Number.isNaN) + 1] ?? (x[gap] as number))}`
  }
  return null
}

/** One plot: everything the candidates share, made once. */
class Plot {
  readonly model: ModelFinding
  readonly plan: Plan
  readonly work: Work
  readonly grid: Float64Array
  readonly lines: readonly {
    readonly level: string | null
    readonly code: number | null
    readonly rows: Uint32Array
    readonly inside: Uint8Array
  }[]

  constructor(model: ModelFinding, plan: Plan, work: Work) {
    this.model = model
    this.plan = plan
    this.work = work
    const points = plan.averaged ? Math.max(leastGrid, Math.min(gridPoints, Math.floor(averagedWork / model.problem.rows))) : gridPoints
    this.grid = plan.axis.levels === null ? gridOf(plan.range[0], plan.range[1], points) : Float64Array.from(plan.axis.levels, (_, i) => i)
    const all = Uint32Array.from({ length: model.problem.rows }, (_, i) => i)
    const levels = plan.levels ?? [{ level: null, code: null }]
    this.lines = levels.map(({ level, code }) => {
      const rows = code === null ? all : all.filter((row) => plan.codes?.[row] === code)
      const [low, high] = ends(Float64Array.from(rows, (row) => plan.x[row] as number))
      return { level, code, rows, inside: Uint8Array.from(this.grid, (at) => (at >= low && at <= high ? 1 : 0)) }
    })
  }

  async candidate(spec: LinkSpec, says: string, own: boolean, of: Fit): Promise<CandidateFound> {
    const { model, plan, grid, work } = this
    const link = linkOf(spec)
    const c = criticalValue(of, model.problem.confidence)
    const curves: ScalesCurve[] = []
    const points: CandidateFound["points"][number][] = []
    for (const { level, code, rows, inside } of this.lines) {
      await work.checkpoint()
      const line: Line = plan.averaged
        ? await averagedLine(model, of, link, plan.of, grid, code, () => work.checkpoint())
        : heldLine(model, of, plan.of, grid, code)
      curves.push(curveOf(spec, familyOf(model.problem.family).range, line, c, grid, level, inside))
      if (!plan.points || rows.length === 0) continue
      const at = (x: Float64Array): Float64Array => (plan.averaged ? along(grid, line.eta, x) : heldLine(model, of, plan.of, x, code).eta)
      points.push(pointsOf(model, of, spec, rows, plan.x, at, level, plan.axis.levels !== null))
    }
    const mean = overallMean(model)
    return {
      link: says,
      formula: linkFormula(says),
      own,
      aic: of.aic,
      deviance: of.deviance,
      df: of.df,
      trouble: troubleOf({ ok: true, fit: of }),
      fitted: true,
      curves,
      points,
      bridge: this.bridge(spec, curves, points),
      middle: { eta: link.eta(mean), slope: 1 / link.slope(link.eta(mean)) },
    }
  }

  /** A candidate that is on the strip and has no fit. */
  unfitted(spec: LinkSpec, says: string): CandidateFound {
    return {
      link: says,
      formula: linkFormula(says),
      own: false,
      aic: null,
      deviance: null,
      df: null,
      trouble: null,
      fitted: false,
      curves: [],
      points: [],
      bridge: this.bridge(spec, [], []),
      middle: { eta: Number.NaN, slope: Number.NaN },
    }
  }

  /** Pairs (μ, g(μ)) over the means on the plot: for a share over (0, 1), denser at the ends; else over what curves and points span. */
  private bridge(spec: LinkSpec, curves: readonly ScalesCurve[], points: CandidateFound["points"]): CandidateFound["bridge"] {
    const link = linkOf(spec)
    const range = familyOf(this.model.problem.family).range
    const steps = 96
    const mu = new Float64Array(steps)
    if (range.low === 0 && range.high === 1) {
      // Smoothstep of equal steps: close together at both ends, where links differ.
      for (let i = 0; i < steps; i++) {
        const t = (i + 1) / (steps + 1)
        mu[i] = t * t * (3 - 2 * t)
      }
    } else {
      const seen = ends(this.model.problem.y)
      const span = [
        ...curves.flatMap(({ mu: of }) => finite(of)),
        ...points.flatMap(({ mean }) => finite(mean)),
        ...(curves.length === 0 ? seen : []),
      ]
      const [low, high] = ends(Float64Array.from(span))
      const least = Math.max(low, range.low === 0 ? high / 500 : low)
      for (let i = 0; i < steps; i++) mu[i] = least + ((high - least) * i) / (steps - 1)
    }
    const kept = mu.filter((at) => at > link.range.low && at < link.range.high)
    return { mu: kept, eta: kept.map((at) => link.eta(at)) }
  }
}

const finite = (values: Float64Array): readonly number[] => {
  const [low, high] = ends(values.filter((value) => !Number.isNaN(value)))
  return low <= high ? [low, high] : []
}

/** Linear interpolation of `y` over the rising grid `x`, at other places; the ends go on flat. */
function along(x: Float64Array, y: Float64Array, at: Float64Array): Float64Array {
  return at.map((place) => {
    let [low, high] = [0, x.length - 1]
    while (high - low > 1) {
      const middle = (low + high) >> 1
      if ((x[middle] as number) <= place) low = middle
      else high = middle
    }
    const [from, to] = [x[low] as number, x[high] as number]
    const share = to > from ? Math.min(1, Math.max(0, (place - from) / (to - from))) : 0
    return (y[low] as number) + share * ((y[high] as number) - (y[low] as number))
  })
}

/** μ₀ = Σaμ̂/Σa under the model's own link, per unit of exposure in the families with positive means. */
function overallMean(model: ModelFinding): number {
  const { trials, repeat, precision, exposure, family } = model.problem
  const units = family.name === "binomial" ? null : exposure
  let [sum, total] = [0, 0]
  for (let i = 0; i < model.fit.mu.length; i++) {
    const a = (repeat?.[i] ?? 1) * (precision?.[i] ?? 1) * (trials?.[i] ?? 1)
    sum += a * (model.fit.mu[i] as number)
    total += a * (units?.[i] ?? 1)
  }
  return sum / total
}
