// Sample blocks for the gallery and its tests. Fits of Bliss's beetles come from the coefficients and covariances of the reference file,
// turned into curves here by the plain formulas; they are for looking at, not for checking numbers.

import type {
  Block,
  DialBlock,
  FigureBlock,
  FormulaBlock,
  ProseBlock,
  ScalesBlock,
  ScalesCandidate,
  ScalesCurve,
  ScalesPoints,
  TableBlock,
  TapeBlock,
} from "../../../cells/block.ts"
import type { Formula } from "../../../cells/figure/formula.ts"

interface LinkMaths {
  readonly formula: string
  g(mu: number): number
  h(eta: number): number
  slope(eta: number): number
}

const phi = (z: number): number => Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI)

/** Normal distribution function, by the error function's continued fraction in the tails and its series in the middle. */
function normalCdf(z: number): number {
  const a = Math.abs(z)
  if (a > 5) {
    const tail = phi(a) / (a + 1 / (a + 2 / (a + 3 / (a + 4 / a))))
    return z > 0 ? 1 - tail : tail
  }
  let [term, sum] = [a, a]
  for (let k = 1; k < 200; k += 1) {
    term *= (a * a) / (2 * k + 1)
    sum += term
  }
  const upper = 0.5 + phi(a) * sum
  return z > 0 ? upper : 1 - upper
}

function normalQuantile(p: number): number {
  let z = 0
  for (let k = 0; k < 60; k += 1) z -= Math.max(-1, Math.min(1, (normalCdf(z) - p) / phi(z)))
  return z
}

export const maths: Readonly<Record<string, LinkMaths>> = {
  logit: {
    formula: "ln(μ/(1 − μ))",
    g: (m) => Math.log(m / (1 - m)),
    h: (e) => 1 / (1 + Math.exp(-e)),
    slope: (e) => 1 / (2 + Math.exp(e) + Math.exp(-e)),
  },
  probit: { formula: "Φ⁻¹(μ)", g: normalQuantile, h: normalCdf, slope: phi },
  cloglog: {
    formula: "ln(−ln(1 − μ))",
    g: (m) => Math.log(-Math.log1p(-m)),
    h: (e) => -Math.expm1(-Math.exp(e)),
    slope: (e) => Math.exp(e - Math.exp(e)),
  },
  loglog: {
    formula: "−ln(−ln(μ))",
    g: (m) => -Math.log(-Math.log(m)),
    h: (e) => Math.exp(-Math.exp(-e)),
    slope: (e) => Math.exp(-e - Math.exp(-e)),
  },
  cauchit: {
    formula: "tan(π(μ − ½))",
    g: (m) => Math.tan(Math.PI * (m - 0.5)),
    h: (e) => 0.5 + Math.atan(e) / Math.PI,
    slope: (e) => 1 / (Math.PI * (1 + e * e)),
  },
  log: { formula: "ln(μ)", g: Math.log, h: Math.exp, slope: Math.exp },
  identity: { formula: "μ", g: (m) => m, h: (e) => e, slope: () => 1 },
  reciprocal: { formula: "1/μ", g: (m) => 1 / m, h: (e) => (e > 0 ? 1 / e : Number.NaN), slope: (e) => -1 / (e * e) },
  square_root: { formula: "√μ", g: Math.sqrt, h: (e) => (e > 0 ? e * e : Number.NaN), slope: (e) => 2 * e },
}

const maths_ = (link: string): LinkMaths => maths[link] as LinkMaths

export interface LineSpec {
  readonly level: string | null
  readonly line: (x: number) => number
  readonly error: (x: number) => number
  readonly x: readonly number[]
  readonly y: readonly number[]
  readonly weight: (mu: number, slope: number, i: number) => number
  readonly rows?: readonly number[]
}

export function gridOver(from: number, to: number, points = 201): readonly number[] {
  return Array.from({ length: points }, (_, i) => from + ((to - from) * i) / (points - 1))
}

