// What is compared between Node and a browser: fits of every family and link, predictions from them, and the functions beneath over many
// arguments. Each is digested from the bits of all its numbers, so that one last bit that differs is seen.

import { sha256 } from "@noble/hashes/sha2.js"
import * as elementary from "../../cells/statistics/elementary.ts"
import { type FamilyName, familyNames } from "../../cells/statistics/families.ts"
import { fit } from "../../cells/statistics/fit.ts"
import { legalLinks } from "../../cells/statistics/legal-pairs.ts"
import { linkNames } from "../../cells/statistics/links.ts"
import { predicted } from "../../cells/statistics/prediction.ts"
import type { Problem } from "../../cells/statistics/problem.ts"
import * as special from "../../cells/statistics/special.ts"
import { settledBook } from "../book.ts"
import { factor, generator, numbers, problem, type Stated } from "../cells/statistics/problems.ts"

/** By what was computed, a class where there is one and the digest of its bits. */
export type Bits = Readonly<Record<string, string>>

/** How many arguments each elementary function is given. */
export const argumentsOfEach = 100_000

export async function allBits(): Promise<Bits> {
  const bits: Record<string, string> = {}
  for (const family of plainFamilies) {
    for (const link of legalLinks({ name: family, parameters: familyParameters(family) })) {
      const parameters = linkNames[link].map((_, at) => linkParameters[link]?.[at] ?? 0.75)
      const own: Problem = {
        ...problem(data(family)),
        family: { name: family, parameters: familyParameters(family) },
        link: { name: link, parameters },
      }
      bits[`${family} ${link}`] = await fitBits(own)
    }
  }
  for (const [says, stated] of Object.entries(hard())) bits[says] = await fitBits(problem(stated))
  Object.assign(bits, await notebookBits())
  for (const [name, f] of Object.entries(elementary)) {
    if (typeof f === "function") bits[name] = functionBits(f as (x: number, y: number) => number, argumentsOfEach)
  }
  for (const [name, f] of Object.entries(specials)) bits[name] = functionBits(f, 4000)
  return bits
}

/** Families that need no more than numbers; a variance of the user's own is fitted through a notebook, below. */
export const plainFamilies: readonly FamilyName[] = familyNames.filter((name) => (name as string) !== "quasi_likelihood")

/** A whole notebook: a file read, an own link proved, a variance as an expression, estimated parameters, candidates. By cell, the hash of its finding. */
async function notebookBits(): Promise<Bits> {
  const next = generator(31)
  const rows = Array.from({ length: 80 }, () => {
    const dose = Math.floor(next() * 400) / 100
    const n = 5 + Math.floor(next() * 20)
    const share = 0.08 + (0.9 * dose) / (1.4 + dose)
    return [dose, n, Math.min(n, Math.floor(n * share * (0.7 + 0.6 * next()))), (0.3 + dose) * (0.4 + next())]
  })
  const model = (name: string, says: string): string => `model ${name}\n  data trial\n${says}\n  predictor dose`
  const cells = [
    'data trial\n  from "trial.csv"\n  column dose number\n  column n count\n  column y count\n  column amount number',
    "link abbott\n  mean from c to 1\n  given c = 0.05\n  eta = normal_quantile((mu - c)/(1 - c))",
    model("own", "  response y out of n\n  family binomial\n  link abbott"),
    model("limited", "  response y out of n\n  family binomial\n  link cloglog\n  limits estimate to 1"),
    model("bent", "  response y out of n\n  family binomial\n  link aranda_ordaz(estimate)"),
    model("quasi", "  response amount\n  family quasi_likelihood(mu^1.3)\n  link log"),
    model("counts", "  response y\n  family negative_binomial(estimate)\n  link log"),
    "scales candidates\n  model bent\n  across dose",
    "value at_one = mean_at(own, dose = 1)",
  ]
  const book = await settledBook(cells, { "trial.csv": `dose,n,y,amount\n${rows.map((row) => row.join(",")).join("\n")}\n` })
  const bits: Record<string, string> = {}
  for (const name of ["trial", "abbott", "own", "limited", "bent", "quasi", "counts", "candidates", "at_one"]) {
    const state = book.state(name)
    bits[`cell ${name}`] = state.status === "ready" ? `ready ${state.hash}` : `${state.status} ${JSON.stringify(book.notices(name))}`
  }
  return bits
}

async function fitBits(of: Problem): Promise<string> {
  const found = await fit(of, async () => {})
  if (!found.ok) return `${found.why} ${found.detail}`
  const { fit: own } = found
  return `${own.certificate.class} ${digest([own, predicted(own, of.variables, of.rows)])}`
}

const familyParameters = (family: FamilyName): readonly number[] => ({ negative_binomial: [2.5], tweedie: [1.6] })[family as string] ?? []
const linkParameters: Readonly<Record<string, readonly number[]>> = { power: [0.4], box_cox: [0.3], stukel: [0.2, -0.1] }

/** Two numbers and a factor under which every link has possible means somewhere, and a response the family can have. */
function data(family: string): Stated {
  const next = generator(20_240_601)
  const rows = 160
  const dose = Array.from({ length: rows }, () => next() * 2)
  const age = Array.from({ length: rows }, () => 20 + Math.floor(next() * 50))
  const lot = Array.from({ length: rows }, () => "abcd"[Math.floor(next() * 4)] as string)
  const trials = Float64Array.from({ length: rows }, () => 1 + Math.floor(next() * 9))
  const level = dose.map((x, i) => 0.25 + 0.2 * x + 0.002 * (age[i] as number) + (lot[i] === "c" ? 0.08 : 0))
  const y = level.map((mean, i) => {
    if (family === "binomial") {
      let successes = 0
      for (let k = 0; k < (trials[i] as number); k++) if (next() < mean) successes++
      return successes / (trials[i] as number)
    }
    const counted = family === "poisson" || family === "negative_binomial"
    if (counted) return Math.floor(mean * 8 * (0.4 + 1.2 * next()))
    if (family === "tweedie" && next() < 0.15) return 0
    return mean * (0.5 + next())
  })
  return {
    family,
    link: "identity",
    terms: ["dose", "age", "lot"],
    variables: { dose: numbers(dose), age: numbers(age), lot: factor(lot) },
    y,
    ...(family === "binomial" ? { trials } : {}),
  }
}

