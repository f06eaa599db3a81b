// Every link through the same laws, and against a table at 20 digits.

import { describe, expect, it } from "vitest"
import type { Link } from "../../../cells/statistics/link.ts"
import { isLinkName, linkNames, linkOf } from "../../../cells/statistics/links.ts"
import { relativeError } from "../../reference/exact.ts"
import reference from "../../reference/special-functions.json" with { type: "json" }

const plain = Object.keys(linkNames).filter((name) => name !== "power")
const powers = [-2, -1, -0.5, 0, 0.25, 0.5, 1, 1.7, 3]
const links: readonly (readonly [string, Link])[] = [
  ...plain.map((name) => [name, linkOf({ name, parameters: [] })] as const),
  ...powers.map((a) => [`power(${a})`, linkOf({ name: "power", parameters: [a] })] as const),
  ["reciprocal of negative means", linkOf({ name: "reciprocal", parameters: [] }, -1)],
]

/** Linear predictors from end to end of what a link reaches, both tails included as far as their means are doubles. */
const predictors = (link: Link): readonly number[] => {
  const sizes = [1e-3, 0.02, 0.3, 0.9, 1.0, 1.7, 3, 6, 20, 37]
  if (link.reach.low === -Infinity && link.reach.high === Infinity) return [...sizes.map((x) => -x), ...sizes]
  return link.reach.low === 0 ? sizes : sizes.map((x) => -x)
}

const obeysItsLaws = (link: Link): void => {
  const atLeast = link.complement === null ? 0 : 1e-300
  for (const eta of predictors(link)) {
    const mu = link.mean(eta)
    if (link.complement !== null) {
      const rest = link.complement(eta)
      expect(Math.abs(mu + rest - 1)).toBeLessThan(3e-16)
      if (mu < atLeast || rest < atLeast) continue
    }
    // mean(eta(mu)) = mu wherever μ can say where it is: from the upper tail of a share it cannot, and 1 − μ says it instead.
    if (mu !== 0 && (mu < 0.9 || link.complement === null)) {
      expect(Math.abs(link.mean(link.eta(mu)) / mu - 1)).toBeLessThan(1e-12)
      if (link.complement !== null && mu > 1e-16) expect(Math.abs(link.eta(mu) - eta)).toBeLessThan(1e-12 * Math.max(1, Math.abs(eta)))
    }
    // Slope and curvature against difference quotients, of the mean where it is small and of the complement where that is.
    // The step is small beside the distance over which the slope changes.
    const h = 1e-3 / Math.max(1, Math.abs(link.curvature(eta) / link.slope(eta)), link.complement === null ? 1 / Math.abs(eta) : 0)
    const upper = link.complement !== null && mu > 0.5
    const value = (x: number): number => (upper ? -(link.complement as (x: number) => number)(x) : link.mean(x))
    const quotient = (value(eta - 2 * h) - 8 * value(eta - h) + 8 * value(eta + h) - value(eta + 2 * h)) / (12 * h)
    const second = (link.slope(eta - 2 * h) - 8 * link.slope(eta - h) + 8 * link.slope(eta + h) - link.slope(eta + 2 * h)) / (12 * h)
    expect(Math.abs(link.slope(eta) - quotient)).toBeLessThan(1e-8 * Math.abs(quotient))
    expect(Math.abs(link.curvature(eta) - second)).toBeLessThan(1e-8 * (Math.abs(second) + Math.abs(link.slope(eta))))
  }
}

const isStrictlyMonotone = (link: Link): void => {
  const means = [...predictors(link)].sort((a, b) => a - b).map((eta) => [link.mean(eta), link.complement?.(eta) ?? 0] as const)
  const up = link.slope(predictors(link)[3] as number) > 0
  for (let i = 1; i < means.length; i++) {
    const [before, now] = [means[i - 1], means[i]] as [readonly [number, number], readonly [number, number]]
    const rises = now[0] > before[0] || now[1] < before[1]
    // Where a share's mean and complement are both at their ends in doubles, nothing can tell two predictors apart.
    const ended = (now[0] === 1 && now[1] === 0 && before[1] === 0) || (now[1] === 1 && now[0] === 0 && before[0] === 0)
    expect(ended || (up ? rises : now[0] < before[0])).toBe(true)
  }
}

