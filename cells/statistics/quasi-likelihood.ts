// Quasi-likelihood: a variance as a function of the mean, and no law. Its deviance u = 2∫ (y − t)/V(t) dt from μ to y is had by quadrature, to a
// relative error of about 1e-12; where the integral is infinite whatever the mean is, the deviance is null and differences of it are used
// for the search. McCullagh & Nelder (1989), §9.2.

import { cosh, exp, log, sinh } from "./elementary.ts"
import type { Family } from "./family.ts"
import { placesOf, run } from "./own-link.ts"
import type { Variance } from "./problem.ts"

/** Thrown away below: two estimates this near are one. */
const tolerance = 1e-13

export function quasiLikelihood({ program, range }: Variance): Family {
  const places = new Float64Array(placesOf(program))
  const output = (mu: number, which: 0 | 1): number => {
    run(program, mu, places, which)
    return places[program.outputs[which] as number] as number
  }
  const V = (mu: number): number => output(mu, 0)
  const [low, high] = range
  // Where an integral from y itself has no end, it is taken from here instead: differences in μ are the same.
  const anchor = Number.isFinite(high - low) ? (low + high) / 2 : Number.isFinite(low) ? low + 1 : Number.isFinite(high) ? high - 1 : 0
  const isEndless = (y: number): boolean => !(V(y) > 0) && !vanishesFast(V, y, anchor)
  let [known, endless] = [Number.NaN, false]
  return {
    name: "quasi_likelihood",
    range: { low, high },
    discrete: false,
    dispersion: "pearson",
    variance: V,
    varianceSlope: (mu) => output(mu, 1),
    unitDeviance: (y, mu) => {
      if (y === mu) return 0
      if (y !== known) [known, endless] = [y, isEndless(y)]
      // Beyond the range no mean is possible, and the search is told so.
      if (!(mu > low && mu < high)) return Infinity
      if (endless) return 2 * (anchor - mu) * overUnit((s) => (y - mu - (anchor - mu) * s) / V(mu + (anchor - mu) * s))
      const integrand = (s: number): number => s / V(y + (mu - y) * s)
      return 2 * (y - mu) * (y - mu) * (V(y) > 0 ? overUnit(integrand) : overUnitFromEnd(integrand))
    },
    logDensity: () => Number.NaN,
    isEndless,
  }
}

/** Whether ∫ s/V(y + (m − y)s) ds from 0 is finite: s²/V has to vanish as s does, which is read off its power there. */
function vanishesFast(V: (mu: number) => number, y: number, m: number): boolean {
  const ratio = (s: number): number => log((s / V(y + (m - y) * s)) * s)
  // Beside a y that is not 0, nothing nearer than a double's last digits can be told from it.
  const [near, far] = y === 0 ? [1e-100, 1e-50] : [1e-10, 1e-5]
  const power = (ratio(near) - ratio(far)) / (log(near) - log(far))
  return power > (y === 0 ? 1e-3 : 0.05)
}

/** ∫ f over (0, 1) by Gauss and Kronrod's 7 and 15 points, halved where they differ. */
function overUnit(f: (s: number) => number): number {
  const piece = (from: number, to: number, whole: number, depth: number): number => {
    const [half, middle] = [(to - from) / 2, (from + to) / 2]
    const centre = f(middle)
    let kronrod = centre * (kronrodWeights[7] as number)
    let gauss = centre * (gaussWeights[3] as number)
    for (let k = 0; k < 7; k++) {
      const off = half * (nodes[k] as number)
      const both = f(middle - off) + f(middle + off)
      kronrod += both * (kronrodWeights[k] as number)
      if (k % 2 === 1) gauss += both * (gaussWeights[(k - 1) / 2] as number)
    }
    const value = kronrod * half
    // The error of the 15 points is far below the difference.
    const difference = Math.abs(gauss * half - value)
    const scale = Math.max(Math.abs(whole), Math.abs(value))
    if (depth >= 40 || !(difference > 1e-9 * scale * tolerant(depth)) || !Number.isFinite(value)) return value
    return piece(from, middle, scale, depth + 1) + piece(middle, to, scale, depth + 1)
  }
  return piece(0, 1, 0, 0)
}

const tolerant = (depth: number): number => (depth === 0 ? 1e-2 : 1e-1)

/** ∫ f over (0, 1) where f has an end at 0 that is infinite but has an integral: the double exponential rule of Takahasi & Mori (1974). */
function overUnitFromEnd(f: (s: number) => number): number {
  const at = (t: number): number => {
    const q = Math.PI * sinh(t)
    const e = exp(q < 0 ? q : -q)
    const s = q < 0 ? e / (1 + e) : 1 / (1 + e)
    const weight = Math.PI * cosh(t) * (e / (1 + e) / (1 + e))
    const value = weight > 0 ? f(s) * weight : 0
    return Number.isFinite(value) ? value : 0
  }
  const [from, to] = [-6, 4]
  let step = 0.25
  let sum = 0
  for (let t = from; t <= to; t += step) sum += at(t)
  let before = sum * step
  for (let k = 0; k < 4; k++) {
    for (let t = from + step / 2; t < to; t += step) sum += at(t)
    step /= 2
    const now = sum * step
    if (Math.abs(now - before) <= tolerance * Math.abs(now)) return now
    before = now
  }
  return before
}

// Kronrod (1965), Nodes and Weights of Quadrature Formulas: from the outermost node inwards, the middle left out of the nodes.
const nodes = [
  0.9914553711208126, 0.9491079123427585, 0.8648644233597691, 0.7415311855993945, 0.5860872354676911, 0.4058451513773972,
  0.20778495500789848,
]
const kronrodWeights = [
  0.022935322010529224, 0.06309209262997856, 0.10479001032225019, 0.14065325971552592, 0.1690047266392679, 0.19035057806478542,
  0.20443294007529889, 0.20948214108472782,
]
const gaussWeights = [0.1294849661688697, 0.27970539148927664, 0.3818300505051189, 0.4179591836734694]
