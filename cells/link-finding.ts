// What a link cell finds, as far as other kinds may rely on it: the one place where `link` and those who use a link (model, scales and
// others) meet. Plain data; the link itself is a list of instructions that the statistics run.

import type { Name, Value } from "../runtime/value.ts"
import type { OwnLink } from "./statistics/own-link.ts"

/** `witness` is the point that refutes, or the two ends of the smallest interval left. */
export type LinkVerdict = {
  readonly verdict: "proved" | "refuted" | "undecided"
  readonly witness: number | readonly [number, number] | null
}

/** A constant of the formula: a number, or what it is estimated between. */
export type LinkGiven = { readonly name: Name; readonly value: number | null; readonly from: number | null; readonly to: number | null }

export type LinkFinding = {
  readonly link: Name
  /** g(μ) and dη/dμ as they are written in a clause. */
  readonly eta: string
  readonly slope: string
  readonly inverse: string | null
  readonly range: readonly [number, number]
  /** The ends of the range as they were written. */
  readonly ends: readonly [string, string]
  readonly given: readonly LinkGiven[]
  readonly defined: LinkVerdict
  readonly strictlyMonotone: LinkVerdict
  readonly differentiable: LinkVerdict
  /** Whether η rises with μ; null where it is not known. */
  readonly rising: boolean | null
  /** The open range of η; null for an end that is not known. */
  readonly reach: readonly [number | null, number | null]
  readonly canonical: string | null
  /** Where the derivative is 0. */
  readonly level: readonly number[]
  /** Where the derivative is too small for a double. */
  readonly flat: readonly (readonly [number, number])[]
  /** Null where a property is refuted, or a constant is still to be estimated. */
  readonly own: OwnLink | null
  /** For the figure: μ, η and dη/dμ; NaN where there is none. */
  readonly curve: { readonly mu: Float64Array; readonly eta: Float64Array; readonly slope: Float64Array }
}

/** The finding of a link cell; null for a value of another kind. */
export function linkIn(value: Value | undefined): LinkFinding | null {
  const is = typeof value === "object" && value !== null && "link" in value && "strictlyMonotone" in value
  return is ? (value as unknown as LinkFinding) : null
}

/** Properties that were not decided, in words; whoever uses the link repeats them. */
export function undecidedIn(link: LinkFinding): readonly string[] {
  const said: readonly (readonly [LinkVerdict, string])[] = [
    [link.defined, "defined"],
    [link.strictlyMonotone, "strictly monotone"],
    [link.differentiable, "differentiable"],
  ]
  return said.flatMap(([{ verdict }, says]) => (verdict === "undecided" ? [says] : []))
}
