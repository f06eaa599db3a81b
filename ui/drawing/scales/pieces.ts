// The few shapes that all parts of the drawing are made of, with coordinates to a tenth of a pixel; empty paths are left out.

import { type Box, type SceneMark, tenth } from "../scene.ts"

export const label = (
  key: string,
  role: string,
  x: number,
  y: number,
  size: number,
  anchor: "start" | "middle" | "end",
  text: string,
): Extract<SceneMark, { type: "text" }> => ({ type: "text", key, role, x: tenth(x), y: tenth(y), size, anchor, text })

export const path = (key: string, role: string, d: string): readonly SceneMark[] => (d === "" ? [] : [{ type: "path", key, role, d }])

export function rect(key: string, role: string, box: Box): SceneMark {
  return {
    type: "rect",
    key,
    role,
    x: tenth(box.left),
    y: tenth(box.top),
    width: tenth(Math.max(0, box.right - box.left)),
    height: tenth(Math.max(0, box.bottom - box.top)),
  }
}

/** The label of an axis, unit in brackets. */
export const withUnit = (text: string, unit: string | null): string => (unit === null ? text : `${text} (${unit})`)
