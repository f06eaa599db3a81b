// Fits against outside figures: worked examples as printed, certified values, and multiple-precision fits of 25 digits (sources in the
// files, listed in README.md). An error of a coefficient is measured as a share of the coefficient or of its standard error, whichever is
// larger; where columns of length one have a condition above 1e4, three digits less are asked for.

import { describe, expect, it } from "vitest"
import type { Fit } from "../../cells/statistics/fit.ts"
import { fit } from "../../cells/statistics/index.ts"
import type { Problem } from "../../cells/statistics/problem.ts"
import { digits, expectPrinted } from "./printed.ts"
import { problemOf, type ReferenceModel, type ReferenceSet, referenceSets } from "./reference-models.ts"

const pause = async (): Promise<void> => {}

async function fitted(problem: Problem): Promise<Fit> {
  const found = await fit(problem, pause)
  if (!found.ok) throw new Error(found.detail)
  return found.fit
}

type Case = readonly [string, ReferenceSet, ReferenceModel, Problem]

const casesOf = (file: string): readonly Case[] =>
  referenceSets(file).flatMap((set) =>
    set.models.flatMap((model): Case[] => {
      const problem = problemOf(set, model)
      return problem ? [[`${set.id}, ${model.id}`, set, model, problem]] : []
    }),
  )

/** What a certificate of a linear regression states. */
type Certified = Readonly<Record<"coefficients" | "standard_errors", readonly string[]>> & {
  readonly residual_ss: string
  readonly residual_df: number
}

/** Digits that coefficients and errors have, and those that sums have. */
const wanted = { coefficients: 11, sums: 12 }

// Rounding the data loses digits before any fitting begins: residuals of a hundred-thousandth of the responses; means of 1e-9.
const lost: Readonly<Record<string, number>> = {
  g10: 1,
  MGH10: 0.5,
  Bennett5: 0.5,
}

describe.each(["published-glm.json", "generated-glm.json", "link-grid.json", "nist-linear.json", "nist-nonlinear.json"])("%s", (file) => {
  it.each(casesOf(file))("%s: coefficients, errors, deviance and likelihood", async (_, set, model, problem) => {
    const reference = model.reference
    const found = await fitted(problem)
    const perfect = Number(reference.deviance) === 0 && problem.dispersion !== "one"
    const ill = found.certificate.condition > 1e4
    const least = wanted.coefficients - (ill ? 3 : 0)
    const sums = wanted.sums - (lost[set.id] ?? 0)
    found.coefficients.forEach((coefficient, j) => {
      const error = Number(reference.se_expected[j])
      expect(digits(coefficient.beta, reference.coefficients[j] as string, error), coefficient.of).toBeGreaterThan(least)
      if (!perfect) expect(digits(coefficient.standardError, reference.se_expected[j] as string), coefficient.of).toBeGreaterThan(least)
    })
    if (perfect) {
      expect(found.deviance).toBe(0)
      expect(found.logLikelihood).toBeNull()
      expect(found.coefficients.every(({ standardError }) => standardError === 0)).toBe(true)
      return
    }
    reference.covariance_expected.forEach((row, i) => {
      row.forEach((exact, j) => {
        const size = Number(reference.se_expected[i]) * Number(reference.se_expected[j])
        expect(digits(found.covariance[(i * (i + 1)) / 2 + j], exact, size)).toBeGreaterThan(least - 1)
      })
    })
    // A saturated fit has no deviance but rounding.
    const size = Number(reference.deviance) === 0 ? 1 : 0
    expect(digits(found.deviance, reference.deviance, size)).toBeGreaterThan(sums)
    expect(digits(found.pearson, reference.pearson_chi2, size)).toBeGreaterThan(sums)
    expect(digits(found.logLikelihood, reference.loglik)).toBeGreaterThan(sums)
    expect(digits(found.aic, reference.aic)).toBeGreaterThan(sums)
    expect([found.df, found.parametersCounted]).toEqual([reference.df_residual, reference.parameters_counted])
    if (reference.null_deviance !== undefined && found.interceptOnly)
      expect(digits(found.interceptOnly.deviance, reference.null_deviance, 1e-3)).toBeGreaterThan(12)
    expect(found.certificate.class).toBe("interior")
    expect(found.certificate.scaledScore).toBeLessThan(1e-9)
  })

  it.each(casesOf(file))("%s: observed errors, dispersions and the score of the link", async (_, set, model, problem) => {
    const reference = model.reference
    if (Number(reference.deviance) === 0) return
    const observed = await fitted({ ...problem, standardErrors: "observed" })
    const ill = observed.certificate.condition > 1e4
    const least = wanted.coefficients - (ill ? 3 : 0)
    observed.coefficients.forEach(({ standardError, of }, j) => {
      expect(digits(standardError, reference.se_observed[j] as string), of).toBeGreaterThan(least)
    })
    const sums = wanted.sums - (lost[set.id] ?? 0)
    for (const by of ["pearson", "deviance", "likelihood"] as const) {
      const exact =
        by === "pearson" ? reference.dispersion_pearson : by === "deviance" ? reference.dispersion_deviance : reference.dispersion_ml
      if (exact === null || exact === undefined) continue
      const found = await fitted({ ...problem, dispersion: by })
      expect(digits(found.dispersion.value, exact), by).toBeGreaterThan(sums)
    }
    const score = observed.goodnessOfLink?.statistic ?? null
    if (reference.link_test === null) expect(score).toBeNull()
    else expect(digits(score, reference.link_test.score_chi2, 1e-6)).toBeGreaterThan(digitsOfScore(set.id))
  })
})

