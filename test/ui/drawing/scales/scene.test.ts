// The two scales as a scene: nothing past its frame, no two texts on each other, and every part said in words.

import { describe, expect, it } from "vitest"
import type { ScalesBlock, ScalesCandidate } from "../../../../cells/block.ts"
import { type ScalesLayout, scalesLayout, scalesLegend, scalesScene } from "../../../../ui/drawing/scales/index.ts"
import { agreementMean, onSubjectScale } from "../../../../ui/drawing/scales/preview.ts"
import { type Box, boxesMeet, type SceneMark, textBox, textsOf } from "../../../../ui/drawing/scene.ts"
import {
  beetleScales,
  candidateOf,
  clottingScales,
  crowdedLevels,
  gridOver,
  largeScales,
  levelScales,
  manyScales,
  maths,
} from "../../../browser/gallery/samples.ts"

const WIDTHS = [340, 390, 500, 560, 640, 720, 860, 990, 1300]

const blocks: readonly (readonly [string, ScalesBlock])[] = [
  ["beetles", beetleScales()],
  ["beetles, all inside", beetleScales("logit", [1.69, 1.885])],
  ["a split", clottingScales()],
  ["a falling link", clottingScales("reciprocal", false)],
  ["levels", levelScales()],
  ["crowded levels", crowdedLevels()],
  ["large means", largeScales()],
  ["many points", manyScales(400)],
]

const laid = (block: ScalesBlock, width: number): ScalesLayout => {
  const layout = scalesLayout(block, width)
  if (layout === null) throw new Error("The sample has curves.")
  return layout
}

const flat = (marks: readonly SceneMark[]): readonly SceneMark[] =>
  marks.flatMap((mark) => (mark.type === "group" ? flat(mark.marks) : [mark]))
const within = (marks: readonly SceneMark[], group: string): readonly SceneMark[] =>
  flat(marks.flatMap((mark) => (mark.type === "group" && mark.role.includes(group) ? mark.marks : [])))

