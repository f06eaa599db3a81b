// The ridge of a function of the coefficients along one of them: its lowest value with that coefficient held, followed outwards from the
// lowest point of all until it has risen by a given amount. The function is a deviance or a penalised one; what rises, and why by so much,
// is for others.

import type { Factor } from "./gram.ts"
import { dot } from "./scoring.ts"

/** A place on the surface: value, minus half its slope, and a positive definite matrix near half its curvature. */
export type Spot = {
  readonly gamma: Float64Array
  value: number
  score: Float64Array
  factor: Factor | null
}

export type Surface = {
  spot(): Spot
  /** Fills a spot from its coefficients; false where the means are impossible or the value is not finite. */
  fill(spot: Spot): Promise<boolean>
  /** The share of a move along v that a step may take; 1 where steps need no bound. Means that run to an end of their range in one step are lost. */
  share(v: Float64Array): number
}

/** How far the end lies from where the ridge began, or why there is none. */
export type RidgeEnd = number | "infinity" | "-infinity" | "edge" | null

/** What is left of the rise when a held maximum counts as reached, in units of φ. */
const reached = 1e-11

/** Below this the held maximum is known well enough to aim for the end from it. */
const near = 0.05

/** Relative distance of the root of the rise from its goal: ten digits of an end, and more where ends are large against their errors. */
const onGoal = 1e-11

/** Rounding of the value, as a share of it: what is asked of the rise is never finer. */
const rounding = 4e-15

/** So many times may the search go four times as far before it is said that the end is never reached. */
const mostGrowths = 20

/** A ridge that comes this near to an end of the possible means, as a share of a standard error, has come to it. */
const leastStep = 1e-9

const mostPasses = 600

export class Ridge {
  private readonly surface: Surface
  private readonly c: Float64Array
  private readonly phi: number
  private readonly origin: Spot
  /** √(φ·c'H⁻¹c): the standard error at the origin. */
  private readonly unit: number

  private constructor(surface: Surface, c: Float64Array, phi: number, origin: Spot, unit: number) {
    this.surface = surface
    this.c = c
    this.phi = phi
    this.origin = origin
    this.unit = unit
  }

  /**
   * A ridge from a lowest point.
   * @param c  the coefficient followed is c'γ
   */
  static async from(surface: Surface, gamma: Float64Array, c: Float64Array, phi: number): Promise<Ridge | null> {
    const origin = surface.spot()
    origin.gamma.set(gamma)
    if (!(await surface.fill(origin)) || origin.factor === null) return null
    const unit = Math.sqrt(phi * dot(c, origin.factor.solve(c)))
    return unit > 0 && Number.isFinite(unit) ? new Ridge(surface, c, phi, origin, unit) : null
  }

  /** The value at the origin. */
  get value(): number {
    return this.origin.value
  }

  /**
   * The distance along the coefficient, on one side, at which the lowest value is `base` + `rise`.
   * @param side  1 or −1
   */
  async end(side: 1 | -1, base: number, rise: number): Promise<RidgeEnd> {
    const { surface, phi, unit, c, origin } = this
    const goal = Math.sqrt(rise)
    const tolerance = goal * Math.max(onGoal, (rounding * Math.abs(base)) / rise)
    // Distances from the origin, along the side; the spot at hand with its displacement.
    let current = copied(surface, origin)
    let trial = surface.spot()
    let at = 0
    const shift = new Float64Array(c.length)
    // The last place inside that was reached, to go back to.
    let inside = 0
    let insideGamma = origin.gamma.slice()
    let insideShift = shift.slice()
    let outside = Number.POSITIVE_INFINITY
    let aim = (unit * goal) / Math.sqrt(phi)
    let stride = 4 * aim
    let growths = 0
    let back = false
    let lastRise = 0
    for (let passes = 0; passes < mostPasses; passes++) {
      if (back) {
        current.gamma.set(insideGamma)
        shift.set(insideShift)
        at = inside
        if (!(await surface.fill(current)) || current.factor === null) return null
        back = false
      }
      // One step to the aim, or to the ridge where the aim is here.
      const factor = current.factor
      if (factor === null) return null
      const z = factor.solve(current.score)
      const v = factor.solve(c)
      const pull = dot(c, z) / dot(c, v)
      if (aim !== at) {
        const move = (aim - at) / dot(c, v)
        aim = at + (aim - at) * surface.share(v.map((x) => x * move))
      }
      const along = side * aim - dot(c, shift)
      const step = z.map((x, j) => x - (pull - along / dot(c, v)) * (v[j] as number))
      let share = 1
      let possible = false
      const held = aim === at
      for (let halving = 0; halving < (held ? 30 : 1); halving++) {
        for (let j = 0; j < step.length; j++) trial.gamma[j] = (current.gamma[j] as number) + share * (step[j] as number)
        possible = (await surface.fill(trial)) && trial.factor !== null
        if (possible && (!held || trial.value <= current.value + 1e-13 * Math.abs(current.value))) break
        possible = false
        share /= 2
        passes++
      }
      if (!possible) {
        // From here the aim is not reached: a shorter stride from the last place inside.
        stride = Math.min(stride, aim - inside) / 2
        if (stride < leastStep * unit) return Number.isFinite(outside) ? null : "edge"
        aim = inside + stride
        back = true
        continue
      }
      for (let j = 0; j < step.length; j++) shift[j] = (shift[j] as number) + share * (step[j] as number)
      at = aim
      ;[current, trial] = [trial, current]
      const again = (current.factor as Factor).solve(current.score)
      const tangent = (current.factor as Factor).solve(c)
      const slope = dot(c, again) / dot(c, tangent)
      const left = Math.max(0, dot(again, current.score) - slope * dot(c, again))
      // What Newton's method says is still to be gained on the ridge is taken as gained.
      const risen = current.value - left - base
      const arrived = left <= reached * phi
      const root = Math.sqrt(Math.max(0, risen))
      if (arrived || left <= 1e-7 * phi) {
        if (risen < rise) {
          if (at > inside) {
            stride = Math.max(stride, 2 * (at - inside))
            inside = at
            insideGamma = current.gamma.slice()
            insideShift = shift.slice()
          }
        } else outside = Math.min(outside, at)
        if (arrived && Math.abs(root - goal) <= tolerance) return side * at
        if (outside < Number.POSITIVE_INFINITY && outside - inside <= 4e-16 * outside) return side * at
      }
      if (left > near * phi) continue
      // Newton's method on the root of the rise, which is all but straight.
      const rate = root > 0 ? (-side * slope) / root : Number.NaN
      let next = at + (goal - root) / rate
      if (Number.isFinite(outside)) {
        if (!(next > inside && next < outside)) {
          if (!arrived) continue
          next = (inside + outside) / 2
        }
      } else {
        if (!(next > at) && risen < rise) next = 2 * at
        if (!arrived && !(Math.abs(next - at) < 0.5 * unit)) {
          // Far from the end the ridge is found before the next step along it.
          if (left > 1e-7 * phi) continue
        }
        if (next > 4 * at && at > 0) {
          next = 4 * at
          growths++
          const flat = risen - lastRise < 1e-9 * phi
          lastRise = risen
          if (growths > mostGrowths || (flat && growths > 6)) return side > 0 ? "infinity" : "-infinity"
        }
        next = Math.min(next, inside + stride)
      }
      if (!(next > 0)) next = at / 2
      aim = next
    }
    return null
  }
}

function copied(surface: Surface, spot: Spot): Spot {
  const other = surface.spot()
  other.gamma.set(spot.gamma)
  other.value = spot.value
  other.score = spot.score
  other.factor = spot.factor
  return other
}
