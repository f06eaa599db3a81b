// Blocks: what a finding shows, as a closed union of plain data that the page, the report and the terminal each know how to draw. A
// face may place, colour, snap and look up; it computes no number. What a block can do it carries as an Intent.

import type { Intent } from "../runtime/notice.ts"
import type { Figure } from "./figure/figure.ts"
import type { Formula } from "./figure/formula.ts"

export type Block = SentenceBlock | TableBlock | FormulaBlock | FigureBlock | TapeBlock | ScalesBlock | DialBlock | ProseBlock

/** One or more sentences. `quiet` is for what qualifies the finding (certificates, counts), `lead` for what it comes to. */
export type SentenceBlock = { readonly type: "sentence"; readonly text: string; readonly tone: "lead" | "plain" | "quiet" }

/** How a number is to be written: `digits` significant ones, or a fixed count of decimals so that a column lines up on the point. */
export type TableColumn = {
  readonly head: string
  /** What the head means, in one sentence. */
  readonly says: string | null
  readonly align: "text" | "number"
}

/** Entries are text, a number with the digits it is shown to (the full value on request), or null for "not available". */
export type TableEntry =
  | string
  | { readonly value: number; readonly digits: number }
  | { readonly from: number; readonly to: number; readonly digits: number }
  | null

export type TableBlock = {
  readonly type: "table"
  readonly caption: string | null
  readonly columns: readonly TableColumn[]
  readonly rows: readonly (readonly TableEntry[])[]
  /** Shown folded until asked for. */
  readonly folded: boolean
}

export type FormulaBlock = { readonly type: "formula"; readonly formula: Formula; readonly text: string }

export type FigureBlock = { readonly type: "figure"; readonly figure: Figure; readonly text: string }

/** A column of data as one ruled line, like a tape measure. */
export type Tape = {
  readonly name: string
  readonly called: string | null
  readonly unit: string | null
  readonly columnType: "number" | "count" | "category" | "truth" | "date" | "text"
  /** Written at the two ends; null for a column without numbers. */
  readonly ends: readonly [string, string] | null
  /** Places on the line, 0 to 1, where there are few values; each mark stands for `rows` rows. */
  readonly marks: readonly { readonly at: number; readonly rows: number }[] | null
  /** Counts in equal bins from end to end where there are many values. */
  readonly bins: readonly number[] | null
  /** Levels with their counts, for categories and truths (the first is the reference). */
  readonly levels: readonly { readonly level: string; readonly rows: number }[] | null
  /** Missing values and the like, in words. */
  readonly says: string
}

export type TapeBlock = { readonly type: "tapes"; readonly tapes: readonly Tape[] }

/** One curve of one candidate: means and linear predictors over the same grid. Arrays have equal length; a gap is NaN. */
export type ScalesCurve = {
  readonly level: string | null
  readonly x: Float64Array
  readonly eta: Float64Array
  readonly etaLow: Float64Array
  readonly etaHigh: Float64Array
  readonly mu: Float64Array
  readonly muLow: Float64Array
  readonly muHigh: Float64Array
  /** 1 where the grid point lies inside the data, 0 where it is extrapolated. */
  readonly inside: Uint8Array
}

/** Points drawn on both scales; a point stands for `rows` rows. `x` is a level's place (0, 1, 2 …) where `across` is a category. */
export type ScalesPoints = {
  readonly level: string | null
  readonly x: Float64Array
  readonly mean: Float64Array
  readonly working: Float64Array
  readonly weight: Float64Array
  readonly rows: Uint32Array
}

export type ScalesCandidate = {
  /** As a `link` clause says it. */
  readonly link: string
  /** g(μ) as text, such as `ln(−ln(1 − μ))`. */
  readonly formula: string
  readonly chosen: boolean
  /** Against the least AIC among the candidates; null until it is there, or where there is none. */
  readonly deltaAic: number | null
  /** Why there is no fit, in words; null where there is one. */
  readonly trouble: string | null
  readonly choose: Intent
  readonly curves: readonly ScalesCurve[]
  readonly points: readonly ScalesPoints[]
  /** Pairs along the link over the means on the plot: each μ and its g(μ). */
  readonly bridge: { readonly mu: Float64Array; readonly eta: Float64Array }
}

export type ScalesBlock = {
  readonly type: "scales"
  readonly across: {
    readonly name: string
    readonly label: string
    readonly unit: string | null
    readonly levels: readonly string[] | null
  }
  readonly response: { readonly label: string; readonly unit: string | null }
  readonly split: { readonly name: string; readonly levels: readonly string[] } | null
  /** The open range of possible means, ±Infinity allowed. */
  readonly possible: readonly [number, number]
  /** The range of x on the plot, and that of the data. */
  readonly range: readonly [number, number]
  readonly data: readonly [number, number]
  /** What the other predictors are held at, in words; null where there is none. */
  readonly held: string | null
  readonly aligned: boolean
  /** True when every candidate is there. */
  readonly complete: boolean
  /** The confidence level of the bands. */
  readonly confidence: number
  readonly candidates: readonly ScalesCandidate[]
  /** What the figure shows, in sentences, for those who cannot see it. */
  readonly summary: string
}

export type DialBlock = {
  readonly type: "dial"
  readonly name: string
  readonly range: {
    readonly from: number
    readonly to: number
    readonly step: number
    readonly steps: number
    readonly digits: number
  } | null
  readonly choices: readonly string[] | null
  readonly value: number | string
  /** The clause that a move rewrites. */
  readonly clause: "start"
}

/** A note: CommonMark text with its live values already put in. */
export type ProseBlock = { readonly type: "prose"; readonly markdown: string }
