// A link as the statistics take it, made of expressions: programs for η and its slopes on each piece, and knots between which a mean is looked for.
// Near a mean of 1 the link is written in 1 − μ, so that 1 − μ itself keeps its digits there.

import type { Name } from "../../runtime/value.ts"
import type { LinkPiece, LinkSide, OwnLink } from "../statistics/own-link.ts"
import { placesOf, run } from "../statistics/own-link.ts"
import { derivative } from "./derivative.ts"
import type { Expression } from "./expression.ts"
import type { Given } from "./formula.ts"
import { programOf } from "./program.ts"
import { middleOf, type ProvedPiece } from "./proof.ts"

export type LinkParts = {
  readonly formula: string
  readonly variable: Name
  readonly givens: ReadonlyMap<Name, Given>
  readonly range: readonly [number, number]
  readonly pieces: readonly ProvedPiece[]
  readonly rising: boolean | null
  /** Limits of η, least first; null where not known: then the last knot stands for it. */
  readonly reach: readonly [number | null, number | null]
  readonly inverse: Expression | null
  readonly canonical: string | null
}

/** The link, and the stretches of μ on which its slope is too small for a double; null where no number at all comes out. */
export function linkData(parts: LinkParts): { readonly own: OwnLink; readonly flat: readonly (readonly [number, number])[] } | null {
  const { range, pieces, variable, givens } = parts
  const [low, high] = range
  const upToOne = high === 1 && low < 0.5
  const lower = {
    variable: "mu" as const,
    pieces: pieces.map((piece) => ({ from: piece.from, program: programOf(derived(piece, variable), variable, givens) })),
  }
  const places = knotsBetween(low, high)
  const lowerKnots = upToOne ? places.filter((mu) => mu <= 0.5) : places
  const first = valuesOver(lower.pieces, lowerKnots)
  const rising = parts.rising ?? isRising(first.eta)
  if (rising === null) return null
  const sides: LinkSide[] = [{ ...lower, ...knotted(lower.pieces, monotone(lowerKnots, first.eta, rising), rising, 1) }]
  const flat = [...flatIn(lowerKnots, first.slope, (x) => slopeAt(lower.pieces, x))]
  if (upToOne) {
    const upper = pieces.filter(({ to }) => to > 0.5).reverse()
    const upperPieces = upper.map((piece, k) => ({
      from: k === 0 ? 0 : 1 - piece.to,
      program: programOf(
        derived(piece, variable).map((each) => inRest(each, variable)),
        restName,
        givens,
      ),
    }))
    const knots = knotsBetween(0, 1).filter((rest) => rest <= 0.5)
    const values = valuesOver(upperPieces, knots)
    sides.push({ variable: "rest", pieces: upperPieces, ...knotted(upperPieces, monotone(knots, values.eta, !rising), !rising, -1) })
    for (const [from, to] of flatIn(knots, values.slope, (x) => slopeAt(upperPieces, x))) flat.push([1 - to, 1 - from])
  }
  if (sides.some(({ knots }) => knots.length < 2)) return null
  const ends = sides.flatMap(({ eta }) => [eta[0] as number, eta.at(-1) as number])
  const reach: readonly [number, number] = [parts.reach[0] ?? Math.min(...ends), parts.reach[1] ?? Math.max(...ends)]
  const inverse = parts.inverse === null ? null : programOf([parts.inverse], "eta", givens)
  return { own: { formula: parts.formula, range, reach, rising, sides, inverse, canonical: parts.canonical }, flat }
}

const restName = "rest"

/** η and both derivatives with respect to μ. What has a derivative has a second one: its parts are smooth. */
const derived = ({ expression, slope }: ProvedPiece, variable: Name): readonly Expression[] =>
  [expression, slope, derivative(slope, variable) ?? slope].map(careful)

/**
 * The same function where doubles lose no digits: log(1 − x) as log1p(−x), and exp(x) − 1 as expm1(x). Who writes log(-log(1 - mu)) means rare
 * events too, of which 1 − μ has lost all but a few digits.
 */