/** A candidate from its straight lines. */
export function candidateOf(
  link: string,
  lines: readonly LineSpec[],
  grid: readonly number[],
  data: readonly [number, number],
  possible: readonly [number, number],
  more: { chosen: boolean; deltaAic: number | null },
): ScalesCandidate {
  const { g, h, slope, formula } = maths_(link)
  const falling = slope(g(0.4)) < 0
  const within = (eta: number): number => {
    const mu = h(eta)
    return Number.isNaN(mu) ? (falling === eta <= 0 ? possible[1] : possible[0]) : mu
  }
  const curves = lines.map(({ level, line, error }): ScalesCurve => {
    const eta = grid.map(line)
    const half = grid.map((x) => 1.96 * error(x))
    const ends = eta.map((e, i) => [within(e - (half[i] as number)), within(e + (half[i] as number))] as const)
    return {
      level,
      x: Float64Array.from(grid),
      eta: Float64Array.from(eta),
      etaLow: Float64Array.from(eta, (e, i) => e - (half[i] as number)),
      etaHigh: Float64Array.from(eta, (e, i) => e + (half[i] as number)),
      mu: Float64Array.from(eta, h),
      muLow: Float64Array.from(ends, ([a, b], i) => (Number.isNaN(h(eta[i] as number)) ? Number.NaN : Math.min(a, b))),
      muHigh: Float64Array.from(ends, ([a, b], i) => (Number.isNaN(h(eta[i] as number)) ? Number.NaN : Math.max(a, b))),
      inside: Uint8Array.from(grid, (x) => (x >= data[0] && x <= data[1] ? 1 : 0)),
    }
  })
  const points = lines.map(({ level, line, x, y, weight, rows }): ScalesPoints => {
    const eta = x.map(line)
    return {
      level,
      x: Float64Array.from(x),
      mean: Float64Array.from(y),
      working: Float64Array.from(eta, (e, i) => e + ((y[i] as number) - h(e)) / slope(e)),
      weight: Float64Array.from(eta, (e, i) => weight(h(e), slope(e), i)),
      rows: Uint32Array.from(x, (_, i) => rows?.[i] ?? 1),
    }
  })
  const steps = 96
  const isShare = possible[1] === 1
  const seen = [...curves.flatMap((curve) => [...curve.mu]), ...points.flatMap((p) => [...p.mean])].filter(Number.isFinite)
  const [low, high] = [Math.max(Math.max(...seen) / 500, Math.min(...seen)), Math.max(...seen)]
  const mu = Array.from({ length: steps }, (_, i) => {
    const t = (i + 1) / (steps + 1)
    return isShare ? t * t * (3 - 2 * t) : low + ((high - low) * i) / (steps - 1)
  })
  return {
    link,
    formula,
    chosen: more.chosen,
    deltaAic: more.deltaAic,
    trouble: null,
    choose: { label: `Take the link ${link} in m`, edits: [{ cell: "m", clause: "link", nth: 0, says: link }] },
    curves,
    points,
    bridge: { mu: Float64Array.from(mu), eta: Float64Array.from(mu, g) },
  }
}

// Bliss (1935), beetles killed by carbon disulphide, as tabulated in Dobson & Barnett (2008), table 7.2; fits and covariances to ten
// digits from the reference computations that the tests of the fitting are held to.
const beetles = {
  dose: [1.6907, 1.7242, 1.7552, 1.7842, 1.8113, 1.8369, 1.861, 1.8839],
  n: [59, 60, 62, 56, 63, 59, 62, 60],
  killed: [6, 13, 18, 28, 52, 53, 61, 60],
}
const beetleFits = {
  logit: { a: -60.71745456, b: 34.27032573, aa: 26.83977127, ab: -15.08215101, bb: 8.480559791, aic: 41.430269 },
  probit: { a: -34.9352589, b: 19.72793421, aa: 7.011468668, ab: -3.93654385, bb: 2.211868067, aic: 40.317796 },
  cloglog: { a: -39.57231061, b: 22.04116982, aa: 10.49936665, ab: -5.82865149, bb: 3.237679103, aic: 33.644477 },
  loglog: { a: -37.5589058, b: 21.52397973, aa: 8.659016956, ab: -4.929835892, bb: 2.808941462, aic: 58.11534 },
  cauchit: { a: -77.32000969, b: 43.52602775, aa: 128.7773374, ab: -72.37596648, bb: 40.68589927, aic: 50.356245 },
} as const

