// Numbers of a model inside an expression: coefficient, mean_at, deviance, aic. Each call is replaced by the number it stands for, so that
// the evaluator of expressions knows nothing of models. Used by the kinds whose expressions may read a model: value and note.

import type { Input } from "../runtime/kind.ts"
import { nearest } from "../runtime/nearest.ts"
import type { Name } from "../runtime/value.ts"
import { written } from "./figure/number.ts"
import { evaluated } from "./language/evaluate.ts"
import { type Expression, printed, type Scalar, type Trouble } from "./language/expression.ts"
import { modelFunctions } from "./language/functions.ts"
import { listed } from "./language/notices.ts"
import { type ModelFinding, modelIn, valuesTaken } from "./model-finding.ts"
import { linkOf, predicted } from "./statistics/index.ts"
import type { Variable } from "./statistics/problem.ts"

type Call = Expression & { readonly type: "call" }

/** A value that other cells made, as an expression sees it; null for a finding that is no single value. */
export function scalarOf(input: Input | undefined): Scalar | null {
  const value = input?.value
  if (typeof value === "number") return { type: "number", value }
  if (typeof value === "boolean") return { type: "truth", value: value ? 1 : 0 }
  return typeof value === "string" ? { type: "text", text: value } : null
}

/**
 * The value of an expression over single values and models. `held` says in words what `mean_at` held that nobody said, `doubts` what can
 * hardly be meant.
 */
export function worthOf(
  expression: Expression,
  inputs: ReadonlyMap<Name, Input>,
):
  | { readonly ok: true; readonly value: Scalar; readonly held: readonly Trouble[]; readonly doubts: readonly Trouble[] }
  | { readonly ok: false; readonly troubles: readonly Trouble[] } {
  const reading = new ModelReading(inputs)
  const numbers = reading.replaced(expression)
  if (numbers === null || reading.troubles.length > 0) return { ok: false, troubles: reading.troubles }
  const found = evaluated(numbers, 1, (name) => scalarOf(inputs.get(name)), inputs.keys())
  if (!found.ok) return { ok: false, troubles: found.troubles }
  const { vector, doubts } = found
  const { held } = reading
  if (!("values" in vector) && !("codes" in vector)) return { ok: true, value: vector, held, doubts }
  // Only single values go in, but a category by cut points comes out a row long.
  if ("codes" in vector) return { ok: true, value: levelAt(vector.codes, vector.levels), held, doubts }
  return { ok: true, value: { type: vector.type, value: vector.values[0] ?? Number.NaN }, held, doubts }
}

const levelAt = (codes: Int32Array, levels: readonly string[]): Scalar => {
  const level = levels[codes[0] ?? -1]
  return level === undefined ? { type: "missing" } : { type: "text", text: level }
}

class ModelReading {
  readonly troubles: Trouble[] = []
  readonly held: Trouble[] = []
  private readonly inputs: ReadonlyMap<Name, Input>

  constructor(inputs: ReadonlyMap<Name, Input>) {
    this.inputs = inputs
  }

  /** The expression with a number for each call on a model; null once a trouble was said. */
  replaced(expression: Expression): Expression | null {
    switch (expression.type) {
      case "minus":
      case "not": {
        const of = this.replaced(expression.of)
        return of === null ? null : { ...expression, of }
      }
      case "pair": {
        const left = this.replaced(expression.left)
        const right = this.replaced(expression.right)
        return left === null || right === null ? null : { ...expression, left, right }
      }
      case "in": {
        const of = this.replaced(expression.of)
        const list = this.all(expression.list)
        return of === null || list === null ? null : { ...expression, of, list }
      }
      case "call": {
        if (modelFunctions.has(expression.name)) return this.number(expression)
        const of = this.all(expression.of)
        return of === null ? null : { ...expression, of }
      }
      case "name":
        return this.single(expression)
      default:
        return expression
    }
  }

  private all(expressions: readonly Expression[]): readonly Expression[] | null {
    const found = expressions.map((each) => this.replaced(each))
    return found.every((each) => each !== null) ? found : null
  }

  /** A bare name has to be a single value: a model or a table is read by more than its name. */
  private single(expression: Expression & { readonly type: "name" }): Expression | null {
    const input = this.inputs.get(expression.name)
    if (input === undefined || scalarOf(input) !== null) return expression
    const isModel = modelIn(input.value) !== null
    return this.trouble(
      expression,
      "value/not-a-number",
      `${expression.name} is ${isModel ? "a model" : "no single value"}, so it cannot stand in a sum by itself.`,
      isModel
        ? `Its numbers are read by coefficient(${expression.name}, "term"), mean_at(${expression.name}, C = v), deviance(${expression.name}) and aic(${expression.name}).`
        : "A dial, another value or a number of a model can stand here.",
    )
  }

