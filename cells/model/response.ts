// The response of a model: which columns it is made of, what it is called, and whether its rows are such as the family can have. A binomial
// response becomes a share of trials; 0/1 rows and truths have no trials.

import { nearest } from "../../runtime/nearest.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import type { ModelFinding } from "../model-finding.ts"
import type { Column } from "../table/column.ts"
import { isCounted, responseFaults, responseWanted } from "./family.ts"
import * as say from "./notices.ts"
import { rowsWhere } from "./response-rows.ts"
import type { TableHere } from "./table.ts"
import type { Named, ResponseSaid } from "./words.ts"

/** A response over all rows of the table, missing values in it. */
export type Response = {
  readonly y: Float64Array
  /** Null where every row is one trial, or the family has none. */
  readonly trials: Float64Array | null
  readonly finding: ModelFinding["response"]
  /** Faults of the rows marked in `used`. */
  faults(used: Uint8Array): readonly Notice[]
}

/** The response; null once a fault was said, and where a column is not there. */
export function responseOf(said: ResponseSaid, family: string, table: TableHere, fault: (notice: Notice) => void): Response | null {
  if (said.type === "successes") return shares(said.successes, said.trials, table, fault)
  const column = table.columns.get(said.column.name)
  if (column === undefined) return null
  if (said.type === "level") return levelReached(said, column, table, fault)
  return family === "binomial" ? zeroOrOne(said.column, column, table, fault) : amounts(said.column, family, column, table, fault)
}

/** What a column is, as it stands after "is a". */
export const typeSays = (column: Column): string => column.type

/** How a column is called on axes and in sentences. */
export const labelOf = (name: Name, column: Column) => ({ label: column.called ?? name, unit: column.unit })

function shares(successes: Named, trials: Named, table: TableHere, fault: (notice: Notice) => void): Response | null {
  const [k, n] = [numbersOf(successes, "successes", table, fault), numbersOf(trials, "trials", table, fault)]
  if (k === null || n === null) return null
  return {
    y: k.map((count, row) => count / (n[row] as number)),
    trials: n,
    finding: { label: `${labelIn(successes, table)} out of ${labelIn(trials, table)}`, unit: null, measured: "share" },
    faults: (used) => {
      const found: Notice[] = []
      for (const [of, values] of [
        [successes, k],
        [trials, n],
      ] as const) {
        const broken = rowsWhere(values, used, (value) => !Number.isInteger(value))
        if (broken !== null) found.push(say.notWhole(of.name, broken, table.rowName, of.at))
        const negative = rowsWhere(values, used, (value) => value < 0)
        if (negative !== null) found.push(say.countNegative(of.name, negative, table.rowName, of.at))
      }
      const more = rowsWhere(k, used, (value, row) => value > (n[row] as number) && (n[row] as number) >= 0)
      if (more !== null) {
        const at = { ...more, trials: n[more.first] as number }
        found.push(say.moreThanTrials(successes.name, trials.name, at, table.rowName, successes.at))
      }
      return found
    },
  }
}

function levelReached(
  said: Extract<ResponseSaid, { type: "level" }>,
  column: Column,
  table: TableHere,
  fault: (notice: Notice) => void,
): Response | null {
  const { column: of, level } = said
  const levels = "codes" in column ? column.levels : column.type === "truth" ? ["false", "true"] : null
  if (levels === null) {
    fault(say.levelOfNumber(of.name, typeSays(column), of.at))
    return null
  }
  if (column.type === "text") {
    fault(say.textColumn(of.name, "response", of.at))
    return null
  }
  const wanted = levels.indexOf(level)
  if (wanted < 0) {
    fault(say.noSuchLevel(of.name, level, levels, nearest(level, levels), said.at))
    return null
  }
  const codeIn = (row: number): number => ("codes" in column ? (column.codes[row] as number) : (column.values[row] as number))
  const y = new Float64Array(table.rows)
  for (let row = 0; row < table.rows; row++) {
    const code = codeIn(row)
    y[row] = code === wanted ? 1 : code >= 0 ? 0 : Number.NaN
  }
  return {
    y,
    trials: null,
    finding: {
      label: column.type === "truth" && level === "true" ? labelIn(of, table) : `${labelIn(of, table)} is ${level}`,
      unit: null,
      measured: "truth",
    },
    faults: (used) => {
      const there = new Set<number>()
      for (let row = 0; row < table.rows; row++) if (used[row] === 1) there.add(codeIn(row))
      if (there.size <= 2) return []
      const present = levels.filter((_, code) => there.has(code))
      return [say.moreThanTwoLevels(of.name, [level, ...present.filter((other) => other !== level)], of.at)]
    },
  }
}

function zeroOrOne(of: Named, column: Column, table: TableHere, fault: (notice: Notice) => void): Response | null {
  if ("codes" in column) {
    fault(
      column.type === "text" ? say.textColumn(of.name, "response", of.at) : say.needsLevel(of.name, typeSays(column), column.levels, of.at),
    )
    return null
  }
  if (column.type === "date") {
    fault(say.responseNotOfFamily(of.name, "date", "binomial", "a truth or 0 and 1", of.at))
    return null
  }
  const { values } = column
  return {
    y: values,
    trials: null,
    finding: { ...labelOf(of.name, column), measured: "truth" },
    faults: (used) => {
      const other = rowsWhere(values, used, (value) => value !== 0 && value !== 1)
      if (other === null) return []
      const shares = rowsWhere(values, used, (value) => value < 0 || value > 1) === null
      return [say.notZeroOrOne(of.name, other, table.rowName, shares, of.at)]
    },
  }
}

function amounts(of: Named, family: string, column: Column, table: TableHere, fault: (notice: Notice) => void): Response | null {
  const wants = responseWanted(family)
  if ("codes" in column) {
    const mend = column.type === "category" && column.levels.length === 2 ? "binomial" : null
    fault(
      column.type === "text"
        ? say.textColumn(of.name, "response", of.at)
        : say.responseNotOfFamily(of.name, "category", family, wants, of.at, mend),
    )
    return null
  }
  // A truth with normal errors is a model some people mean; with counts or amounts it is a slip.
  const unfit = family !== "normal" && (column.type === "truth" || column.type === "date")
  if (unfit) {
    fault(say.responseNotOfFamily(of.name, column.type, family, wants, of.at, column.type === "truth" ? "binomial" : null))
    return null
  }
  const { values } = column
  return {
    y: values,
    trials: null,
    finding: { ...labelOf(of.name, column), measured: isCounted(family) ? "count" : "number" },
    faults: (used) => responseFaults(of, family, values, used, table),
  }
}

/** Numbers of a column, for a part that counts; null once a fault was said, and where the column is not there. */
export function numbersOf(
  of: Named,
  what: string,
  table: TableHere,
  fault: (notice: Notice) => void,
  clause = "response",
): Float64Array | null {
  const column = table.columns.get(of.name)
  if (column === undefined) return null
  if (column.type === "number" || column.type === "count" || (column.type === "truth" && clause === "response")) return column.values
  fault(say.wantsNumber(of.name, typeSays(column), what, clause, of.at))
  return null
}

const labelIn = (of: Named, table: TableHere): string => table.columns.get(of.name)?.called ?? of.name
