// The two scales in words: what each kind of mark means, only for the marks that are there. The sentences for those who cannot see the
// figure come with the finding.

import type { ScalesBlock, TableBlock, TableEntry } from "../../../cells/block.ts"
import { decimalsForExtent, writtenFixed } from "../number.ts"
import type { ScalesLayout } from "./layout.ts"
import { agreementMean } from "./preview.ts"

export function scalesLegend(block: ScalesBlock, layout: ScalesLayout): readonly string[] {
  const { subject, mean, predictor } = layout
  const sentences: string[] = []
  const hasPoints = subject.points.some((points) => points.x.length > 0)
  const [first, second] = layout.arrangement === "beside" ? ["left", "right"] : ["above", "below"]
  if (hasPoints) {
    const mark = block.split === null ? "Circles" : "Points"
    sentences.push(`${mark} ${first}: observed means. ${mark} ${second}: working responses, sized by working weight.`)
  }
  const percent = `${Math.round(block.confidence * 1000) / 10} %`
  sentences.push(block.across.levels === null ? `Bands: ${percent} for the mean, at each x by itself.` : `Bars: ${percent} for the mean.`)
  if (block.possible[0] > mean.y.from || block.possible[1] < mean.y.to) sentences.push("Hatched: means that cannot be.")
  if (block.across.levels === null && (block.range[0] < block.data[0] || block.range[1] > block.data[1])) {
    sentences.push("Shaded: outside the data, lines there are extrapolated.")
  }
  sentences.push("Tinted in the bridge: the means these data use.")
  const beside = block.candidates.filter((candidate) => candidate !== subject && candidate.curves.length > 0)
  if (beside.some((candidate) => candidate.trouble === null) && block.split === null) {
    sentences.push(block.across.levels === null ? "Thin lines: candidates for comparison." : "Short strokes: candidates for comparison.")
  }
  if (beside.some((candidate) => candidate.trouble !== null || block.split !== null)) {
    sentences.push(block.split === null ? "Fits in trouble are drawn when rested on." : "Candidates are drawn when rested on.")
  }
  const cut = subject.points.reduce(
    (count, points) => count + points.working.reduce((sum, z) => sum + (z < predictor.y.from || z > predictor.y.to ? 1 : 0), 0),
    0,
  )
  if (cut > 0)
    sentences.push(`${cut === 1 ? "One working response lies" : `${cut} working responses lie`} past the edge, as an arrow shows.`)
  if (subject.curves.some((curve) => curve.mu.some(Number.isNaN))) sentences.push("A bar ends a curve where no mean is possible beyond it.")
  if (block.aligned) sentences.push("All links are drawn to agree in value and slope at the middle of the data.")
  return sentences
}

/** What a ghost is, said while it is there. */
export function ghostSays(block: ScalesBlock, layout: ScalesLayout, link: string): string {
  if (block.aligned) return `${link}: a preview, nothing is changed yet.`
  const at = writtenFixed(agreementMean(layout.subject), Math.max(1, decimalsForExtent((layout.mean.y.to - layout.mean.y.from) * 4)))
  return `${link}: a preview, nothing is changed yet. Its η is drawn to agree with ${layout.subject.link} in value and slope at μ = ${at}.`
}

/** The points of the candidate that sets the axes, as a table: where each stands on both scales, and what it weighs. */
export function pointsTable(block: ScalesBlock, layout: ScalesLayout): TableBlock {
  const { across, response, split } = block
  const { link, points } = layout.subject
  const levels = across.levels
  const unit = (text: string, of: string | null): string => (of === null ? text : `${text} (${of})`)
  return {
    type: "table",
    caption: `The points under ${link} in numbers`,
    columns: [
      ...(split === null ? [] : [{ head: split.name, says: null, align: "text" as const }]),
      { head: unit(across.label, across.unit), says: null, align: levels === null ? "number" : "text" },
      { head: unit(response.label, response.unit), says: "The observed mean, on the mean scale", align: "number" },
      { head: "working response", says: "On the linear-predictor scale", align: "number" },
      { head: "working weight", says: "What the point weighs in the last step of the fit", align: "number" },
      { head: "rows", says: "How many rows the point stands for", align: "number" },
    ],
    rows: points.flatMap((group) =>
      Array.from(group.x, (x, i): readonly TableEntry[] => [
        ...(split === null ? [] : [group.level ?? ""]),
        levels === null ? { value: x, digits: 5 } : (levels[Math.round(x)] ?? ""),
        { value: group.mean[i] as number, digits: 4 },
        { value: group.working[i] as number, digits: 4 },
        { value: group.weight[i] as number, digits: 3 },
        { value: group.rows[i] as number, digits: 1 },
      ]),
    ),
    folded: false,
  }
}
