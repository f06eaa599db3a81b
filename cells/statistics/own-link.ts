// Links of the user's own: plain data that says how to compute η, its slopes and the way back, and the record of scalar functions made of it. The
// formula comes as a list of instructions over doubles, so the statistics know no expressions. That the link is strictly monotone and
// differentiable on its range was proved before; here that is trusted, and the inverse is found inside the bracket it gives.

import { asin, atan, cos, exp, expm1, log, log1p, log10, pow, sin, tan, tanh } from "./elementary.ts"
import type { Link } from "./link.ts"
import { normalCdf, normalQuantile } from "./special.ts"

/** Instructions: what each computes from the places `a` and `b`. The order is part of stored programs, so new ones go last. */
export const operations = [
  "constant",
  "variable",
  "minus",
  "plus",
  "less",
  "times",
  "over",
  "power",
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
] as const
export type Operation = (typeof operations)[number]

/**
 * A formula of one variable as instructions: three numbers each, an operation (its number above) and two places. Instruction k leaves its
 * result in place k; a constant names its number in `constants`. `outputs` are the places of the results asked for.
 */
export type Program = {
  readonly code: Int32Array
  readonly constants: Float64Array
  readonly outputs: Int32Array
}

/** One piece of a link: from this value of the variable on. The program gives η, dη/dμ and d²η/dμ², in this order. */
export type LinkPiece = { readonly from: number; readonly program: Program }

/**
 * A stretch of the range in a variable that keeps its digits there: `mu`, or near a mean of 1 `rest`, which is 1 − μ. Pieces are in rising order
 * of the variable; knots rise in the variable, η is strictly monotone over them, and `rate` is the slope of the variable in η there.
 */
export type LinkSide = {
  readonly variable: "mu" | "rest"
  readonly pieces: readonly LinkPiece[]
  readonly knots: Float64Array
  readonly eta: Float64Array
  readonly rate: Float64Array
}

/** A link of the user's own, as plain data. */
export type OwnLink = {
  /** g(μ) as text, for whoever shows the link. */
  readonly formula: string
  readonly range: readonly [number, number]
  readonly reach: readonly [number, number]
  readonly rising: boolean
  /** The lower side in `mu`; a link up to a mean of 1 has an upper one in `rest`. */
  readonly sides: readonly LinkSide[]
  /** μ of η where the user said it; it was checked against the formula, and is where the search for μ begins. */
  readonly inverse: Program | null
  /** The family it is canonical for, up to a linear change. */
  readonly canonical: string | null
}

/**
 * Runs a program at one value of its variable, up to the output `upTo`; every result stays in `places`. One loop without calls for what is
 * plain arithmetic: it stands inside the search for the mean of every row.
 */
export function run({ code, constants, outputs }: Program, x: number, places: Float64Array, upTo = outputs.length - 1): void {
  let last = 0
  for (let k = 0; k <= upTo; k++) last = Math.max(last, outputs[k] as number)
  for (let k = 0, at = 0; k <= last; k++, at += 3) {
    const a = code[at + 1] as number
    const b = code[at + 2] as number
    const u = places[a] as number
    switch (code[at]) {
      case 0:
        places[k] = constants[a] as number
        break
      case 1:
        places[k] = x
        break
      case 2:
        places[k] = 0 - u
        break
      case 3:
        places[k] = u + (places[b] as number)
        break
      case 4:
        places[k] = u - (places[b] as number)
        break
      case 5:
        places[k] = u * (places[b] as number)
        break
      case 6:
        places[k] = u / (places[b] as number)
        break
      case 7:
        places[k] = pow(u, places[b] as number)
        break
      case 8:
        places[k] = asin(u)
        break
      case 9:
        places[k] = atan(u)
        break
      case 10:
        places[k] = cos(u)
        break
      case 11:
        places[k] = exp(u)
        break
      case 12:
        places[k] = expm1(u)
        break
      case 13:
        places[k] = log(u)
        break
      case 14:
        places[k] = log10(u)
        break
      case 15:
        places[k] = log1p(u)
        break
      case 16:
        places[k] = sin(u)
        break
      case 17:
        places[k] = Math.sqrt(u)
        break
      case 18:
        places[k] = tan(u)
        break
      case 19:
        places[k] = tanh(u)
        break
      case 20:
        places[k] = normalCdf(u)
        break
      case 21:
        places[k] = normalQuantile(u)
        break
      case 22:
        places[k] = logOdds(u)
        break
      case 23:
        places[k] = share(u)
        break
    }
  }
}

