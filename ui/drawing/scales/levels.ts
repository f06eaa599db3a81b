// A category across: at each level the observed mean, the fitted mean with its interval, and short strokes for the other candidates, side
// by side so that none hides another. There are no lines, since nothing lies between levels.

import type { ScalesBlock, ScalesCandidate, ScalesCurve } from "../../../cells/block.ts"
import { shapeOf, shapePath } from "../curve.ts"
import { linkRole } from "../link-ink.ts"
import { type SceneMark, tenth } from "../scene.ts"
import { levelIndex, ordered, placeOrEdge, pointMarks, stay, type Values, valuesOf, type Which } from "./curves.ts"
import type { PanelLayout, ScalesLayout } from "./layout.ts"
import { path } from "./pieces.ts"
import { onSubjectScale } from "./preview.ts"

/** Where the observed mean, the fitted mean and the first of the other candidates stand at a level, in steps from one another. */
const places = { observed: -0.75, fitted: 0.5, others: 1.4 } as const

/**
 * How the places of one level are shared out: the room of a curve, the step between neighbours, how far all are moved so that together they
 * stand in the middle, and who else stands there.
 */
function shares(
  block: ScalesBlock,
  layout: ScalesLayout,
  which: Which,
): { readonly room: number; readonly step: number; readonly moved: number; readonly others: readonly ScalesCandidate[] } {
  const { subject } = layout
  const { x } = layout[which]
  const comparable = (which === "mean" || block.aligned) && block.split === null
  const others = comparable
    ? block.candidates.filter((other) => other !== subject && other.curves.length > 0 && other.trouble === null)
    : []
  const room = ((x.place(1) - x.place(0)) * 0.86) / Math.max(1, subject.curves.length)
  const last = others.length === 0 ? places.fitted : places.others + others.length - 1
  const step = Math.min(13, room / (last - places.observed + 1))
  return { room, step, moved: (-step * (last + places.observed)) / 2, others }
}

/** How far from the middle of its level the fitted mean of a curve is drawn. */
export function fittedShift(block: ScalesBlock, layout: ScalesLayout, which: Which, curve: number): number {
  if (block.across.levels === null) return 0
  const { room, step, moved } = shares(block, layout, which)
  return (curve - (layout.subject.curves.length - 1) / 2) * room + moved + step * places.fitted
}

export function levelMarks(block: ScalesBlock, layout: ScalesLayout, ghost: ScalesCandidate | null, which: Which): readonly SceneMark[] {
  const { subject } = layout
  const panel = layout[which]
  const { room, step, moved, others: all } = shares(block, layout, which)
  const others = all.filter((other) => other !== ghost)
  const groups = subject.curves.length
  const marks: SceneMark[] = []
  subject.curves.forEach((curve, g) => {
    const centre = (g - (groups - 1) / 2) * room + moved
    const level = levelIndex(block, curve, g)
    marks.push(
      ...intervalMarks(
        subject.link,
        curve,
        valuesOf(curve, which, stay),
        panel,
        `${linkRole(subject.link)} solid level-${level}`,
        centre + step * places.fitted,
        true,
      ),
    )
    others.forEach((other, k) => {
      const same = other.curves[g]
      if (same !== undefined) {
        marks.push(
          ...intervalMarks(
            other.link,
            same,
            valuesOf(same, which, stay),
            panel,
            `${linkRole(other.link)} solid others`,
            centre + step * (places.others + k),
            false,
          ),
        )
      }
    })
    if (ghost !== null) {
      const same = ghost.curves[g]
      const onAxis = block.aligned ? stay : onSubjectScale(subject, ghost)
      if (same !== undefined) {
        marks.push(
          ...intervalMarks(
            `ghost-${ghost.link}`,
            same,
            ordered(valuesOf(same, which, onAxis)),
            panel,
            `${linkRole(ghost.link)} ghost`,
            centre + step * (places.others + others.length),
            true,
          ),
        )
      }
    }
    const points = subject.points[g]
    if (points === undefined) return
    const [values, size, largest] =
      which === "mean" ? ([points.mean, points.rows, 5] as const) : ([points.working, points.weight, 6] as const)
    marks.push(
      ...pointMarks(
        `points-${g}`,
        points,
        values,
        size,
        panel,
        shapeOf(block.split === null ? 0 : level),
        "",
        largest,
        centre + step * places.observed,
      ),
    )
  })
  return marks
}

function intervalMarks(
  key: string,
  curve: ScalesCurve,
  values: Values,
  panel: PanelLayout,
  role: string,
  shift: number,
  interval: boolean,
): readonly SceneMark[] {
  const marks: SceneMark[] = []
  const { top, bottom } = panel.frame
  const within = (y: number): number => Math.min(bottom, Math.max(top, y))
  for (let i = 0; i < curve.x.length; i += 1) {
    const y = panel.y.place(values.middle[i] as number)
    if (!Number.isFinite(y) || y < top || y > bottom) continue
    const x = panel.x.place(curve.x[i] as number) + shift
    const id = `${key}-${curve.level ?? ""}-${i}`
    if (interval) {
      const low = placeOrEdge(panel, values.low[i] as number)
      const high = placeOrEdge(panel, values.high[i] as number)
      if (Number.isFinite(low) && Number.isFinite(high)) {
        // An end past the frame has no cap: the bar goes on.
        const caps = [low, high].map((end) => (end === within(end) ? `M${tenth(x - 3)} ${tenth(end)}h6` : "")).join("")
        marks.push(...path(`bar-${id}`, `bar ${role}`, `M${tenth(x)} ${tenth(within(low))}V${tenth(within(high))}${caps}`))
      }
      marks.push(...path(`fitted-${id}`, `fitted solid ${role}`, shapePath("diamond", x, y, 3.6)))
    } else marks.push(...path(`fitted-${id}`, `bar ${role}`, `M${tenth(x - 4)} ${tenth(y)}h8`))
  }
  return marks
}
