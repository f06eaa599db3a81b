// Links of the user's own as the statistics run them: the same numbers as the links of the library, in both tails, and the same fits.

import { beforeAll, describe, expect, it } from "vitest"
import type { Expression } from "../../../cells/language/expression.ts"
import { linkData } from "../../../cells/language/link-data.ts"
import { fit, linkOf } from "../../../cells/statistics/index.ts"
import type { OwnLink } from "../../../cells/statistics/own-link.ts"
import type { LinkSpec, Problem } from "../../../cells/statistics/problem.ts"
import { claimOf, proofFrom } from "../language/claim.ts"
import { expressionOf } from "../language/sample.ts"

/** An expression in `eta`, read as one in `mu` and called by its own name again. */
const inverseOf = (text: string): Expression =>
  JSON.parse(JSON.stringify(expressionOf(text.replaceAll("eta", "mu"))).replaceAll('"mu"', '"eta"'))

async function ownFrom(eta: string, from: string, to: string, inverse: string | null = null): Promise<OwnLink> {
  const proof = await proofFrom(eta, from, to)
  const limit = (end: (typeof proof.ends)[number]): number | null =>
    end === null ? null : end.lo === end.hi ? end.lo : (end.lo + end.hi) / 2
  const ends = proof.ends.map(limit)
  const made = linkData({
    formula: eta,
    variable: "mu",
    givens: claimOf(eta, from, to).givens,
    range: [Number(from), to === "infinity" ? Infinity : Number(to)].map((end) => (Number.isNaN(end) ? -Infinity : end)) as [
      number,
      number,
    ],
    pieces: proof.pieces,
    rising: proof.rising,
    reach: proof.rising === false ? [ends[1] ?? null, ends[0] ?? null] : [ends[0] ?? null, ends[1] ?? null],
    inverse: inverse === null ? null : inverseOf(inverse),
    canonical: proof.canonical,
  })
  if (made === null) throw new Error(`${eta} gave no link`)
  return made.own
}

/** Links of the library, written as formulas. */
const written: readonly (readonly [LinkSpec, string, string, string])[] = [
  [{ name: "identity", parameters: [] }, "mu", "-infinity", "infinity"],
  [{ name: "log", parameters: [] }, "log(mu)", "0", "infinity"],
  [{ name: "reciprocal", parameters: [] }, "1/mu", "0", "infinity"],
  [{ name: "square_root", parameters: [] }, "square_root(mu)", "0", "infinity"],
  [{ name: "power", parameters: [0.3] }, "mu^0.3", "0", "infinity"],
  [{ name: "power", parameters: [-0.7] }, "mu^-0.7", "0", "infinity"],
  [{ name: "logit", parameters: [] }, "log(mu/(1 - mu))", "0", "1"],
  [{ name: "probit", parameters: [] }, "normal_quantile(mu)", "0", "1"],
  [{ name: "cauchit", parameters: [] }, "tan(pi*(mu - 1/2))", "0", "1"],
  [{ name: "cloglog", parameters: [] }, "log(-log(1 - mu))", "0", "1"],
  [{ name: "loglog", parameters: [] }, "-log(-log(mu))", "0", "1"],
]

describe("a link written as a formula", () => {
  it.each(written)("computes what %j does: %s", async (spec, eta, from, to) => {
    const own = linkOf({ name: "g", parameters: [], own: await ownFrom(eta, from, to) })
    const known = linkOf(spec)
    expect([own.range, own.reach]).toEqual([known.range, known.reach])
    // The tangent near its pole is as good as a double of pi allows.
    const places = spec.name === "cauchit" ? [0.01, 0.2, 0.5, 0.7, 0.99] : [1e-8, 0.01, 0.2, 0.5, 0.7, 0.99, 1 - 1e-6]
    for (const share of places) {
      const mu = known.range.high === 1 ? share : 40 * share
      const at = known.eta(mu)
      const close = (found: number, wanted: number): void =>
        expect(Math.abs(found - wanted)).toBeLessThanOrEqual(1e-12 * Math.abs(wanted) + 1e-15)
      close(own.eta(mu), at)
      close(own.mean(at), known.mean(at))
      close(own.slope(at), known.slope(at))
      if (Math.abs(known.curvature(at)) > 1e-12) expect(own.curvature(at) / known.curvature(at)).toBeCloseTo(1, 8)
      if (known.complement !== null) expect((own.complement?.(at) ?? 0) / known.complement(at)).toBeCloseTo(1, 9)
    }
  })

  it("keeps the digits of 1 − μ where the mean is near 1", async () => {
    const own = linkOf({ name: "g", parameters: [], own: await ownFrom("log(-log(1 - mu))", "0", "1") })
    // 1 − μ = exp(−e^3), about 1.9e-9.
    expect((own.complement?.(3) ?? 0) / Math.exp(-Math.exp(3))).toBeCloseTo(1, 12)
  })

  it("gives the ends of the range for η at or beyond its reach", async () => {
    const own = linkOf({ name: "g", parameters: [], own: await ownFrom("square_root(mu)", "0", "infinity") })
    expect([own.mean(0), own.mean(-1), own.mean(Infinity), own.mean(Number.NaN)]).toEqual([0, 0, Infinity, Number.NaN])
    expect([own.eta(0), own.eta(-3), own.eta(Infinity)]).toEqual([0, 0, Infinity])
  })

  it("finds means where doubles hardly tell them apart", async () => {
    const own = linkOf({ name: "g", parameters: [], own: await ownFrom("log(mu)", "0", "infinity") })
    for (const eta of [-740, -300, -1e-9, 0, 1e-9, 300, 709]) {
      const mean = own.mean(eta)
      expect(Math.abs(own.eta(mean) - eta)).toBeLessThanOrEqual(1e-12 * Math.max(1, Math.abs(eta)) + (mean < 1e-300 ? 1 : 0))
    }
  })

  it("begins at the inverse that is said, and ends where it ends without", async () => {
    const [with_, without] = [
      linkOf({ name: "g", parameters: [], own: await ownFrom("log(mu/(1 - mu))", "0", "1", "1/(1 + exp(-eta))") }),
      linkOf({ name: "g", parameters: [], own: await ownFrom("log(mu/(1 - mu))", "0", "1") }),
    ]
    for (const eta of [-30, -2, 0.3, 4, 30]) expect(with_.mean(eta) / without.mean(eta)).toBeCloseTo(1, 14)
  })

  it("joins pieces at their places", async () => {
    const own = linkOf({ name: "g", parameters: [], own: await ownFrom("if(mu < 1, log(mu), mu - 1)", "0", "infinity") })
    expect([own.eta(0.5), own.eta(1), own.eta(3), own.mean(2), own.mean(Math.log(0.25))]).toEqual(
      [Math.log(0.5), 0, 2, 3, 0.25].map((x) => expect.closeTo(x, 14)),
    )
  })
})