/** Bliss's beetles under five links, from the reference fits. */
export function beetleScales(chosen = "cloglog", range: readonly [number, number] = [1.65, 1.94]): ScalesBlock {
  const { dose, n, killed } = beetles
  const grid = gridOver(range[0], range[1])
  const data = [Math.min(...dose), Math.max(...dose)] as const
  const best = Math.min(...Object.values(beetleFits).map((fit) => fit.aic))
  return {
    type: "scales",
    across: { name: "dose", label: "dose", unit: "log10 mg/l", levels: null },
    response: { label: "share of beetles killed", unit: null },
    split: null,
    possible: [0, 1],
    range,
    data,
    held: null,
    aligned: false,
    complete: true,
    confidence: 0.95,
    candidates: Object.entries(beetleFits).map(([link, fit]) => {
      const line: LineSpec = {
        level: null,
        line: (x) => fit.a + fit.b * x,
        error: (x) => Math.sqrt(fit.aa + 2 * fit.ab * x + fit.bb * x * x),
        x: dose,
        y: killed.map((y, i) => y / (n[i] as number)),
        weight: (mu, slope, i) => ((n[i] as number) * slope * slope) / (mu * (1 - mu)),
      }
      return candidateOf(link, [line], grid, data, [0, 1], { chosen: link === chosen, deltaAic: fit.aic - best })
    }),
    summary:
      "Under cloglog, the mean of share of beetles killed goes from 0.040 at dose 1.65 to 1.000 at 1.94. The data lie between 1.691 and 1.884; beyond them the curve is extrapolated.",
  }
}

/** A falling link: clotting-like times under the reciprocal, with two levels, and other links beside. */
export function clottingScales(chosen = "reciprocal", split = true): ScalesBlock {
  const x = [5, 10, 15, 20, 30, 40, 60, 80, 100].map((u) => Math.log(u))
  const times = [
    [118, 58, 42, 35, 27, 25, 21, 19, 18],
    [69, 35, 26, 21, 18, 16, 13, 12, 12],
  ]
  const lines: Record<string, readonly [number, number][]> = {
    reciprocal: [
      [-0.01655, 0.01534],
      [-0.02391, 0.0236],
    ],
    log: [
      [5.5, -0.602],
      [4.98, -0.59],
    ],
    identity: [
      [115, -24],
      [70, -14.2],
    ],
  }
  const grid = gridOver(1.2, 5)
  const data = [x[0] as number, x.at(-1) as number] as const
  return {
    type: "scales",
    across: { name: "u", label: "concentration", unit: "ln per cent", levels: null },
    response: { label: "clotting time", unit: "s" },
    split: split ? { name: "lot", levels: ["one", "two"] } : null,
    possible: [0, Number.POSITIVE_INFINITY],
    range: [1.2, 5],
    data,
    held: "temperature 37 °C (the mean), operator A (the first level), storage 14 days (the mean)",
    aligned: false,
    complete: true,
    confidence: 0.95,
    candidates: Object.entries(lines).map(([link, coefficients], k) =>
      candidateOf(
        link,
        coefficients.slice(0, split ? 2 : 1).map(([a, b], lot) => ({
          level: split ? (["one", "two"][lot] as string) : null,
          line: (u: number) => a + b * u,
          error: (u: number) => (link === "reciprocal" ? 0.0006 + 0.0004 * Math.abs(u - 3) : link === "log" ? 0.05 : 2),
          x,
          y: times[lot] as number[],
          weight: (mu: number, slope: number) => (slope * slope) / (mu * mu),
        })),
        grid,
        data,
        [0, Number.POSITIVE_INFINITY],
        { chosen: link === chosen, deltaAic: [0, 11.3, 38][k] ?? null },
      ),
    ),
    summary: "Clotting time falls with concentration in both lots.",
  }
}

