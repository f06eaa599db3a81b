// Findings as text: every block in its own way, numbers aligned on the decimal point, sentences broken at the width of the terminal. It
// prints what the blocks say and computes nothing; of a curve it shows a few of the points that are there.

import type { Block, DialBlock, ScalesBlock, ScalesCandidate, ScalesCurve, TableBlock, TableEntry, Tape } from "../../cells/block.ts"
import type { CellId } from "../../runtime/document.ts"
import type { Shown } from "../../runtime/evaluator.ts"
import { absent, decimalsOf, written, writtenCount, writtenFixed, writtenRange, writtenShare } from "../drawing/number.ts"
import type { Finding, PlacedNotice } from "./findings.ts"
import { type Column, textTable } from "./text-table.ts"

export interface Printing {
  /** Signs on a line. */
  readonly width: number
  /** The line of the plain form on which each cell begins; empty for a notebook file. */
  readonly lines: ReadonlyMap<CellId, number>
  /** What a person calls a cell. */
  name(id: CellId): string
}

/** A whole notebook. */
export function printed(title: string, findings: readonly Finding[], printing: Printing): string {
  const cells = findings.filter(({ kind }) => kind !== null).map((finding) => cellText(finding, printing))
  return `${[title, ...cells].join("\n\n")}\n`
}

/** A block as lines. */
export function blockLines(block: Block, width: number): readonly string[] {
  switch (block.type) {
    case "sentence":
      return wrapped(block.text, width)
    case "formula":
      return wrapped(block.text, width)
    case "figure":
      return wrapped(block.text, width)
    case "prose":
      return paragraphs(block.markdown).flatMap((line) => wrapped(line, width))
    case "table":
      return tableLines(block)
    case "tapes":
      return block.tapes.flatMap((tape) => tapeLines(tape, width))
    case "scales":
      return scalesLines(block, width)
    case "dial":
      return [dialLine(block)]
    default: {
      const never: never = block
      return [String(never)]
    }
  }
}

function cellText(finding: Finding, printing: Printing): string {
  const { kind, name, state, notices } = finding
  const title = name === null ? `${kind}` : `${kind} ${name}`
  const inside = printing.width - indent.length
  const lines: string[] = []
  const show = (shown: Shown | null): void => {
    // Only blocks of cells/block.ts come from our kinds; the runtime knows them by less.
    for (const block of (shown?.blocks ?? []) as readonly Block[]) {
      const said = blockLines(block, inside)
      if (said.length > 0) lines.push(...said, "")
    }
  }
  let status = ""
  switch (state.status) {
    case "off":
      status = ": off"
      break
    case "waiting":
      status = `: waits for ${printing.name(state.for)}`
      break
    case "fault":
      status = ": fault"
      show(state.shown)
      break
    case "crash":
      status = ": crash"
      lines.push(
        ...wrapped(`This is a mistake in Etamu, not in the cell: ${state.text}`, inside),
        ...state.stack.split("\n").slice(1, 6),
        "",
      )
      break
    case "ready":
      show(state.shown)
      break
    case "due":
    case "working":
      status = ": not finished"
      break
    default: {
      const never: never = state
      lines.push(String(never))
    }
  }
  for (const notice of notices) lines.push(...noticeLines(notice, title, finding.cell, printing))
  while (lines.at(-1) === "") lines.pop()
  return [`${title}${status}`, ...lines.map((line) => (line === "" ? "" : indent + line))].join("\n")
}

const indent = "  "

/** Level and place come first, so that a line found by itself still says where to look. */
function noticeLines(notice: PlacedNotice, title: string, cell: CellId, { width, lines }: Printing): readonly string[] {
  const { level, line, column, text, hint } = notice
  const start = lines.get(cell)
  const inFile = start === undefined ? "" : ` (line ${start + line - 1} of the file)`
  const place = `${level} in ${title}, line ${line}, column ${column}${inFile}:`
  const said = [text, ...(hint === null ? [] : [hint])].flatMap((sentence) => wrapped(sentence, width - 2 * indent.length))
  return [place, ...said.map((each) => indent + each)]
}

function tableLines(table: TableBlock): readonly string[] {
  const caption = table.caption === null ? [] : [table.caption]
  // It repeats in full what is shown beside it; who asks for it here asks for `--json`.
  if (table.folded) return []
  const shown = table.rows.length > mostRows ? table.rows.slice(0, mostRows - 1) : table.rows
  const columns = table.columns.map(
    ({ head, align }, i): Column => ({ head, align, entries: shown.map((row) => entryText(row[i] ?? null)) }),
  )
  const left = table.rows.length - shown.length
  return [...caption, ...textTable(columns), ...(left > 0 ? [`and ${writtenCount(left)} more rows`] : [])]
}

/** More would run off any screen; all of it is in the page and in `--json`. */
const mostRows = 40

function entryText(entry: TableEntry): string {
  if (entry === null) return absent
  if (typeof entry === "string") return entry
  return "value" in entry ? written(entry.value, entry.digits) : writtenRange(entry.from, entry.to, entry.digits)
}

