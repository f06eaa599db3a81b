// Axes: a linear scale between values and pixels, its round ticks, and the texts at them. Ticks never fall outside the range, and texts
// never touch: where they would, there are fewer of them.

import { tickStep, ticks } from "d3"
import { decimalsOf, writtenAsPower, writtenFixed } from "./number.ts"
import { fitted, textWidth } from "./scene.ts"

export interface Scale {
  readonly from: number
  readonly to: number
  readonly start: number
  readonly end: number
  place(value: number): number
  value(pixels: number): number
}

export interface Tick {
  readonly value: number
  readonly place: number
  readonly text: string
  /** 0, or 1 for a text on the second row. */
  readonly row: number
}

/** A linear scale; a range without extent is widened, since an axis needs two ends. */
export function linearScale(from: number, to: number, start: number, end: number): Scale {
  const extent = to - from || 1
  const low = to === from ? from - extent / 2 : from
  return {
    from: low,
    to: low + extent,
    start,
    end,
    place: (value) => start + ((value - low) / extent) * (end - start),
    value: (pixels) => low + ((pixels - start) / (end - start)) * extent,
  }
}

/** A range a little wider than what it has to hold, its ends on fifths of a tick's step so that small changes of data move nothing. */
export function roomFor(from: number, to: number, count = 5): readonly [number, number] {
  const extent = to - from || Math.abs(from) || 1
  const padding = extent * 0.04
  const step = tickStep(from - padding, from + extent + padding, count) / 5
  return [Math.floor((from - padding) / step) * step, Math.ceil((from + extent + padding) / step) * step]
}

/** Ticks for numbers up a side, about `spacing` pixels apart. */
export function sideTicks(scale: Scale, spacing = 44): readonly Tick[] {
  return numberTicks(scale, Math.max(2, Math.round(Math.abs(scale.end - scale.start) / spacing)))
}

/** Ticks for numbers along the foot, as many as stand clear of each other. */
export function footTicks(scale: Scale, size: number, spacing = 62): readonly Tick[] {
  const length = Math.abs(scale.end - scale.start)
  for (let count = Math.max(2, Math.round(length / spacing)); count > 1; count -= 1) {
    const found = numberTicks(scale, count)
    const clear = found.every((tick, i) => {
      const next = found[i + 1]
      return (
        next === undefined || Math.abs(next.place - tick.place) > (textWidth(tick.text, size) + textWidth(next.text, size)) / 2 + size * 0.8
      )
    })
    if (clear) return found
  }
  return numberTicks(scale, 1).slice(0, 1)
}

/** Ticks for levels: each has its text, on two rows where one is too tight, shortened where two are, and never far past the axis. */
export function levelTicks(scale: Scale, levels: readonly string[], size: number): readonly Tick[] {
  const room = Math.abs(scale.place(1) - scale.place(0)) - 8
  const oneRow = levels.every((level) => textWidth(level, size) <= room)
  return levels.map((level, i) => {
    const place = scale.place(i)
    const toEnd = Math.min(Math.abs(place - scale.start), Math.abs(scale.end - place)) + overhang
    return { value: i, place, text: fitted(level, size, oneRow ? room : Math.min(room * 2, toEnd * 2)), row: oneRow ? 0 : i % 2 }
  })
}

/** How far the text of a level may stand past the end of its axis, in pixels. */
const overhang = 6

/** Ticks at given values, all to the same decimals. */
function numberTicks(scale: Scale, count: number): readonly Tick[] {
  const values = ticks(scale.from, scale.to, count)
  const decimals = decimalsOf(values.length > 1 ? (values[1] ?? 0) - (values[0] ?? 0) : tickStep(scale.from, scale.to, count))
  return values.map((value) => ({ value, place: scale.place(value), text: tickText(value, decimals), row: 0 }))
}

/** Ticks of very small or very large steps say their power of ten. */
function tickText(value: number, decimals: number): string {
  if (decimals <= 5 && Math.abs(value) < 1e7) return writtenFixed(value, decimals)
  if (value === 0) return "0"
  const mantissa = String(Number(value.toPrecision(6)).toExponential().split("e")[0])
  return writtenAsPower(value, mantissa.replace(/[-.]/g, "").length)
}
