// LinkSaid and the dials it names → LinkFinding: the constants are put in exactly, the formula is proved or refuted over the whole range, and
// where it is a link it is made into what the statistics run.

import type { Input, Outcome, Work } from "../../runtime/kind.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import type { End, Ranges } from "../language/bounds.ts"
import { derivative } from "../language/derivative.ts"
import { evaluated } from "../language/evaluate.ts"
import * as exact from "../language/exact.ts"
import { type Expression, printed } from "../language/expression.ts"
import type { Given } from "../language/formula.ts"
import { type Interval, interval } from "../language/interval.ts"
import { knotsBetween, linkData } from "../language/link-data.ts"
import { type Proof, proofOf } from "../language/proof.ts"
import type { LinkFinding, LinkVerdict } from "../link-finding.ts"
import { linkOf } from "../statistics/index.ts"
import type { OwnLink } from "../statistics/own-link.ts"
import { curveOf } from "./curve.ts"
import { formulaText } from "./formula.ts"
import * as say from "./notices.ts"
import type { BoundSaid, LinkSaid } from "./words.ts"

type Inputs = ReadonlyMap<Name, Input>
type Say = (notice: Notice) => void

export async function found(said: LinkSaid, inputs: Inputs, work: Work): Promise<Outcome<LinkFinding>> {
  const notices: Notice[] = []
  const notice: Say = (one) => notices.push(one)
  const nothing = (): Outcome<LinkFinding> => ({ ok: false, found: null, notices })
  const { eta, range, name } = said
  // What is not said at all the parse has said.
  if (eta === null || range === null || name === null) return nothing()
  const constants = constantsOf(said, inputs, notice)
  const [from, to] = [endOf(range.from, constants, inputs, notice), endOf(range.to, constants, inputs, notice)]
  if (constants === null || from === null || to === null) return nothing()
  if (!(from.value < to.value)) {
    notice(say.rangeTurned("mean", from.text, to.text, range.at))
    return nothing()
  }
  const slope = derivative(eta.expression, "mu")
  const claim = { eta: eta.expression, variable: "mu", from: from.end, to: to.end, givens: constants.givens, ranges: constants.ranges }
  const proven = await proofOf(claim, () => work.checkpoint())
  if (!proven.ok || slope === null) {
    if (!proven.ok) notice(say.condition(proven.trouble))
    return nothing()
  }
  const { proof } = proven
  verdictNotices(proof, said, notice)
  const isRefuted = notices.some(({ level }) => level === "fault")
  const estimated = constants.ranges.size > 0
  const limits = proof.ends.map(limitOf) as [number | null, number | null]
  // What turns or is not everywhere defined reaches what it reaches, but its limits do not say what that is.
  const reach: readonly [number | null, number | null] = isRefuted
    ? [null, null]
    : proof.rising === false
      ? [limits[1], limits[0]]
      : [limits[0], limits[1]]
  const made =
    isRefuted || estimated
      ? null
      : linkData({
          formula: formulaText(eta.expression),
          variable: "mu",
          givens: constants.givens,
          range: [from.value, to.value],
          pieces: proof.pieces,
          rising: proof.rising,
          reach,
          inverse: said.inverse === null || hasPieces(said.inverse.expression) ? null : said.inverse.expression,
          canonical: proof.canonical,
        })
  const own = made?.own ?? null
  if (own !== null && said.inverse !== null) inverseNotice(own, said, constants.givens, notice)
  if (!isRefuted) {
    if (proof.level.length > 0) notice(say.level(proof.level, eta.at))
    const flat = made?.flat.filter(isEveryday) ?? []
    if (flat.length > 0) notice(say.flat(flat, eta.at))
    limits.forEach((limit, k) => {
      if (limit === null && !estimated) notice(say.reachUnknown(k === 0 ? "lower" : "upper", eta.at))
    })
  }
  await work.checkpoint()
  const finding: LinkFinding = {
    link: name,
    eta: printed(eta.expression),
    slope: printed(slope),
    inverse: said.inverse === null ? null : printed(said.inverse.expression),
    range: [from.value, to.value],
    ends: [from.text, to.text],
    given: said.given.map((given) =>
      given.type === "estimate"
        ? { name: given.name, value: null, from: given.from, to: given.to }
        : { name: given.name, value: constants.givens.get(given.name)?.value ?? null, from: null, to: null },
    ),
    defined: proof.defined,
    strictlyMonotone: proof.monotone,
    differentiable: proof.differentiable,
    rising: proof.rising,
    reach,
    canonical: proof.canonical,
    level: proof.level,
    flat: made?.flat ?? [],
    own: notices.some(({ level }) => level === "fault") ? null : own,
    curve: curveOf(proof.pieces, constants.middles, [from.value, to.value]),
  }
  return notices.some(({ level }) => level === "fault") ? { ok: false, found: finding, notices } : { ok: true, found: finding, notices }
}

type Constants = {
  readonly givens: ReadonlyMap<Name, Given>
  /** What is estimated, by its symbol. */
  readonly ranges: Ranges
  /** Numbers for all of them, for a figure: the middle of what is estimated. */
  readonly middles: ReadonlyMap<Name, Given>
}

