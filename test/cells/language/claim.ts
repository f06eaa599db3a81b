// A claim about a link from text, for the tests of bounds and proofs.

import type { End, Ranges } from "../../../cells/language/bounds.ts"
import * as exact from "../../../cells/language/exact.ts"
import type { Expression } from "../../../cells/language/expression.ts"
import type { Given } from "../../../cells/language/formula.ts"
import { interval } from "../../../cells/language/interval.ts"
import { type Claim, type Proof, proofOf } from "../../../cells/language/proof.ts"
import { expressionOf } from "./sample.ts"

export const endOf = (text: string): End => {
  if (text === "infinity") return { type: "infinity", sign: 1 }
  if (text === "-infinity") return { type: "infinity", sign: -1 }
  return { type: "limit", place: exact.decimal(text) ?? exact.symbol(text) }
}

/** Constants by name: a decimal, or the two ends of what is estimated. */
export type Constants = Readonly<Record<string, string | readonly [number, number]>>

export function claimOf(eta: string | Expression, from: string, to: string, constants: Constants = {}): Claim {
  const givens = new Map<string, Given>()
  const ranges = new Map<string, ReturnType<typeof interval>>()
  for (const [name, value] of Object.entries(constants)) {
    if (typeof value === "string") givens.set(name, { fraction: exact.decimal(value) ?? exact.zero, value: Number(value) })
    else {
      givens.set(name, { fraction: exact.symbol(name), value: Number.NaN })
      ranges.set(name, interval(value[0], value[1]))
    }
  }
  const expression = typeof eta === "string" ? expressionOf(eta) : eta
  return { eta: expression, variable: "mu", from: endOf(from), to: endOf(to), givens, ranges: ranges as Ranges }
}

export async function proofFrom(eta: string | Expression, from: string, to: string, constants: Constants = {}): Promise<Proof> {
  const proven = await proofOf(claimOf(eta, from, to, constants), async () => {})
  if (!proven.ok) throw new Error(proven.trouble.text)
  return proven.proof
}

/** `proved`, `refuted at …` or `undecided`, of one property. */
export const said = ({ verdict, witness }: Proof["defined"]): string => (verdict === "refuted" ? `refuted at ${witness}` : verdict)