/** Where η² lies all but in the span of the columns, or residuals are all but rounding, the score has fewer digits. */
const digitsOfScore = (id: string): number => ({ MGH10: 2, Bennett5: 8 })[id] ?? 9

describe("figures as printed", () => {
  const cases = casesOf("published-glm.json").filter(([, , model]) => model.published !== undefined)
  it.each(cases)("%s", async (_, set, model, problem) => {
    const found = await fitted(problem)
    const printed = model.published as Readonly<Record<string, never>>
    const units = printed["units_in_last_place"] === undefined ? 0.5 : Number(printed["units_in_last_place"])
    const betas = found.coefficients.map(({ beta }) => beta)
    const errors = found.coefficients.map(({ standardError }) => standardError)
    const figures: Readonly<Record<string, () => number | null | readonly (number | null)[]>> = {
      coefficients: () => betas,
      coefficients_first_two: () => betas.slice(0, 2),
      slope_control: () => betas[2] as number,
      last_coefficient: () => betas.at(-1) as number,
      standard_errors: () => errors,
      deviance: () => found.deviance,
      pearson_chi2: () => found.pearson,
      loglik: () => found.logLikelihood,
      null_deviance: () => found.interceptOnly?.deviance ?? null,
      fitted: () => [...found.mu],
      fitted_counts: () => [...found.mu].map((mu, i) => mu * (problem.trials?.[i] as number)),
      median_lethal_dose: () => 10 ** (-(betas[0] as number) / (betas[1] as number)),
    }
    let compared = 0
    for (const [name, figure] of Object.entries(figures)) {
      if (printed[name] === undefined) continue
      expectPrinted(figure(), printed[name], units)
      compared++
    }
    if (printed["df_residual"] !== undefined) {
      expect(found.df).toBe(printed["df_residual"])
      compared++
    }
    if (printed["covariance"] !== undefined) {
      expectPrinted([...found.covariance], (printed["covariance"] as readonly (readonly string[])[]).flat(), units)
      compared++
    }
    if (printed["standard_errors_with_pearson_dispersion"] !== undefined) {
      const scaled = await fitted({ ...problem, dispersion: "pearson" })
      expectPrinted(
        scaled.coefficients.map(({ standardError }) => standardError),
        printed["standard_errors_with_pearson_dispersion"],
        units,
      )
      expectPrinted(scaled.dispersion.value, `${printed["dispersion_pearson"]}`, units)
      compared++
    }
    if (printed["mean"] !== undefined) {
      expectPrinted(found.mu[0] as number, printed["mean"])
      compared++
    }
    if (printed["shape_lambda"] !== undefined) {
      const shaped = await fitted({ ...problem, dispersion: "likelihood" })
      expectPrinted(1 / (shaped.dispersion.value as number), printed["shape_lambda"])
      compared++
    }
    if (printed["shape_ml"] !== undefined) {
      const shaped = await fitted({ ...problem, dispersion: "likelihood" })
      expectPrinted(1 / (shaped.dispersion.value as number), `${printed["shape_ml"]}`, units)
      compared++
    }
    expect(compared, `${set.id} prints something`).toBeGreaterThan(0)
  })

  // NIST Statistical Reference Datasets, linear regression: 15 digits, of which 12 are asked for even where powers run up to the tenth.
  it.each(referenceSets("nist-linear.json").map((set) => [set.id, set] as const))("gives the certified values of %s", async (_, set) => {
    const model = set.models[0] as ReferenceModel
    const { coefficients, standard_errors, residual_ss, residual_df } = model.published as unknown as Certified
    const found = await fitted(problemOf(set, model) as Problem)
    expect(found.coefficients).toHaveLength(coefficients.length)
    found.coefficients.forEach(({ beta, standardError }, j) => {
      expect(digits(beta, coefficients[j] as string, Number(standard_errors[j]))).toBeGreaterThan(12)
      // The errors of Wampler's last sets are up to 10⁷ times their coefficients; even so nine digits of these are right.
      expect(digits(beta, coefficients[j] as string)).toBeGreaterThan(9)
      expect(digits(standardError, standard_errors[j] as string)).toBeGreaterThan(12)
    })
    expect(digits(found.deviance, residual_ss)).toBeGreaterThan(12)
    expect(found.df).toBe(residual_df)
  })

  // The same, nonlinear regression: 11 digits, for the models that are exactly generalized linear.
  it("gives the certified values of the nonlinear regressions", async () => {
    const sets = new Map(referenceSets("nist-nonlinear.json").map((set) => [set.id, set]))
    const certified = async (id: string): Promise<readonly [Fit, NonNullable<ReferenceSet["certified"]>]> => {
      const set = sets.get(id) as ReferenceSet
      const model = set.models[0] as ReferenceModel
      return [await fitted(problemOf(set, model) as Problem), set.certified as NonNullable<ReferenceSet["certified"]>]
    }
    // y = b₁x^b₂: log μ = log b₁ + b₂ log x.
    const [wood, danWood] = await certified("DanWood")
    expect(digits(Math.exp(wood.coefficients[0]?.beta as number), danWood.parameters[0] as string)).toBeGreaterThan(10)
    expect(digits(wood.coefficients[1]?.beta, danWood.parameters[1] as string)).toBeGreaterThan(10)
    expect(digits(wood.coefficients[1]?.standardError, danWood.standard_deviations[1] as string)).toBeGreaterThan(9.9)
    expect(digits(wood.deviance, danWood.residual_ss)).toBeGreaterThan(10)
    for (const id of ["Misra1d", "Eckerle4"]) {
      const [found, values] = await certified(id)
      expect(found.df, id).toBe(values.residual_df)
    }
    // Where some parameters are held at their certified values, the response is divided by the first of them or not at all.
    for (const set of sets.values()) {
      for (const model of set.models) {
        const values = set.certified as NonNullable<ReferenceSet["certified"]>
        const scale = Number(model.response_scale ?? (set.id === "Rat43" ? values.parameters[0] : 1))
        const found = await fitted(problemOf(set, model) as Problem)
        expect(digits((found.deviance as number) * scale * scale, values.residual_ss), `${set.id}, ${model.id}`).toBeGreaterThan(9.9)
      }
    }
  })
})