describe.each(blocks)("the two scales of %s", (_, block) => {
  it.each(WIDTHS)("have no text on another and none past the edge, at a width of %i", (width) => {
    for (const preview of [null, block.candidates[1]?.link ?? null]) {
      const scene = scalesScene(block, laid(block, width), preview)
      const texts = textsOf(scene.marks)
      const boxes = texts.map((text) => textBox(text))
      const past = texts.filter(
        (_, i) => (boxes[i] as Box).left < -8 || (boxes[i] as Box).right > width + 8 || (boxes[i] as Box).bottom > scene.height + 2,
      )
      expect(past.map((text) => text.text)).toEqual([])
      const meeting = texts.flatMap((text, i) =>
        texts.flatMap((other, j) => (j > i && boxesMeet(boxes[i] as Box, boxes[j] as Box) ? [`“${text.text}” on “${other.text}”`] : [])),
      )
      expect(meeting).toEqual([])
    }
  })

  it.each(WIDTHS)("draw curves, bands and ticks inside their frames, at a width of %i", (width) => {
    const layout = laid(block, width)
    const scene = scalesScene(block, layout, block.candidates[1]?.link ?? null)
    for (const which of ["mean", "predictor"] as const) {
      const { frame, yTicks, xTicks } = layout[which]
      for (const mark of within(scene.marks, `panel ${which}`)) {
        if (mark.type !== "path" || !/^(curve|band|hatch)\b/.test(mark.role) || mark.role.startsWith("curve-end")) continue
        const pairs = (mark.d.match(/-?[\d.]+ -?[\d.]+/g) ?? []).map((pair) => pair.split(" ").map(Number) as [number, number])
        const past = pairs.filter(
          ([x, y]) => x < frame.left - 0.1 || x > frame.right + 0.1 || y < frame.top - 0.1 || y > frame.bottom + 0.1,
        )
        expect(past).toEqual([])
      }
      for (const tick of yTicks) expect(tick.place >= frame.top - 0.01 && tick.place <= frame.bottom + 0.01).toBe(true)
      for (const tick of xTicks) expect(tick.place >= frame.left - 0.01 && tick.place <= frame.right + 0.01).toBe(true)
    }
  })

  it.each(WIDTHS)("keep what stands at a level clear of the frame and of its neighbours, at a width of %i", (width) => {
    if (block.across.levels === null) return
    const layout = laid(block, width)
    const marks = scalesScene(block, layout, null).marks
    for (const which of ["mean", "predictor"] as const) {
      const { x } = layout[which]
      const half = (x.place(1) - x.place(0)) / 2
      for (const mark of within(marks, `panel ${which}`)) {
        const place =
          mark.type === "circle"
            ? mark.x
            : mark.type === "path" && /^(bar|fitted)\b/.test(mark.role)
              ? Number(/[\d.]+/.exec(mark.d)?.[0])
              : null
        if (place === null) continue
        const level = Math.round(x.value(place))
        expect(Math.abs(place - x.place(level))).toBeLessThan(half - 4)
        if (mark.type === "path" && mark.role.startsWith("fitted")) expect(mark.key.endsWith(`-${level}`)).toBe(true)
      }
    }
  })

  it("hold the whole interval of every level, unless it is out of all proportion", () => {
    if (block.across.levels === null) return
    const { mean, predictor, subject } = laid(block, 860)
    for (const curve of subject.curves) {
      expect([...curve.etaLow, ...curve.etaHigh].filter((eta) => eta < predictor.y.from || eta > predictor.y.to)).toEqual([])
      expect([...curve.muLow, ...curve.muHigh].filter((mu) => mu < mean.y.from || mu > mean.y.to)).toEqual([])
    }
  })

  it.each(WIDTHS)("keep the numbers of the bridge clear of its lines, at a width of %i", (width) => {
    const layout = laid(block, width)
    if (layout.arrangement === "stacked") return
    const bridge = within(scalesScene(block, layout, null).marks, "bridge")
    const knots = bridge.flatMap((mark) => (mark.type === "circle" ? [mark] : []))
    const boxes = textsOf(bridge).map((text) => textBox(text))
    const touching = knots.filter(({ x, y, r }) =>
      boxes.some((box) => boxesMeet(box, { left: x - r, right: x + r, top: y - r, bottom: y + r })),
    )
    expect(touching).toEqual([])
  })

  it("hold every observed mean and every working response of weight", () => {
    const { mean, predictor, subject } = laid(block, 860)
    for (const points of subject.points) {
      const heaviest = Math.max(...points.weight)
      expect([...points.mean].filter((value) => value < mean.y.from || value > mean.y.to)).toEqual([])
      const outside = [...points.working].filter((value, i) => {
        return (points.weight[i] as number) > 0.1 * heaviest && (value < predictor.y.from || value > predictor.y.to)
      })
      expect(outside).toEqual([])
    }
  })

  it("have keys that are all different, so that a redraw meets its marks again", () => {
    for (const marks of [
      scalesScene(block, laid(block, 860), null).marks,
      within(scalesScene(block, laid(block, 860), null).marks, "panel mean"),
    ]) {
      const keys = marks.map((mark) => `${mark.type} ${mark.key}`)
      expect(new Set(keys).size).toBe(keys.length)
    }
  })
})

