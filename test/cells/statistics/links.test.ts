// Every link through the same laws, and against a table at 20 digits.

import { describe, expect, it } from "vitest"
import type { Link } from "../../../cells/statistics/link.ts"
import { isLinkName, linkNames, linkOf } from "../../../cells/statistics/links.ts"
import { relativeError } from "../../reference/exact.ts"
import reference from "../../reference/special-functions.json" with { type: "json" }

const plain = Object.keys(linkNames).filter((name) => linkNames[name as keyof typeof linkNames].length === 0)
const powers = [-2, -1, -0.5, 0, 0.25, 0.5, 1, 1.7, 3]
/** Parameters at, near and away from where a formula is a limit. */
const parametric: readonly (readonly [string, readonly number[]])[] = [
  ...[-2, -0.5, -1e-9, 0, 1e-12, 1e-5, 0.4, 1, 2.5].map((a) => ["box_cox", [a]] as const),
  ...[-1, -0.6, -0.1, -1e-9, 0, 1e-12, 1e-5, 0.3, 1, 2, 8].map((a) => ["aranda_ordaz", [a]] as const),
  ...[0, 1e-12, 1e-5, 0.1, 0.5, 0.9, 1].map((a) => ["symmetric_power", [a]] as const),
  ...[
    [0, 0],
    [0.3, 0.1],
    [-0.4, 0.2],
    [0.25, -0.5],
    [-1, -0.3],
    [1e-12, -1e-12],
    [1e-5, -1e-5],
  ].map((ab) => ["stukel", ab] as const),
]
const parametricLinks = parametric.map(([name, parameters]) => [`${name}(${parameters})`, linkOf({ name, parameters })] as const)
const links: readonly (readonly [string, Link])[] = [
  ...parametricLinks,
  ...plain.map((name) => [name, linkOf({ name, parameters: [] })] as const),
  ...powers.map((a) => [`power(${a})`, linkOf({ name: "power", parameters: [a] })] as const),
  ["reciprocal of negative means", linkOf({ name: "reciprocal", parameters: [] }, -1)],
]

/** Linear predictors from end to end of what a link reaches, both tails included as far as their means are doubles. */
const predictors = (link: Link): readonly number[] => {
  const sizes = [1e-3, 0.02, 0.3, 0.9, 1.0, 1.7, 3, 6, 20, 37]
  if (link.reach.low === -Infinity && link.reach.high === Infinity) return [...sizes.map((x) => -x), ...sizes]
  const { low, high } = link.reach
  if (low === 0 && high === Infinity) return sizes
  if (low === -Infinity && high === 0) return sizes.map((x) => -x)
  // From just inside one end to just inside the other, or far out where there is none.
  const [from, to] = [Math.max(low, Math.min(high, 0) - 20), Math.min(high, Math.max(low, 0) + 20)]
  return [0.02, 0.1, 0.3, 0.45, 0.53, 0.6, 0.8, 0.95, 0.99].map((share) => from + share * (to - from))
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
      // Towards an end that is a number, the distance to it is what the mean still says.
      if (link.complement !== null && mu > 1e-16 && link.reach.high - link.reach.low === Infinity)
        expect(Math.abs(link.eta(mu) - eta)).toBeLessThan(2e-12 * Math.max(1, Math.abs(eta)))
    }
    // Slope and curvature against difference quotients, of the mean where it is small and of the complement where that is.
    // The step is small beside the distance over which the slope changes.
    // Neither past an end nor, where a link is made of two halves, past 0.
    const { low, high } = link.reach
    const room = Math.min(eta - low, high - eta, link.name.startsWith("stukel") ? Math.abs(eta) / 2 : Infinity)
    const steep = Math.max(1, Math.abs(link.curvature(eta) / link.slope(eta)), link.complement === null ? 1 / Math.abs(eta) : 0)
    const h = Math.min(1e-3 / steep, 1e-2 * room)
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
    ["log_complement", 1e-300],
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

  it.each(parametric)("%s%s moves with its parameters as it says", (name, parameters) => {
    const q = parameters.length
    const bend = (of: readonly number[], eta: number): Float64Array => {
      const out = new Float64Array(2 * q + 3)
      linkOf({ name, parameters: of }).bend?.(eta, out)
      return out
    }
    const link = linkOf({ name, parameters })
    const moved = (j: number, by: number): readonly number[] =>
      // The square of its parameter is what symmetric_power moves with.
      name === "symmetric_power"
        ? [Math.sqrt((parameters[0] as number) ** 2 + by)]
        : parameters.map((value, k) => (k === j ? value + by : value))
    for (const eta of [-1.3, -0.4, 0.2, 0.7]) {
      if (!(eta > 0.9 * link.reach.low && eta < 0.9 * link.reach.high)) continue
      const own = bend(parameters, eta)
      parameters.forEach((value, j) => {
        // One-sided where the parameter ends or a second slope jumps.
        const sided = (name === "symmetric_power" && value < 0.1) || (name === "aranda_ordaz" && value === -1) || name === "stukel"
        const side = name === "stukel" && value <= 0 ? -1 : 1
        const h = 1e-3 * side
        const slope = (f: (of: readonly number[]) => number): number => {
          const at = (k: number): number => f(moved(j, k * h))
          return sided
            ? (-25 * at(0) + 48 * at(1) - 36 * at(2) + 16 * at(3) - 3 * at(4)) / (12 * h)
            : (at(-2) - 8 * at(-1) + 8 * at(1) - at(2)) / (12 * h)
        }
        const expected = [
          slope((of) => linkOf({ name, parameters: of }).mean(eta)),
          slope((of) => linkOf({ name, parameters: of }).slope(eta)),
          slope((of) => bend(of, eta)[j] as number),
        ]
        const said = [own[j], own[q + j], own[2 * q + (j * (j + 1)) / 2 + j]] as number[]
        // Where a tiny parameter is moved past the place at which a second slope jumps, only the first two can be compared.
        const compared = name === "stukel" && value !== 0 && Math.abs(value) < 1e-4 ? 2 : 3
        for (let k = 0; k < compared; k++)
          expect(Math.abs((said[k] as number) - (expected[k] as number)), `${k} at ${eta}`).toBeLessThan(
            1e-7 * (Math.abs(expected[k] as number) + 0.01),
          )
      })
    }
  })

  it.each([
    ["box_cox", 0, "log", []],
    ["box_cox", 1e-14, "log", []],
    ["aranda_ordaz", 1, "logit", []],
    ["aranda_ordaz", 0, "cloglog", []],
    ["aranda_ordaz", -1e-14, "cloglog", []],
    ["aranda_ordaz", -1, "log", []],
    ["symmetric_power", 1e-9, "logit", []],
    ["stukel", 0, "logit", [0]],
  ] as const)("%s at %s is %s", (name, a, other, more) => {
    const [link, like] = [linkOf({ name, parameters: [a, ...more] }), linkOf({ name: other, parameters: [] })]
    for (const eta of [-9, -1.1, -0.2]) {
      for (const f of ["mean", "slope", "curvature"] as const) expect(Math.abs(link[f](eta) / like[f](eta) - 1)).toBeLessThan(1e-12)
      expect(Math.abs(link.eta(like.mean(eta)) - eta)).toBeLessThan(1e-12 * 9)
    }
  })

  it("says which names are links, and takes no other", () => {
    expect([isLinkName("cloglog"), isLinkName("toString"), isLinkName("arcsine")]).toEqual([true, false, false])
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
