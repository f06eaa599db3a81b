// Evaluating an expression over whole columns. It is total: it ends, throws nothing and has no side effect; what cannot be computed is
// said as trouble at the part at fault. A missing value is NaN; what makes NaN or an infinity out of present values gives missing, and
// the rows are counted.

import { nearest } from "../../runtime/nearest.ts"
import type { Name } from "../../runtime/value.ts"
import { asin, atan, cos, exp, expm1, log, log1p, log10, pow, sin, tan, tanh } from "../statistics/elementary.ts"
import { normalCdf, normalQuantile } from "../statistics/special.ts"
import { daysFrom, monthOf } from "./calendar.ts"
import { count, largest, mean, median, quantile, sd, smallest, sum } from "./column-summary.ts"
import { type Expression, type Operator, printed, type Scalar, type Trouble, type Vector } from "./expression.ts"
import { functions } from "./functions.ts"
import { listed, unknownFunction } from "./notices.ts"

export type Evaluated =
  | {
      readonly ok: true
      readonly vector: Vector | Scalar
      /** Rows where present values gave NaN or an infinity, and which are missing for it (or missing to a mean or the like). */
      readonly lost: number
      /** What can hardly be meant, such as a comparison with a level that the column does not have. */
      readonly doubts: readonly Trouble[]
    }
  | { readonly ok: false; readonly troubles: readonly Trouble[] }

/**
 * Evaluates over `rows` rows. `lookup` gives a column or a single value for a name, null where there is none; `names` are those there are,
 * for the nearest. `and` and `or` are decided by one side where one side decides: false and missing is false, true or missing is true.
 */
export function evaluated(
  expression: Expression,
  rows: number,
  lookup: (name: Name) => Vector | Scalar | null,
  names: Iterable<Name> = [],
): Evaluated {
  const evaluation = new Evaluation(rows, lookup, names)
  const part = evaluation.value(expression)
  if (part === null || evaluation.troubles.length > 0) return { ok: false, troubles: evaluation.troubles }
  return { ok: true, vector: handedOut(part), lost: evaluation.lost(part), doubts: evaluation.doubts }
}

/** Numbers, truths or dates: one a row, or (`step` 0) one for all. */
type Numbers = { readonly type: "number" | "truth" | "date"; readonly values: Float64Array; readonly step: 0 | 1 }
type Codes = { readonly type: "category"; readonly codes: Int32Array; readonly levels: readonly string[] }
type Part = Numbers | Codes | { readonly type: "text"; readonly text: string } | { readonly type: "missing" }

const single = (type: Numbers["type"], value: number): Numbers => ({ type, values: Float64Array.of(value), step: 0 })

function handedOut(part: Part): Vector | Scalar {
  switch (part.type) {
    case "text":
    case "missing":
    case "category":
      return part
    default:
      return part.step === 0 ? { type: part.type, value: part.values[0] ?? Number.NaN } : { type: part.type, values: part.values }
  }
}

function takenIn(given: Vector | Scalar): Part {
  if (given.type === "text" || given.type === "missing" || given.type === "category") return given
  return "value" in given ? single(given.type, given.value) : { type: given.type, values: given.values, step: 1 }
}

/** Names of types, as they stand in sentences. */
const typeWords = {
  number: "a number",
  truth: "a truth",
  date: "a date",
  category: "a category",
  text: "a text",
  missing: "missing",
} as const

class Evaluation {
  readonly troubles: Trouble[] = []
  readonly doubts: Trouble[] = []
  private readonly rows: number
  private readonly lookup: (name: Name) => Vector | Scalar | null
  private readonly names: Iterable<Name>
  /** 1 for each row in which present values gave no number; null while there is none. */
  private lostRows: Uint8Array | null = null
  /** The same for rows that were lost to a number over a whole column. */
  private lostToSummary: Uint8Array | null = null

  constructor(rows: number, lookup: (name: Name) => Vector | Scalar | null, names: Iterable<Name>) {
    this.rows = rows
    this.lookup = lookup
    this.names = names
  }