const logOdds = (u: number): number => (u > 0.25 && u < 0.75 ? log1p((2 * u - 1) / (1 - u)) : log(u) - log1p(-u))

const share = (u: number): number => {
  if (u >= 0) return 1 / (1 + exp(-u))
  const e = exp(u)
  return e / (1 + e)
}

/** How many places a program needs. */
export const placesOf = ({ code }: Program): number => code.length / 3

/** The link with this name. Mean, slope and curvature of the same η are asked for in turn, so the last μ is kept. */
export function ownLink(own: OwnLink, name: string): Link {
  const [low, high] = own.range
  const [reachLow, reachHigh] = own.reach
  const sides = own.sides.map((side) => new Side(side))
  const lower = sides[0] as Side
  const upper = sides[1] ?? null
  const middle = upper === null ? Number.NaN : lower.at(0.5, 0)
  const inverse = own.inverse === null ? null : { program: own.inverse, places: new Float64Array(placesOf(own.inverse)) }
  let known = Number.NaN
  let mean = Number.NaN
  let rest = Number.NaN
  let derivedAt = Number.NaN
  let [steep, bend] = [Number.NaN, Number.NaN]

  /** Leaves μ and 1 − μ of this η. Beyond the reach stands the end of the range, as its limit. */
  const solve = (eta: number): void => {
    if (eta === known) return
    known = eta
    const atLow = own.rising ? eta <= reachLow : eta >= reachHigh
    const atHigh = own.rising ? eta >= reachHigh : eta <= reachLow
    if (Number.isNaN(eta) || atLow || atHigh) {
      mean = Number.isNaN(eta) ? eta : atLow ? low : high
      rest = 1 - mean
      return
    }
    if (upper !== null && (own.rising ? eta > middle : eta < middle)) {
      rest = upper.solved(eta, !own.rising, 1 - high, 0.5, 1 - said(eta))
      mean = 1 - rest
      return
    }
    mean = lower.solved(eta, own.rising, low, upper === null ? high : 0.5, said(eta))
    rest = 1 - mean
  }
  /** The mean as the user's inverse has it: where the search begins, since its rounding may be poor in a tail. */
  const said = (eta: number): number => {
    if (inverse === null) return Number.NaN
    run(inverse.program, eta, inverse.places)
    return inverse.places[inverse.program.outputs[0] as number] as number
  }
  /** Leaves dη/dμ and d²η/dμ² at this η, by the side on which its mean is. */
  const derive = (eta: number): void => {
    solve(eta)
    if (derivedAt === eta) return
    derivedAt = eta
    const side = upper !== null && mean > 0.5 ? upper : lower
    bend = side.at(upper !== null && mean > 0.5 ? rest : mean, 2)
    steep = side.lastSlope()
  }
  return {
    name,
    range: { low, high },
    reach: { low: reachLow, high: reachHigh },
    eta: (mu) => {
      if (mu <= low) return own.rising ? reachLow : reachHigh
      if (mu >= high) return own.rising ? reachHigh : reachLow
      return upper !== null && mu > 0.5 ? upper.at(1 - mu, 0) : lower.at(mu, 0)
    },
    mean: (eta) => {
      solve(eta)
      return mean
    },
    complement:
      upper === null
        ? null
        : (eta) => {
            solve(eta)
            return rest
          },
    slope: (eta) => {
      derive(eta)
      return 1 / steep
    },
    curvature: (eta) => {
      derive(eta)
      return -(bend / steep / steep) / steep
    },
  }
}

/** Steps enough for bisection between any two doubles of one sign. */
const mostSteps = 200
/** A step this small, as a share of x, is the last. */
const arrived = 1e-10

