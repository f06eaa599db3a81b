// Proofs: what is known of links and of functions that are none, polynomials whose monotonicity is known by construction, and the law that
// nothing is ever proved that a fine grid contradicts.

import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { evaluated } from "../../../cells/language/evaluate.ts"
import { type Expression, printed } from "../../../cells/language/expression.ts"
import { type Constants, proofFrom, said } from "./claim.ts"
import { expressionOf } from "./sample.ts"

const effort = Number(process.env["EFFORT"] ?? "1")

describe("a proof", () => {
  it.each([
    // formula                                     from          to          constants        η at the ends            canonical for
    ["mu", "-infinity", "infinity", {}, [-Infinity, Infinity], "normal"],
    ["log(mu)", "0", "infinity", {}, [-Infinity, Infinity], "poisson"],
    ["log10(mu)", "0", "infinity", {}, [-Infinity, Infinity], null],
    ["1/mu", "0", "infinity", {}, [Infinity, 0], "gamma"],
    ["3 - 2/mu^2", "0", "infinity", {}, [-Infinity, 3], "inverse_gaussian"],
    ["square_root(mu)", "0", "infinity", {}, [0, Infinity], null],
    ["mu^0.3", "0", "infinity", {}, [0, Infinity], null],
    ["log(mu/(1-mu))", "0", "1", {}, [-Infinity, Infinity], "binomial"],
    ["logit(mu)", "0", "1", {}, [-Infinity, Infinity], "binomial"],
    ["log(mu) - log(1-mu)", "0", "1", {}, [-Infinity, Infinity], "binomial"],
    ["normal_quantile(mu)", "0", "1", {}, [-Infinity, Infinity], null],
    ["tan(pi*(mu-1/2))", "0", "1", {}, [-Infinity, Infinity], null],
    ["log(-log(1-mu))", "0", "1", {}, [-Infinity, Infinity], null],
    ["-log(-log(mu))", "0", "1", {}, [-Infinity, Infinity], null],
    ["log(1-mu)", "0", "1", {}, [0, -Infinity], null],
    ["normal_quantile((mu-c)/(1-c))", "0.05", "1", { c: "0.05" }, [-Infinity, Infinity], null],
    ["normal_quantile((mu-c)/(1-c))", "c", "1", { c: [0, 0.3] }, [-Infinity, Infinity], null],
    ["log(((1-mu)^(-a)-1)/a)", "0", "1", { a: "0.7" }, [-Infinity, Infinity], null],
    ["log(((1-mu)^(-a)-1)/a)", "0", "1", { a: [0.1, 2] }, [-Infinity, Infinity], null],
    ["(2/a)*(mu^a-(1-mu)^a)/(mu^a+(1-mu)^a)", "0", "1", { a: "0.5" }, [-4, 4], null],
    ["2*asin(square_root(mu))", "0", "1", {}, [0, Math.PI], null],
    ["mu - sin(mu)", "0", "infinity", {}, [0, Infinity], null],
    ["log(mu) - log(1+mu)", "0", "infinity", {}, [-Infinity, 0], null],
    ["mu^3", "-infinity", "infinity", {}, [-Infinity, Infinity], null],
    ["if(mu<1, log(mu), mu-1)", "0", "infinity", {}, [-Infinity, Infinity], null],
    ["if(mu<0.1, 3*mu, 0.3+3*(mu-0.1))", "0", "1", {}, [0, 3], null],
    ["if(mu>=0.2, log(0.2)+5*(mu-0.2), log(mu))", "0", "1", {}, [-Infinity, 4 + Math.log(0.2)], null],
  ] as const)("finds that %s is a link from %s to %s", async (eta, from, to, constants, ends, canonical) => {
    const proof = await proofFrom(eta, from, to, constants as Constants)
    expect([said(proof.defined), said(proof.monotone), said(proof.differentiable)]).toEqual(["proved", "proved", "proved"])
    expect(proof.canonical).toBe(canonical)
    expect(proof.rising).toBe(ends[1] > ends[0])
    proof.ends.forEach((end, k) => {
      expect(end).not.toBeNull()
      expect(end?.lo).toBeLessThanOrEqual(ends[k] as number)
      expect(end?.hi).toBeGreaterThanOrEqual(ends[k] as number)
      if (Number.isFinite(ends[k])) expect((end?.hi ?? 1) - (end?.lo ?? 0)).toBeLessThan(1e-13)
    })
  })

  it.each([
    // 1/√3, π/2, the middle of a parabola, a pole that is no double, joins
    ["mu^3 - mu", "0", "1", ["proved", `refuted at ${1 / Math.sqrt(3)}`, "proved"]],
    ["sin(mu)", "0", "3", ["proved", `refuted at ${Math.PI / 2}`, "proved"]],
    ["mu^2", "-1", "1", ["proved", "refuted at 0", "proved"]],
    ["7", "0", "1", ["proved", "refuted at 0.25", "proved"]],
    ["1/mu", "-1", "1", ["refuted at 0", "refuted at 0", "refuted at 0"]],
    ["if(mu<0.5, mu, mu+1)", "0", "1", ["proved", "proved", "refuted at 0.5"]],
    ["if(mu<0.5, mu, mu-1)", "0", "1", ["proved", "refuted at 0.5", "refuted at 0.5"]],
    ["if(mu<0.2, log(mu), log(0.2)+4*(mu-0.2))", "0", "1", ["proved", "proved", "refuted at 0.2"]],
    ["if(mu<0.5, mu, 1-mu)", "0", "1", ["proved", "refuted at 0.5", "refuted at 0.5"]],
  ])("refutes %s from %s to %s, with the point", async (eta, from, to, expected) => {
    const proof = await proofFrom(eta, from, to)
    expect([said(proof.defined), said(proof.monotone), said(proof.differentiable)]).toEqual(expected)
  })

  it("finds a point without a value where the formula ends, and near a pole that is no double", async () => {
    const half = await proofFrom("log(mu - 0.3)", "0", "1")
    expect(half.defined.verdict === "refuted" && half.defined.witness <= 0.3).toBe(true)
    const pole = await proofFrom("1/(mu - 1/3)", "0", "1")
    expect(pole.defined.verdict === "refuted" && Math.abs(pole.defined.witness - 1 / 3) < 1e-15).toBe(true)
  })

  it("says where it cannot decide, in an interval about the place", async () => {
    // The derivative is 3(μ − 1)², written so that it does not show.
    const { monotone } = await proofFrom("mu^3 - 3*mu^2 + 3*mu", "0", "2")
    expect(monotone.verdict).toBe("undecided")
    if (monotone.verdict !== "undecided") return
    expect(monotone.witness[0]).toBeLessThanOrEqual(1)
    expect(monotone.witness[1]).toBeGreaterThanOrEqual(1)
    expect(monotone.witness[1] - monotone.witness[0]).toBeLessThan(1e-12)
  })

  it("says where a strictly monotone link is level", async () => {
    const proof = await proofFrom("(mu - 0.25)^3", "0", "1")
    expect([said(proof.monotone), proof.level]).toEqual(["proved", [0.25]])
  })

  it("refutes a link with a constant to be estimated by one value of the constant only", async () => {
    expect(said((await proofFrom("a*mu", "0", "1", { a: [-1, 1] })).monotone)).toBe("undecided")
    expect((await proofFrom("mu^2 - a*mu", "0", "1", { a: [0.5, 1] })).monotone.verdict).toBe("refuted")
    expect(said((await proofFrom("mu^2 + a*mu", "0", "1", { a: [0.5, 1] })).monotone)).toBe("proved")
  })

  it("takes decimals as they are written, and pi as the number itself", async () => {
    // As doubles, 3·0.1 is not 0.3 and the two pieces would not meet; and π/2 as a double lies below the pole of the tangent.
    expect(said((await proofFrom("if(mu<0.1, 3*mu, 0.3 + 3*(mu - 0.1))", "0", "1")).differentiable)).toBe("proved")
    expect(said((await proofFrom("tan(pi*mu/2)", "0", "1")).defined)).toBe("proved")
    expect((await proofFrom("tan(pi*mu/2)", "0", "1.000000000000001")).defined.verdict).not.toBe("proved")
  })
})

