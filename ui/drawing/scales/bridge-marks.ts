// The bridge as marks. Along each edge runs a column for numbers, clear of lines; between the columns the link bends its lines. A labelled
// line starts and ends in a knot beside its number, so that no line can be taken for a minus sign.

import type { ScalesBlock, ScalesCandidate } from "../../../cells/block.ts"
import { linkRole } from "../link-ink.ts"
import { type SceneMark, tenth, textWidth } from "../scene.ts"
import { bridgeHairs, etaAt, falls, joinArea, joinPath, type LabelledLine, labelledLines } from "./bridge.ts"
import { stay } from "./curves.ts"
import { type ScalesLayout, TICK_SIZE } from "./layout.ts"
import { label, path } from "./pieces.ts"
import { onSubjectScale } from "./preview.ts"

/** The column for numbers along an edge: room for `−12.34`, and more where numbers are longer. */
const COLUMN = 50
/** What stands in a column beside the number, in pixels: the tick before it and the knot after it. */
const BESIDE = 18
/** The lines keep at least this much of the bridge to bend in. */
const BEND = 34

/** Where the bridge's edges are, across the way its lines go. */
export interface Ways {
  readonly runs: "down" | "across"
  /** The edges that are the axes. */
  readonly near: number
  readonly far: number
  /** The edges of the columns for numbers. */
  readonly start: number
  readonly end: number
  /** The ends of the edges. */
  readonly low: number
  readonly high: number
}

export function waysOf(layout: ScalesLayout): Ways {
  const { frame } = layout.bridge
  const most = frame.right - frame.left - BEND - COLUMN
  const column = (texts: readonly string[]): number =>
    Math.min(most, Math.max(COLUMN, BESIDE + Math.max(0, ...texts.map((text) => textWidth(text, TICK_SIZE)))))
  return layout.arrangement === "beside"
    ? {
        runs: "down",
        near: frame.left,
        far: frame.right,
        start: frame.left + column(labelled(layout).map(({ muText }) => muText)),
        end: frame.right - column(labelled(layout).map(({ etaText }) => etaText)),
        low: frame.top,
        high: frame.bottom,
      }
    : {
        runs: "across",
        near: frame.top,
        far: frame.bottom,
        start: frame.top + 22,
        end: frame.bottom - 22,
        low: frame.left,
        high: frame.right,
      }
}

/** A layout is asked again for every move of a pointer. */
const remembered = new WeakMap<ScalesLayout, readonly LabelledLine[]>()

/** The lines that have numbers, as many as stand clear of each other. */
export function labelled(layout: ScalesLayout): readonly LabelledLine[] {
  const known = remembered.get(layout)
  if (known !== undefined) return known
  const { bridge, subject } = layout
  const { top, bottom } = bridge.frame
  const runs = layout.arrangement === "beside" ? "down" : "across"
  const falling = falls(subject.bridge)
  const most = runs === "across" ? (falling ? 5 : 7) : falling ? 6 : Math.max(5, Math.floor((bottom - top) / 28))
  const lines = labelledLines(subject.bridge, { mu: bridge.mu, eta: bridge.eta, runs }, most)
  remembered.set(layout, lines)
  return lines
}

