// The words of a dial: a number or a text that a hand turns, for other cells to use. All that can be wrong with it is wrong with its text,
// so reading it finds every fault and evaluating it none.

import type { Words } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { type Filled, type Matched, readClauses } from "../language/form.ts"
import { type Decimal, decimalFrom, decimalText, numberOf, tenTo, withDigits } from "./decimal.ts"
import * as say from "./notices.ts"

export type DialSaid = {
  readonly name: Name | null
  readonly dial:
    | {
        readonly type: "range"
        readonly from: number
        readonly to: number
        readonly step: number
        /** How many steps the range has. */
        readonly steps: number
        /** Digits after the point of every value. */
        readonly digits: number
        readonly value: number
      }
    | { readonly type: "choice"; readonly choices: readonly string[]; readonly value: string }
    | null
}

/** A slider of more steps has several to each pixel of any screen, and a hand cannot tell them apart. */
const mostSteps = 1_000_000

export const dialWords: Words<DialSaid> = {
  word: "dial",
  name: "needed",
  says: "A number or a text that a hand turns, for other cells to use by its name",
  example: "dial k\n  from 0 to 1\n  step 0.1\n  start 0.5",
  clauses: {
    from: { forms: ["NUMBER:from to NUMBER:to"], says: "The range it turns over" },
    step: { forms: ["NUMBER:step"], says: "How far apart the numbers are at which it stops" },
    choice: { forms: ["{ TEXT:choices },"], says: "The texts to choose from, in place of a range" },
    start: { forms: ["NUMBER:start", "TEXT:start"], says: "Where it stands; turning it rewrites this clause" },
  },
  parse(statement) {
    const { clauses, notices } = readClauses(statement, dialWords)
    const all: Notice[] = [...notices]
    const clause = (keyword: string): Matched | null => clauses.find((each) => each.keyword === keyword) ?? null
    const written = (keyword: string): boolean => statement.clauses.some((each) => each.keyword === keyword)
    const [range, step, choice, start] = [clause("from"), clause("step"), clause("choice"), clause("start")]
    let dial: DialSaid["dial"] = null
    if (written("choice") && (written("from") || written("step"))) {
      if (choice !== null) all.push(say.rangeAndChoice(whole(choice)))
    } else if (choice !== null) {
      dial = choiceDial(choice, start, all)
    } else if (range !== null) {
      dial = rangeDial(range, step, written("step"), start, all)
    } else if (step !== null && !written("from")) {
      all.push(say.noRange(whole(step)))
    } else if (!written("from") && !written("choice") && notices.length === 0) {
      all.push(say.nothingToTurn())
    }
    return { said: { name: statement.name, dial }, notices: all }
  },
  names: (said) => ({ defines: said.name, uses: [], files: [] }),
}

const whole = (clause: Matched): Place => ({ clause: clause.clause, from: 0, to: 1 })

const quoted = (text: string): string => `"${text.replaceAll("\\", "\\\\").replaceAll('"', '\\"')}"`

function choiceDial(choice: Matched, start: Matched | null, all: Notice[]): DialSaid["dial"] {
  const choices: string[] = []
  for (const filled of choice.slots["choices"] ?? []) {
    if (filled.type !== "TEXT") continue
    if (choices.includes(filled.text)) all.push(say.choiceTwice(filled.at, quoted(filled.text)))
    else choices.push(filled.text)
  }
  const [first] = choices
  const [said] = start?.slots["start"] ?? []
  if (first === undefined) return null
  if (said === undefined) return { type: "choice", choices, value: first }
  const value = said.type === "TEXT" ? said.text : said.type === "NUMBER" ? said.text : ""
  if (said.type === "TEXT" && choices.includes(value)) return { type: "choice", choices, value }
  const near = choices.includes(value) ? value : nearest(value, choices)
  const shown = said.type === "TEXT" ? quoted(value) : value
  all.push(say.startNotAChoice(said.at, shown, choices.map(quoted), near === null ? null : quoted(near)))
  return null
}