/** One side, with the places its programs write to. */
class Side {
  private readonly side: LinkSide
  private readonly places: Float64Array
  private slopeThere = Number.NaN

  constructor(side: LinkSide) {
    this.side = side
    this.places = new Float64Array(Math.max(...side.pieces.map(({ program }) => placesOf(program))))
  }

  at(x: number, output: 0 | 1 | 2): number {
    const { program } = this.pieceAt(x)
    run(program, x, this.places, output)
    if (output > 0) this.slopeThere = this.places[program.outputs[1] as number] as number
    return this.places[program.outputs[output] as number] as number
  }

  /**
   * The x between `from` and `to` with g(x) = η: Newton's method inside a bracket that shrinks with every step. A step that leaves the bracket
   * is replaced by its middle, on the scale of logarithms where its ends are far apart.
   * @param rising  whether η rises in x (in `rest` it falls where the link rises)
   * @param start   where x may be; NaN where nothing is known
   */
  solved(eta: number, rising: boolean, from: number, to: number, start: number): number {
    const { knots, eta: known } = this.side
    // The first knot whose η is at or past what is looked for.
    let [first, past] = [0, knots.length]
    while (first < past) {
      const middle = (first + past) >> 1
      if (rising ? (known[middle] as number) < eta : (known[middle] as number) > eta) first = middle + 1
      else past = middle
    }
    if (first < knots.length && known[first] === eta) return knots[first] as number
    let low = first === 0 ? from : (knots[first - 1] as number)
    let high = first === knots.length ? to : (knots[first] as number)
    // Before the first knot and past the last there is hardly a double left: the end stands for them.
    if (first === 0) return Number.isFinite(low) ? low : high
    if (first === knots.length) return Number.isFinite(high) ? high : low
    let x = start > low && start < high ? start : this.between(first, eta)
    if (!(x > low && x < high)) x = middleOf(low, high)
    const sign = rising ? 1 : -1
    // dη/dμ is what the program gives; in `rest` the slope has the other sign.
    const turned = this.side.variable === "rest" ? -1 : 1
    for (let k = 0; k < mostSteps; k++) {
      const { program } = this.pieceAt(x)
      run(program, x, this.places, 1)
      const off = (this.places[program.outputs[0] as number] as number) - eta
      if (off === 0) return x
      if (sign * off > 0) high = x
      else low = x
      const step = off / (turned * (this.places[program.outputs[1] as number] as number))
      const next = x - step
      // The error after a step is about the square of it: what is left is less than doubles show.
      if (next >= low && next <= high) {
        if (step < arrived * next && -step < arrived * next) return next
        if (next < 0 && step > arrived * next && -step > arrived * next) return next
      }
      const inside = next > low && next < high ? next : middleOf(low, high)
      if (inside === x || !(inside > low && inside < high)) return x
      x = inside
    }
    return x
  }

  /** Where x may be, between the knot before this one and itself: by the cubic through both with their slopes. */
  private between(knot: number, eta: number): number {
    const { knots, eta: known, rate } = this.side
    const [a, b] = [knots[knot - 1] as number, knots[knot] as number]
    const width = (known[knot] as number) - (known[knot - 1] as number)
    const t = (eta - (known[knot - 1] as number)) / width
    const [p, q] = [width * (rate[knot - 1] as number), width * (rate[knot] as number)]
    const rest = 1 - t
    return a * (1 + 2 * t) * rest * rest + b * (3 - 2 * t) * t * t + t * rest * (p * rest - q * t)
  }

  /** dη/dμ where a program was run last. */
  lastSlope(): number {
    return this.slopeThere
  }

  private pieceAt(x: number): LinkPiece {
    const { pieces } = this.side
    let at = pieces.length - 1
    while (at > 0 && x < (pieces[at] as LinkPiece).from) at--
    return pieces[at] as LinkPiece
  }
}

const middleOf = (low: number, high: number): number =>
  low > 0 && high > 4 * low
    ? Math.sqrt(low) * Math.sqrt(high)
    : high < 0 && low < 4 * high
      ? -Math.sqrt(-low) * Math.sqrt(-high)
      : low + 0.5 * (high - low)