/** Coefficients of the polynomial with this derivative and no constant. */
const integrated = (slope: readonly number[]): readonly number[] => [0, ...slope.map((c, k) => c / (k + 1))]
const product = (a: readonly number[], b: readonly number[]): number[] => {
  const out = new Array<number>(a.length + b.length - 1).fill(0)
  a.forEach((x, i) => {
    b.forEach((y, j) => {
      out[i + j] = (out[i + j] as number) + x * y
    })
  })
  return out
}
const written = (c: readonly number[]): string =>
  c
    .map((each, k) => `${each < 0 ? "- " : "+ "}${Math.abs(each)}*mu^${k}`)
    .join(" ")
    .replace(/^\+ /, "")

describe("a polynomial", () => {
  // Derivatives with quadratic factors above 0 for the rising ones, and one simple root inside for those that turn.
  const quadratic = fc.tuple(fc.integer({ min: -4, max: 4 }), fc.integer({ min: 1, max: 6 })).map(([b, c]) => [b * b + c, 2 * b, 1])

  it("is proved to rise where its derivative is a product of quadratics without a root", { timeout: 120_000 }, async () => {
    await fc.assert(
      fc.asyncProperty(fc.array(quadratic, { minLength: 1, maxLength: 2 }), async (factors) => {
        const slope = factors.reduce<readonly number[]>((all, each) => product(all, each), [1])
        const proof = await proofFrom(written(integrated(slope)), "-2", "2")
        expect([said(proof.defined), said(proof.monotone), proof.rising]).toEqual(["proved", "proved", true])
      }),
      { numRuns: 25 * effort, seed: 3 },
    )
  })

  it("is refuted at the root of its derivative", { timeout: 120_000 }, async () => {
    await fc.assert(
      fc.asyncProperty(quadratic, fc.integer({ min: -15, max: 15 }), async (factor, eighths) => {
        const root = eighths / 8
        const proof = await proofFrom(written(integrated(product(factor, [-root, 1]))), "-2", "2")
        expect(proof.monotone.verdict).toBe("refuted")
        if (proof.monotone.verdict === "refuted") expect(Math.abs(proof.monotone.witness - root)).toBeLessThan(1e-9)
      }),
      { numRuns: 25 * effort, seed: 4 },
    )
  })
})