  value(expression: Expression): Part | null {
    switch (expression.type) {
      case "number":
        return single("number", expression.value)
      case "text":
        return { type: "text", text: expression.text }
      case "truth":
        return single("truth", expression.value ? 1 : 0)
      case "missing":
        return { type: "missing" }
      case "name":
        return this.named(expression)
      case "minus":
        return this.minus(expression.of)
      case "not":
        return this.not(expression.of)
      case "pair":
        return this.pair(expression.sign, expression.left, expression.right, expression)
      case "in":
        return this.contained(expression.of, expression.list)
      case "call":
        return this.call(expression)
    }
  }

  /** Rows that were lost: where the result is missing for it, or where a number over a column did without them. */
  lost(result: Part): number {
    let lost = 0
    for (let i = 0; i < this.rows; i++) {
      if (this.lostToSummary?.[i] === 1 || (this.lostRows?.[i] === 1 && isMissing(result, i))) lost++
    }
    return lost
  }

  private named(expression: Expression & { readonly type: "name" }): Part | null {
    const given = this.lookup(expression.name)
    if (given !== null) return takenIn(given)
    const near = nearest(expression.name, this.names)
    return this.trouble(
      expression,
      "expression/unknown-name",
      `There is no column and no cell called ${expression.name} here.`,
      near === null ? "A name is that of a column of the table or of another cell." : `The nearest name is ${near}.`,
    )
  }

  private minus(of: Expression): Part | null {
    const part = this.numeric(of, "A minus")
    return part === null ? null : this.each(part, (x) => 0 - x)
  }

  private not(of: Expression): Part | null {
    const part = this.truth(of, "not")
    return part === null ? null : { ...this.each(part, (x) => 1 - x), type: "truth" }
  }

  private pair(sign: Operator, left: Expression, right: Expression, whole: Expression): Part | null {
    switch (sign) {
      case "and":
      case "or": {
        const a = this.truth(left, sign)
        const b = this.truth(right, sign)
        return a === null || b === null ? null : this.joined(a, b, sign === "and" ? 0 : 1)
      }
      case "+":
      case "-":
      case "*":
      case "/":
      case "^":
        return this.arithmetic(sign, left, right, whole)
      default: {
        const a = this.value(left)
        const b = this.value(right)
        return a === null || b === null ? null : this.comparison(sign, a, b, left, right, whole)
      }
    }
  }

  private arithmetic(sign: "+" | "-" | "*" | "/" | "^", left: Expression, right: Expression, whole: Expression): Part | null {
    const a = this.value(left)
    const b = this.value(right)
    if (a === null || b === null) return null
    const dates = (a.type === "date" ? 1 : 0) + (b.type === "date" ? 1 : 0)
    const [x, y] = [
      dates > 0 && a.type === "date" ? a : this.asNumber(a, left, sign),
      dates > 0 && b.type === "date" ? b : this.asNumber(b, right, sign),
    ]
    if (x === null || y === null) return null
    const fits = dates === 0 || (dates === 1 && (sign === "+" || (sign === "-" && a.type === "date"))) || (dates === 2 && sign === "-")
    if (!fits)
      return this.trouble(
        whole,
        "expression/type",
        `Dates have no ${sign}.`,
        "Two dates may be subtracted, and a number of days added to a date.",
      )
    const found = this.both(x, y, arithmeticOf[sign])
    return dates === 1 ? { ...found, type: "date" } : { ...found, type: "number" }
  }

  private comparison(sign: Operator, a: Part, b: Part, left: Expression, right: Expression, whole: Expression): Part | null {
    if (a.type === "missing" || b.type === "missing") return single("truth", Number.NaN)
    const equality = sign === "=" || sign === "!="
    if (a.type === "text" && b.type !== "text") return this.comparison(mirrored[sign] ?? sign, b, a, right, left, whole)
    if (b.type === "text") {
      if (a.type === "date") {
        const days = daysFrom(b.text)
        if (days !== null) return this.compared(sign, a, single("date", days))
        return this.trouble(right, "expression/date", `"${b.text}" is no date.`, 'A date is written as "2024-02-29": year, month, day.')
      }
      if (!equality && (a.type === "category" || a.type === "text"))
        return this.trouble(whole, "expression/type", "Texts and levels have no order.", "They are compared by = and !=, or by in.")
      if (a.type === "text") return single("truth", (a.text === b.text) === (sign === "=") ? 1 : 0)
      if (a.type === "category") return this.levelCompared(a, [b.text], sign === "=", [right])
      return this.unlike(a, b, left, right, whole)
    }
    if (a.type === "text") return this.unlike(a, b, left, right, whole)
    if (a.type === "category" || b.type === "category") {
      if (a.type !== "category" || b.type !== "category") return this.unlike(a, b, left, right, whole)
      if (!equality) return this.trouble(whole, "expression/type", "Levels have no order.", "They are compared by = and !=, or by in.")
      return this.codesCompared(a, b, sign === "=")
    }
    if (a.type !== b.type) return this.unlike(a, b, left, right, whole)
    if (a.type === "truth" && !equality)
      return this.trouble(whole, "expression/type", "Truths have no order.", "They are compared by = and !=.")
    return this.compared(sign, a, b)
  }