describe("links", () => {
  it.each(links)("%s gives its means back, and has the slope and curvature it says", (_, link) => obeysItsLaws(link))
  it.each(links)("%s is strictly monotone", (_, link) => isStrictlyMonotone(link))

  it.each([
    ["logit", 1e-300],
    ["probit", 1e-300],
    ["cauchit", 1e-300],
    ["cloglog", 1e-300],
    ["loglog", 1e-300],
  ])("%s gives back a mean of %s", (name, mu) => {
    const link = linkOf({ name, parameters: [] })
    expect(Math.abs(link.mean(link.eta(mu)) / mu - 1)).toBeLessThan(1e-12)
  })

  it.each([
    ["logit", 800],
    ["probit", 800],
    ["cloglog", 800],
    ["loglog", 800],
    ["cauchit", 1e200],
  ])("%s has means and slopes, never NaN, as far out as ±%s", (name, far) => {
    const link = linkOf({ name, parameters: [] })
    for (const eta of [-far, far]) {
      expect([link.mean(eta), link.complement?.(eta)].map((x) => (x as number) < 0.5)).toEqual(eta < 0 ? [true, false] : [false, true])
      expect(Math.abs(link.slope(eta))).toBeLessThan(1e-200)
      expect(Math.abs(link.curvature(eta))).toBeLessThan(1e-200)
    }
  })

  it("power is the link of that name at its special values", () => {
    for (const [a, name] of [
      [0, "log"],
      [0.5, "square_root"],
      [1, "identity"],
      [-1, "reciprocal"],
    ] as const) {
      const [power, named] = [linkOf({ name: "power", parameters: [a] }), linkOf({ name, parameters: [] })]
      for (const eta of [0.2, 1, 4.5]) {
        expect(power.mean(eta)).toBe(named.mean(eta))
        expect(power.eta(eta)).toBe(named.eta(eta))
        expect(power.slope(eta)).toBeCloseTo(named.slope(eta), 13)
        expect(power.curvature(eta)).toBeCloseTo(named.curvature(eta), 12)
      }
    }
  })

  it("the reciprocal of negative means goes to −∞ towards 0, that of positive ones to ∞", () => {
    const spec = { name: "reciprocal", parameters: [] }
    expect([linkOf(spec, -1).eta(0), linkOf(spec, 1).eta(0)]).toEqual([-Infinity, Infinity])
  })

  it("says which names are links, and takes no other", () => {
    expect([isLinkName("cloglog"), isLinkName("toString"), isLinkName("stukel")]).toEqual([true, false, false])
    expect(() => linkOf({ name: "power", parameters: [] })).toThrow(RangeError)
    expect(() => linkOf({ name: "logit", parameters: [1] })).toThrow(RangeError)
  })
})

type Table = {
  readonly link: { readonly name: string; readonly parameters: readonly string[] }
  readonly rows: readonly (readonly string[])[]
}

describe("links against values at 20 digits", () => {
  const named = (tables: readonly Table[]) =>
    tables.map(
      (table) =>
        [
          `${table.link.name} ${table.link.parameters}`,
          linkOf({ ...table.link, parameters: table.link.parameters.map(Number) }),
          table.rows,
        ] as const,
    )

  // 13 digits: where the mean is e^−t, t itself has lost its last digits to rounding.
  it.each(named(reference.tables.inverse_links as readonly Table[]))(
    "%s has mean, complement, slope and curvature to 13 digits",
    (_, link, rows) => {
      const far = rows.flatMap(([eta, mean, rest, slope, curvature]) => {
        const x = Number(eta)
        const compared: [string, number, string][] = [
          ["mean", link.mean(x), mean as string],
          ["slope", link.slope(x), slope as string],
          ["curvature", link.curvature(x), curvature as string],
        ]
        if (link.complement !== null) compared.push(["complement", link.complement(x), rest as string])
        return compared.filter(([, value, exact]) => !(relativeError(value, exact) < 1e-13)).map(([what, value]) => ({ eta, what, value }))
      })
      expect(far).toEqual([])
    },
  )

  it.each(named(reference.tables.links as readonly Table[]))("%s has its linear predictor to 13 digits", (_, link, rows) => {
    const far = rows.filter(([mu, eta]) => {
      const error = Math.abs(link.eta(Number(mu)) - Number(eta))
      // A mean near 1 is known to half a unit of 1 only, which moves η by that over the slope.
      const known = Number(mu) > 0.5 ? 1.2e-16 / link.slope(Number(eta)) : 0
      return !(error <= 1e-13 * Math.abs(Number(eta)) + known + 1e-15)
    })
    expect(far).toEqual([])
  })
})
