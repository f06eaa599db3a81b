// What the rows say of parameters that are estimated beside the coefficients: those of the link, limits of the mean, and 1/k of the negative
// binomial. Scores, information with each other and, as columns, with the coefficients, so that errors are joint ones. Conventions,
// dispersion and errors.

import { alphaSlopes } from "./negative-binomial.ts"
import type { FamilySpec, LinkSpec, Problem } from "./problem.ts"
import type { Information, Responses } from "./rows.ts"

export type EstimatedParameter = {
  /** As findings call it: `k`, `p`, `a`, `b`, `lower limit`, `upper limit`. */
  readonly of: string
  readonly part: "family" | "link" | "low" | "high"
  /** Its place among the parameters of family or link. */
  readonly index: number
}

const linkParameterNames = ["a", "b"]

/** The parameters that a problem leaves to be estimated, in the order in which they are shown. */
export function estimatedParameters({
  family,
  link,
}: {
  readonly family: FamilySpec
  readonly link: LinkSpec
}): readonly EstimatedParameter[] {
  const found: EstimatedParameter[] = []
  for (const index of link.estimated ?? []) found.push({ of: linkParameterNames[index] ?? `parameter ${index + 1}`, part: "link", index })
  for (const end of link.limits?.estimated ?? []) found.push({ of: end === "low" ? "lower limit" : "upper limit", part: end, index: 0 })
  for (const index of family.estimated ?? []) found.push({ of: family.name === "tweedie" ? "p" : "k", part: "family", index })
  return found
}

/** Value of a parameter on the scale on which it is searched: 1/k for k, a² for symmetric_power, itself else. */
export function searchedValue(problem: Problem, { part, index }: EstimatedParameter): number {
  const { family, link } = problem
  if (part === "low") return link.limits?.low ?? 0
  if (part === "high") return link.limits?.high ?? 1
  if (part === "family") return family.name === "tweedie" ? (family.parameters[index] as number) : 1 / (family.parameters[index] as number)
  const a = link.parameters[index] as number
  return link.name === "symmetric_power" ? a * a : a
}

/** The value as it is shown, and d(shown)/d(searched) there. */
export function shownValue({ family, link }: Problem, { part }: EstimatedParameter, searched: number): readonly [number, number] {
  if (part === "family" && family.name !== "tweedie") return [1 / searched, 1 / (searched * searched)]
  if (part === "link" && link.name === "symmetric_power") return [Math.sqrt(searched), 0.5 / Math.sqrt(searched)]
  return [searched, 1]
}

/** The problem with its parameters at these values of the search. */
export function problemAt(problem: Problem, parameters: readonly EstimatedParameter[], values: ArrayLike<number>): Problem {
  let { family, link } = problem
  parameters.forEach(({ part, index }, j) => {
    const value = values[j] as number
    const put = (into: readonly number[], shown: number): readonly number[] => into.map((old, k) => (k === index ? shown : old))
    if (part === "family") family = { ...family, parameters: put(family.parameters, family.name === "tweedie" ? value : 1 / value) }
    else if (part === "link") link = { ...link, parameters: put(link.parameters, shownIn(link.name, value)) }
    else if (link.limits) link = { ...link, limits: { ...link.limits, [part]: value } }
  })
  return { ...problem, family, link }
}

/** A power so near to 0 is the log: μ^a would keep fewer digits of its mean than the difference makes. */
const asLog = 1e-7

const shownIn = (link: string, value: number): number =>
  link === "symmetric_power" ? Math.sqrt(value) : link === "power" && Math.abs(value) < asLog ? 0 : value

export type JointSums = {
  /** What rows of no dose, which are not among the others, add to ∂ℓ/∂θ; φ taken as one. */
  readonly beside: Float64Array
  /** Of the parameters with each other, by rows. */
  readonly information: Float64Array
  /** A column a parameter: X' times it is its information with the coefficients. */
  readonly columns: readonly Float64Array[]
  /** ∂ℓ/∂θ of each row. */
  readonly rowScores: readonly Float64Array[]
}

/**
 * Sums over the rows at a point; the power of a Tweedie family takes no part here (its information with the coefficients is expected to be nought).
 * @param state  η and μ of the rows
 */
