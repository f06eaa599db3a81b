// The equation of a model: g(μ) written out, then the linear predictor, coefficient by coefficient, as a formula and as the same in text.

import type { Formula } from "../figure/formula.ts"
import { written } from "../figure/number.ts"
import { printed } from "../language/expression.ts"
import { linkFormula } from "../language/vocabulary.ts"
import type { ModelFinding } from "../model-finding.ts"
import type { LinkSpec } from "../statistics/problem.ts"

/** Coefficients written out at most; of more, the first and the last stand for all. */
const mostWritten = 8

export type Equation = { readonly formula: Formula; readonly text: string }

export function equation(found: ModelFinding): Equation {
  const right = rightSide(found)
  // A link of the user's own is called by its name; its cell has the formula.
  const own = found.problem.link.own === undefined ? linkFormula(found.link) : `${found.link}(μ)`
  const { limits } = found.problem.link
  const [low, high] = limits === undefined ? ["0", "1"] : [written(limits.low, 6), written(limits.high, 6)]
  const mean = unitsOfMean(found)
    ? `(μ/${found.exposure?.name})`
    : limits === undefined
      ? "μ"
      : limits.low === 0
        ? `(μ/${high})`
        : `((μ − ${low})/(${high} − ${low}))`
  const text = `${own.replaceAll("μ", mean)} = ${right.text}`
  return { formula: row(leftSide(found), sign("="), right.formula), text }
}

/** The name of a coefficient, β with its number: `β₁`. */
export const coefficientName = (index: number): string => `β${[...String(index)].map((digit) => lowered[Number(digit)]).join("")}`

const lowered = "₀₁₂₃₄₅₆₇₈₉"

/** g(μ) as a formula, `mean` in the place of μ. */
export function linkTree(link: LinkSpec, mean: Formula): Formula {
  const rest = row(number("1"), sign("−"), mean)
  switch (link.name) {
    case "identity":
      return mean
    case "log":
      return called("ln", mean)
    case "reciprocal":
      return { type: "fraction", above: number("1"), below: mean }
    case "square_root":
      return { type: "root", of: mean }
    case "reciprocal_square":
      return { type: "fraction", above: number("1"), below: powered(mean, 2) }
    case "power": {
      const a = link.parameters[0] ?? 1
      return a === 0 ? called("ln", mean) : powered(mean, a)
    }
    case "box_cox": {
      const a = link.parameters[0] ?? 1
      if (a === 0) return called("ln", mean)
      return { type: "fraction", above: row(powered(mean, a), sign("−"), number("1")), below: decimal(a) }
    }
    case "logit":
      return called("ln", { type: "fraction", above: mean, below: rest })
    case "probit":
      return row({ type: "power", base: name("Φ"), with: number("−1") }, { type: "bracket", of: mean })
    case "cauchit":
      return called(
        "tan",
        row(name("π"), { type: "bracket", of: row(mean, sign("−"), { type: "fraction", above: number("1"), below: number("2") }) }),
      )
    case "cloglog":
      return called("ln", row(sign("−"), called("ln", rest)))
    case "loglog":
      return row(sign("−"), called("ln", row(sign("−"), called("ln", mean))))
    case "log_complement":
      return called("ln", rest)
    case "aranda_ordaz": {
      const a = link.parameters[0] ?? 1
      if (a === 0) return called("ln", row(sign("−"), called("ln", rest)))
      const power = powered({ type: "bracket", of: rest }, -a)
      return called("ln", { type: "fraction", above: row(power, sign("−"), number("1")), below: decimal(a) })
    }
    case "symmetric_power": {
      const a = link.parameters[0] ?? 1
      if (a === 0) return called("ln", { type: "fraction", above: mean, below: rest })
      const [up, down] = [powered(mean, a), powered({ type: "bracket", of: rest }, a)]
      const ratio: Formula = { type: "fraction", above: row(up, sign("−"), down), below: row(up, sign("+"), down) }
      return row({ type: "fraction", above: number("2"), below: decimal(a) }, sign("·"), ratio)
    }
    default:
      return row(link.own === undefined ? name("g") : word(link.name), { type: "bracket", of: mean })
  }
}

/** Whether the mean is linked per unit of the exposure; under cloglog its logarithm is added instead. */
const unitsOfMean = ({ exposure, problem }: ModelFinding): boolean => exposure !== null && problem.family.name !== "binomial"

function leftSide(found: ModelFinding): Formula {
  const mu = name("μ")
  const mean: Formula = unitsOfMean(found) ? { type: "fraction", above: mu, below: word(found.exposure?.name ?? "") } : mu
  const { limits } = found.problem.link
  if (limits === undefined) return linkTree(found.problem.link, mean)
  // Between limits it is the share of the way from the one to the other that is linked.
  const above = limits.low === 0 ? mean : row(mean, sign("−"), decimal(limits.low))
  const width = limits.low === 0 ? decimal(limits.high) : row(decimal(limits.high), sign("−"), decimal(limits.low))
  return linkTree(found.problem.link, { type: "bracket", of: { type: "fraction", above, below: width } })
}

function rightSide(found: ModelFinding): Equation {
  const { fit, offset, exposure } = found
  const first = fit.coefficients[0]?.of === "intercept" ? 0 : 1
  const written = fit.coefficients.flatMap(({ of, beta, toward }, j) => (beta === null && toward === null ? [] : [summand(of, j + first)]))
  const parts: Equation[] =
    written.length <= mostWritten
      ? written
      : [...written.slice(0, mostWritten - 2), { formula: sign("⋯"), text: "⋯" }, written.at(-1) as Equation]
  if (offset !== null) {
    const says = printed(offset.expression)
    parts.push({ formula: word(says), text: says })
  }
  if (exposure !== null && !unitsOfMean(found)) parts.push({ formula: called("ln", word(exposure.name)), text: `ln ${exposure.name}` })
  if (parts.length === 0) return { formula: number("0"), text: "0" }
  const formulas = parts.flatMap(({ formula }, k) => (k === 0 ? [formula] : [sign("+"), formula]))
  return { formula: row(...formulas), text: parts.map(({ text }) => text).join(" + ") }
}

/** One coefficient times its column; a level stands in brackets, being 1 where it holds and 0 elsewhere. */
function summand(of: string, index: number): Equation {
  const beta: Formula = { type: "sub", base: name("β"), with: number(String(index)) }
  if (of === "intercept") return { formula: beta, text: coefficientName(index) }
  const factors = of.split(" . ")
  const formulas = factors.map((factor): Formula => (/ is /.test(factor) ? { type: "bracket", of: word(factor) } : word(factor)))
  return {
    formula: row(beta, ...formulas.flatMap((formula) => [sign("·"), formula])),
    text: [coefficientName(index), ...factors.map((factor) => (/ is /.test(factor) ? `[${factor}]` : factor))].join("·"),
  }
}

const decimal = (value: number): Formula => number(written(value, 6).replace("-", "−"))
const powered = (base: Formula, exponent: number): Formula => ({ type: "power", base, with: decimal(exponent) })
const row = (...of: readonly Formula[]): Formula => ({ type: "row", of })
const name = (text: string): Formula => ({ type: "name", text })
const word = (text: string): Formula => ({ type: "word", text })
const number = (text: string): Formula => ({ type: "number", text })
const sign = (text: string): Formula => ({ type: "sign", text })
const called = (text: string, of: Formula): Formula => row(word(text), { type: "bracket", of })