function tapeLines(tape: Tape, width: number): readonly string[] {
  const called = tape.called === null ? "" : ` (${tape.called})`
  const unit = tape.unit === null ? "" : ` ${tape.unit}`
  const range = tape.ends === null ? "" : `, ${tape.ends[0]} to ${tape.ends[1]}${unit}`
  const levels = tape.levels === null ? "" : `, ${tape.levels.map(({ level, rows }) => `${level} ${writtenCount(rows)}`).join(", ")}`
  const says = tape.says === "" ? "" : `; ${tape.says}`
  const [first = "", ...rest] = wrapped(`${tape.name}${called}: ${tape.columnType}${range}${levels}${says}`, width - indent.length)
  return [first, ...rest.map((line) => indent + line)]
}

function scalesLines(block: ScalesBlock, width: number): readonly string[] {
  const chosen = block.candidates.find((candidate) => candidate.chosen) ?? block.candidates[0]
  const held = block.held === null || block.summary.includes(block.held) ? [] : wrapped(block.held, width)
  const curves = chosen === undefined ? [] : chosen.curves.flatMap((curve) => [...curveLines(block, chosen, curve), ""])
  const strip = block.candidates.length < 2 ? [] : [...stripLines(block.candidates), ""]
  const lines = [...wrapped(block.summary, width), ...held, "", ...curves, ...strip]
  while (lines.at(-1) === "") lines.pop()
  return lines
}

function curveLines(block: ScalesBlock, candidate: ScalesCandidate, curve: ScalesCurve): readonly string[] {
  const { across, response, split, confidence } = block
  const picks = across.levels === null ? evenly(curve.x.length, fewPoints) : evenly(curve.x.length, mostRows)
  const column = (head: string, values: Float64Array): Column => ({
    head,
    align: "number",
    entries: picks.map((i) => written(values[i] ?? Number.NaN, 4)),
  })
  const range = (head: string, low: Float64Array, high: Float64Array): Column => ({
    head,
    align: "number",
    entries: picks.map((i) => (Number.isNaN(low[i] ?? Number.NaN) ? absent : writtenRange(low[i] ?? Number.NaN, high[i] ?? Number.NaN, 4))),
  })
  const outside = picks.map((i) => (curve.inside[i] === 0 ? "outside the data" : ""))
  const share = writtenShare(confidence, decimalsOf(confidence * 100))
  const x: Column =
    across.levels === null
      ? column(across.name, curve.x)
      : { head: across.name, align: "text", entries: picks.map((i) => across.levels?.[curve.x[i] ?? 0] ?? absent) }
  const which = curve.level === null ? "" : `, ${split?.name ?? "level"} ${curve.level}`
  const unit = response.unit === null ? "" : ` (${response.unit})`
  return [
    `${response.label}${unit} under ${candidate.link}, η = ${candidate.formula}${which}`,
    ...textTable([
      x,
      column("μ", curve.mu),
      range(`${share} of μ`, curve.muLow, curve.muHigh),
      column("η", curve.eta),
      range(`${share} of η`, curve.etaLow, curve.etaHigh),
      ...(outside.some((word) => word !== "") ? [{ head: "", align: "text" as const, entries: outside }] : []),
    ]),
  ]
}

const fewPoints = 9

/** Places from first to last, at most so many. */
const evenly = (length: number, most: number): readonly number[] =>
  length <= most ? Array.from({ length }, (_, i) => i) : Array.from({ length: most }, (_, i) => Math.round((i * (length - 1)) / (most - 1)))

function stripLines(candidates: readonly ScalesCandidate[]): readonly string[] {
  return textTable([
    { head: "link", align: "text", entries: candidates.map(({ link }) => link) },
    { head: "ΔAIC", align: "number", entries: candidates.map(({ deltaAic }) => (deltaAic === null ? absent : written(deltaAic, 3))) },
    { head: "", align: "text", entries: candidates.map(({ chosen, trouble }) => trouble ?? (chosen ? "the model's own" : "")) },
  ])
}

function dialLine({ name, range, choices, value }: DialBlock): string {
  if (range === null) return `${name} = ${value} (of ${(choices ?? []).join(", ")})`
  const at = (number: number): string => writtenFixed(number, range.digits)
  return `${name} = ${typeof value === "number" ? at(value) : value} (from ${at(range.from)} to ${at(range.to)} in steps of ${at(range.step)})`
}

/** CommonMark text with the lines of each paragraph joined, since they were broken for another width; all else line by line. */
function paragraphs(markdown: string): readonly string[] {
  const lines: string[] = []
  let fenced = false
  let open = false
  for (const line of markdown.trim().split("\n")) {
    const fence = /^\s*(```|~~~)/.test(line)
    if (fence) fenced = !fenced
    const alone: boolean = fenced || fence || /^\s*(#|>|\||$)/.test(line) || (!open && /^ {4}/.test(line))
    const begins = /^\s*([-*+]|\d+[.)])\s/.test(line)
    const last = lines.at(-1)
    if (!alone && !begins && open && last !== undefined) lines[lines.length - 1] = `${last} ${line.trim()}`
    else lines.push(line)
    // Two spaces or a backslash at its end break a line on purpose.
    open = !alone && !/( {2}|\\)$/.test(line)
  }
  return lines
}

/** A text broken between words into lines of at most so many signs; a longer word stands alone. */
export function wrapped(text: string, width: number): readonly string[] {
  const lines: string[] = []
  for (const line of text.split("\n")) {
    let held = ""
    for (const word of line.split(" ")) {
      if (held !== "" && [...held].length + 1 + [...word].length > width) {
        lines.push(held)
        held = word
      } else held = held === "" ? word : `${held} ${word}`
    }
    lines.push(held)
  }
  return lines
}