describe("what is proved of any formula", () => {
  const at = { clause: 0, from: 0, to: 0 }
  const leaf = fc.constantFrom("mu", "mu", "mu", "1", "2", "0.5", "3", "pi", "0.1").map(expressionOf)
  const formula: fc.Arbitrary<Expression> = fc.letrec<{ whole: Expression }>((tie) => ({
    whole: fc.oneof(
      { maxDepth: 4, depthSize: "small" },
      leaf,
      fc
        .tuple(fc.constantFrom("+" as const, "-" as const, "*" as const, "/" as const), tie("whole"), tie("whole"))
        .map(([sign, left, right]): Expression => ({ type: "pair", sign, left, right, at })),
      fc
        .tuple(tie("whole"), fc.constantFrom("2", "3", "0.5", "-1", "1.5"))
        .map(([left, right]): Expression => ({ type: "pair", sign: "^", left, right: expressionOf(right), at })),
      fc
        .tuple(
          fc.constantFrom(
            "exp",
            "log",
            "tan",
            "sin",
            "cos",
            "atan",
            "tanh",
            "square_root",
            "normal_cdf",
            "normal_quantile",
            "log1p",
            "expm1",
            "asin",
            "inverse_logit",
            "logit",
          ),
          tie("whole"),
        )
        .map(([name, of]): Expression => ({ type: "call", name, of: [of], at })),
      tie("whole").map((of): Expression => ({ type: "minus", of, at })),
      fc
        .tuple(fc.constantFrom("0.3", "0.5", "1/3"), tie("whole"), tie("whole"))
        .map(([place, yes, no]): Expression => ({ type: "call", name: "if", of: [expressionOf(`mu < ${place}`), yes, no], at })),
    ),
  })).whole

  const grid = Float64Array.from({ length: 4001 }, (_, k) => (k + 0.5) / 4001)
  const values = (expression: Expression): readonly number[] => {
    const found = evaluated(expression, grid.length, (name) => (name === "mu" ? { type: "number", values: grid } : null))
    if (!found.ok) return []
    const { vector } = found
    if ("values" in vector) return Array.from(vector.values)
    return "value" in vector ? Array.from(grid, () => vector.value) : []
  }

  it("is never contradicted by a fine grid, nor is what is refuted", { timeout: 300_000 }, async () => {
    let proved = 0
    await fc.assert(
      fc.asyncProperty(formula, async (expression) => {
        const proof = await proofFrom(expression, "0", "1").catch(() => null)
        if (proof === null) return
        const eta = values(expression)
        const says = printed(expression)
        if (proof.defined.verdict === "proved") {
          // A double may overflow or lose a pole's neighbourhood where the number does not: only what is missing is a contradiction.
          const lost = eta.findIndex((value) => Number.isNaN(value))
          if (lost >= 0) expect(isHuge(expression, grid[lost] as number), `${says} at ${grid[lost]}`).toBe(true)
        }
        if (proof.monotone.verdict === "proved") {
          proved++
          const sign = proof.rising === true ? 1 : -1
          for (let k = 1; k < eta.length; k++) {
            const [before, after] = [eta[k - 1] as number, eta[k] as number]
            const slack = 1e-11 * Math.max(1, Math.abs(before), Math.abs(after))
            if (Number.isFinite(before) && Number.isFinite(after))
              expect(sign * (after - before), `${says} at ${grid[k]}`).toBeGreaterThan(-slack)
          }
        }
        if (proof.monotone.verdict === "refuted" && proof.defined.verdict === "proved" && proof.differentiable.verdict === "proved") {
          // Then the grid shows both ways, or none, or the turn is too narrow or too shallow for it.
          const steps = eta.slice(1).map((value, k) => value - (eta[k] as number))
          const [up, down] = [Math.max(...steps), Math.min(...steps)]
          const size = Math.max(1, ...eta.filter(Number.isFinite).map(Math.abs))
          const narrow = Math.min(up, -down) <= 0 && Math.abs(up - down) > 1e-9 * size
          if (narrow)
            expect(
              [Math.abs(up), Math.abs(down)].some((step) => step < 1e-5 * size),
              says,
            ).toBe(true)
        }
      }),
      { numRuns: 250 * effort, seed: 7 },
    )
    expect(proved).toBeGreaterThan(10)
  })

  /** Whether some part grows beyond what doubles hold near there. */
  const isHuge = (expression: Expression, x: number): boolean => {
    const parts: Expression[] = [expression]
    for (const part of parts) {
      if (part.type === "pair") parts.push(part.left, part.right)
      else if (part.type === "minus") parts.push(part.of)
      else if (part.type === "call") parts.push(...part.of)
    }
    return parts.some((part) => {
      const found = evaluated(part, 1, (name) => (name === "mu" ? { type: "number", value: x } : null))
      const value = found.ok && "value" in found.vector ? Math.abs(found.vector.value) : 0
      return value > 600 || (value !== 0 && value < 1e-15)
    })
  }
})
