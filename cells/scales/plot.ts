// One plot: everything its candidates share (grid, lines, rows of each level), and each candidate drawn on it from a fit.

import type { Work } from "../../runtime/kind.ts"
import type { ScalesCurve } from "../block.ts"
import { linkFormula } from "../language/vocabulary.ts"
import type { ModelFinding } from "../model-finding.ts"
import type { Fit } from "../statistics/fit.ts"
import { criticalValue, familyOf, linkOf } from "../statistics/index.ts"
import type { Link, Range } from "../statistics/link.ts"
import type { LinkSpec } from "../statistics/problem.ts"
import { type Bridge, bridgeOf } from "./bridge.ts"
import { averagedLine, curveOf, heldLine, type Line } from "./curve.ts"
import type { CandidateFound } from "./finding.ts"
import type { Plan } from "./plan.ts"
import { observedMean, pointsOf } from "./points.ts"
import { ends, gridOf, gridPoints } from "./setting.ts"
import { troubleOf } from "./trouble.ts"

/** Averaging costs grid points × rows; this bounds their product, and the grid gives way first. */
const averagedWork = 20_000_000
const leastGrid = 25
/** Up to so many rows a candidate keeps its fit; beyond, a drag would not follow the hand anyway. */
const keptRows = 5_000

/** One plot: everything the candidates share, made once. */
export class Plot {
  readonly model: ModelFinding
  readonly plan: Plan
  readonly work: Work
  /** Means the family can have. */
  readonly possible: Range
  readonly grid: Float64Array
  readonly lines: readonly {
    readonly level: string | null
    readonly code: number | null
    readonly rows: Uint32Array
    readonly inside: Uint8Array
  }[]

  constructor(model: ModelFinding, plan: Plan, work: Work) {
    this.model = model
    this.plan = plan
    this.work = work
    this.possible = familyOf(model.problem.family).range
    const points = plan.averaged ? Math.max(leastGrid, Math.min(gridPoints, Math.floor(averagedWork / model.problem.rows))) : gridPoints
    this.grid =
      plan.places ??
      (plan.axis.levels === null ? gridOf(plan.range[0], plan.range[1], points) : Float64Array.from(plan.axis.levels, (_, i) => i))
    const all = Uint32Array.from({ length: model.problem.rows }, (_, i) => i)
    const levels = plan.levels ?? [{ level: null, code: null }]
    this.lines = levels.map(({ level, code }) => {
      const rows = code === null ? all : all.filter((row) => plan.codes?.[row] === code)
      const [low, high] = ends(Float64Array.from(rows, (row) => plan.x[row] as number))
      return { level, code, rows, inside: Uint8Array.from(this.grid, (at) => (at >= low && at <= high ? 1 : 0)) }
    })
  }

  /**
   * A candidate drawn from its fit. In a drag the others are drawn `beside` the model's own as lines alone: their bands and working responses
   * are seen only in a preview, and a hand on a dial is not on the strip. Their bridges span what the own points do.
   */
  async candidate(spec: LinkSpec, says: string, own: boolean, of: Fit, beside: CandidateFound | null = null): Promise<CandidateFound> {
    const { model, plan, grid, work } = this
    const link = this.link(spec, of)
    const c = beside === null ? criticalValue(of, model.problem.confidence) : null
    const curves: ScalesCurve[] = []
    const points: CandidateFound["points"][number][] = []
    for (const { level, code, rows, inside } of this.lines) {
      await work.checkpoint()
      const line: Line = plan.averaged
        ? await averagedLine(model, of, link, plan.of, grid, code, () => work.checkpoint())
        : heldLine(model, of, plan.of, grid, code)
      curves.push(curveOf(link, this.possible, line, c, grid, level, inside))
      if (!plan.points || rows.length === 0 || beside !== null) continue
      const known = plan.averaged ? await this.averagedAt(of, link, rows, code, line) : null
      const at = (x: Float64Array): Float64Array =>
        known === null ? heldLine(model, of, plan.of, x, code).eta : along(known.x, known.eta, x)
      points.push(pointsOf(model, of, spec, rows, plan.x, at, level, plan.axis.levels !== null))
    }
    const mean = overallMean(model)
    return {
      link: says,
      formula: spec.own?.formula ?? linkFormula(says),
      own,
      aic: of.aic,
      deviance: of.deviance,
      df: of.df,
      trouble: troubleOf({ ok: true, fit: of }),
      fitted: true,
      curves,
      points,
      bridge: this.bridge(link, curves, beside?.points ?? points),
      middle: { eta: link.eta(mean), slope: 1 / link.slope(link.eta(mean)) },
      fit: own || model.problem.rows > keptRows ? null : of,
    }
  }

