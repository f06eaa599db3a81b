// Pieces of a formula whose parts are joined by `if`: where they meet, exactly, and what holds in each. A condition compares the variable with numbers,
// so that it turns at places that can be said; anything else has no place in a formula that is to be proved smooth.

import type { Name } from "../../runtime/value.ts"
import type { End } from "./bounds.ts"
import * as exact from "./exact.ts"
import { type Expression, printed, type Trouble } from "./expression.ts"
import { Formula, type Given, variableSymbol } from "./formula.ts"

export type Piece = { readonly from: End; readonly to: End; readonly expression: Expression }
/** Where two pieces meet, and what holds there. */
export type Join = { readonly place: exact.Fraction; readonly expression: Expression }

export type Pieces =
  | { readonly ok: true; readonly pieces: readonly Piece[]; readonly joins: readonly Join[] }
  | { readonly ok: false; readonly trouble: Trouble }

export function piecesOf(expression: Expression, variable: Name, givens: ReadonlyMap<Name, Given>, from: End, to: End): Pieces {
  const conditions = conditionsIn(expression)
  if (conditions.length === 0) return { ok: true, pieces: [{ from, to, expression }], joins: [] }
  const [lower, upper] = [placeOf(from), placeOf(to)]
  if (lower === undefined || upper === undefined) return { ok: false, trouble: unplaced(conditions[0] as Expression, variable) }
  const reader = new Conditions(variable, givens)
  const places: Quotient[] = []
  for (const condition of conditions) {
    const turns = reader.turns(condition)
    if (turns === null) return { ok: false, trouble: unplaced(condition, variable) }
    for (const place of turns) {
      const inside = (lower === null || isBelow(lower, place)) && (upper === null || isBelow(place, upper))
      if (inside && !places.some((other) => !isBelow(other, place) && !isBelow(place, other))) places.push(place)
    }
  }
  places.sort((a, b) => (isBelow(a, b) ? -1 : 1))
  const ends = [lower, ...places, upper]
  const pieces = ends.slice(1).map((end, k): Piece => {
    const start = ends[k] as Quotient | null
    const held = reader.held(expression, between(start, end))
    return {
      from: k === 0 ? from : { type: "limit", place: fractionOf(start as Quotient) },
      to: k === ends.length - 2 ? to : { type: "limit", place: fractionOf(end as Quotient) },
      expression: held,
    }
  })
  const joins = places.map((place): Join => ({ place: fractionOf(place), expression: reader.held(expression, place) }))
  return { ok: true, pieces, joins }
}

/** A number as two whole ones. */
type Quotient = readonly [bigint, bigint]

const fractionOf = ([n, d]: Quotient): exact.Fraction => exact.over(exact.whole(n), exact.whole(d)) ?? exact.zero
const isBelow = ([n, d]: Quotient, [m, e]: Quotient): boolean => n * e < m * d

/** Null for an infinite end, undefined for one that is no number yet. */
function placeOf(end: End): Quotient | null | undefined {
  if (end.type === "infinity") return null
  if (end.type === "inside") return exact.numberOf(exact.double(end.at) ?? exact.zero) ?? undefined
  return exact.numberOf(end.place) ?? undefined
}

function between(low: Quotient | null, high: Quotient | null): Quotient {
  if (low === null) return high === null ? [0n, 1n] : [high[0] - high[1], high[1]]
  if (high === null) return [low[0] + low[1], low[1]]
  return [low[0] * high[1] + high[0] * low[1], 2n * low[1] * high[1]]
}

/** The conditions of every `if`, inner ones too. */
function conditionsIn(expression: Expression): readonly Expression[] {
  const found: Expression[] = []
  const visit = (part: Expression): void => {
    if (part.type === "call") {
      const [condition] = part.of
      if (part.name === "if" && condition !== undefined) found.push(condition)
      part.of.forEach((each, k) => {
        if (part.name !== "if" || k > 0) visit(each)
      })
    } else if (part.type === "minus") visit(part.of)
    else if (part.type === "pair") {
      visit(part.left)
      visit(part.right)
    }
  }
  visit(expression)
  return found
}

