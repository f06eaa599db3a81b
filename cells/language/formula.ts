// A formula of one variable as a list of steps: each part of the expression once, what it is made of before it. The list is what is bounded over
// intervals (bounds.ts) and what is made into a program (program.ts). Steps that are rational functions carry themselves exactly, and
// an angle that is a multiple of pi is known as one, so that nothing hangs on the last digit of pi.

import type { Name } from "../../runtime/value.ts"
import type { Operation } from "../statistics/own-link.ts"
import * as exact from "./exact.ts"
import type { Expression } from "./expression.ts"

export type Step = {
  readonly operation: Operation
  /** Numbers of the steps it is made of; −1 where there is none. */
  readonly a: number
  readonly b: number
  /** The double it is computed with, for a constant. */
  readonly value: number
  /** Itself, where it is a rational function of the variable and of symbols. */
  readonly fraction: exact.Fraction | null
  /** True where the variable does not occur in it. */
  readonly free: boolean
  /** True where it is one number, whatever it is made of: `free`, or a fraction from which the variable falls out. */
  readonly still: boolean
  /** For sin, cos and tan: the step that is the angle over pi; −1 where the angle is not said as a multiple of pi. */
  readonly turns: number
}

/** A constant of the formula: a number, exactly; or a symbol for one that lies between two ends. */
export type Given = { readonly fraction: exact.Fraction; readonly value: number }

/** The name of the symbol that stands for the variable. */
export const variableSymbol = "mu"

/** What may stand in a formula beside signs: functions that have a derivative wherever they are defined. */
export const smoothFunctions: ReadonlySet<string> = new Set([
  "asin",
  "atan",
  "cos",
  "exp",
  "expm1",
  "log",
  "log10",
  "log1p",
  "sin",
  "square_root",
  "tan",
  "tanh",
  "normal_cdf",
  "normal_quantile",
  "logit",
  "inverse_logit",
])

const signs: Readonly<Partial<Record<string, Operation>>> = { "+": "plus", "-": "less", "*": "times", "/": "over", "^": "power" }

/** A list of steps that grows: adding an expression gives the number of its step. */
export class Formula {
  readonly steps: Step[] = []
  private readonly givens: ReadonlyMap<Name, Given>
  private readonly variable: Name
  private readonly known = new Map<string, number>()

  constructor(variable: Name, givens: ReadonlyMap<Name, Given>) {
    this.variable = variable
    this.givens = givens
  }

  /** @throws RangeError for what has no place in a formula: that is found out before */
  add(expression: Expression): number {
    switch (expression.type) {
      case "number": {
        if (expression.text === "pi") return this.constant(Math.PI, exact.symbol("pi"))
        return this.constant(expression.value, exact.decimal(expression.text) ?? exact.double(expression.value))
      }
      case "name": {
        if (expression.name === this.variable)
          return this.step({ operation: "variable", a: -1, b: -1, value: Number.NaN, fraction: exact.symbol(variableSymbol), free: false })
        const given = this.givens.get(expression.name)
        if (given !== undefined) return this.constant(given.value, given.fraction)
        break
      }
      case "minus":
        return this.of("minus", this.add(expression.of))
      case "pair": {
        const operation = signs[expression.sign]
        if (operation === undefined) break
        const left = this.add(expression.left)
        return this.of(operation, left, this.add(expression.right))
      }
      case "call": {
        const [first] = expression.of
        if (!smoothFunctions.has(expression.name) || first === undefined) break
        const a = this.add(first)
        const isWave = expression.name === "sin" || expression.name === "cos" || expression.name === "tan"
        return this.of(expression.name as Operation, a, -1, isWave ? this.turnsOf(a) : -1)
      }
    }
    throw new RangeError(`A formula cannot hold ${expression.type}.`)
  }

  private constant(value: number, fraction: exact.Fraction | null): number {
    return this.step({ operation: "constant", a: -1, b: -1, value, fraction, free: true })
  }

  private of(operation: Operation, a: number, b = -1, turns = -1): number {
    const left = this.steps[a] as Step
    const right = b < 0 ? null : (this.steps[b] as Step)
    return this.step(
      { operation, a, b, value: Number.NaN, fraction: fractionOf(operation, left, right), free: left.free && (right?.free ?? true) },
      turns,
    )
  }

  private step(step: Omit<Step, "turns" | "still">, turns = -1): number {
    const { operation, a, b, value, fraction, free } = step
    const key = operation === "constant" ? `constant ${value} ${fraction === null ? "" : exact.named(fraction)}` : `${operation} ${a} ${b}`
    const known = this.known.get(key)
    if (known !== undefined) return known
    const still = free || (fraction !== null && exact.isFreeOf(fraction, variableSymbol))
    this.steps.push({ ...step, turns, still })
    this.known.set(key, this.steps.length - 1)
    return this.steps.length - 1
  }

  /** The angle over pi, where pi is a factor of it: pi·t, t·pi, sums of such, and quotients by what is free of pi. */
  private turnsOf(at: number): number {
    const { operation, a, b, fraction } = this.steps[at] as Step
    switch (operation) {
      case "constant":
        return fraction !== null && exact.areEqual(fraction, exact.symbol("pi")) ? this.constant(1, exact.one) : -1
      case "minus": {
        const of = this.turnsOf(a)
        return of < 0 ? -1 : this.of("minus", of)
      }
      case "plus":
      case "less": {
        const [left, right] = [this.turnsOf(a), this.turnsOf(b)]
        return left < 0 || right < 0 ? -1 : this.of(operation, left, right)
      }
      case "times": {
        const left = this.turnsOf(a)
        if (left >= 0) return this.of("times", left, b)
        const right = this.turnsOf(b)
        return right < 0 ? -1 : this.of("times", a, right)
      }
      case "over": {
        const left = this.turnsOf(a)
        return left < 0 ? -1 : this.of("over", left, b)
      }
      default:
        return -1
    }
  }
}

function fractionOf(operation: Operation, left: Step, right: Step | null): exact.Fraction | null {
  const [a, b] = [left.fraction, right?.fraction ?? null]
  if (a === null) return null
  if (operation === "minus") return exact.minus(a)
  if (b === null) return null
  switch (operation) {
    case "plus":
      return exact.plus(a, b)
    case "less":
      return exact.less(a, b)
    case "times":
      return exact.times(a, b)
    case "over":
      return exact.over(a, b)
    case "power": {
      const exponent = exact.numberOf(b)
      return exponent === null || exponent[1] !== 1n ? null : exact.power(a, Number(exponent[0]))
    }
    default:
      return null
  }
}