  private compared(sign: Operator, a: Numbers, b: Numbers): Numbers {
    const test = comparisonOf[sign] ?? ((): boolean => false)
    const out = new Float64Array(a.step === 1 || b.step === 1 ? this.rows : 1)
    for (let i = 0; i < out.length; i++) {
      const x = a.values[i * a.step] as number
      const y = b.values[i * b.step] as number
      out[i] = Number.isNaN(x) || Number.isNaN(y) ? Number.NaN : test(x, y) ? 1 : 0
    }
    return { type: "truth", values: out, step: a.step === 1 || b.step === 1 ? 1 : 0 }
  }

  /** Whether a level is one of these texts. */
  private levelCompared(of: Codes, texts: readonly string[], wanted: boolean, at: readonly Expression[]): Numbers {
    const among = new Uint8Array(of.levels.length)
    texts.forEach((text, k) => {
      const code = of.levels.indexOf(text)
      if (code >= 0) among[code] = 1
      else {
        const near = nearest(text, of.levels)
        const where = at[k]
        if (where !== undefined)
          this.doubts.push({
            at: where.at,
            code: "expression/unknown-level",
            text: `The column has no level "${text}".`,
            hint:
              near === null
                ? `Its levels are ${listed(
                    of.levels.slice(0, 12).map((level) => `"${level}"`),
                    "and",
                  )}.`
                : `The nearest is "${near}".`,
          })
      }
    })
    const out = new Float64Array(of.codes.length)
    for (let i = 0; i < out.length; i++) {
      const code = of.codes[i] as number
      out[i] = code < 0 ? Number.NaN : (among[code] === 1) === wanted ? 1 : 0
    }
    return { type: "truth", values: out, step: 1 }
  }

  private codesCompared(a: Codes, b: Codes, wanted: boolean): Numbers {
    const inA = Int32Array.from(b.levels, (level) => a.levels.indexOf(level))
    const out = new Float64Array(this.rows)
    for (let i = 0; i < out.length; i++) {
      const x = a.codes[i] as number
      const y = b.codes[i] as number
      out[i] = x < 0 || y < 0 ? Number.NaN : (x === inA[y]) === wanted ? 1 : 0
    }
    return { type: "truth", values: out, step: 1 }
  }

  private contained(of: Expression, list: readonly Expression[]): Part | null {
    const part = this.value(of)
    const parts = list.map((each) => this.value(each))
    if (part === null || parts.includes(null)) return null
    const texts = parts.flatMap((each) => (each?.type === "text" ? [each.text] : []))
    if (part.type === "category" && texts.length === parts.length) return this.levelCompared(part, texts, true, list)
    let found: Numbers = single("truth", 0)
    for (let k = 0; k < list.length; k++) {
      const [each, where] = [parts[k], list[k]]
      if (each === undefined || each === null || where === undefined) return null
      const equal = this.comparison("=", part, each, of, where, where)
      if (equal === null || equal.type !== "truth") return null
      found = this.joined(found, equal, 1)
    }
    return found
  }

  /** `and` with 0 and `or` with 1 as the value by which one side decides; where none does, a missing side makes it missing. */
  private joined(a: Numbers, b: Numbers, decides: 0 | 1): Numbers {
    const step = a.step === 1 || b.step === 1 ? 1 : 0
    const out = new Float64Array(step === 1 ? this.rows : 1)
    for (let i = 0; i < out.length; i++) {
      const x = a.values[i * a.step] as number
      const y = b.values[i * b.step] as number
      out[i] = x === decides || y === decides ? decides : Number.isNaN(x) || Number.isNaN(y) ? Number.NaN : 1 - decides
    }
    return { type: "truth", values: out, step }
  }