const unplaced = (condition: Expression, variable: Name): Trouble => ({
  at: condition.at,
  code: "condition",
  text: `It cannot be said where ${printed(condition)} turns from false to true.`,
  hint: `A condition compares ${variable} with a number, such as ${variable} < 0.5; several are joined by and, or and not.`,
})

class Conditions {
  private readonly variable: Name
  private readonly givens: ReadonlyMap<Name, Given>

  constructor(variable: Name, givens: ReadonlyMap<Name, Given>) {
    this.variable = variable
    this.givens = givens
  }

  /** The places at which a condition may turn; null where they cannot be said. */
  turns(condition: Expression): readonly Quotient[] | null {
    if (condition.type === "truth") return []
    if (condition.type === "not") return this.turns(condition.of)
    if (condition.type !== "pair") return null
    const { sign, left, right } = condition
    if (sign === "and" || sign === "or") {
      const [a, b] = [this.turns(left), this.turns(right)]
      return a === null || b === null ? null : [...a, ...b]
    }
    if (sign !== "<" && sign !== "<=" && sign !== ">" && sign !== ">=") return null
    const difference = this.difference(left, right)
    if (difference === null) return null
    const slope = exact.slope(difference, variableSymbol)
    const at0 = exact.approach(difference, variableSymbol, exact.zero)
    if (slope === null || at0 === null) return null
    if (exact.isZero(slope)) return exact.numberOf(difference) === null ? null : []
    const [rate, start] = [
      exact.numberOf(slope),
      at0.type === "value" ? exact.numberOf(at0.value) : at0.type === "zero" ? zeroNumber : null,
    ]
    if (rate === null || start === null || rate[0] === 0n) return null
    // p·x + q turns at −q/p.
    const place = exact.numberOf(exact.over(exact.minus(fractionOf(start)), fractionOf(rate)) ?? exact.zero)
    return place === null ? null : [place]
  }

  /** The expression with every `if` decided as it is at one place. */
  held(expression: Expression, place: Quotient): Expression {
    switch (expression.type) {
      case "minus":
        return { ...expression, of: this.held(expression.of, place) }
      case "pair":
        return { ...expression, left: this.held(expression.left, place), right: this.held(expression.right, place) }
      case "call": {
        const [condition, yes, no] = expression.of
        if (expression.name === "if" && condition !== undefined && yes !== undefined && no !== undefined)
          return this.held(this.isTrue(condition, place) ? yes : no, place)
        return { ...expression, of: expression.of.map((each) => this.held(each, place)) }
      }
      default:
        return expression
    }
  }

  private isTrue(condition: Expression, place: Quotient): boolean {
    if (condition.type === "truth") return condition.value
    if (condition.type === "not") return !this.isTrue(condition.of, place)
    if (condition.type !== "pair") return false
    const { sign, left, right } = condition
    if (sign === "and") return this.isTrue(left, place) && this.isTrue(right, place)
    if (sign === "or") return this.isTrue(left, place) || this.isTrue(right, place)
    const difference = this.difference(left, right)
    const found = difference === null ? null : exact.approach(difference, variableSymbol, fractionOf(place))
    const value = found === null ? null : found.type === "value" ? exact.numberOf(found.value) : found.type === "zero" ? zeroNumber : null
    if (value === null) return false
    const above = value[0] > 0n
    const equal = value[0] === 0n
    return sign === "<" ? !above && !equal : sign === "<=" ? !above : sign === ">" ? above : above || equal
  }

  private difference(left: Expression, right: Expression): exact.Fraction | null {
    if (!isPlain(left) || !isPlain(right)) return null
    const formula = new Formula(this.variable, this.givens)
    const at = formula.add({ type: "pair", sign: "-", left, right, at: left.at })
    return formula.steps[at]?.fraction ?? null
  }
}

const zeroNumber: Quotient = [0n, 1n]

/** Numbers, names and signs only: what a condition may compare. */
const isPlain = (expression: Expression): boolean =>
  expression.type === "number" ||
  expression.type === "name" ||
  (expression.type === "minus" && isPlain(expression.of)) ||
  (expression.type === "pair" &&
    ["+", "-", "*", "/", "^"].includes(expression.sign) &&
    isPlain(expression.left) &&
    isPlain(expression.right))
