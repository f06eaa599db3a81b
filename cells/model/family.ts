// What a model asks of a family beside its statistics: what a response of it is called, and which rows no response can be.

import type { Notice } from "../../runtime/notice.ts"
import * as say from "./notices.ts"
import { rowsWhere } from "./response-rows.ts"
import type { TableHere } from "./table.ts"
import type { Named } from "./words.ts"

/** Whether the response is a count or a share, so that its dispersion is one unless said otherwise. */
export const isDiscrete = (family: string): boolean => ["binomial", "poisson", "negative_binomial"].includes(family)

/** What a response of a family is called. */
export const responseWanted = (family: string): string =>
  ({
    poisson: "a count",
    negative_binomial: "a count",
    gamma: "an amount above 0",
    inverse_gaussian: "an amount above 0",
    tweedie: "an amount of 0 or above",
  })[family] ?? "a number"

export const isCounted = (family: string): boolean => family === "poisson" || family === "negative_binomial"

/** Rows that no response of the family can be; not for the binomial, which has its own. */
export function responseFaults(of: Named, family: string, values: Float64Array, used: Uint8Array, table: TableHere): readonly Notice[] {
  const found: Notice[] = []
  if (isCounted(family)) {
    const negative = rowsWhere(values, used, (value) => value < 0)
    if (negative !== null) found.push(say.countNegative(of.name, negative, table.rowName, of.at))
    const broken = rowsWhere(values, used, (value) => !Number.isInteger(value))
    if (broken !== null) found.push(say.countNotWhole(of.name, family, broken, table.rowName, of.at))
  }
  if (family === "gamma" || family === "inverse_gaussian") {
    const low = rowsWhere(values, used, (value) => value <= 0)
    if (low !== null) found.push(say.notPositive(of.name, family, low, table.rowName, of.at))
  }
  if (family === "tweedie") {
    const low = rowsWhere(values, used, (value) => value < 0)
    if (low !== null) found.push(say.belowZero(of.name, family, low, table.rowName, of.at))
  }
  return found
}
