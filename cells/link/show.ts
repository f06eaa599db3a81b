// A link as blocks: whether it is one, its formula and derivative, what was found of each property, and a figure of g over the range.

import type { Block, FigureBlock } from "../block.ts"
import type { Axis, Panel } from "../figure/figure.ts"
import { written, writtenInFull } from "../figure/number.ts"
import type { LinkFinding, LinkVerdict } from "../link-finding.ts"
import { asText, formulaOf } from "./formula.ts"
import type { LinkSaid } from "./words.ts"

export function shown(found: LinkFinding, said: LinkSaid): readonly Block[] {
  const formula = said.eta === null ? { type: "word" as const, text: found.eta } : formulaOf(said.eta.expression)
  return [
    { type: "sentence", tone: "lead", text: leadSays(found) },
    {
      type: "formula",
      formula: { type: "row", of: [{ type: "name", text: "η" }, { type: "sign", text: "=" }, formula] },
      text: `η = ${asText(found.eta)}`,
    },
    { type: "sentence", tone: "plain", text: verdictsSay(found) },
    { type: "sentence", tone: "plain", text: `${derivativeSays(found)} ${reachSays(found)}`.trim() },
    ...(givenSays(found) === "" ? [] : [{ type: "sentence" as const, tone: "quiet" as const, text: givenSays(found) }]),
    figure(found),
  ]
}

/** A number as a person reads it: in full where that is short. */
const number = (value: number): string => (`${value}`.length <= 10 ? writtenInFull(value) : written(value, 6))
const end = (value: number): string => (value === Infinity ? "∞" : value === -Infinity ? "−∞" : number(value))

const rangeSays = ({ range }: LinkFinding): string => `from ${end(range[0])} to ${end(range[1])}`

function leadSays(found: LinkFinding): string {
  const verdicts = [found.defined, found.strictlyMonotone, found.differentiable]
  if (verdicts.some(({ verdict }) => verdict === "refuted")) return `${found.link} is no link for means ${rangeSays(found)}.`
  const way = found.rising === null ? "" : found.rising ? ", rising" : ", falling"
  if (verdicts.some(({ verdict }) => verdict === "undecided"))
    return `Whether ${found.link} is a link for means ${rangeSays(found)} is not wholly decided${way}.`
  const canonical = found.canonical === null ? "" : ` It is the canonical link of ${found.canonical}, up to a linear change.`
  return `${found.link} is a link for means ${rangeSays(found)}${way}.${canonical}`
}

function verdictsSay(found: LinkFinding): string {
  const all: readonly (readonly [string, LinkVerdict])[] = [
    ["defined and finite", found.defined],
    ["strictly monotone", found.strictlyMonotone],
    ["differentiable", found.differentiable],
  ]
  const proved = all.filter(([, { verdict }]) => verdict === "proved").map(([says]) => says)
  const sentences = proved.length === 0 ? [] : [`Proved over the whole range: ${proved.join(", ")}.`]
  for (const [says, { verdict, witness }] of all) {
    if (verdict === "refuted")
      sentences.push(`Refuted: it is not ${says} at μ = ${typeof witness === "number" ? number(witness) : "a point"}.`)
    if (verdict === "undecided") sentences.push(`Undecided: whether it is ${says}${leftSays(witness)}.`)
  }
  return sentences.join(" ")
}

const leftSays = (witness: LinkVerdict["witness"]): string =>
  witness === null || typeof witness === "number"
    ? ""
    : witness[0] === witness[1]
      ? ` at μ = ${number(witness[0])}`
      : ` between μ = ${end(witness[0])} and ${end(witness[1])}`

const list = (words: readonly string[]): string =>
  words.length < 2 ? words.join("") : `${words.slice(0, -1).join(", ")} and ${words.at(-1)}`

const derivativeSays = (found: LinkFinding): string => `Its derivative dη/dμ is ${asText(found.slope)}.`

function reachSays({ reach, strictlyMonotone }: LinkFinding): string {
  if (strictlyMonotone.verdict === "refuted") return ""
  const [low, high] = reach
  if (low === -Infinity && high === Infinity) return "η reaches every number, so every η gives a possible mean."
  if (low === null || high === null) return "How far η reaches is not known at both ends."
  return `η reaches from ${end(low)} to ${end(high)} only; an η outside gives no mean.`
}

function givenSays({ given, inverse, own }: LinkFinding): string {
  const parts = given.map(({ name, value, from, to }) =>
    value === null
      ? `${name} is estimated in each model, between ${number(from ?? 0)} and ${number(to ?? 0)}`
      : `${name} is ${number(value)}`,
  )
  const sentences = parts.length === 0 ? [] : [`${list(parts)}.`]
  if (own !== null)
    sentences.push(inverse === null ? "The mean of an η is found numerically." : `μ = ${asText(inverse)}, checked against the formula.`)
  return sentences.join(" ")
}

/** A link may run to infinity at an end: what is drawn is the middle of it, and what lies beyond is cut. */
function window(values: Float64Array): readonly [number, number] {
  const finite = values.filter((value) => !Number.isNaN(value)).sort()
  if (finite.length === 0) return [0, 1]
  const at = (share: number): number => finite[Math.round(share * (finite.length - 1))] as number
  const [low, high] = [at(0.02), at(0.98)]
  const room = high > low ? 0.05 * (high - low) : Math.max(1, Math.abs(low)) * 0.5
  return [low - room, high + room]
}

function figure(found: LinkFinding): FigureBlock {
  const { mu, eta, slope } = found.curve
  const x: Axis = { label: "μ", unit: null, from: mu[0] ?? 0, to: mu.at(-1) ?? 1, levels: null }
  const panel = (title: string, label: string, values: Float64Array): Panel => {
    const [from, to] = window(values)
    const y = values.map((value) => (value >= from && value <= to ? value : Number.NaN))
    return { title, x, y: { label, unit: null, from, to, levels: null }, marks: [{ type: "line", series: found.link, x: mu.slice(), y }] }
  }
  const middle = mu.length >> 1
  const text = [
    `g over means from ${written(x.from, 3)} to ${written(x.to, 3)}: η goes from ${written(eta[0] ?? Number.NaN, 3)} through ${written(
      eta[middle] ?? Number.NaN,
      3,
    )} at μ = ${written(mu[middle] ?? Number.NaN, 3)} to ${written(eta.at(-1) ?? Number.NaN, 3)}.`,
    derivativeSays(found),
  ].join(" ")
  return { type: "figure", figure: { panels: [panel("the link", "η", eta), panel("its derivative", "dη/dμ", slope)] }, text }
}