  private call(expression: Expression & { readonly type: "call" }): Part | null {
    const { name, of } = expression
    const [first, second, third] = of
    const known = functions.get(name)
    if (known === undefined) {
      this.troubles.push(unknownFunction(expression.at, name, nearest(name, functions.keys()), false))
      return null
    }
    if (first === undefined || of.length < known.least || of.length > known.most)
      return this.trouble(expression, "expression/arguments", `${name} is not given what it takes.`, `It is written ${known.form}.`)

    const scalar = scalarFunctions[name]
    if (scalar !== undefined) {
      const part = this.numeric(first, name)
      return part === null ? null : this.each(part, scalar)
    }
    switch (name) {
      case "min":
      case "max":
        return this.extreme(name, of)
      case "mod": {
        const a = this.numeric(first, name)
        const b = second === undefined ? null : this.numeric(second, name)
        return a === null || b === null ? null : this.both(a, b, (x, m) => x - m * Math.floor(x / m))
      }
      case "band":
        return this.band(first, of.slice(1))
      case "if":
        return second === undefined || third === undefined ? null : this.choice(first, second, third, expression)
      case "known":
        return this.known(first)
      case "year":
      case "month":
        return this.calendar(name, first)
      default:
        return this.summary(name, first, second ?? null)
    }
  }

  private extreme(name: "min" | "max", of: readonly Expression[]): Part | null {
    const parts = of.map((each) => this.value(each))
    const dates = parts.some((part) => part?.type === "date")
    let found: Numbers | null = null
    for (let k = 0; k < of.length; k++) {
      const [part, where] = [parts[k], of[k]]
      if (part === undefined || part === null || where === undefined) return null
      const numbers: Numbers | null = dates && part.type === "date" ? part : this.asNumber(part, where, name)
      if (numbers === null) return null
      if (dates && numbers.type !== "date" && part.type !== "missing")
        return this.trouble(where, "expression/type", `${name} of dates takes dates only.`, "A date cannot be compared with a number.")
      found = found === null ? numbers : this.both(found, numbers, name === "min" ? Math.min : Math.max)
    }
    return found === null ? null : { ...found, type: dates ? "date" : "number" }
  }

  /** A category by cut points: below the first, from each to the next, and from the last on. */
  private band(of: Expression, cuts: readonly Expression[]): Part | null {
    const part = this.numeric(of, "band")
    const points: number[] = []
    const words: string[] = []
    for (const cut of cuts) {
      const point = this.constant(cut, "A cut point of band")
      if (point === null) return null
      if (!(points.length === 0 || point > (points.at(-1) ?? 0)))
        return this.trouble(
          cut,
          "expression/cut-points",
          "The cut points of band do not rise.",
          "They are written from the least to the greatest.",
        )
      points.push(point)
      words.push(`${point}`)
    }
    if (part === null) return null
    const levels = [`below ${words[0]}`, ...words.slice(1).map((word, k) => `${words[k]} to ${word}`), `${words.at(-1)} and above`]
    const codes = new Int32Array(this.rows)
    for (let i = 0; i < codes.length; i++) {
      const x = part.values[i * part.step] as number
      let code = !Number.isNaN(x) ? 0 : -1
      while (code >= 0 && code < points.length && x >= (points[code] as number)) code++
      codes[i] = code
    }
    return { type: "category", codes, levels }
  }

