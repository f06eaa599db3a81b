// A finding of `scales` as blocks: the figure itself, and its numbers as a table. Arrays are copied, since blocks are handed over.

import type { Intent } from "../../runtime/notice.ts"
import type { Block, ScalesBlock, ScalesCandidate, ScalesCurve, ScalesPoints, TableBlock, TableEntry } from "../block.ts"
import { written } from "../figure/number.ts"
import type { CandidateFound, ScalesFinding } from "./finding.ts"

export function shown(found: ScalesFinding): readonly Block[] {
  return [scalesBlock(found), numbers(found)]
}

function scalesBlock(found: ScalesFinding): ScalesBlock {
  const least = leastAic(found)
  const shared: Shared = new Map()
  return {
    type: "scales",
    across: found.across,
    response: found.response,
    split: found.split,
    possible: found.possible,
    range: found.range,
    data: found.data,
    held: found.heldSays,
    aligned: found.aligned,
    complete: found.complete,
    confidence: found.confidence,
    candidates: found.candidates.map((candidate) => drawn(candidate, found, least, shared)),
    summary: summaryText(found),
  }
}

/** What all curves have in common is copied once. */
type Shared = Map<Float64Array | Uint8Array, Float64Array | Uint8Array>

function copied<Values extends Float64Array | Uint8Array>(values: Values, shared: Shared): Values {
  const copy = shared.get(values) ?? values.slice()
  shared.set(values, copy)
  return copy as Values
}

function drawn(candidate: CandidateFound, found: ScalesFinding, least: number | null, shared: Shared): ScalesCandidate {
  const align = found.aligned
    ? alignment(candidate, found.candidates[0] as CandidateFound)
    : (eta: Float64Array): Float64Array => eta.slice()
  return {
    link: candidate.link,
    formula: candidate.formula,
    chosen: candidate.own,
    deltaAic: deltaAic(candidate, found, least),
    trouble: candidate.trouble,
    choose: choice(candidate.link, found.model),
    curves: candidate.curves.map((curve) => curveCopy(curve, align, shared)),
    points: candidate.points.map((points) => pointsCopy(points, align)),
    bridge: { mu: candidate.bridge.mu.slice(), eta: align(candidate.bridge.eta) },
  }
}

/** Choosing a candidate writes the model's clause. */
const choice = (link: string, model: string): Intent => ({
  label: `Take the link ${link} in ${model}`,
  edits: [{ cell: model, clause: "link", nth: 0, says: link }],
})

/** g is drawn as g_M(μ₀) + g_M'(μ₀)·(g − g(μ₀))/g'(μ₀): equal value and slope at the middle of the data. */
function alignment(of: CandidateFound, own: CandidateFound): (eta: Float64Array) => Float64Array {
  if (of.own || !Number.isFinite(of.middle.slope)) return (eta) => eta.slice()
  const scale = own.middle.slope / of.middle.slope
  return (eta) => eta.map((at) => own.middle.eta + scale * (at - of.middle.eta))
}

const curveCopy = (curve: ScalesCurve, align: (eta: Float64Array) => Float64Array, shared: Shared): ScalesCurve => ({
  level: curve.level,
  x: copied(curve.x, shared),
  eta: align(curve.eta),
  etaLow: align(curve.etaLow),
  etaHigh: align(curve.etaHigh),
  mu: curve.mu.slice(),
  muLow: curve.muLow.slice(),
  muHigh: curve.muHigh.slice(),
  inside: copied(curve.inside, shared),
})

const pointsCopy = (points: ScalesPoints, align: (eta: Float64Array) => Float64Array): ScalesPoints => ({
  level: points.level,
  x: points.x.slice(),
  mean: points.mean.slice(),
  working: align(points.working),
  weight: points.weight.slice(),
  rows: points.rows.slice(),
})

/** The least AIC among the candidates; null where one of them has none yet. */
export function leastAic(found: ScalesFinding): number | null {
  const all = found.candidates.flatMap(({ aic }) => (aic === null ? [] : [aic]))
  return found.complete && all.length > 0 ? Math.min(...all) : null
}

