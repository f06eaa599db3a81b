// The families and links of the language by name: what completion offers, what a fault compares with, and how a formula is written. Plain
// data that the page loads; what they compute is in cells/statistics, and a test holds the two together.

export type FamilyWords = {
  readonly name: string
  readonly says: string
  /** Names of the parameters in brackets; all of them may be left out. */
  readonly parameters: readonly string[]
  /** Which means are possible. */
  readonly mean: "any" | "positive" | "unit"
  /** V(μ) as text. */
  readonly variance: string
  /** The link where none is said: the canonical one, or the one the language takes. */
  readonly link: string
}

export type LinkWords = {
  readonly name: string
  readonly says: string
  readonly parameters: readonly string[]
  /** g(μ) as text, with the parameters by name. */
  readonly formula: string
  /** The means on which it is defined. */
  readonly mean: "any" | "positive" | "unit"
}

const family = (
  name: string,
  mean: FamilyWords["mean"],
  variance: string,
  link: string,
  says: string,
  parameters: readonly string[] = [],
): FamilyWords => ({ name, says, parameters, mean, variance, link })

/** By name, in the order of the language. */
export const families: Readonly<Record<string, FamilyWords>> = byName([
  family("normal", "any", "1", "identity", "any number, spread alike at every mean"),
  family("binomial", "unit", "μ(1 − μ)", "logit", "successes out of trials, or true and false"),
  family("poisson", "positive", "μ", "log", "counts whose variance is their mean"),
  family("gamma", "positive", "μ²", "reciprocal", "positive amounts whose spread grows with the mean"),
  family("inverse_gaussian", "positive", "μ³", "reciprocal_square", "positive amounts with a long upper tail"),
  family("negative_binomial", "positive", "μ + μ²/k", "log", "counts that vary more than Poisson's", ["k"]),
  family("tweedie", "positive", "μ^p", "log", "amounts that are 0 or positive", ["p"]),
  family("quasi_likelihood", "any", "as said", "identity", "a variance said as an expression of mu, without a law", ["variance"]),
])

const link = (name: string, mean: LinkWords["mean"], formula: string, says: string, parameters: readonly string[] = []): LinkWords => ({
  name,
  says,
  parameters,
  formula,
  mean,
})

/** By name, in the order of the language. */
export const links: Readonly<Record<string, LinkWords>> = byName([
  link("identity", "any", "μ", "the mean itself: effects are differences of means"),
  link("log", "positive", "ln μ", "effects multiply the mean"),
  link("reciprocal", "positive", "1/μ", "effects add to one over the mean: a rate for a time"),
  link("reciprocal_square", "positive", "1/μ²", "effects add to one over the mean squared"),
  link("square_root", "positive", "√μ", "effects add to the square root of the mean"),
  link("power", "positive", "μ^a", "effects add to a power of the mean; ln μ at a = 0", ["a"]),
  link("box_cox", "positive", "(μ^a − 1)/a", "a power of the mean, continuous at a = 0 where it is ln μ", ["a"]),
  link("logit", "unit", "ln(μ/(1 − μ))", "effects multiply the odds"),
  link("probit", "unit", "Φ⁻¹(μ)", "effects shift a normal threshold"),
  link("cauchit", "unit", "tan(π(μ − ½))", "heavy tails: forgiving of surprises far out"),
  link("cloglog", "unit", "ln(−ln(1 − μ))", "effects multiply a hazard; the upper end is reached fast"),
  link("loglog", "unit", "−ln(−ln μ)", "the mirror of cloglog; the lower end is reached fast"),
  link("log_complement", "unit", "ln(1 − μ)", "effects multiply the chance of none; decreasing"),
  link("aranda_ordaz", "unit", "ln(((1 − μ)^−a − 1)/a)", "from log over cloglog (a = 0) to logit (a = 1) and beyond", ["a"]),
  link("symmetric_power", "unit", "(2/a)·(μ^a − (1 − μ)^a)/(μ^a + (1 − μ)^a)", "symmetric, with tails lighter than the logit's", ["a"]),
  link("stukel", "unit", "logit bent by a above ½ and by b below", "the logit bent apart in each half", ["a", "b"]),
])

/** Names of the links of this version that are legal with a family, its own link first; none for a family there is not. */
export function legalLinks(familyName: string): readonly string[] {
  const known = Object.hasOwn(families, familyName) ? families[familyName] : undefined
  if (known === undefined) return []
  // A normal mean may be any number; its means are then those of the link. Else the link must be defined for every possible mean.
  const legal = Object.values(links).filter(
    ({ mean }) =>
      known.name === "normal" || known.name === "quasi_likelihood" || known.mean === "unit" || mean === "any" || mean === known.mean,
  )
  const names = legal.map(({ name }) => name)
  return names.includes(known.link) ? [known.link, ...names.filter((name) => name !== known.link)] : names
}

/** The link a family takes where none is said; null for a family there is not. */
export const canonicalLink = (familyName: string): string | null =>
  Object.hasOwn(families, familyName) ? (families[familyName]?.link ?? null) : null

/** g(μ) for a link as a clause says it, its numbers in place of the parameters: `μ^0.5` for `power(0.5)`; the text itself where unknown. */
export function linkFormula(says: string): string {
  const found = /^([\p{L}_][\p{L}\p{M}\p{Nd}_]*)(?:\((.*)\))?$/u.exec(says.trim())
  const name = found?.[1] ?? ""
  const words = Object.hasOwn(links, name) ? links[name] : undefined
  if (words === undefined) return says
  const numbers = (found?.[2] ?? "").split(",").map((number) => number.trim())
  const first = Number(numbers[0] || Number.NaN)
  const atNought = formulasAtNought[name]
  if (first === 0 && atNought !== undefined) return atNought
  // Two signs one after the other would be hard to read.
  if (name === "aranda_ordaz" && first < 0) return `ln((1 − (1 − μ)^${-first})/${-first})`
  if (name === "box_cox" && first < 0) return `(1 − μ^−${-first})/${-first}`
  return words.parameters.reduce((formula, parameter, k) => {
    const number = numbers[k]
    if (number === undefined || number === "") return formula
    const text = number.replace("-", "−")
    return formula.replace(new RegExp(`(?<![\\p{L}])${parameter}(?![\\p{L}])`, "gu"), text)
  }, words.formula)
}

/** What the parameters of a family or a link can be, in words and as a question; any number where nothing is said. */
export const parameterRange = (name: string): { readonly says: string; readonly holds: (value: number) => boolean } =>
  (Object.hasOwn(parameterRanges, name) ? parameterRanges[name] : undefined) ?? { says: "a finite number", holds: Number.isFinite }

const parameterRanges: Readonly<Record<string, { readonly says: string; readonly holds: (value: number) => boolean }>> = {
  negative_binomial: { says: "a number above 0", holds: (k) => k > 0 },
  tweedie: { says: "a number between 1 and 2", holds: (p) => p > 1 && p < 2 },
  aranda_ordaz: { says: "a number from −1 on", holds: (a) => a >= -1 },
  symmetric_power: { says: "a number from 0 to 1", holds: (a) => a >= 0 && a <= 1 },
}

/** What a formula tends to as its parameter does to 0. */
const formulasAtNought: Readonly<Record<string, string>> = {
  power: "ln μ",
  box_cox: "ln μ",
  aranda_ordaz: "ln(−ln(1 − μ))",
  symmetric_power: "ln(μ/(1 − μ))",
}

function byName<W extends { readonly name: string }>(words: readonly W[]): Readonly<Record<string, W>> {
  return Object.fromEntries(words.map((each) => [each.name, each]))
}