  private choice(condition: Expression, yes: Expression, no: Expression, whole: Expression): Part | null {
    const test = this.truth(condition, "if")
    // What is lost in a branch counts only where the branch is taken: if(x > 0, log(x), 0) loses nothing.
    const before = this.lostRows
    this.lostRows = null
    const a = this.value(yes)
    const lostA = this.lostRows
    this.lostRows = null
    const b = this.value(no)
    const lostB = this.lostRows
    this.lostRows = before
    if (test === null || a === null || b === null) return null
    for (let i = 0; i < this.rows; i++) {
      const taken = test.values[i * test.step]
      if ((taken === 1 && lostA?.[i] === 1) || (taken === 0 && lostB?.[i] === 1)) this.loses(i, 1)
    }
    if (isLevels(a) && isLevels(b)) return this.levelChosen(test, a, b)
    if (a.type === "missing" && b.type === "missing") return a
    if (a.type === "missing" && isLevels(b))
      return this.levelChosen(test, { type: "category", codes: new Int32Array(this.rows).fill(-1), levels: [] }, b)
    if (b.type === "missing" && isLevels(a))
      return this.levelChosen(test, a, { type: "category", codes: new Int32Array(this.rows).fill(-1), levels: [] })
    const x = a.type === "missing" && isNumbers(b) ? single(b.type, Number.NaN) : a
    const y = b.type === "missing" && isNumbers(a) ? single(a.type, Number.NaN) : b
    if (!isNumbers(x) || !isNumbers(y) || x.type !== y.type)
      return this.trouble(
        whole,
        "expression/type",
        `The two results of this if are ${typeWords[a.type]} and ${typeWords[b.type]}.`,
        "Both have to be of one type.",
      )
    const step = test.step === 1 || x.step === 1 || y.step === 1 ? 1 : 0
    const out = new Float64Array(step === 1 ? this.rows : 1)
    for (let i = 0; i < out.length; i++) {
      const taken = test.values[i * test.step] as number
      out[i] = taken === 1 ? (x.values[i * x.step] as number) : taken === 0 ? (y.values[i * y.step] as number) : Number.NaN
    }
    return { type: x.type, values: out, step }
  }

  /** A text, or a category, row by row: the levels of the first, then those of the second that are new. */
  private levelChosen(test: Numbers, a: Levels, b: Levels): Part {
    if (test.step === 0 && a.type === "text" && b.type === "text")
      return test.values[0] === 1 ? a : test.values[0] === 0 ? b : { type: "missing" }
    const levelsOf = (part: Levels): readonly string[] => (part.type === "text" ? [part.text] : part.levels)
    const levels = [...new Set([...levelsOf(a), ...levelsOf(b)])]
    const place = new Map(levels.map((level, code) => [level, code] as const))
    const codesB = Int32Array.from(levelsOf(b), (level) => place.get(level) ?? -1)
    const codes = new Int32Array(this.rows)
    for (let i = 0; i < codes.length; i++) {
      const taken = test.values[i * test.step] as number
      // The levels of the first come first, so their codes stay as they are.
      const code =
        taken === 1 ? (a.type === "text" ? 0 : (a.codes[i] as number)) : taken === 0 ? (b.type === "text" ? 0 : (b.codes[i] as number)) : -1
      codes[i] = taken === 0 && code >= 0 ? (codesB[code] as number) : code
    }
    return { type: "category", codes, levels }
  }

  private known(of: Expression): Part | null {
    const part = this.value(of)
    if (part === null) return null
    if (part.type === "text") return single("truth", 1)
    if (part.type === "missing") return single("truth", 0)
    const scalar = part.type !== "category" && part.step === 0
    const out = new Float64Array(scalar ? 1 : this.rows)
    for (let i = 0; i < out.length; i++) out[i] = isMissing(part, i) ? 0 : 1
    return { type: "truth", values: out, step: scalar ? 0 : 1 }
  }

  private calendar(name: "year" | "month", of: Expression): Part | null {
    const part = this.value(of)
    if (part === null) return null
    if (part.type === "missing") return single("number", Number.NaN)
    if (part.type === "text") {
      const days = daysFrom(part.text)
      if (days !== null) return single("number", monthOf(days)[name])
      return this.trouble(of, "expression/date", `"${part.text}" is no date.`, 'A date is written as "2024-02-29": year, month, day.')
    }
    if (part.type !== "date") return this.off(of, part, name, "a date")
    return { ...this.each(part, (days) => monthOf(days)[name]), type: "number" }
  }

