// Programs from expressions: the list of steps that the statistics run for each mean. Only what the results need is in it, and results are
// in the order asked for, so that the first can be had without the others.

import type { Name } from "../../runtime/value.ts"
import { type Operation, operations, type Program } from "../statistics/own-link.ts"
import type { Expression } from "./expression.ts"
import { Formula, type Given, type Step } from "./formula.ts"

export function programOf(results: readonly Expression[], variable: Name, givens: ReadonlyMap<Name, Given>): Program {
  const formula = new Formula(variable, givens)
  const asked = results.map((result) => formula.add(result))
  const { steps } = formula
  // Places in the order in which the results need them: all of the first, then what the second needs more.
  const place = new Map<number, number>()
  const order: number[] = []
  const visit = (k: number): void => {
    if (place.has(k)) return
    const { a, b } = steps[k] as Step
    if (a >= 0) visit(a)
    if (b >= 0) visit(b)
    place.set(k, order.length)
    order.push(k)
  }
  for (const k of asked) visit(k)
  const constants: number[] = []
  const code = new Int32Array(3 * order.length)
  order.forEach((k, at) => {
    const { operation, a, b, value } = steps[k] as Step
    code[3 * at] = numbers.get(operation) ?? 0
    code[3 * at + 1] = operation === "constant" ? constants.push(value) - 1 : (place.get(a) ?? 0)
    code[3 * at + 2] = place.get(b) ?? 0
  })
  return { code, constants: Float64Array.from(constants), outputs: Int32Array.from(asked, (k) => place.get(k) ?? 0) }
}

const numbers: ReadonlyMap<Operation, number> = new Map(operations.map((operation, k) => [operation, k]))
