// Curves and bands as paths, cut to a frame by arithmetic: a line that leaves is cut where it crosses the edge, a gap (NaN) ends it.

import { placeText, tenth } from "./scene.ts"

export interface Point {
  readonly x: number
  readonly y: number
}

/** The unbroken stretches of a line: split where a coordinate is not finite. */
export function stretches(points: readonly Point[]): readonly (readonly Point[])[] {
  const found: Point[][] = []
  let current: Point[] = []
  for (const point of points) {
    if (Number.isFinite(point.x) && Number.isFinite(point.y)) current.push(point)
    else if (current.length > 0) {
      found.push(current)
      current = []
    }
  }
  return current.length > 0 ? [...found, current] : found
}

/** A path along points, cut at `top` and `bottom`; empty where nothing is left. */
export function linePath(points: readonly Point[], top: number, bottom: number): string {
  let d = ""
  for (const stretch of stretches(points)) {
    let pen: Point | null = null
    const [only] = stretch
    if (stretch.length === 1 && only !== undefined && only.y >= top && only.y <= bottom) d += `M${tenth(only.x)} ${tenth(only.y)}h0.1`
    for (let i = 1; i < stretch.length; i += 1) {
      const piece = cut(stretch[i - 1] as Point, stretch[i] as Point, top, bottom)
      if (piece === null) {
        pen = null
        continue
      }
      const [from, to] = piece
      if (pen === null || pen.x !== from.x || pen.y !== from.y) d += `M${placeText(from.x, from.y)}`
      d += `L${placeText(to.x, to.y)}`
      pen = to
    }
  }
  return d
}

/** A closed path between two lines over the same x, both cut to the frame; an infinite end reaches the edge. */
export function bandPath(x: readonly number[], low: readonly number[], high: readonly number[], top: number, bottom: number): string {
  let d = ""
  let upper = ""
  let lower: string[] = []
  const close = (): void => {
    if (lower.length > 1) d += `${upper}L${lower.toReversed().join("L")}Z`
    upper = ""
    lower = []
  }
  for (let i = 0; i < x.length; i += 1) {
    const [at, a, b] = [x[i] as number, low[i] as number, high[i] as number]
    if (Number.isNaN(a) || Number.isNaN(b)) {
      close()
      continue
    }
    upper += `${upper === "" ? "M" : "L"}${placeText(at, Math.min(bottom, Math.max(top, b)))}`
    lower.push(placeText(at, Math.min(bottom, Math.max(top, a))))
  }
  close()
  return d
}

/** What is left of a segment between two heights, or null. */
function cut(a: Point, b: Point, top: number, bottom: number): readonly [Point, Point] | null {
  if ((a.y < top && b.y < top) || (a.y > bottom && b.y > bottom)) return null
  const at = (height: number): Point => ({ x: a.x + ((height - a.y) / (b.y - a.y)) * (b.x - a.x), y: height })
  const inside = (p: Point): boolean => p.y >= top && p.y <= bottom
  const entering = inside(a) ? a : at(a.y < top ? top : bottom)
  const leaving = inside(b) ? b : at(b.y < top ? top : bottom)
  return [entering, leaving]
}

/** The ways to tell series apart by shape. */
const SHAPES = ["circle", "square", "triangle", "diamond", "dart", "cross"] as const
export type Shape = (typeof SHAPES)[number]

export const shapeOf = (series: number): Shape => SHAPES[series % SHAPES.length] ?? "circle"

/** The outline of a shape with about the area of a circle of that radius. */
export function shapePath(shape: Shape, x: number, y: number, r: number): string {
  const at = (dx: number, dy: number): string => placeText(x + dx * r, y + dy * r)
  switch (shape) {
    case "circle":
      return `M${at(-1, 0)}a${tenth(r)} ${tenth(r)} 0 1 0 ${tenth(2 * r)} 0a${tenth(r)} ${tenth(r)} 0 1 0 ${tenth(-2 * r)} 0Z`
    case "square":
      return `M${at(-0.9, -0.9)}L${at(0.9, -0.9)}L${at(0.9, 0.9)}L${at(-0.9, 0.9)}Z`
    case "triangle":
      return `M${at(0, -1.25)}L${at(1.15, 0.8)}L${at(-1.15, 0.8)}Z`
    case "diamond":
      return `M${at(0, -1.3)}L${at(1.3, 0)}L${at(0, 1.3)}L${at(-1.3, 0)}Z`
    case "dart":
      return `M${at(0, 1.25)}L${at(1.15, -0.8)}L${at(-1.15, -0.8)}Z`
    case "cross":
      return `M${at(-0.4, -1.2)}L${at(0.4, -1.2)}L${at(0.4, -0.4)}L${at(1.2, -0.4)}L${at(1.2, 0.4)}L${at(0.4, 0.4)}L${at(0.4, 1.2)}L${at(-0.4, 1.2)}L${at(-0.4, 0.4)}L${at(-1.2, 0.4)}L${at(-1.2, -0.4)}L${at(-0.4, -0.4)}Z`
    default: {
      const never: never = shape
      return never
    }
  }
}

/** Radii that dots come in: half pixels, since nobody sees less. */
const DOT_STEP = 0.5

/**
 * Many dots as a few paths: strokes without length and with round ends, so that a dot costs two numbers. Each size is dealt out over
 * several paths, because only between paths do dots that lie on each other darken.
 */
export class Dots {
  readonly #paths = new Map<string, string>()
  #count = 0

  add(x: number, y: number, r: number): void {
    const size = Math.max(1, Math.min(DOT_SIZES, Math.round((2 * r) / DOT_STEP)))
    const key = `${size} ${this.#count++ % 4}`
    this.#paths.set(key, `${this.#paths.get(key) ?? ""}M${placeText(x, y)}h0`)
  }

  /** Every path with the role word that gives its dots their size. */
  paths(): readonly { readonly key: string; readonly role: string; readonly d: string }[] {
    return [...this.#paths].map(([key, d]) => ({ key, role: `dots dot-${key.split(" ")[0]}`, d }))
  }
}

/** How many sizes of dots there are. */
export const DOT_SIZES = 24

/** The width of a dot by its size. */
export const dotWidth = (size: number): number => size * DOT_STEP