function rangeDial(range: Matched, step: Matched | null, stepWritten: boolean, start: Matched | null, all: Notice[]): DialSaid["dial"] {
  const ends = [exact(range.slots["from"]?.[0]), exact(range.slots["to"]?.[0])]
  const [from, to] = ends
  if (from === undefined || from === null || to === undefined || to === null) {
    all.push(say.tooManySteps(whole(range), mostSteps))
    return null
  }
  if (from.number >= to.number) {
    all.push(say.rangeTurned(whole(range), from.text, to.text))
    return null
  }
  const [saidStep] = step?.slots["step"] ?? []
  if (saidStep === undefined) {
    if (!stepWritten) all.push(say.noStep(whole(range), hundredth(from.number, to.number)))
    return null
  }
  const stepped = exact(saidStep)
  if (stepped === null) {
    all.push(say.tooManySteps(saidStep.at, mostSteps))
    return null
  }
  if (stepped.decimal.units <= 0n) {
    all.push(say.stepNotPositive(saidStep.at, stepped.text))
    return null
  }
  // One more digit than the step has only where the range begins between: from 0.25 in steps of 0.5.
  const digits = Math.max(from.decimal.digits, stepped.decimal.digits)
  const common = Math.max(digits, to.decimal.digits)
  const low = withDigits(from.decimal, common).units
  const high = withDigits(to.decimal, common).units
  const one = withDigits(stepped.decimal, common).units
  const steps = (high - low) / one
  if (steps < 1n) {
    all.push(say.stepTooLong(saidStep.at, stepped.text, from.text, to.text))
    return null
  }
  if (steps > BigInt(mostSteps)) {
    all.push(say.tooManySteps(saidStep.at, mostSteps))
    return null
  }
  const textAt = (k: bigint): string => decimalText(shortened({ units: low + k * one, digits: common }, digits))
  if (low + steps * one !== high) all.push(say.endNotReached(whole(range), to.text, textAt(steps)))
  const at = startStep(start, { low, one, steps, common }, textAt, all)
  if (at === null) return null
  return {
    type: "range",
    from: from.number,
    to: to.number,
    step: stepped.number,
    steps: Number(steps),
    digits,
    value: Number(textAt(at)),
  }
}

type Steps = { readonly low: bigint; readonly one: bigint; readonly steps: bigint; readonly common: number }

/** Which step the dial starts at; null once a fault was said. */
function startStep(start: Matched | null, { low, one, steps, common }: Steps, textAt: (k: bigint) => string, all: Notice[]): bigint | null {
  const [said] = start?.slots["start"] ?? []
  if (said === undefined) return 0n
  const given = exact(said)
  if (given === null) {
    all.push(say.startNotOnStep(said.at, said.type === "TEXT" ? quoted(said.text) : "this number", textAt(0n)))
    return null
  }
  const digits = Math.max(common, given.decimal.digits)
  const scale = tenTo(digits - common)
  const beyond = withDigits(given.decimal, digits).units - low * scale
  const length = one * scale
  const k = beyond / length
  if (beyond >= 0n && k <= steps && k * length === beyond) return k
  const rounded = (2n * beyond + length) / (2n * length)
  const near = beyond < 0n ? 0n : rounded > steps ? steps : rounded
  all.push(say.startNotOnStep(said.at, given.text, textAt(near)))
  return null
}

/** A number as written, exactly; null for a text and for a number too long for a dial. */
function exact(filled: Filled | undefined): { readonly text: string; readonly number: number; readonly decimal: Decimal } | null {
  if (filled?.type !== "NUMBER") return null
  const decimal = decimalFrom(filled.text)
  return decimal === null ? null : { text: filled.text, number: numberOf(decimal), decimal }
}

/** A decimal whose last digits are zeros, without them. */
const shortened = ({ units, digits }: Decimal, wanted: number): Decimal => ({
  units: units / tenTo(digits - wanted),
  digits: wanted,
})

/** A step to propose: the power of ten next below a tenth of the range. */
function hundredth(from: number, to: number): string {
  const power = Number((to - from).toExponential().split("e")[1]) - 1
  return power >= 0 ? `1${"0".repeat(Math.min(power, 30))}` : `0.${"0".repeat(Math.min(-power - 1, 29))}1`
}