function careful(expression: Expression): Expression {
  const isOne = (part: Expression): boolean => part.type === "number" && part.value === 1
  const { at } = expression
  switch (expression.type) {
    case "minus":
      return { ...expression, of: careful(expression.of) }
    case "pair": {
      const [left, right] = [careful(expression.left), careful(expression.right)]
      const power = (part: Expression): Expression => ({ ...part, type: "call", name: "expm1" }) as Expression
      if (expression.sign === "-" && isOne(right) && left.type === "call" && left.name === "exp") return power(left)
      if (expression.sign === "-" && isOne(left) && right.type === "call" && right.name === "exp")
        return { type: "minus", of: power(right), at }
      return { ...expression, left, right }
    }
    case "call": {
      const of = expression.of.map(careful)
      const [first] = of
      if (expression.name === "log" && first?.type === "pair" && isOne(first.left)) {
        if (first.sign === "-") return { ...expression, name: "log1p", of: [{ type: "minus", of: first.right, at }] }
        if (first.sign === "+") return { ...expression, name: "log1p", of: [first.right] }
      }
      return { ...expression, of }
    }
    default:
      return expression
  }
}

/** The expression with 1 − rest in place of μ, and rest itself wherever 1 − μ stood. */
function inRest(expression: Expression, variable: Name): Expression {
  const rest: Expression = { type: "name", name: restName, at: expression.at }
  const isMean = (part: Expression | undefined): boolean => part?.type === "name" && part.name === variable
  const isOne = (part: Expression): boolean => part.type === "number" && part.value === 1
  switch (expression.type) {
    case "name":
      return isMean(expression)
        ? { type: "pair", sign: "-", left: { type: "number", value: 1, text: "1", at: expression.at }, right: rest, at: expression.at }
        : expression
    case "minus":
      return { ...expression, of: inRest(expression.of, variable) }
    case "pair":
      if (expression.sign === "-" && isOne(expression.left) && isMean(expression.right)) return rest
      return { ...expression, left: inRest(expression.left, variable), right: inRest(expression.right, variable) }
    case "call": {
      const [first] = expression.of
      // log(1 − rest) keeps the digits of a small rest only as log1p(−rest).
      if (expression.name === "log" && isMean(first))
        return { ...expression, name: "log1p", of: [{ type: "minus", of: rest, at: expression.at }] }
      if (expression.name === "log1p" && first?.type === "minus" && isMean(first.of)) return { ...expression, name: "log", of: [rest] }
      if ((expression.name === "logit" || expression.name === "normal_quantile") && isMean(first))
        return { type: "minus", of: { ...expression, of: [rest] }, at: expression.at }
      return { ...expression, of: expression.of.map((each) => inRest(each, variable)) }
    }
    default:
      return expression
  }
}

function valuesOver(
  pieces: readonly LinkPiece[],
  at: readonly number[],
): { readonly eta: readonly number[]; readonly slope: readonly number[] } {
  const places = new Float64Array(Math.max(...pieces.map(({ program: of }) => placesOf(of))))
  const [eta, slope]: [number[], number[]] = [[], []]
  for (const x of at) {
    const { program: of } = pieceAt(pieces, x)
    run(of, x, places, 1)
    eta.push(places[of.outputs[0] as number] as number)
    slope.push(places[of.outputs[1] as number] as number)
  }
  return { eta, slope }
}

const pieceAt = (pieces: readonly LinkPiece[], x: number): LinkPiece => {
  let k = pieces.length - 1
  while (k > 0 && x < (pieces[k] as LinkPiece).from) k--
  return pieces[k] as LinkPiece
}

const slopeAt = (pieces: readonly LinkPiece[], x: number): number => valuesOver(pieces, [x]).slope[0] as number

function isRising(eta: readonly number[]): boolean | null {
  const finite = eta.filter(Number.isFinite)
  const [first, last] = [finite[0], finite.at(-1)]
  return first === undefined || last === undefined || first === last ? null : last > first
}

type Knots = Pick<LinkSide, "knots" | "eta" | "rate">
type Knot = { readonly x: number; readonly eta: number; readonly rate: number }

/** The knots over which η goes strictly one way, as doubles see it. */
function monotone(at: readonly number[], eta: readonly number[], rising: boolean): readonly number[] {
  const knots: number[] = []
  let last: number | undefined
  at.forEach((x, k) => {
    const value = eta[k] as number
    if (!Number.isFinite(value) || (last !== undefined && (rising ? value <= last : value >= last))) return
    knots.push(x)
    last = value
  })
  return knots
}

/** So many halvings between two knots, and so many knots, at most. */
const [mostHalvings, mostKnots] = [7, 3_000]
/** Knots are close enough where a cubic between them misses the middle by less than this share. */
const closeEnough = 1e-5
/** Beyond these, as distances from 0, no mean is looked for often. */
const [leastOften, greatestOften] = [1e-13, 1e13]

