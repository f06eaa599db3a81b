// What `scales` finds: the model's own link at once from the fit that is there, then the other candidates, each fitted from its own cold
// start, as a late part. Links differ in nothing but the link: rows, response, weights and predictor stay.

import type { Outcome, Work } from "../../runtime/kind.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name, Value } from "../../runtime/value.ts"
import { families, legalLinks, links, parameterRange } from "../language/vocabulary.ts"
import { type ModelFinding, modelIn } from "../model-finding.ts"
import { familyOf, fit } from "../statistics/index.ts"
import type { LinkSpec } from "../statistics/problem.ts"
import type { CandidateFound, ScalesFinding } from "./finding.ts"
import * as say from "./notices.ts"
import { ownLinkOf } from "./own-link.ts"
import { type Inputs, numberOf, planOf, rounded } from "./plan.ts"
import { Plot } from "./plot.ts"
import { troubleOf } from "./trouble.ts"
import type { Named, ScalesSaid } from "./words.ts"

export async function found(said: ScalesSaid, inputs: Inputs, work: Work): Promise<Outcome<ScalesFinding>> {
  const notices: Notice[] = []
  const fault = (notice: Notice): null => {
    notices.push(notice)
    return null
  }
  const model = said.model === null ? null : modelIn(inputs.get(said.model.name)?.value)
  if (said.model === null) return { ok: false, found: null, notices }
  if (model === null) return { ok: false, found: null, notices: [say.notAModel(said.model.name, said.model.at)] }
  const setting = planOf(said, said.model.name, model, inputs, fault)
  const named = candidateLinks(said, model, inputs, fault)
  // Limits of the mean are the model's, whatever the link between them.
  const { limits } = model.problem.link
  const candidates = named?.map(({ spec, says }) => ({ spec: limits === undefined ? spec : { ...spec, limits }, says })) ?? null
  if (setting === null || candidates === null || notices.length > 0) return { ok: false, found: null, notices }

  const mark = markOf(model)
  const plot = new Plot(model, setting, work)
  const own = await plot.candidate(model.problem.link, model.link, true, model.fit)
  const others = candidates.filter(({ says }) => says !== model.link)
  const finding = (rest: readonly CandidateFound[], complete: boolean): ScalesFinding => ({
    model: (said.model as Named).name,
    mark,
    family: model.problem.family.name,
    predictor: model.problem.terms.map(({ says }) => says).join(" + ") || "intercept",
    n: model.fit.n,
    across: setting.axis,
    response: { label: model.response.label, unit: model.response.unit },
    split: setting.levels === null ? null : { name: setting.of.split as Name, levels: setting.levels.map(({ level }) => level) },
    possible: [familyOf(model.problem.family).range.low, familyOf(model.problem.family).range.high],
    range: setting.range,
    data: setting.data,
    held: setting.heldValues,
    heldSays: setting.heldSays,
    averaged: said.averaged,
    aligned: said.aligned,
    confidence: model.problem.confidence,
    candidates: [own, ...rest],
    complete,
  })
  const left = leaving(own, setting.axis.label)
  if (left !== null) notices.push(say.leavesRange(own.link, left, said.range?.at ?? null))
  // In a gesture that leaves the model as it was, the candidates fitted before are drawn again: only the plot has changed.
  const before = new Map<string, CandidateFound>()
  if (isScales(work.near) && isSame(work.near.mark, mark)) for (const each of work.near.candidates) before.set(each.link, each)
  const meanwhile: CandidateFound[] = []
  for (const { spec, says } of others) {
    const known = before.get(says)?.fit ?? null
    meanwhile.push(known === null ? plot.unfitted(spec, says) : await plot.candidate(spec, says, false, known, own))
  }
  const soFar: Outcome<ScalesFinding> = {
    ok: true,
    found: finding(
      meanwhile,
      meanwhile.every(({ fitted }) => fitted),
    ),
    notices,
  }
  if (others.length === 0 || !(await work.late(soFar))) return soFar
  const rest: CandidateFound[] = []
  for (const { spec, says } of others) {
    await work.checkpoint()
    const fitted = await fit({ ...model.problem, link: spec }, () => work.checkpoint())
    rest.push(
      fitted.ok ? await plot.candidate(spec, says, false, fitted.fit) : { ...plot.unfitted(spec, says), trouble: troubleOf(fitted) },
    )
  }
  return { ok: true, found: finding(rest, true), notices }
}