  private number(expression: Call): Expression | null {
    const [first, ...more] = expression.of
    const input = first?.type === "name" ? this.inputs.get(first.name) : undefined
    const model = modelIn(input?.value)
    if (first === undefined || first.type !== "name" || model === null)
      return this.trouble(
        first ?? expression,
        "value/no-model",
        first?.type === "name" ? `${first.name} is no model.` : `The first argument of ${expression.name} has to name a model.`,
        `It is written ${modelFunctions.get(expression.name)?.form ?? expression.name}, with the name of a model cell for M.`,
      )
    switch (expression.name) {
      case "coefficient":
        return this.coefficient(expression, first.name, model, more[0])
      case "mean_at":
        return this.meanAt(expression, first.name, model, more)
      case "deviance":
        return this.criterion(expression, first.name, "deviance", model.fit.deviance)
      default:
        return this.criterion(expression, first.name, "AIC", model.fit.aic)
    }
  }

  private criterion(at: Expression, name: Name, what: string, value: number | null): Expression | null {
    if (value !== null) return numberAt(at, value)
    return this.trouble(
      at,
      "value/not-available",
      `The model ${name} has no ${what}.`,
      "What is missing and why is said in the finding of the model.",
    )
  }

  private coefficient(at: Call, name: Name, model: ModelFinding, term: Expression | undefined): Expression | null {
    if (term?.type !== "text")
      return this.trouble(
        term ?? at,
        "value/term",
        "The term of a coefficient is a text in double quotes.",
        `It is written coefficient(${name}, "term").`,
      )
    const terms = model.fit.coefficients.map(({ of }) => of)
    const found = model.fit.coefficients.find(({ of }) => of === term.text)
    if (found === undefined) {
      const near = nearest(term.text, terms)
      return this.trouble(
        term,
        "value/unknown-term",
        `The model ${name} has no coefficient called "${term.text}".`,
        near === null
          ? `Its coefficients are ${listed(
              terms.slice(0, 12).map((each) => `"${each}"`),
              "and",
            )}.`
          : `The nearest is "${near}".`,
      )
    }
    if (found.beta !== null) return numberAt(at, found.beta)
    return this.trouble(
      term,
      "value/no-coefficient",
      found.toward === null
        ? `The coefficient "${term.text}" of ${name} cannot be told from the others.`
        : `The coefficient "${term.text}" of ${name} runs to ${found.toward === "infinity" ? "∞" : "−∞"}.`,
      "It has no number that a value could take on.",
    )
  }

  private meanAt(at: Call, name: Name, model: ModelFinding, arguments_: readonly Expression[]): Expression | null {
    const variables: Record<Name, Variable> = { ...(model.offset?.variables ?? {}), ...model.problem.variables }
    const made: Record<Name, Variable> = {}
    for (const each of arguments_) {
      if (each.type !== "pair" || each.sign !== "=" || each.left.type !== "name")
        return this.trouble(
          each,
          "value/held",
          `${printed(each)} does not say what is held.`,
          `It is written mean_at(${name}, C = v): a column, = and its value.`,
        )
      const column = each.left.name
      const like = Object.hasOwn(variables, column) ? variables[column] : undefined
      if (like === undefined) {
        const near = nearest(column, Object.keys(variables))
        return this.trouble(
          each.left,
          "value/not-in-predictor",
          `${column} is no column of the predictor of ${name}.`,
          near === null ? `Its columns are ${listed(Object.keys(variables), "and")}.` : `The nearest is ${near}.`,
        )
      }
      if (made[column] !== undefined)
        return this.trouble(each.left, "value/held-twice", `${column} is held twice.`, "Each column has one value here.")
      const right = this.replaced(each.right)
      if (right === null) return null
      const variable = this.heldAt(column, like, valuesTaken(model, column), right)
      if (variable === null) return null
      made[column] = variable
    }
    const defaults: string[] = []
    for (const [column, like] of Object.entries(variables)) {
      if (made[column] !== undefined) continue
      const [variable, says] = heldByDefault(column, like, model)
      made[column] = variable
      defaults.push(says)
    }
    if (defaults.length > 0)
      this.held.push({
        at: at.at,
        code: "value/held-by-default",
        text: `In ${printed(at)}, ${listed(defaults, "and")} ${defaults.length === 1 ? "is" : "are"} held there because nothing else is said.`,
        hint: `Another value is written mean_at(${name}, C = v).`,
      })
    const mean = meanOf(model, made)
    if (Number.isFinite(mean)) return numberAt(at, mean)
    return this.trouble(
      at,
      "value/no-mean",
      `The model ${name} gives no possible mean there.`,
      "The linear predictor lies outside what the link can take back to a mean.",
    )
  }