/** Knots with values and slopes, and more between them where a cubic misses. `turned` is −1 for a variable that falls with μ. */
function knotted(pieces: readonly LinkPiece[], at: readonly number[], rising: boolean, turned: 1 | -1): Knots {
  const knotAt = (x: number): Knot => {
    const values = valuesOver(pieces, [x])
    return { x, eta: values.eta[0] as number, rate: turned / (values.slope[0] as number) }
  }
  const made: Knot[] = []
  const between = (a: Knot, b: Knot, halvings: number): void => {
    const x = middleOf(a.x, b.x)
    const size = x === null ? 0 : Math.abs(x)
    if (x === null || halvings === mostHalvings || made.length > mostKnots || size < leastOften || size > greatestOften) return
    const middle = knotAt(x)
    if (!(rising ? middle.eta > a.eta && middle.eta < b.eta : middle.eta < a.eta && middle.eta > b.eta)) return
    if (Math.abs(cubic(a, b, middle.eta) - x) <= closeEnough * size) return
    between(a, middle, halvings + 1)
    made.push(middle)
    between(middle, b, halvings + 1)
  }
  let last: Knot | null = null
  for (const x of at) {
    const knot = knotAt(x)
    if (last !== null) between(last, knot, 0)
    made.push(knot)
    last = knot
  }
  return {
    knots: Float64Array.from(made, (knot) => knot.x),
    eta: Float64Array.from(made, (knot) => knot.eta),
    rate: Float64Array.from(made, (knot) => knot.rate),
  }
}

/** The cubic through two knots with their slopes, as the search for a mean begins with it. */
function cubic(a: Knot, b: Knot, eta: number): number {
  const width = b.eta - a.eta
  const t = (eta - a.eta) / width
  const rest = 1 - t
  return a.x * (1 + 2 * t) * rest * rest + b.x * (3 - 2 * t) * t * t + t * rest * width * (a.rate * rest - b.rate * t)
}

/** Sixteenfold from one knot to the next towards an end: as near as doubles go where the end is 0. */
const stride = 16

/** Places inside an open range, close together towards both ends. */
export function knotsBetween(low: number, high: number): readonly number[] {
  const places = new Set<number>()
  const towards = (end: number, sign: 1 | -1, widest: number): void => {
    for (let away = widest; away > 0; away /= stride) {
      const x = end + sign * away
      if (x === end) break
      places.add(x)
    }
    if (end === 0) places.add(sign * Number.MIN_VALUE)
  }
  const outwards = (from: number, sign: 1 | -1): void => {
    for (let away = 1; away < Infinity; away *= stride) places.add(from + sign * away)
    places.add(sign * Number.MAX_VALUE)
  }
  if (low === -Infinity && high === Infinity) {
    places.add(0)
    for (const sign of [1, -1] as const) {
      outwards(0, sign)
      for (let away = 1 / stride; away > 1e-18; away /= stride) places.add(sign * away)
    }
  } else if (high === Infinity) {
    outwards(low, 1)
    towards(low, 1, 1)
  } else if (low === -Infinity) {
    outwards(high, -1)
    towards(high, -1, 1)
  } else {
    const width = high - low
    for (let k = 1; k < stride; k++) places.add(low + (width * k) / stride)
    towards(low, 1, width / stride)
    towards(high, -1, width / stride)
  }
  return [...places].filter((x) => x > low && x < high && Number.isFinite(x)).sort((a, b) => a - b)
}

/** The least double that keeps all its digits. */
const leastNormal = 2.2250738585072014e-308

/**
 * Stretches of neighbouring knots at which the slope is below that, with their ends found by halving. A single knot is none: there the slope may
 * be 0 for a point, or by rounding.
 */
function flatIn(at: readonly number[], slope: readonly number[], slopeOf: (x: number) => number): readonly (readonly [number, number])[] {
  const isFlat = (value: number): boolean => value < leastNormal && value > -leastNormal
  const found: [number, number][] = []
  at.forEach((x, k) => {
    if (!isFlat(slope[k] as number)) return
    const last = found.at(-1)
    if (last !== undefined && k > 0 && last[1] === at[k - 1]) last[1] = x
    else found.push([x, x])
  })
  const edge = (flat: number, steep: number): number => {
    let [a, b] = [flat, steep]
    for (let k = 0; k < 60; k++) {
      const middle = a + (b - a) / 2
      if (middle === a || middle === b) break
      if (isFlat(slopeOf(middle))) a = middle
      else b = middle
    }
    return a
  }
  return found
    .filter(([from, to]) => to > from)
    .map(([from, to]) => {
      const [before, after] = [at[at.indexOf(from) - 1], at[at.indexOf(to) + 1]]
      return [before === undefined ? from : edge(from, before), after === undefined ? to : edge(to, after)] as const
    })
}