/** A category across, rates under log and identity. */
export function levelScales(): ScalesBlock {
  const levels = ["harbour", "north quay", "old town", "upper meadow", "mill"]
  const y = [2.1, 4.4, 3.2, 7.9, 5.1]
  const candidate = (link: string, chosen: boolean, deltaAic: number | null): ScalesCandidate =>
    candidateOf(
      link,
      [
        {
          level: null,
          line: (x) => maths_(link).g((y[x] as number) * (0.94 + 0.03 * x)),
          error: (x) => (0.18 + 0.02 * x) * (link === "log" ? 1 : link === "square_root" ? 0.9 : (y[x] as number)),
          x: [0, 1, 2, 3, 4],
          y,
          weight: (mu, slope) => (slope * slope) / mu,
          rows: [12, 30, 22, 8, 17],
        },
      ],
      [0, 1, 2, 3, 4],
      [0, 4],
      [0, Number.POSITIVE_INFINITY],
      { chosen, deltaAic },
    )
  return {
    type: "scales",
    across: { name: "site", label: "site", unit: null, levels },
    response: { label: "falls per bed and year", unit: null },
    split: null,
    possible: [0, Number.POSITIVE_INFINITY],
    range: [0, 4],
    data: [0, 4],
    held: "age 71.4 (the mean)",
    aligned: false,
    complete: false,
    confidence: 0.9,
    candidates: [
      candidate("log", true, null),
      candidate("identity", false, null),
      candidate("square_root", false, null),
      {
        ...candidate("reciprocal", false, null),
        curves: [],
        points: [],
        trouble: "The link reciprocal reaches means below 0 at site mill, so no fit keeps all means possible.",
      },
    ],
    summary: "Falls per bed and year by site.",
  }
}

/** A thousand single trials, to be drawn as points: more than a finding would bring. */
/** Levels with as many candidates as a family has links, and names that are longer than their room. */
export function crowdedLevels(): ScalesBlock {
  const block = levelScales()
  const levels = ["the old hospital by the harbour", "north quay", "old town", "upper meadow", "mill on the far side of the river"]
  const others = block.candidates.filter(({ chosen }) => !chosen)
  const chosen = block.candidates.filter((candidate) => candidate.chosen)
  const more = Array.from({ length: 9 }, (_, i) => ({ ...(others[i % others.length] as ScalesCandidate), link: `power(0.${i + 1})` }))
  return { ...block, across: { ...block.across, levels }, candidates: [...chosen, ...more] }
}

/** Means in the hundreds of thousands under the logarithm. */
export function largeScales(): ScalesBlock {
  const x = Array.from({ length: 12 }, (_, i) => i)
  const line: LineSpec = {
    level: null,
    line: (u) => 10.2 + 0.16 * u,
    error: () => 0.05,
    x,
    y: x.map((u) => Math.exp(10.2 + 0.16 * u + (u % 3 === 0 ? 0.05 : -0.03))),
    weight: () => 1,
  }
  const block = beetleScales()
  return {
    ...block,
    range: [0, 11],
    data: [0, 11],
    response: { label: "life under load", unit: "h" },
    possible: [0, Number.POSITIVE_INFINITY],
    candidates: [candidateOf("log", [line], gridOver(0, 11), [0, 11], [0, Number.POSITIVE_INFINITY], { chosen: true, deltaAic: 0 })],
  }
}

export function manyScales(rows = 1000): ScalesBlock {
  const block = beetleScales("logit")
  let seed = 7
  const random = (): number => {
    seed = (seed * 48271) % 2147483647
    return seed / 2147483647
  }
  const x = Array.from({ length: rows }, () => 1.69 + random() * 0.2).toSorted((a, b) => a - b)
  return {
    ...block,
    candidates: block.candidates.map((candidate) => {
      const curve = candidate.curves[0] as ScalesCurve
      const at = (u: number): number => Math.round(((u - 1.65) / 0.29) * 200)
      const noise = x.map(() => random() - 0.5)
      const points: ScalesPoints = {
        level: null,
        x: Float64Array.from(x),
        mean: Float64Array.from(x, (u, i) => Math.min(1, Math.max(0, (curve.mu[at(u)] as number) + (noise[i] as number) * 0.35))),
        working: Float64Array.from(x, (u, i) => (curve.eta[at(u)] as number) + (noise[i] as number) * 2.4),
        weight: Float64Array.from(x, (u) => (curve.mu[at(u)] as number) * (1 - (curve.mu[at(u)] as number)) + 0.01),
        rows: new Uint32Array(rows).fill(1),
      }
      return { ...candidate, points: [points] }
    }),
  }
}