const isScales = (near: Value | null): near is ScalesFinding => typeof near === "object" && near !== null && "mark" in near

/** Numbers by which a drag tells whether the model is still the one drawn before: a key may not get into a finding. */
const markOf = ({ fit: own, problem }: ModelFinding): Float64Array =>
  Float64Array.of(problem.rows, own.n, own.deviance ?? Number.NaN, own.pearson, ...own.coefficients.map(({ beta }) => beta ?? Number.NaN))

const isSame = (a: Float64Array, b: Float64Array): boolean => a.length === b.length && a.every((value, i) => Object.is(value, b[i]))

/** The candidates on the strip: those stated, else the named links legal for the family; null once a fault was said. */
function candidateLinks(
  said: ScalesSaid,
  model: ModelFinding,
  inputs: Inputs,
  fault: (notice: Notice) => null,
): readonly { readonly spec: LinkSpec; readonly says: string }[] | null {
  const family = model.problem.family.name
  // A binomial mean has a value per unit of exposure under cloglog only, so no other link can stand beside it.
  const perUnit = family === "binomial" ? model.exposure : null
  const legal = legalLinks(family).filter((name) => perUnit === null || name === "cloglog")
  if (said.beside === null) {
    // Links made for the family's own means first: on a share, those that reach every share and nothing else.
    const made = (name: string): number => (links[name]?.mean === families[family]?.mean ? 0 : 1)
    return legal
      .toSorted((a, b) => made(a) - made(b))
      .filter((name) => links[name]?.parameters.length === 0)
      .map((name) => ({ spec: { name, parameters: [] }, says: name }))
  }
  const made: { spec: LinkSpec; says: string }[] = []
  for (const { call, at } of said.beside) {
    if (perUnit !== null && call.name !== "cloglog") {
      fault(say.linkNotPerUnit(call.name, perUnit.label, at))
      continue
    }
    const known = links[call.name]
    if (known === undefined) {
      const spec = ownLinkOf(call, at, family, inputs, fault)
      if (spec !== null && !made.some((other) => other.says === spec.name)) made.push({ spec, says: spec.name })
    } else if (!legal.includes(call.name)) fault(say.linkNotLegal(call.name, families[family]?.name ?? family, legal, at))
    else if ((call.bounds?.length ?? 0) !== known.parameters.length) fault(say.linkParameters(call.name, known.parameters.length, at))
    else {
      const parameters: number[] = []
      for (const bound of call.bounds ?? []) {
        const number = numberOf(bound, at, "beside", inputs, fault)
        if (number === null) continue
        parameters.push(number)
        if (!parameterRange(call.name).holds(number)) fault(say.parameterOutside(call.name, parameterRange(call.name).says, number, at))
      }
      const says = parameters.length === 0 ? call.name : `${call.name}(${parameters.join(", ")})`
      if (!made.some((other) => other.says === says)) made.push({ spec: { name: call.name, parameters }, says })
    }
  }
  return made
}

/** Where the own curve is cut, in words; null where it is not. */
function leaving(own: CandidateFound, label: string): string | null {
  for (const { x, mu } of own.curves) {
    const gap = mu.findIndex(Number.isNaN)
    if (gap < 0) continue
    return gap > 0
      ? `above ${label} ${rounded(x[gap - 1] as number)}`
      : `below ${label} ${rounded(x[mu.findLastIndex(Number.isNaN) + 1] ?? (x[gap] as number))}`
  }
  return null
}
