// The plan of a plot: across, split, hold and from, read against the model. What is wrong with them is said as faults.

import type { Input } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { written } from "../figure/number.ts"
import type { Bound, Choice } from "../language/form.ts"
import { type ModelFinding, valuesTaken } from "../model-finding.ts"
import type { Variable } from "../statistics/problem.ts"
import type { ScalesFinding } from "./finding.ts"
import * as say from "./notices.ts"
import { ends, meanOf, type Setting, variablesOf } from "./setting.ts"
import type { Named, ScalesSaid } from "./words.ts"

export type Inputs = ReadonlyMap<Name, Input>

export type Plan = {
  readonly of: Setting
  readonly axis: ScalesFinding["across"]
  /** x of each row of the problem. */
  readonly x: Float64Array
  readonly range: readonly [number, number]
  /** The only x with a mean, where the axis is a number taken as a category; null where every x has one. */
  readonly places: Float64Array | null
  readonly data: readonly [number, number]
  readonly levels: readonly { readonly level: string; readonly code: number }[] | null
  readonly codes: Int32Array | null
  readonly heldValues: { readonly [name: Name]: number | string }
  readonly heldSays: string | null
  readonly points: boolean
  readonly averaged: boolean
}

/** Reads across, split, hold and from against the model; null once a fault was said. */
export function planOf(said: ScalesSaid, name: Name, model: ModelFinding, inputs: Inputs, fault: (notice: Notice) => null): Plan | null {
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
    const code = heldAt(column.name, variable, valuesTaken(model, column.name), value, at, inputs, fault)
    if (code !== null) held.set(column.name, code)
    stated.add(column.name)
  }
  if (across === null || (said.split !== null && splitBy === null)) return null
  for (const other of names) {
    const variable = variables[other] as Variable
    if (said.averaged || held.has(other) || other === acrossName || other === said.split?.name) continue
    held.set(other, variable.type === "number" ? (valuesTaken(model, other)?.[0] ?? meanOf(model, variable.values)) : 0)
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
  const [from, to] = range
  const places = valuesTaken(model, acrossName)?.filter((at) => at >= from && at <= to) ?? null
  if (places?.length === 0 && said.range !== null) return fault(say.emptyRange(from, to, said.range.at))

  const heldValues: Record<Name, number | string> = {}
  const parts: string[] = []
  for (const [column, at] of held) {
    const variable = variables[column] as Variable
    const value = variable.type === "number" ? at : (variable.levels[at] as string)
    heldValues[column] = value
    const { label: called, unit } = model.labels[column] ?? { label: column, unit: null }
    const mean = variable.type === "number" && !stated.has(column) && valuesTaken(model, column) === null ? " (its mean)" : ""
    parts.push(`${called} at ${typeof value === "number" ? rounded(value) : value}${unit === null ? "" : ` ${unit}`}${mean}`)
  }
  if (model.exposure !== null) parts.push(`a unit of ${model.exposure.label}`)
  if (said.averaged) parts.unshift("averaged over the rows used")
  return {
    of: { across: acrossName, split: said.split?.name ?? null, held, averaged: said.averaged },
    axis: { name: acrossName, ...label, levels: across.type === "factor" ? across.levels : null },
    x,
    range,
    places,
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
export const rounded = (value: number): string => written(Number(value.toPrecision(4)), Number.isInteger(value) ? 1 : 4)

/** What a stated value means for a column: the number, or the code of the level; null once a fault was said. */
function heldAt(
  name: Name,
  variable: Variable,
  taken: Float64Array | null,
  choice: Choice,
  at: Place,
  inputs: Inputs,
  fault: (notice: Notice) => null,
): number | null {
  let value: number | string | null = null
  if (choice.type === "text") value = choice.text
  else if (choice.type === "truth") value = String(choice.value)
  else if (choice.type === "number") value = choice.value
  else if (choice.type === "cell") {
    const given = inputs.get(choice.name)?.value
    if (typeof given === "number" || typeof given === "string") value = given
  }
  if (variable.type === "number") {
    if (typeof value === "number" && taken !== null && !taken.includes(value)) return fault(say.noSuchValue(name, value, taken, at))
    return typeof value === "number" && Number.isFinite(value) ? value : fault(say.heldWrongly(name, "a number", at))
  }
  if (value === null) return fault(say.heldWrongly(name, "a level", at))
  const code = variable.levels.indexOf(String(value))
  return code >= 0 ? code : fault(say.noSuchLevel(name, String(value), variable.levels, at))
}

/** The number a bound stands for; null once a fault was said, at the bound or, for a bare word, at the `whole` it stands in. */
export function numberOf(bound: Bound, whole: Place, clause: string, inputs: Inputs, fault: (notice: Notice) => null): number | null {
  if (bound.type === "number") return bound.value
  if (bound.type === "cell") {
    const value = inputs.get(bound.name)?.value
    return typeof value === "number" && Number.isFinite(value) ? value : fault(say.notANumber(bound.name, clause, bound.at))
  }
  return fault(say.notANumber(bound.type === "estimate" ? "estimate" : "infinity", clause, whole))
}