/** All links on one axis, each moved to agree with the chosen one in value and slope at μ = 0.6. */
export function alignedScales(): ScalesBlock {
  const block = beetleScales("logit")
  const at = 0.6
  const slopeOf = (link: string): number => 1 / maths_(link).slope(maths_(link).g(at))
  return {
    ...block,
    aligned: true,
    candidates: block.candidates.map((candidate) => {
      const factor = slopeOf("logit") / slopeOf(candidate.link)
      const move = (etas: Float64Array): Float64Array =>
        etas.map((eta) => maths_("logit").g(at) + factor * (eta - maths_(candidate.link).g(at)))
      return {
        ...candidate,
        curves: candidate.curves.map((curve) => ({
          ...curve,
          eta: move(curve.eta),
          etaLow: move(curve.etaLow),
          etaHigh: move(curve.etaHigh),
        })),
        points: candidate.points.map((points) => ({ ...points, working: move(points.working) })),
        bridge: { mu: candidate.bridge.mu, eta: move(candidate.bridge.eta) },
      }
    }),
  }
}

const name = (text: string): Formula => ({ type: "name", text })
const word = (text: string): Formula => ({ type: "word", text })
const number = (text: string): Formula => ({ type: "number", text })
const sign = (text: string): Formula => ({ type: "sign", text })
const row = (...of: Formula[]): Formula => ({ type: "row", of })
const bracket = (...of: Formula[]): Formula => ({ type: "bracket", of: row(...of) })

export const formulaSample: FormulaBlock = {
  type: "formula",
  text: "ln(−ln(1 − μ)) = β₀ + β₁ dose",
  formula: row(
    word("ln"),
    bracket(sign("−"), word("ln"), bracket(number("1"), sign("−"), name("μ"))),
    sign("="),
    { type: "sub", base: name("β"), with: number("0") },
    sign("+"),
    { type: "sub", base: name("β"), with: number("1") },
    word("dose"),
  ),
}

export const tableSample: TableBlock = {
  type: "table",
  caption: null,
  columns: [
    { head: "for", says: null, align: "text" },
    { head: "β", says: "The coefficient, on the linear-predictor scale", align: "number" },
    { head: "standard error", says: "From the expected information", align: "number" },
    { head: "95 % Wald", says: "Estimate ± 1.96 standard errors", align: "number" },
    { head: "p", says: "Two-sided", align: "number" },
  ],
  rows: [
    [
      "intercept",
      { value: -39.57231060613717, digits: 5 },
      { value: 3.240279, digits: 4 },
      { from: -45.923, to: -33.2215, digits: 4 },
      { value: 2.7e-34, digits: 2 },
    ],
    [
      "dose",
      { value: 22.04116982075754, digits: 5 },
      { value: 1.7994, digits: 4 },
      { from: 18.5145, to: 25.568, digits: 4 },
      { value: 0.0042, digits: 2 },
    ],
    ["dose : lot two", null, { value: 0.0123, digits: 3 }, null, { value: 0.731, digits: 2 }],
  ],
  folded: false,
}

export const tapesSample: TapeBlock = {
  type: "tapes",
  tapes: [
    {
      name: "night",
      called: "lowest temperature of the night",
      unit: "°C",
      columnType: "number",
      ends: ["−9.5", "−0.5"],
      marks: Array.from({ length: 10 }, (_, i) => ({ at: i / 9, rows: 1 })),
      bins: null,
      levels: null,
      says: "none missing",
    },
    {
      name: "buds",
      called: null,
      unit: null,
      columnType: "count",
      ends: ["96", "96"],
      marks: [{ at: 0.5, rows: 10 }],
      bins: null,
      levels: null,
      says: "96 in every row",
    },
    {
      name: "killed",
      called: null,
      unit: null,
      columnType: "count",
      ends: ["8", "96"],
      marks: [0, 0.08, 0.2, 0.33, 0.5, 0.71, 0.88, 0.96, 0.99, 1].map((at) => ({ at, rows: 1 })),
      bins: null,
      levels: null,
      says: "none missing",
    },
    {
      name: "cost",
      called: null,
      unit: "crowns",
      columnType: "number",
      ends: ["112.5", "48\u202f210"],
      marks: null,
      bins: [3, 18, 62, 118, 140, 122, 96, 80, 61, 44, 31, 25, 18, 14, 9, 8, 5, 3, 3, 2, 1, 1, 0, 0, 1, 0, 0, 1],
      levels: null,
      says: "3 missing",
    },
    {
      name: "site",
      called: null,
      unit: null,
      columnType: "category",
      ends: null,
      marks: null,
      bins: null,
      levels: ["harbour", "north quay", "old town", "mill"].map((level, i) => ({ level, rows: [412, 300, 122, 9][i] as number })),
      says: "none missing",
    },
  ],
}