describe("what is drawn", () => {
  it("stands beside each other on a wide page and over each other on a narrow one", () => {
    expect(laid(beetleScales(), 860).arrangement).toBe("beside")
    const narrow = laid(beetleScales(), 390)
    expect(narrow.arrangement).toBe("stacked")
    expect(narrow.mean.frame.bottom).toBeLessThan(narrow.bridge.frame.top)
    expect(narrow.bridge.frame.bottom).toBeLessThan(narrow.predictor.frame.top)
  })

  it("has the chosen curve strong, the others thin, and the ghost only where it is previewed", () => {
    const block = beetleScales()
    const roles = (preview: string | null): readonly string[] =>
      within(scalesScene(block, laid(block, 860), preview).marks, "panel mean").map((mark) => mark.role)
    const still = roles(null)
    expect(still.filter((role) => /^curve (?!beyond).*chosen/.test(role))).toHaveLength(1)
    expect(still.filter((role) => /^curve (?!beyond)/.test(role))).toHaveLength(5)
    expect(still.some((role) => role.includes("ghost"))).toBe(false)
    expect(roles("logit").some((role) => role.startsWith("curve") && role.includes("ghost"))).toBe(true)
    expect(roles("cloglog").some((role) => role.includes("ghost"))).toBe(false)
  })

  it("hatches a strip beyond each end of the possible means that is near", () => {
    const hatches = (block: ScalesBlock): readonly string[] =>
      within(scalesScene(block, laid(block, 860), null).marks, "panel mean").flatMap((mark) => (mark.role === "hatch" ? [mark.key] : []))
    expect(hatches(beetleScales())).toEqual(["hatch-high", "hatch-low"])
    expect(hatches(clottingScales())).toEqual(["hatch-low"])
  })

  it("ends a curve with a bar where no mean is possible, on both scales, and says so", () => {
    const block = clottingScales("reciprocal", false)
    const reaching: ScalesBlock = {
      ...block,
      range: [0.5, 5],
      candidates: [
        candidateOf(
          "reciprocal",
          [{ level: null, line: (u) => -0.01655 + 0.01534 * u, error: () => 0.001, x: [1.6, 3, 4.6], y: [118, 35, 18], weight: () => 1 }],
          gridOver(0.5, 5),
          [1.6, 4.6],
          [0, Number.POSITIVE_INFINITY],
          { chosen: true, deltaAic: 0 },
        ),
      ],
    }
    const layout = laid(reaching, 860)
    const scene = scalesScene(reaching, layout, null)
    expect(within(scene.marks, "panel predictor").filter((mark) => mark.role.startsWith("curve-end"))).toHaveLength(1)
    expect(scalesLegend(reaching, layout).join(" ")).toContain("A bar ends a curve where no mean is possible")
    expect(scalesLegend(block, laid(block, 860)).join(" ")).not.toContain("A bar ends")
  })

  it("shows a working response past the edge as an arrow, and counts it in words", () => {
    const block = beetleScales()
    const far: ScalesCandidate[] = block.candidates.map((candidate) => ({
      ...candidate,
      points: candidate.points.map((points) => ({
        ...points,
        working: points.working.map((z, i) => (i === 7 ? 1e4 : z)),
        weight: points.weight.map((w, i) => (i === 7 ? 1e-9 : w)),
      })),
    }))
    const layout = laid({ ...block, candidates: far }, 860)
    const marks = within(scalesScene({ ...block, candidates: far }, layout, null).marks, "panel predictor")
    expect(marks.some((mark) => mark.role === "point off")).toBe(true)
    expect(layout.predictor.y.to).toBeLessThan(30)
    expect(scalesLegend({ ...block, candidates: far }, layout).join(" ")).toContain("One working response lies past the edge")
  })

  it("names each split level on its line and in the key", () => {
    const texts = textsOf(scalesScene(clottingScales(), laid(clottingScales(), 860), null).marks).map((mark) => mark.text)
    expect(texts.filter((text) => text === "one").length).toBeGreaterThanOrEqual(2)
    expect(texts.filter((text) => text === "two").length).toBeGreaterThanOrEqual(2)
  })

  it("says on the plot what is held", () => {
    const texts = textsOf(scalesScene(levelScales(), laid(levelScales(), 860), null).marks).map((mark) => mark.text)
    expect(texts).toContain("Held: age 71.4 (the mean)")
  })

  it("is nothing where no candidate has a curve", () => {
    const block = beetleScales()
    expect(scalesLayout({ ...block, candidates: block.candidates.map((candidate) => ({ ...candidate, curves: [] })) }, 860)).toBeNull()
  })
})

describe("a ghost", () => {
  it.each(["logit", "probit", "loglog", "cauchit"])("of %s agrees with the chosen link in value and slope where it is said to", (link) => {
    const block = beetleScales()
    const subject = block.candidates.find((candidate) => candidate.chosen) as ScalesCandidate
    const other = block.candidates.find((candidate) => candidate.link === link) as ScalesCandidate
    const at = agreementMean(subject)
    const moved = onSubjectScale(subject, other)
    const [own, its] = [maths["cloglog"], maths[link]]
    if (own === undefined || its === undefined) throw new Error("Unknown link.")
    expect(moved(its.g(at))).toBeCloseTo(own.g(at), 3)
    const step = 0.001
    const slope = (g: (mu: number) => number): number => (g(at + step) - g(at - step)) / (2 * step)
    expect(slope((mu) => moved(its.g(mu))) / slope(own.g)).toBeCloseTo(1, 2)
  })
})
