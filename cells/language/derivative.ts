// Derivatives of expressions, by rule, simplified as they are made. What has no derivative everywhere (`abs`, `round`, a comparison
// outside an `if`) gives null, unless the variable does not occur in it. A test holds every rule against difference quotients.

import type { Name } from "../../runtime/value.ts"
import { type Expression, partsOf } from "./expression.ts"

/** The derivative with respect to `name`, simplified; null where a part has no derivative. Pieces joined by `if` are taken piece by piece. */
export function derivative(expression: Expression, name: Name): Expression | null {
  if (!occurs(expression, name)) return number(0, expression)
  switch (expression.type) {
    case "name":
      return number(1, expression)
    case "minus": {
      const inner = derivative(expression.of, name)
      return inner === null ? null : negative(inner)
    }
    case "pair":
      return ofPair(expression, name)
    case "call":
      return ofCall(expression, name)
    default:
      return null
  }
}

type Call = Expression & { readonly type: "call" }
type Pair = Expression & { readonly type: "pair" }

function occurs(expression: Expression, name: Name): boolean {
  return expression.type === "name" ? expression.name === name : partsOf(expression).some((part) => occurs(part, name))
}

function ofPair(expression: Pair, name: Name): Expression | null {
  const { sign, left, right } = expression
  if (sign === "=" || sign === "!=" || sign === "<" || sign === "<=" || sign === ">" || sign === ">=" || sign === "and" || sign === "or")
    return null
  const a = derivative(left, name)
  const b = derivative(right, name)
  if (a === null || b === null) return null
  switch (sign) {
    case "+":
      return plus(a, b)
    case "-":
      return less(a, b)
    case "*":
      return plus(times(a, right), times(left, b))
    case "/":
      return isNumber(b, 0) ? over(a, right) : over(less(times(a, right), times(left, b)), power(right, number(2, right)))
    case "^": {
      // A constant power: n·u^(n − 1)·u'. A constant base: u^v·ln(u)·v'. Both vary: u^v·(v'·ln u + v·u'/u).
      if (isNumber(b, 0)) return times(times(right, power(left, less(right, number(1, right)))), a)
      if (isNumber(a, 0)) return times(times(expression, call("log", [left])), b)
      return times(expression, plus(times(b, call("log", [left])), over(times(right, a), left)))
    }
  }
}

function ofCall(expression: Call, name: Name): Expression | null {
  const [first, second, third] = expression.of
  if (first === undefined) return null
  if (expression.name === "if") {
    if (second === undefined || third === undefined) return null
    const yes = derivative(second, name)
    const no = derivative(third, name)
    if (yes === null || no === null) return null
    return yes.type === "number" && no.type === "number" && yes.value === no.value
      ? yes
      : { type: "call", name: "if", of: [first, yes, no], at: expression.at }
  }
  const rule = outer[expression.name]
  const inner = derivative(first, name)
  return rule === undefined || inner === null || expression.of.length !== 1 ? null : times(rule(first, expression), inner)
}

/** f'(u), given u and f(u). */
const outer: Readonly<Record<string, (u: Expression, f: Expression) => Expression>> = {
  exp: (_, f) => f,
  expm1: (u) => call("exp", [u]),
  log: (u) => over(one(u), u),
  log10: (u) => over(one(u), times(u, call("log", [number(10, u)]))),
  log1p: (u) => over(one(u), plus(one(u), u)),
  sin: (u) => call("cos", [u]),
  cos: (u) => negative(call("sin", [u])),
  tan: (_, f) => plus(one(f), power(f, number(2, f))),
  asin: (u) => over(one(u), call("square_root", [less(one(u), power(u, number(2, u)))])),
  atan: (u) => over(one(u), plus(one(u), power(u, number(2, u)))),
  tanh: (_, f) => less(one(f), power(f, number(2, f))),
  square_root: (_, f) => over(one(f), times(number(2, f), f)),
  normal_cdf: (u) =>
    over(call("exp", [over(negative(power(u, number(2, u))), number(2, u))]), call("square_root", [times(number(2, u), pi(u))])),
  normal_quantile: (u, f) =>
    times(call("square_root", [times(number(2, u), pi(u))]), call("exp", [over(power(f, number(2, f)), number(2, f))])),
  logit: (u) => over(one(u), times(u, less(one(u), u))),
  inverse_logit: (_, f) => times(f, less(one(f), f)),
}