export function bridgeMarks(block: ScalesBlock, layout: ScalesLayout, ghost: ScalesCandidate | null): readonly SceneMark[] {
  const { bridge, subject } = layout
  const ways = waysOf(layout)
  const { runs, near, far, start, end } = ways
  const edges = { mu: bridge.mu, eta: bridge.eta, runs }
  const role = linkRole(subject.link)
  const faded = ghost === null ? "" : " held-back"
  const falling = falls(subject.bridge)
  const marks: SceneMark[] = [...usedMarks(layout, ways, role)]
  const hairs = bridgeHairs(subject.bridge, edges, falling ? 13 : 8)
  marks.push(...path("hairs", `hair solid ${role}${faded}`, hairs.map((line) => joinPath(runs, start, end, line.from, line.to)).join("")))
  const lines = labelled(layout)
  for (const line of lines)
    marks.push(...path(`join-${line.muText}`, `join solid ${role}${faded}`, joinPath(runs, start, end, line.from, line.to)))
  if (ghost !== null) marks.push(...ghostJoins(block, layout, ghost, lines, ways))
  for (const line of lines)
    marks.push(
      ...knot(`knot-mu-${line.muText}`, role + faded, ways, start, line.from),
      ...knot(`knot-eta-${line.muText}`, role + faded, ways, end, line.to),
    )

  let ticks = ""
  for (const line of lines) {
    ticks +=
      runs === "down"
        ? `M${tenth(near)} ${tenth(line.from)}h4M${tenth(far)} ${tenth(line.to)}h-4`
        : `M${tenth(line.from)} ${tenth(near)}v4M${tenth(line.to)} ${tenth(far)}v-4`
    const [mu, eta] = [`mu-${line.muText}`, `eta-${line.muText}`]
    const lower = TICK_SIZE * 0.36
    if (runs === "down") {
      marks.push(
        label(mu, "ink", near + 7, line.from + lower, TICK_SIZE, "start", line.muText),
        label(eta, "ink", far - 7, line.to + lower, TICK_SIZE, "end", line.etaText),
      )
    } else {
      marks.push(
        label(mu, "ink", line.from, near + 16, TICK_SIZE, "middle", line.muText),
        label(eta, "ink", line.to, far - 8, TICK_SIZE, "middle", line.etaText),
      )
    }
  }
  marks.push(...path("bridge-ticks", "tick", ticks))
  if (runs === "across") {
    const { left, right, top, bottom } = bridge.frame
    marks.push(
      ...path("bridge-edges", "frame", `M${tenth(left)} ${tenth(top)}H${tenth(right)}M${tenth(left)} ${tenth(bottom)}H${tenth(right)}`),
    )
  }
  return [{ type: "group", key: "bridge", role: "bridge", marks }]
}

function knot(key: string, role: string, ways: Ways, across: number, along: number): readonly SceneMark[] {
  const [x, y] = ways.runs === "down" ? [across, along] : [along, across]
  return [{ type: "circle", key, role: `knot ${role}`, x: tenth(x), y: tenth(y), r: 2 }]
}

/** The same means under the previewed link: the ghost bends the lines. */
function ghostJoins(
  block: ScalesBlock,
  layout: ScalesLayout,
  ghost: ScalesCandidate,
  lines: readonly LabelledLine[],
  ways: Ways,
): readonly SceneMark[] {
  const { eta } = layout.bridge
  const moved = block.aligned ? stay : onSubjectScale(layout.subject, ghost)
  const joins = lines.flatMap((line) => {
    const to = eta.place(moved(etaAt(ghost.bridge, line.mu)))
    const inside = Number.isFinite(to) && (to - eta.start) * (to - eta.end) <= 0
    return inside ? [joinPath(ways.runs, ways.start, ways.end, line.from, to)] : []
  })
  return path("ghost-joins", `join ghost ${linkRole(ghost.link)}`, joins.join(""))
}

/** The part of the link that these data use: the span of fitted means inside the data, and the span of η it becomes. */
function usedMarks(layout: ScalesLayout, ways: Ways, role: string): readonly SceneMark[] {
  const { bridge, subject } = layout
  const used = usedMeans(subject)
  if (used === null) return []
  const within = (place: number): number => Math.min(ways.high, Math.max(ways.low, place))
  const from = used.map((mu) => within(bridge.mu.place(mu))) as [number, number]
  const to = used.map((mu) => within(bridge.eta.place(etaAt(subject.bridge, mu)))) as [number, number]
  if (![...from, ...to].every(Number.isFinite)) return []
  return path("used", `used ${role}`, joinArea(ways, from, to))
}

function usedMeans(subject: ScalesCandidate): readonly [number, number] | null {
  const first = subject.bridge.mu[0]
  const last = subject.bridge.mu.at(-1)
  let low = Number.POSITIVE_INFINITY
  let high = Number.NEGATIVE_INFINITY
  for (const curve of subject.curves) {
    for (const [i, mu] of curve.mu.entries()) {
      if (curve.inside[i] !== 1 || !Number.isFinite(mu)) continue
      low = Math.min(low, mu)
      high = Math.max(high, mu)
    }
  }
  return low > high || first === undefined || last === undefined ? null : [Math.max(low, first), Math.min(high, last)]
}