  /**
   * The averaged curve at every x of these rows; where that is too much work, or a hand waits for it, the curve on the grid, between whose
   * points a circle is then off by less than can be seen.
   */
  private async averagedAt(
    of: Fit,
    link: Link,
    rows: Uint32Array,
    code: number | null,
    line: Line,
  ): Promise<{ readonly x: Float64Array; readonly eta: Float64Array }> {
    const { model, plan, grid, work } = this
    const places = Float64Array.from(new Set(Float64Array.from(rows, (row) => plan.x[row] as number))).sort()
    if (work.near !== null || places.length * model.problem.rows > averagedWork) return { x: grid, eta: line.eta }
    const { eta } = await averagedLine(model, of, link, plan.of, places, code, () => work.checkpoint())
    return { x: places, eta }
  }

  /** The link as the fit has it: the reciprocal on the side of zero its means are on. */
  private link(spec: LinkSpec, of: Fit): Link {
    return linkOf(spec, (of.mu[0] ?? 1) < 0 ? -1 : 1)
  }

  /** A candidate that is on the strip and has no fit. */
  unfitted(spec: LinkSpec, says: string): CandidateFound {
    const { model } = this
    return {
      link: says,
      formula: spec.own?.formula ?? linkFormula(says),
      own: false,
      aic: null,
      deviance: null,
      df: null,
      trouble: null,
      fitted: false,
      curves: [],
      points: [],
      bridge: this.bridge(this.link(spec, model.fit), [], []),
      middle: { eta: Number.NaN, slope: Number.NaN },
      fit: null,
    }
  }

  /** The bridge over what curves and points span; without them, over what was observed. */
  private bridge(link: Link, curves: readonly ScalesCurve[], points: CandidateFound["points"]): Bridge {
    const { problem } = this.model
    const drawn = [...curves.flatMap(({ mu }) => finite(mu)), ...points.flatMap(({ mean }) => finite(mean))]
    const seen = (): Float64Array => Float64Array.from(problem.y, (_, row) => observedMean(problem, row))
    return bridgeOf(link, this.possible, ends(drawn.length === 0 ? seen() : Float64Array.from(drawn)))
  }
}

const finite = (values: Float64Array): readonly number[] => {
  const [low, high] = ends(values.filter((value) => !Number.isNaN(value)))
  return low <= high ? [low, high] : []
}

/** Linear interpolation of `y` over the rising grid `x`, at other places; the ends go on flat. */
function along(x: Float64Array, y: Float64Array, at: Float64Array): Float64Array {
  return at.map((place) => {
    let [low, high] = [0, x.length - 1]
    while (high - low > 1) {
      const middle = (low + high) >> 1
      if ((x[middle] as number) <= place) low = middle
      else high = middle
    }
    const [from, to] = [x[low] as number, x[high] as number]
    const share = to > from ? Math.min(1, Math.max(0, (place - from) / (to - from))) : 0
    // At a place of the grid nothing is mixed, so that an infinite neighbour does no harm.
    if (share === 0) return y[low] as number
    if (share === 1) return y[high] as number
    return (y[low] as number) + share * ((y[high] as number) - (y[low] as number))
  })
}

/** μ₀ = Σaμ̂/Σa under the model's own link, per unit of exposure in the families with positive means. */
function overallMean(model: ModelFinding): number {
  const { trials, repeat, precision, exposure, family } = model.problem
  const units = family.name === "binomial" ? null : exposure
  let [sum, total] = [0, 0]
  for (let i = 0; i < model.fit.mu.length; i++) {
    const a = (repeat?.[i] ?? 1) * (precision?.[i] ?? 1) * (trials?.[i] ?? 1)
    sum += a * (model.fit.mu[i] as number)
    total += a * (units?.[i] ?? 1)
  }
  return sum / total
}