export const deltaAic = (candidate: CandidateFound, found: ScalesFinding, least = leastAic(found)): number | null =>
  candidate.aic === null || least === null ? null : candidate.aic - least

/** At most this many rows a curve, the ends among them. */
const tableRows = 9

function numbers(found: ScalesFinding): TableBlock {
  const own = found.candidates[0] as CandidateFound
  const percent = `${Math.round(found.confidence * 1000) / 10} %`
  const split = found.split !== null
  const rows: TableEntry[][] = own.curves.flatMap((curve) => {
    const places = found.across.levels === null ? Math.min(curve.x.length, tableRows) : curve.x.length
    return Array.from({ length: places }, (_, k) => {
      const i = places === 1 ? 0 : Math.round((k * (curve.x.length - 1)) / (places - 1))
      const x = curve.x[i] as number
      const label: TableEntry = found.across.levels === null ? { value: x, digits: 4 } : (found.across.levels[x] ?? "")
      return [
        ...(split ? [curve.level ?? ""] : []),
        label,
        number(curve.mu[i]),
        interval(curve.muLow[i], curve.muHigh[i]),
        number(curve.eta[i]),
        curve.inside[i] === 1 ? "inside" : "outside the data",
      ]
    })
  })
  const unit = found.across.unit === null ? "" : ` (${found.across.unit})`
  return {
    type: "table",
    caption: `The curve under ${own.link} in numbers`,
    columns: [
      ...(split ? [{ head: found.split?.name ?? "", says: null, align: "text" as const }] : []),
      { head: `${found.across.label}${unit}`, says: null, align: found.across.levels === null ? ("number" as const) : ("text" as const) },
      { head: "μ", says: "The fitted mean", align: "number" },
      { head: `${percent} interval of μ`, says: "For the mean, at each x by itself", align: "number" },
      { head: "η", says: `The linear predictor, ${own.formula}`, align: "number" },
      { head: "data", says: "Whether x lies within the data", align: "text" },
    ],
    rows,
    folded: true,
  }
}

const number = (value: number | undefined): TableEntry => (value === undefined || Number.isNaN(value) ? null : { value, digits: 4 })

const interval = (from: number | undefined, to: number | undefined): TableEntry =>
  from === undefined || to === undefined || Number.isNaN(from) || Number.isNaN(to) ? null : { from, to, digits: 4 }

/** Three significant digits, for a sentence. */
const said = (value: number): string => written(value, 3)

function summaryText(found: ScalesFinding): string {
  const own = found.candidates[0] as CandidateFound
  const sentences: string[] = []
  for (const curve of own.curves) {
    const at = (i: number): string => found.across.levels?.[curve.x[i] as number] ?? said(curve.x[i] as number)
    const drawnAt = Array.from(curve.mu.keys()).filter((i) => !Number.isNaN(curve.mu[i] as number))
    const [first, last] = [drawnAt[0], drawnAt[drawnAt.length - 1]]
    if (first === undefined || last === undefined) continue
    const level = curve.level === null ? "" : `, ${found.split?.name} ${curve.level}`
    sentences.push(
      `Under ${own.link}${level}, the mean of ${found.response.label} goes from ${said(curve.mu[first] as number)} at ${found.across.label} ${at(first)} to ${said(
        curve.mu[last] as number,
      )} at ${at(last)}; the linear predictor from ${said(curve.eta[first] as number)} to ${said(curve.eta[last] as number)}.`,
    )
  }
  if (found.across.levels === null && (found.range[0] < found.data[0] || found.range[1] > found.data[1])) {
    sentences.push(`The data lie between ${said(found.data[0])} and ${said(found.data[1])}; beyond them the curve is extrapolated.`)
  }
  if (found.heldSays !== null) sentences.push(`Drawn with ${found.heldSays}.`)
  const least = leastAic(found)
  const others = found.candidates.flatMap((candidate) => {
    const delta = deltaAic(candidate, found, least)
    return delta === null ? [] : [`${candidate.link} ${delta === 0 ? "lowest" : `+${said(delta)}`}`]
  })
  if (others.length > 1) sentences.push(`AIC: ${others.join(", ")}.`)
  return sentences.join(" ")
}