const number = (value: number, like: Expression): Expression => ({ type: "number", value, text: `${value}`, at: like.at })
const one = (like: Expression): Expression => number(1, like)
const pi = (like: Expression): Expression => ({ type: "number", value: Math.PI, text: "pi", at: like.at })
const isNumber = (expression: Expression, value: number): boolean => expression.type === "number" && expression.value === value
const call = (name: string, of: readonly [Expression]): Expression => ({ type: "call", name, of, at: of[0].at })

/** A number that is written out, for sums of two of them; π stays π. */
const plain = (expression: Expression): number | null =>
  expression.type === "number" && expression.text !== "pi" && Number.isInteger(expression.value) ? expression.value : null

/** An integer as an expression: a number below 0 is a number with a minus before it, as it reads back. */
const integer = (value: number, like: Expression): Expression => (value < 0 ? negative(number(-value, like)) : number(value, like))

const signed = (expression: Expression): number | null => {
  if (expression.type !== "minus") return plain(expression)
  const inner = plain(expression.of)
  return inner === null ? null : -inner
}

function negative(of: Expression): Expression {
  if (isNumber(of, 0)) return of
  if (of.type === "minus") return of.of
  return { type: "minus", of, at: of.at }
}

function plus(left: Expression, right: Expression): Expression {
  if (isNumber(left, 0)) return right
  if (isNumber(right, 0)) return left
  const [a, b] = [signed(left), signed(right)]
  if (a !== null && b !== null) return integer(a + b, left)
  // u − x and x are u.
  if (left.type === "pair" && left.sign === "-" && left.right.type === "name" && right.type === "name" && left.right.name === right.name)
    return left.left
  return right.type === "minus" ? less(left, right.of) : { type: "pair", sign: "+", left, right, at: left.at }
}

function less(left: Expression, right: Expression): Expression {
  if (isNumber(right, 0)) return left
  if (isNumber(left, 0)) return negative(right)
  const [a, b] = [signed(left), signed(right)]
  if (a !== null && b !== null) return integer(a - b, left)
  return right.type === "minus" ? plus(left, right.of) : { type: "pair", sign: "-", left, right, at: left.at }
}

function times(left: Expression, right: Expression): Expression {
  if (isNumber(left, 0) || isNumber(right, 1)) return left
  if (isNumber(right, 0) || isNumber(left, 1)) return right
  const [a, b] = [plain(left), plain(right)]
  if (a !== null && b !== null) return number(a * b, left)
  if (left.type === "minus") return negative(times(left.of, right))
  if (right.type === "minus") return negative(times(left, right.of))
  // 1/u·v is v/u.
  if (left.type === "pair" && left.sign === "/" && isNumber(left.left, 1)) return over(right, left.right)
  if (right.type === "pair" && right.sign === "/" && isNumber(right.left, 1)) return over(left, right.right)
  return { type: "pair", sign: "*", left, right, at: left.at }
}

function over(left: Expression, right: Expression): Expression {
  if (isNumber(left, 0) || isNumber(right, 1)) return left
  if (left.type === "minus") return negative(over(left.of, right))
  return { type: "pair", sign: "/", left, right, at: left.at }
}

function power(left: Expression, right: Expression): Expression {
  if (isNumber(right, 1)) return left
  if (isNumber(right, 0)) return number(1, left)
  return { type: "pair", sign: "^", left, right, at: left.at }
}