/** Problems that take other ways: an orthogonal basis, many levels, an offset, infinite estimates, the edge, clusters. */
function hard(): Readonly<Record<string, Stated>> {
  const next = generator(77)
  const rows = 400
  const year = Array.from({ length: rows }, (_, i) => 1960 + (i % 60))
  const square = year.map((x) => x * x)
  const level = Array.from({ length: rows }, () => `level ${Math.floor(next() * 40)}`)
  const cluster = Int32Array.from({ length: rows }, (_, i) => i % 20)
  const counts = year.map((x) => Math.floor(((x - 1940) / 10) * (0.3 + 1.4 * next())))
  const shares = year.map((x) => (next() < (x - 1950) / 80 ? 1 : 0))
  return {
    "years and their squares": {
      family: "poisson",
      link: "log",
      terms: ["year", "square"],
      variables: { year: numbers(year), square: numbers(square) },
      y: counts,
    },
    "many levels with an offset": {
      family: "poisson",
      link: "log",
      terms: ["year", "level"],
      variables: { year: numbers(year), level: factor(level) },
      offset: Float64Array.from(year, (x) => (x - 1990) / 100),
      y: counts,
    },
    "clusters and a spline": {
      family: "binomial",
      link: "logit",
      terms: ["natural_spline(year, 3)", "polynomial(square, 2)"],
      variables: { year: numbers(year), square: numbers(square) },
      standardErrors: "sandwich",
      cluster,
      y: shares,
    },
    "a separated share": {
      family: "binomial",
      link: "cloglog",
      terms: ["x", "z"],
      variables: { x: numbers([1, 2, 3, 4, 5, 6, 7, 8]), z: numbers([2, 1, 2, 1, 1, 2, 1, 2]) },
      y: [0, 0, 0, 0, 1, 1, 1, 1],
    },
    "counts at the edge": {
      family: "poisson",
      link: "identity",
      terms: ["x"],
      variables: { x: numbers([0, 1, 2, 3, 4, 5]) },
      y: [0, 0, 1, 0, 9, 14],
    },
  }
}

const specials: Readonly<Record<string, (x: number, y: number) => number>> = {
  normalDensity: special.normalDensity,
  normalCdf: special.normalCdf,
  normalLogCdf: special.normalLogCdf,
  normalQuantile: (x) => special.normalQuantile(within(x)),
  logGamma: (x) => special.logGamma(Math.abs(x)),
  digamma: (x) => special.digamma(Math.abs(x)),
  trigamma: (x) => special.trigamma(Math.abs(x)),
  stirlingError: (x) => special.stirlingError(Math.abs(x)),
  devianceTerm: (x, y) => special.devianceTerm(Math.abs(x), Math.abs(y)),
  chiSquareUpperTail: (x, y) => special.chiSquareUpperTail(Math.abs(x), 1 + Math.floor(Math.min(1e4, Math.abs(y)))),
  tUpperTail: (x, y) => special.tUpperTail(x, 1 + Math.min(1e4, Math.abs(y))),
  tUpperQuantile: (x, y) => special.tUpperQuantile(0.001 + 0.998 * within(x), 1 + Math.min(1e3, Math.abs(y))),
  fUpperTail: (x, y) => special.fUpperTail(Math.abs(x), 3, 1 + Math.min(1e4, Math.abs(y))),
}

/** A number in (0, 1) for any number. */
const within = (x: number): number => 1 / (1 + Math.abs(x))

/** The digest of a function over arguments of every size: half of them evenly in ±40, half with any power of two from −80 to 80. */
function functionBits(f: (x: number, y: number) => number, count: number): string {
  const next = generator(4)
  const any = (): number => {
    const plain = 80 * (next() - 0.5)
    let size = 1 + next()
    const power = Math.floor(next() * 161) - 80
    for (let k = 0; k < Math.abs(power); k++) size *= power < 0 ? 0.5 : 2
    return next() < 0.5 ? plain : plain < 0 ? -size : size
  }
  const values = new Float64Array(count)
  for (let i = 0; i < count; i++) values[i] = f(any(), any())
  return digest(values)
}

/** SHA-256 over the bits of every number and the letters of every word, in the order in which they stand. */
export function digest(of: unknown): string {
  const hash = sha256.create()
  const bytes = new Uint8Array(8)
  const view = new DataView(bytes.buffer)
  const encoder = new TextEncoder()
  const add = (value: unknown): void => {
    if (typeof value === "number") {
      // What a NaN looks like inside is nobody's promise.
      view.setFloat64(0, Number.isNaN(value) ? Number.NaN : value)
      hash.update(bytes)
    } else if (ArrayBuffer.isView(value) || Array.isArray(value)) {
      for (const each of value as unknown as Iterable<unknown>) add(each)
    } else if (typeof value === "object" && value !== null) {
      for (const [name, each] of Object.entries(value)) {
        hash.update(encoder.encode(name))
        add(each)
      }
    } else hash.update(encoder.encode(String(value)))
  }
  add(of)
  return [...hash.digest()].map((byte) => byte.toString(16).padStart(2, "0")).join("")
}