  /** A number over a whole column; rows where it is missing take no part. */
  private summary(name: string, of: Expression, share: Expression | null): Part | null {
    const before = this.lostRows
    this.lostRows = null
    const part = this.value(of)
    const lost: Uint8Array | null = this.lostRows
    this.lostRows = before
    if (part === null) return null
    if (lost !== null && name !== "count") {
      this.lostToSummary ??= new Uint8Array(this.rows)
      for (let i = 0; i < this.rows; i++) if ((lost as Uint8Array)[i] === 1 && isMissing(part, i)) this.lostToSummary[i] = 1
    }
    if (name === "count") {
      let there = 0
      for (let i = 0; i < this.rows; i++) if (!isMissing(part, i)) there++
      return single("number", there)
    }
    const date = part.type === "date" && (name === "smallest" || name === "largest")
    const truth = part.type === "truth" && (name === "mean" || name === "sum")
    const numbers = (date || truth) && isNumbers(part) ? part : this.asNumber(part, of, name)
    if (numbers === null) return null
    const values = numbers.step === 1 ? numbers.values : new Float64Array(this.rows).fill(numbers.values[0] ?? Number.NaN)
    const p = share === null ? 0 : this.constant(share, "The share of quantile")
    if (p === null) return null
    if (share !== null && !(p >= 0 && p <= 1))
      return this.trouble(
        share,
        "expression/share",
        `A share of ${p} is outside 0 to 1.`,
        "The quarter below is quantile(x, 0.25), or quantile(x, 25%).",
      )
    const found = name === "quantile" ? quantile(values, p) : (summaries[name]?.(values) ?? Number.NaN)
    const finite = Number.isFinite(found)
    if (!finite && count(values) > 0 && !(name === "sd" && count(values) < 2)) this.lostToSummary = new Uint8Array(this.rows).fill(1)
    return single(date ? "date" : "number", finite ? found : Number.NaN)
  }

  /** A number that is the same in every row. */
  private constant(expression: Expression, what: string): number | null {
    const part = this.value(expression)
    if (part === null) return null
    if (part.type === "number" && part.step === 0 && Number.isFinite(part.values[0])) return part.values[0] ?? null
    return this.trouble(
      expression,
      "expression/constant",
      `${what} has to be one number for all rows.`,
      "A number, a dial or another value can stand here.",
    )
  }

  private numeric(expression: Expression, by: string): Numbers | null {
    const part = this.value(expression)
    return part === null ? null : this.asNumber(part, expression, by)
  }

  private asNumber(part: Part, expression: Expression, by: string): Numbers | null {
    if (part.type === "number") return part
    return part.type === "missing" ? single("number", Number.NaN) : this.off(expression, part, by, "a number")
  }

  private truth(expression: Expression, by: string): Numbers | null {
    const part = this.value(expression)
    if (part === null || part.type === "truth") return part
    return part.type === "missing" ? single("truth", Number.NaN) : this.off(expression, part, by, "a truth")
  }

  private off(expression: Expression, part: Part, by: string, wanted: string): null {
    const signs: Readonly<Record<string, string>> = {
      "+": "A sum",
      "-": "A difference",
      "*": "A product",
      "/": "A quotient",
      "^": "A power",
    }
    return this.trouble(
      expression,
      "expression/type",
      `${signs[by] ?? by} takes ${wanted}, but ${shortly(expression)} is ${typeWords[part.type]}.`,
      wanted === "a truth" ? "A truth comes of a comparison such as x > 0, or of a truth column." : typeHints[part.type],
    )
  }

  private unlike(a: Part, b: Part, left: Expression, right: Expression, whole: Expression): null {
    return this.trouble(
      whole,
      "expression/type",
      `${shortly(left)} is ${typeWords[a.type]} and ${shortly(right)} is ${typeWords[b.type]}, so they cannot be compared.`,
      'A number is compared with a number, a level with a text, a date with a text such as "2024-02-29".',
    )
  }

  private trouble(expression: Expression, code: string, text: string, hint: string | null): null {
    this.troubles.push({ at: expression.at, code, text, hint })
    return null
  }

  /** A function of one number, row by row. */
  private each(part: Numbers, of: (x: number) => number): Numbers {
    const { values, step } = part
    const out = new Float64Array(values.length)
    for (let i = 0; i < out.length; i++) {
      const x = values[i] as number
      const y = of(x)
      if (Number.isFinite(y)) out[i] = y
      else {
        out[i] = Number.NaN
        if (!Number.isNaN(x)) this.loses(i, step)
      }
    }
    return { type: part.type, values: out, step }
  }