export const dialSample: DialBlock = {
  type: "dial",
  name: "background",
  range: { from: 0, to: 0.3, step: 0.01, steps: 30, digits: 2 },
  choices: null,
  value: 0.12,
  clause: "start",
}

export const choiceSample: DialBlock = {
  type: "dial",
  name: "season",
  range: null,
  choices: ["spring", "autumn", "both"],
  value: "autumn",
  clause: "start",
}

export const proseSample: ProseBlock = {
  type: "prose",
  markdown:
    "# Frost on the north terrace\n\nTen nights, *ninety-six* buds each. The question is **which link** ties the share killed to the cold; see [the paper](https://example.org/a) and [not this](javascript:alert(1)).\n\n- a bud dies at the *first* of many freezing events\n- so a `cloglog` is what the mechanism says\n\n> Planned before the results were seen.\n\n| night | killed |\n| --- | ---: |\n| −9.5 | 96 |\n| −0.5 | 8 |\n\n<b>markup stays text</b> & so on.",
}

export const figureSample: FigureBlock = {
  type: "figure",
  text: "Residuals against the fitted mean, with no trend; their counts beside.",
  figure: {
    panels: [
      {
        title: "Quantile residuals",
        x: { label: "fitted mean", unit: null, from: 0, to: 1, levels: null },
        y: { label: "residual", unit: null, from: -3, to: 3, levels: null },
        marks: [
          {
            type: "band",
            series: "smooth",
            x: Float64Array.of(0, 0.5, 1),
            low: Float64Array.of(-0.6, -0.3, -0.7),
            high: Float64Array.of(0.5, 0.4, 0.6),
          },
          {
            type: "points",
            series: "rows",
            x: Float64Array.from({ length: 60 }, (_, i) => (i + 0.5) / 60),
            y: Float64Array.from({ length: 60 }, (_, i) => 2 * Math.sin(i * 12.9)),
            size: null,
            rows: null,
          },
          { type: "line", series: "smooth", x: Float64Array.of(0, 0.5, 1), y: Float64Array.of(-0.05, 0.05, -0.05) },
        ],
      },
      {
        title: null,
        x: { label: "residual", unit: null, from: -3, to: 3, levels: null },
        y: { label: "rows", unit: null, from: 0, to: 20, levels: null },
        marks: [
          {
            type: "bars",
            series: "rows",
            edges: Float64Array.from({ length: 13 }, (_, i) => -3 + i / 2),
            counts: Float64Array.of(0, 2, 4, 6, 4, 5, 6, 8, 9, 8, 6, 2),
          },
        ],
      },
    ],
  },
}

export const gallery: readonly (readonly [title: string, block: Block])[] = [
  ["sentence, lead", { type: "sentence", tone: "lead", text: "Each degree colder multiplies the hazard of a bud being killed by 1.63." }],
  ["sentence, plain", { type: "sentence", tone: "plain", text: "From −4 to −5 °C the mean killed goes from 46 % to 63 %." }],
  ["sentence, quiet", { type: "sentence", tone: "quiet", text: "Interior maximum, certain for this family and link." }],
  ["formula", formulaSample],
  ["table", tableSample],
  ["folded table", { ...tableSample, caption: "The curve in numbers", folded: true }],
  ["tapes", tapesSample],
  ["dial", dialSample],
  ["dial with choices", choiceSample],
  ["scales, beetles", beetleScales()],
  ["scales, a falling link and a split", clottingScales()],
  ["scales, a falling link alone", clottingScales("reciprocal", false)],
  ["scales, a category across", levelScales()],
  ["scales, all links aligned", alignedScales()],
  ["scales, many points", manyScales()],
  ["figure", figureSample],
  ["prose", proseSample],
]
