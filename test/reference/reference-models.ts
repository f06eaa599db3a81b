// Reference models read from the JSON beside this file: columns given as nested expressions become numeric variables, and every model in
// families and links of the program becomes a problem for it.

import { readFileSync } from "node:fs"
import type { LinkSpec, Problem, Term, Variable } from "../../cells/statistics/problem.ts"

export type Expression = readonly [string, ...(string | Expression)[]]

export type ReferenceFit = {
  readonly n: number
  readonly p: number
  readonly df_residual: number
  readonly coefficients: readonly string[]
  readonly se_expected: readonly string[]
  readonly se_observed: readonly string[]
  readonly covariance_expected: readonly (readonly string[])[]
  readonly deviance: string
  readonly pearson_chi2: string
  readonly dispersion_used: string
  readonly dispersion_pearson: string | null
  readonly dispersion_deviance: string | null
  readonly dispersion_ml?: string
  readonly loglik: string
  readonly parameters_counted: number
  readonly aic: string
  readonly null_deviance: string
  readonly link_test: { readonly score_chi2: string; readonly one_step_coefficient: string } | null
  readonly eta?: readonly string[]
  readonly fitted?: readonly string[]
}

export type ReferenceModel = {
  readonly id: string
  readonly family: { readonly name: string; readonly k?: string; readonly p?: string }
  readonly link: { readonly name: string; readonly lambda?: string }
  readonly response: string
  readonly trials?: string
  readonly weights?: string
  readonly offset?: Expression
  readonly dispersion?: string
  readonly response_scale?: string
  readonly columns: readonly { readonly name: string; readonly expr: Expression }[]
  readonly published?: Readonly<Record<string, unknown>>
  readonly reference: ReferenceFit
}

export type ReferenceSet = {
  readonly id: string
  readonly title?: string
  readonly source?: string
  readonly n: number
  readonly data: Readonly<Record<string, readonly string[]>>
  readonly certified?: {
    readonly parameters: readonly string[]
    readonly standard_deviations: readonly string[]
    readonly residual_ss: string
    readonly residual_df: number
  }
  readonly models: readonly ReferenceModel[]
}

export const referenceSets = (file: string): readonly ReferenceSet[] =>
  (JSON.parse(readFileSync(new URL(file, import.meta.url), "utf8")) as { readonly datasets: readonly ReferenceSet[] }).datasets

const families: Readonly<Record<string, string>> = {
  gaussian: "normal",
  binomial: "binomial",
  poisson: "poisson",
  gamma: "gamma",
  "inverse-gaussian": "inverse_gaussian",
  "negative-binomial": "negative_binomial",
  tweedie: "tweedie",
}
const links: Readonly<Record<string, string>> = {
  identity: "identity",
  log: "log",
  inverse: "reciprocal",
  "inverse-square": "reciprocal_square",
  "log-complement": "log_complement",
  "aranda-ordaz": "aranda_ordaz",
  sqrt: "square_root",
  power: "power",
  logit: "logit",
  probit: "probit",
  cauchit: "cauchit",
  cloglog: "cloglog",
  loglog: "loglog",
}