  /** A function of two numbers, row by row. */
  private both(a: Numbers, b: Numbers, of: (x: number, y: number) => number): Numbers {
    const step = a.step === 1 || b.step === 1 ? 1 : 0
    const out = new Float64Array(step === 1 ? this.rows : 1)
    for (let i = 0; i < out.length; i++) {
      const x = a.values[i * a.step] as number
      const y = b.values[i * b.step] as number
      const z = of(x, y)
      // A missing value stays missing whatever the function: pow(NaN, 0) is 1 in the usual arithmetic.
      if (Number.isNaN(x) || Number.isNaN(y)) out[i] = Number.NaN
      else if (Number.isFinite(z)) out[i] = z
      else {
        out[i] = Number.NaN
        this.loses(i, step)
      }
    }
    return { type: a.type, values: out, step }
  }

  private loses(row: number, step: 0 | 1): void {
    this.lostRows ??= new Uint8Array(this.rows)
    if (step === 0) this.lostRows.fill(1)
    else this.lostRows[row] = 1
  }
}

type Levels = Codes | { readonly type: "text"; readonly text: string }

const isNumbers = (part: Part): part is Numbers => part.type === "number" || part.type === "truth" || part.type === "date"
const isLevels = (part: Part): part is Levels => part.type === "category" || part.type === "text"

function isMissing(part: Part, row: number): boolean {
  if (part.type === "text") return false
  if (part.type === "missing") return true
  if (part.type === "category") return (part.codes[row] as number) < 0
  const value = part.values[row * part.step] as number
  return Number.isNaN(value)
}

/** A part of an expression as it stands in a sentence: long ones are cut. */
function shortly(expression: Expression): string {
  const text = printed(expression)
  return text.length <= 40 ? text : `${text.slice(0, 37)}…`
}

const typeHints: Readonly<Record<Part["type"], string>> = {
  number: "A number is there already.",
  truth: "if(x, 1, 0) makes a number of a truth.",
  date: "year(d) and month(d) make numbers of a date, and so does a difference of two dates.",
  category: 'A category is compared with a text, as in lot = "b", and the comparison turned into a number by if.',
  text: "A number is written without quotes.",
  missing: "A value belongs here.",
}

const mirrored: Readonly<Partial<Record<Operator, Operator>>> = { "<": ">", "<=": ">=", ">": "<", ">=": "<=" }

const arithmeticOf = {
  "+": (x: number, y: number): number => x + y,
  "-": (x: number, y: number): number => x - y,
  "*": (x: number, y: number): number => x * y,
  "/": (x: number, y: number): number => x / y,
  "^": (x: number, y: number): number => (y === 2 ? x * x : pow(x, y)),
} as const

const comparisonOf: Readonly<Partial<Record<Operator, (x: number, y: number) => boolean>>> = {
  "=": (x, y) => x === y,
  "!=": (x, y) => x !== y,
  "<": (x, y) => x < y,
  "<=": (x, y) => x <= y,
  ">": (x, y) => x > y,
  ">=": (x, y) => x >= y,
}

/** Halves away from 0. Not by adding a half: 0.49999999999999994 + 0.5 is 1. */
function rounded(x: number): number {
  const whole = Math.trunc(x)
  return Math.abs(x - whole) >= 0.5 ? whole + Math.sign(x) : whole
}

/** η ↦ 1/(1 + e^−η), without overflow on either side. */
function inverseLogit(x: number): number {
  if (x >= 0) return 1 / (1 + exp(-x))
  const e = exp(x)
  return e / (1 + e)
}

const scalarFunctions: Readonly<Record<string, (x: number) => number>> = {
  abs: Math.abs,
  asin,
  atan,
  ceil: Math.ceil,
  cos,
  exp,
  expm1,
  floor: Math.floor,
  log,
  log10,
  log1p,
  round: rounded,
  sign: Math.sign,
  sin,
  square_root: Math.sqrt,
  tan,
  tanh,
  normal_cdf: normalCdf,
  normal_quantile: normalQuantile,
  logit: (p) => log(p) - log1p(-p),
  inverse_logit: inverseLogit,
}

const summaries: Readonly<Record<string, (values: Float64Array) => number>> = { mean, median, sd, sum, smallest, largest }