// Bliss (1935), beetles killed by carbon disulphide, as printed in Dobson & Barnett (2008), table 7.2; counts of Dobson & Barnett, table 9.2 (Poisson).
const dose = Float64Array.of(1.6907, 1.7242, 1.7552, 1.7842, 1.8113, 1.8369, 1.861, 1.8839)
const trials = Float64Array.of(59, 60, 62, 56, 63, 59, 62, 60)
const killed = Float64Array.of(6, 13, 18, 28, 52, 53, 61, 60)

const problem = (family: string, link: LinkSpec, y: Float64Array, m: Float64Array | null): Problem => ({
  family: { name: family, parameters: [] },
  link,
  intercept: true,
  terms: [{ pieces: [{ variable: "dose", as: "itself", setting: null }], says: "dose" }],
  variables: { dose: { type: "number", values: dose } },
  rows: y.length,
  y,
  trials: m,
  repeat: null,
  precision: null,
  offset: null,
  exposure: null,
  cluster: null,
  dispersion: "one",
  standardErrors: "expected",
  confidence: 0.95,
})

describe("a fit under a link written as a formula", () => {
  const shares = killed.map((k, i) => k / (trials[i] as number))
  const owns = new Map<string, OwnLink>()
  beforeAll(async () => {
    for (const [, eta, from, to] of written) owns.set(eta, await ownFrom(eta, from, to))
  })

  it.each([
    ["binomial", { name: "logit", parameters: [] }, "log(mu/(1 - mu))"],
    ["binomial", { name: "cloglog", parameters: [] }, "log(-log(1 - mu))"],
    ["binomial", { name: "probit", parameters: [] }, "normal_quantile(mu)"],
    ["binomial", { name: "loglog", parameters: [] }, "-log(-log(mu))"],
    ["binomial", { name: "cauchit", parameters: [] }, "tan(pi*(mu - 1/2))"],
    ["poisson", { name: "log", parameters: [] }, "log(mu)"],
    ["poisson", { name: "power", parameters: [0.3] }, "mu^0.3"],
    ["gamma", { name: "power", parameters: [-0.7] }, "mu^-0.7"],
    ["gamma", { name: "reciprocal", parameters: [] }, "1/mu"],
    ["normal", { name: "square_root", parameters: [] }, "square_root(mu)"],
  ] as const)("is the one of the library: %s, %j", async (family, link, eta) => {
    const [y, m] = family === "binomial" ? [shares, trials] : [killed, null]
    const known = await fit(problem(family, link, y, m), async () => {})
    const own = await fit(problem(family, { name: "g", parameters: [], own: owns.get(eta) as OwnLink }, y, m), async () => {})
    expect(known.ok && own.ok).toBe(true)
    if (!known.ok || !own.ok) return
    expect(own.fit.certificate.class).toBe(known.fit.certificate.class)
    own.fit.coefficients.forEach((coefficient, j) => {
      const other = known.fit.coefficients[j]
      expect((coefficient.beta ?? 0) / (other?.beta ?? 1)).toBeCloseTo(1, 12)
      expect((coefficient.standardError ?? 0) / (other?.standardError ?? 1)).toBeCloseTo(1, 12)
    })
    expect((own.fit.deviance ?? 0) / (known.fit.deviance ?? 1)).toBeCloseTo(1, 12)
  })

  it("runs to infinity where the one of the library does", async () => {
    const none = problem(
      "binomial",
      { name: "g", parameters: [], own: owns.get("log(mu/(1 - mu))") as OwnLink },
      Float64Array.of(0, 0, 0, 0, 1, 1, 1, 1),
      null,
    )
    const found = await fit(none, async () => {})
    expect(found.ok && found.fit.certificate.class).toBe("infinite")
  })

  it("keeps a binomial mean below 1 under a logarithm", async () => {
    const all = problem("binomial", { name: "g", parameters: [], own: owns.get("log(mu)") as OwnLink }, shares, trials)
    const known = await fit({ ...all, link: { name: "log", parameters: [] } }, async () => {})
    const found = await fit(all, async () => {})
    expect(found.ok && known.ok).toBe(true)
    if (!found.ok || !known.ok) return
    expect(found.fit.certificate.class).toBe(known.fit.certificate.class)
    expect(Math.max(...found.fit.mu)).toBeLessThanOrEqual(1)
    expect((found.fit.deviance ?? 0) / (known.fit.deviance ?? 1)).toBeCloseTo(1, 8)
  })
})