/** The problem a reference model states; null where its family or link is not (yet) one of the program's. Rows of no weight are not used. */
export function problemOf(whole: ReferenceSet, model: ReferenceModel): Problem | null {
  const used = (whole.data[model.response] ?? []).map((_, i) => model.weights === undefined || Number(whole.data[model.weights]?.[i]) > 0)
  const data = Object.fromEntries(Object.entries(whole.data).map(([name, values]) => [name, values.filter((_, i) => used[i])]))
  const set: ReferenceSet = { ...whole, data }
  const family = families[model.family.name]
  const name = links[model.link.name]
  if (family === undefined || name === undefined) return null
  const link: LinkSpec = { name, parameters: model.link.lambda === undefined ? [] : [Number(model.link.lambda)] }
  const { k, p } = model.family
  // With k by maximum likelihood the search starts anywhere.
  const parameter = k === "ml" ? 1 : (k ?? p)
  const rows = set.data[model.response]?.length ?? 0
  const column = (of: string): Float64Array => Float64Array.from(set.data[of] ?? [], Number)
  const trials = model.trials === undefined ? (family === "binomial" ? new Float64Array(rows).fill(1) : null) : column(model.trials)
  const scale = model.response_scale === undefined ? 1 : Number(model.response_scale)
  const response = column(model.response)
  const y = response.map((value, i) => (model.trials === undefined || !trials ? value / scale : value / (trials[i] as number)))
  const variables: Record<string, Variable> = {}
  const terms: Term[] = []
  let intercept = false
  for (const { name: says, expr } of model.columns) {
    if (expr[0] === "num" && expr[1] === "1" && says === "(intercept)") {
      intercept = true
      continue
    }
    const pieces = numericPieces(expr)
    if (pieces !== null) {
      for (const { variable } of pieces) variables[variable] = { type: "number", values: column(variable) }
      terms.push({ says, pieces })
      continue
    }
    const values = Float64Array.from({ length: rows }, (_, i) => expressionValue(expr, set.data, i))
    variables[says] = { type: "number", values }
    terms.push({ says, pieces: [{ variable: says, as: "itself", setting: null }] })
  }
  return {
    family: {
      name: family,
      parameters: parameter === undefined ? [] : [Number(parameter)],
      ...(k === "ml" ? { estimated: [0] } : {}),
    },
    link,
    intercept,
    terms,
    variables,
    rows,
    y,
    trials,
    repeat: null,
    precision: model.weights === undefined ? null : column(model.weights),
    offset:
      model.offset === undefined
        ? null
        : Float64Array.from({ length: rows }, (_, i) => expressionValue(model.offset as Expression, set.data, i)),
    exposure: null,
    cluster: null,
    dispersion:
      model.dispersion !== undefined
        ? Number(model.dispersion)
        : ["binomial", "poisson", "negative_binomial"].includes(family)
          ? "one"
          : "pearson",
    standardErrors: "expected",
    confidence: 0.95,
  }
}

/** Whole powers of columns and products of them as a predictor says them, since these have more digits than a double; null for all else. */
function numericPieces(expression: Expression): Term["pieces"] | null {
  const [what, left, right] = expression
  if (what === "var") return [{ variable: left as string, as: "itself", setting: null }]
  if (what === "pow" && left?.[0] === "var" && right?.[0] === "num" && Number.isInteger(Number(right[1])))
    return [{ variable: left[1] as string, as: "power", setting: Number(right[1]) }]
  if (what !== "mul") return null
  const factors = [numericPieces(left as Expression), numericPieces(right as Expression)]
  return factors.every((pieces) => pieces !== null) ? factors.flat() : null
}

/** The value of a nested expression in one row. */
function expressionValue(expression: Expression, data: ReferenceSet["data"], row: number): number {
  const [what, ...args] = expression
  const text = (k: number): string => args[k] as string
  const value = (k: number): number => expressionValue(args[k] as Expression, data, row)
  switch (what) {
    case "num":
      return Number(text(0))
    case "var":
      return Number(data[text(0)]?.[row])
    case "is":
      return data[text(0)]?.[row] === text(1) ? 1 : 0
    case "log":
      return Math.log(value(0))
    case "log10":
      return Math.log10(value(0))
    case "log2":
      return Math.log2(value(0))
    case "exp":
      return Math.exp(value(0))
    case "sqrt":
      return Math.sqrt(value(0))
    case "neg":
      return -value(0)
    case "cos":
      return Math.cos(value(0))
    case "sin":
      return Math.sin(value(0))
    case "add":
      return value(0) + value(1)
    case "sub":
      return value(0) - value(1)
    case "mul":
      return value(0) * value(1)
    case "div":
      return value(0) / value(1)
    case "pow":
      return value(0) ** value(1)
    default:
      throw new RangeError(`no expression ${what}`)
  }
}
