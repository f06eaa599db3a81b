// The variance of quasi_likelihood: an expression in mu made into a program with its derivative, and the means for which it is above 0.

import type { Input } from "../../runtime/kind.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { derivative } from "../language/derivative.ts"
import { type Expression, namesIn, partsOf, printed } from "../language/expression.ts"
import { smoothFunctions, variableSymbol } from "../language/formula.ts"
import { programOf } from "../language/program.ts"
import { placesOf, run } from "../statistics/own-link.ts"
import type { Variance } from "../statistics/problem.ts"
import * as say from "./notices.ts"
import type { CallSaid } from "./words.ts"

/** The variance with numbers for its dials; null once a fault was said. */
export function varianceOf(said: CallSaid, inputs: ReadonlyMap<Name, Input>, notice: (notice: Notice) => void): Variance | null {
  const { expression, at } = said
  if (expression === undefined || expression === null) return null
  let fault = false
  const numbers = new Map<Name, number>()
  for (const { name, at: place } of namesIn(expression)) {
    if (name === variableSymbol) continue
    const value = inputs.get(name)?.value
    if (typeof value === "number" && Number.isFinite(value)) numbers.set(name, value)
    else {
      fault = true
      notice(say.notANumber(name, "family", place))
    }
  }
  if (fault) return null
  const formula = withNumbers(expression, numbers)
  const unfit = unfitIn(formula)
  const slope = unfit === null ? derivative(formula, variableSymbol) : null
  if (slope === null) {
    notice(say.varianceNotSmooth(unfit ?? printed(expression), at))
    return null
  }
  const program = programOf([formula, slope], variableSymbol, new Map())
  const places = new Float64Array(placesOf(program))
  const range = rangeOf((mu) => {
    run(program, mu, places, 0)
    return places[program.outputs[0] as number] as number
  })
  if (range === null) {
    notice(say.varianceNotPositive(printed(expression), at))
    return null
  }
  return { says: printed(formula), program, range }
}

/** Dials and values in the expression as the numbers they are. */
function withNumbers(expression: Expression, numbers: ReadonlyMap<Name, number>): Expression {
  const into = (part: Expression): Expression => withNumbers(part, numbers)
  switch (expression.type) {
    case "name": {
      const value = numbers.get(expression.name)
      if (value === undefined) return expression
      const size: Expression = { type: "number", value: Math.abs(value), text: `${Math.abs(value)}`, at: expression.at }
      return value < 0 ? { type: "minus", of: size, at: expression.at } : size
    }
    case "minus":
      return { ...expression, of: into(expression.of) }
    case "pair":
      return { ...expression, left: into(expression.left), right: into(expression.right) }
    case "call":
      return { ...expression, of: expression.of.map(into) }
    default:
      return expression
  }
}

/** A part that has no place in a variance, as it is written; null where there is none. */
function unfitIn(expression: Expression): string | null {
  const sound =
    expression.type === "number" ||
    expression.type === "name" ||
    expression.type === "minus" ||
    (expression.type === "pair" && ["+", "-", "*", "/", "^"].includes(expression.sign)) ||
    (expression.type === "call" && smoothFunctions.has(expression.name) && expression.of.length === 1)
  if (!sound) return printed(expression)
  for (const part of partsOf(expression)) {
    const unfit = unfitIn(part)
    if (unfit !== null) return unfit
  }
  return null
}

const sizes = Array.from({ length: 97 }, (_, k) => Number(`${[1, 1.8, 3.2, 5.6][k % 4]}e${Math.floor(k / 4) - 12}`))
const shares = [...sizes.filter((size) => size < 1), ...sizes.filter((size) => size < 0.5).map((size) => 1 - size)].filter(
  (share) => share > 0 && share < 1,
)

/** The widest of all numbers, those above 0 and shares on which the variance is above 0, at places from 1e-12 to 1e12. */
function rangeOf(V: (mu: number) => number): readonly [number, number] | null {
  const isPositive = (at: readonly number[]): boolean => at.every((mu) => V(mu) > 0 && V(mu) < Infinity)
  if (isPositive([0, 1, ...sizes, ...sizes.map((size) => -size)])) return [-Infinity, Infinity]
  if (isPositive([1, ...sizes])) return [0, Infinity]
  return isPositive(shares) ? [0, 1] : null
}