/** The constants, exactly; null once a fault was said. */
function constantsOf(said: LinkSaid, inputs: Inputs, notice: Say): Constants | null {
  const givens = new Map<Name, Given>()
  const middles = new Map<Name, Given>()
  const ranges = new Map<string, Interval>()
  let fault = false
  for (const given of said.given) {
    if (given.type === "estimate") {
      givens.set(given.name, { fraction: exact.symbol(given.name), value: Number.NaN })
      const middle = (given.from + given.to) / 2
      middles.set(given.name, { fraction: exact.double(middle) ?? exact.zero, value: middle })
      ranges.set(given.name, interval(given.from, given.to))
      continue
    }
    const number = numberOf(given.value, inputs)
    const fraction = number === null ? null : (exact.decimal(number.text) ?? exact.double(number.value))
    if (number === null || fraction === null) {
      const { bound, at } = given.value
      notice(say.notANumber(bound.type === "cell" ? bound.name : given.name, "given", at))
      fault = true
      continue
    }
    givens.set(given.name, { fraction, value: number.value })
    middles.set(given.name, { fraction, value: number.value })
  }
  return fault ? null : { givens, ranges, middles }
}

/** The number of a bound and its decimal: a dial stands at a decimal too, so its shortest text is what it means. */
function numberOf({ bound }: BoundSaid, inputs: Inputs): { readonly value: number; readonly text: string } | null {
  if (bound.type === "number") return { value: bound.value, text: bound.text }
  if (bound.type !== "cell") return null
  const value = inputs.get(bound.name)?.value
  return typeof value === "number" && Number.isFinite(value) ? { value, text: String(value) } : null
}

type Ending = { readonly end: End; readonly value: number; readonly text: string }

/** An end of the range: a number, an infinity, or a constant of the link. */
function endOf(said: BoundSaid, constants: Constants | null, inputs: Inputs, notice: Say): Ending | null {
  const { bound, at } = said
  if (bound.type === "infinity")
    return { end: { type: "infinity", sign: bound.sign }, value: bound.sign * Infinity, text: bound.sign === 1 ? "infinity" : "-infinity" }
  const given = bound.type === "cell" ? constants?.middles.get(bound.name) : undefined
  if (bound.type === "cell" && given !== undefined) {
    const place = constants?.givens.get(bound.name)?.fraction ?? given.fraction
    return { end: { type: "limit", place }, value: given.value, text: bound.name }
  }
  // A constant that has no number was said already.
  if (constants === null) return null
  const number = numberOf(said, inputs)
  const place = number === null ? null : (exact.decimal(number.text) ?? exact.double(number.value))
  if (number === null || place === null) {
    notice(say.notANumber(bound.type === "cell" ? bound.name : "estimate", "mean", at))
    return null
  }
  return { end: { type: "limit", place }, value: number.value, text: bound.type === "cell" ? bound.name : number.text }
}

function verdictNotices({ defined, monotone, differentiable }: Proof, { eta }: LinkSaid, notice: Say): void {
  if (eta === null) return
  const at = eta.at
  const all = [
    ["defined", defined],
    ["strictly monotone", monotone],
    ["differentiable", differentiable],
  ] as const
  const refutedAt = new Set<number>()
  for (const [property, verdict] of all) {
    if (verdict.verdict === "refuted") {
      // One point at which it is not defined refutes all three; it is said once.
      if (!refutedAt.has(verdict.witness) || property === "defined") notice(say.refuted(property, verdict.witness, at))
      refutedAt.add(verdict.witness)
    } else if (verdict.verdict === "undecided" && defined.verdict !== "refuted") notice(say.undecided(property, verdict as LinkVerdict, at))
  }
}

/** The number a limit is; of an enclosure, its middle. */
const limitOf = (limit: Interval | null): number | null =>
  limit === null
    ? null
    : limit.lo === limit.hi
      ? limit.lo
      : Number.isFinite(limit.hi - limit.lo)
        ? limit.lo + (limit.hi - limit.lo) / 2
        : null

/** Beyond these no mean of anything is ever met, and every reciprocal is flat. */
const [leastMean, greatestMean] = [1e-100, 1e100]

const isEveryday = ([from, to]: readonly [number, number]): boolean =>
  to > from && Math.min(Math.abs(from), Math.abs(to)) < greatestMean && Math.max(Math.abs(from), Math.abs(to)) > leastMean

const hasPieces = (expression: Expression): boolean =>
  expression.type === "call"
    ? expression.name === "if" || expression.of.some(hasPieces)
    : expression.type === "minus"
      ? hasPieces(expression.of)
      : expression.type === "pair" && (hasPieces(expression.left) || hasPieces(expression.right))

/** How far an inverse may be off, as a share of the mean, before it is another function. */
const mostOff = 1e-6

/** Whether the inverse leads back: checked at means all over the range, as far as rounding of η allows. */
function inverseNotice(own: OwnLink, { inverse }: LinkSaid, givens: ReadonlyMap<Name, Given>, notice: Say): void {
  if (inverse === null) return
  const link = linkOf({ name: "own", parameters: [], own: { ...own, inverse: null } })
  const numbers = new Map([...givens].map(([name, { value }]) => [name, value] as const))
  for (const mu of knotsBetween(own.range[0], own.range[1])) {
    const eta = link.eta(mu)
    const slope = link.slope(eta)
    const slack = mostOff * Math.abs(mu) + 64 * 2.3e-16 * Math.abs(eta * slope)
    // Where a step of η in its last digit moves the mean more than that, nothing can be said.
    if (!Number.isFinite(eta) || !Number.isFinite(slope) || !(slack < 1e-3 * Math.max(1e-12, Math.abs(mu)))) continue
    const back = worth(inverse.expression, eta, numbers)
    if (Math.abs(back - mu) <= slack) continue
    notice(say.inverseOff(eta, mu, back, inverse.at))
    return
  }
}

/** The inverse at one η. */
function worth(expression: Expression, eta: number, numbers: ReadonlyMap<Name, number>): number {
  const result = evaluated(expression, 1, (name) => {
    const value = name === "eta" ? eta : numbers.get(name)
    return value === undefined ? null : { type: "number", value }
  })
  return result.ok && "value" in result.vector ? result.vector.value : Number.NaN
}
