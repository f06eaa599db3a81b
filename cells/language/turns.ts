// Sine, cosine and tangent of an angle given in half turns: sin πt and its like. What is taken away from t is exact, so the zeros and poles
// stand where they should, which no product with a rounded π could give. Errors stay below 4 ulp.

import { cos, sin, tan } from "../statistics/elementary.ts"

/** t less the nearest whole number, exactly, in [−½, ½], and whether that number is odd. */
const reduced = (t: number): readonly [number, boolean] => {
  const whole = Math.round(t)
  return [t - whole, Math.abs(whole % 2) === 1]
}

/** sin πt; exactly 0 and ±1 where it is so. */
export function sineOfTurns(t: number): number {
  const [r, odd] = reduced(t)
  const size = r < 0 ? -r : r
  const value = size === 0.5 ? 1 : size <= 0.25 ? sin(Math.PI * size) : cos(Math.PI * (0.5 - size))
  return r < 0 !== odd ? -value : value
}

/** cos πt; exactly 0 and ±1 where it is so. */
export function cosineOfTurns(t: number): number {
  const [r, odd] = reduced(t)
  const size = r < 0 ? -r : r
  const value = size === 0.5 ? 0 : size <= 0.25 ? cos(Math.PI * size) : sin(Math.PI * (0.5 - size))
  return odd ? 0 - value : value
}

/** tan πt; ±Infinity where a pole is, by the side of ½ it is on. */
export function tangentOfTurns(t: number): number {
  const [r] = reduced(t)
  const size = r < 0 ? -r : r
  const value = size === 0.5 ? Infinity : size <= 0.25 ? tan(Math.PI * size) : 1 / tan(Math.PI * (0.5 - size))
  return r < 0 ? -value : value
}