  /** A column that is one value: of a number, or a level of a category. */
  private heldAt(column: Name, like: Variable, taken: Float64Array | null, expression: Expression): Variable | null {
    const found = evaluated(expression, 1, (each) => scalarOf(this.inputs.get(each)), this.inputs.keys())
    if (!found.ok) {
      this.troubles.push(...found.troubles)
      return null
    }
    const scalar = found.vector
    if (like.type === "number") {
      if ("value" in scalar && scalar.type === "number" && taken !== null && !taken.includes(scalar.value)) {
        const there = Array.from(taken.subarray(0, 12), String)
        return this.trouble(
          expression,
          "value/unknown-level",
          `${column} is taken as a category, and none of the rows used has ${column} ${printed(expression)}.`,
          `They have ${taken.length > 12 ? `${there.join(", ")} and more` : listed(there, "and")}.`,
        )
      }
      if ("value" in scalar && scalar.type === "number" && Number.isFinite(scalar.value))
        return { type: "number", values: Float64Array.of(scalar.value) }
      return this.trouble(
        expression,
        "value/held",
        `${column} is a number, but ${printed(expression)} is not.`,
        "A number, a dial or another value can stand here.",
      )
    }
    const level =
      scalar.type === "text"
        ? scalar.text
        : scalar.type === "truth" && "value" in scalar
          ? scalar.value === 1
            ? "true"
            : "false"
          : "value" in scalar
            ? `${scalar.value}`
            : ""
    const code = like.levels.indexOf(level)
    if (code >= 0) return { ...like, codes: Int32Array.of(code) }
    const near = nearest(level, like.levels)
    return this.trouble(
      expression,
      "value/unknown-level",
      `${column} has no level ${printed(expression)}.`,
      near === null
        ? `Its levels are ${listed(
            like.levels.slice(0, 12).map((each) => `"${each}"`),
            "and",
          )}.`
        : `The nearest is "${near}".`,
    )
  }

  private trouble(expression: Expression, code: string, text: string, hint: string): null {
    this.troubles.push({ at: expression.at, code, text, hint })
    return null
  }
}

const numberAt = (like: Expression, value: number): Expression => ({ type: "number", value, text: `${value}`, at: like.at })

/** A number at its mean over the rows used, weighted by R·m; a category at its first level. */
function heldByDefault(column: Name, like: Variable, model: ModelFinding): readonly [Variable, string] {
  if (like.type === "factor") return [{ ...like, codes: Int32Array.of(0) }, `${column} at ${like.levels[0] ?? ""}`]
  const least = valuesTaken(model, column)?.[0]
  if (least !== undefined) return [{ type: "number", values: Float64Array.of(least) }, `${column} at ${least}`]
  const { repeat, trials } = model.problem
  let [sum, total] = [0, 0]
  for (let i = 0; i < like.values.length; i++) {
    const weight = (repeat?.[i] ?? 1) * (trials?.[i] ?? 1)
    sum += weight * (like.values[i] as number)
    total += weight
  }
  return [{ type: "number", values: Float64Array.of(sum / total) }, `${column} at its mean ${written(sum / total, 4)}`]
}

/** The fitted mean at one row: offset included, exposure 1. NaN where the link takes η back to no mean. */
function meanOf(model: ModelFinding, variables: Readonly<Record<Name, Variable>>): number {
  const { fit, problem, offset } = model
  const { eta } = predicted(fit, variables, 1)
  // Means of a normal response may all be negative; the reciprocal has a branch for them.
  const link = linkOf(problem.link, problem.link.name === "reciprocal" && (fit.mu[0] ?? 1) < 0 ? -1 : 1)
  const at = (eta[0] ?? Number.NaN) + (offset === null ? 0 : offsetAt(offset, variables))
  return at > link.reach.low && at < link.reach.high ? link.mean(at) : Number.NaN
}

function offsetAt(offset: NonNullable<ModelFinding["offset"]>, variables: Readonly<Record<Name, Variable>>): number {
  const found = evaluated(offset.expression, 1, (name) => {
    const variable = variables[name]
    if (variable?.type === "number") return { type: "number", values: variable.values }
    if (variable?.type === "factor") return { type: "category", codes: variable.codes, levels: variable.levels }
    const number = offset.numbers[name]
    return number === undefined ? null : { type: "number", value: number }
  })
  if (!found.ok) return Number.NaN
  if ("values" in found.vector) return found.vector.values[0] ?? Number.NaN
  return "value" in found.vector ? found.vector.value : Number.NaN
}