export function jointSums(
  problem: Problem,
  responses: Responses,
  parameters: readonly EstimatedParameter[],
  state: { readonly eta: Float64Array; readonly mu: Float64Array },
  kind: Information,
): JointSums {
  const { family, link, y, a, scale, rows } = responses
  const { repeat, precision, control } = problem
  const q = parameters.length
  const beside = new Float64Array(q)
  const information = new Float64Array(q * q)
  const columns = parameters.map(() => new Float64Array(rows))
  const rowScores = parameters.map(() => new Float64Array(rows))
  const count = problem.link.parameters.length
  const bend = new Float64Array(2 * count + (count * (count + 1)) / 2)
  const first = new Float64Array(q)
  const mixed = new Float64Array(q)
  const second = new Float64Array(q * q)
  const slopes = { first: 0, second: 0, withMean: 0 }
  const observed = kind === "observed"
  const { low, high } = problem.link.limits ?? { low: 0, high: 1 }
  const alpha = problem.family.name === "negative_binomial" ? 1 / (problem.family.parameters[0] as number) : 0
  const ofFamily = parameters.findIndex(({ part }) => part === "family")
  const besideFamily = parameters.some(({ part }) => part !== "family")
  // Filled again for each row.
  const at = { m: 0, rest: 0, d: 0, low, high }
  const out = { first, mixed, second }
  for (let i = 0; i < rows; i++) {
    const own = a[i] as number
    if (own === 0) continue
    const e = state.eta[i] as number
    const m = state.mu[i] as number
    const times = scale ? (scale[i] as number) : 1
    const rest = link.complement === null || m < 0.5 ? 1 - m : link.complement(e)
    const v = family.variance(m, rest)
    if (!(v > 0) || v === Infinity) continue
    const response = y[i] as number
    const residual = family.name === "binomial" && response > 0.5 ? rest - (1 - response) : response - m
    const d = times * link.slope(e)
    const byMean = (own * residual) / v
    const byMeanTwice = observed ? -own * (1 / v + ((residual / v) * family.varianceSlope(m, rest)) / v) : -own / v
    if (count > 0 && link.bend) link.bend(e, bend)
    if (besideFamily) {
      at.m = m
      at.rest = rest
      at.d = d
      slopesOf(parameters, count, bend, times, at, out)
    }
    const R = (repeat ? (repeat[i] as number) : 1) * (precision ? (precision[i] as number) : 1)
    if (ofFamily >= 0 && family.discrete) alphaSlopes(response, m, alpha, slopes)
    for (let j = 0; j < q; j++) {
      const column = columns[j] as Float64Array
      const rowScore = rowScores[j] as Float64Array
      if (j === ofFamily) {
        if (!family.discrete) continue
        rowScore[i] = R * slopes.first
        if (observed) column[i] = -R * slopes.withMean * d
        information[j * q + j] = (information[j * q + j] as number) - R * slopes.second
        continue
      }
      const own = first[j] as number
      rowScore[i] = byMean * own
      column[i] = -byMeanTwice * d * own - (observed ? byMean * (mixed[j] as number) : 0)
      for (let k = 0; k < q; k++) {
        const at = j * q + k
        if (k === ofFamily) {
          const both = observed && family.discrete ? -R * slopes.withMean * own : 0
          information[at] = (information[at] as number) + both
          information[k * q + j] = (information[k * q + j] as number) + both
        } else
          information[at] =
            (information[at] as number) - byMeanTwice * own * (first[k] as number) - (observed ? byMean * (second[at] as number) : 0)
      }
    }
  }
  const ofLow = parameters.findIndex(({ part }) => part === "low")
  if (control && ofLow >= 0) {
    const sums = controlSlopes(control, low, kind)
    beside[ofLow] = sums.score
    information[ofLow * q + ofLow] = (information[ofLow * q + ofLow] as number) + sums.information
  }
  return { beside, information, columns, rowScores }
}

/** ∂μ/∂θ, ∂²μ/∂η∂θ and ∂²μ/∂θ∂θ' of one row for the parameters asked for; what concerns a family is left at 0. */
function slopesOf(
  parameters: readonly EstimatedParameter[],
  count: number,
  bend: Float64Array,
  times: number,
  at: { readonly m: number; readonly rest: number; readonly d: number; readonly low: number; readonly high: number },
  out: { readonly first: Float64Array; readonly mixed: Float64Array; readonly second: Float64Array },
): void {
  const q = parameters.length
  const width = at.high - at.low
  parameters.forEach(({ part, index }, j) => {
    if (part === "family") return
    if (part === "link") {
      out.first[j] = times * (bend[index] as number)
      out.mixed[j] = times * (bend[count + index] as number)
    } else {
      // Shares of a whole have no exposure, so times is 1 here.
      const sign = part === "low" ? -1 : 1
      out.first[j] = part === "low" ? (at.rest - (1 - at.high)) / width : (at.m - at.low) / width
      out.mixed[j] = (sign * at.d) / width
    }
    parameters.forEach((other, k) => {
      let value = 0
      if (part === "link" && other.part === "link") {
        const [more, less] = index > other.index ? [index, other.index] : [other.index, index]
        value = times * (bend[2 * count + (more * (more + 1)) / 2 + less] as number)
      } else if (part === "link" && (other.part === "low" || other.part === "high"))
        value = ((other.part === "low" ? -1 : 1) * (bend[index] as number)) / width
      else if (other.part === "link" && (part === "low" || part === "high"))
        value = ((part === "low" ? -1 : 1) * (bend[other.index] as number)) / width
      out.second[j * q + k] = value
    })
  })
}

/** What the rows of no dose say of the lower limit, which is their mean. */
function controlSlopes(
  control: NonNullable<Problem["control"]>,
  low: number,
  kind: Information,
): { readonly score: number; readonly information: number } {
  let [score, information] = [0, 0]
  control.y.forEach((y, i) => {
    const own = controlWeight(control, i)
    if (y > 0) score += (own * y) / low
    score -= (own * (1 - y)) / (1 - low)
    if (kind === "expected") information += own / (low * (1 - low))
    else information += own * ((y > 0 ? y / low / low : 0) + (1 - y) / (1 - low) / (1 - low))
  })
  return { score, information }
}

export const controlWeight = ({ trials, repeat, precision }: NonNullable<Problem["control"]>, i: number): number =>
  (trials ? (trials[i] as number) : 1) * (repeat ? (repeat[i] as number) : 1) * (precision ? (precision[i] as number) : 1)
