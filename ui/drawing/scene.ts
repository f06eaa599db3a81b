// Scenes: what every face draws, as a list of plain marks in pixels from the top left. A mark says its role in words ("curve chosen
// link-3"), never a colour; ink.ts says how a role looks, in custom properties, so that one scene serves light, dark and print. Whatever
// would reach past a frame is cut here, when the scene is made, so that a scene needs no clip paths, patterns or identifiers.

export type SceneMark =
  | { readonly type: "path"; readonly key: string; readonly role: string; readonly d: string }
  | { readonly type: "circle"; readonly key: string; readonly role: string; readonly x: number; readonly y: number; readonly r: number }
  | {
      readonly type: "rect"
      readonly key: string
      readonly role: string
      readonly x: number
      readonly y: number
      readonly width: number
      readonly height: number
    }
  /** `y` is the baseline. */
  | {
      readonly type: "text"
      readonly key: string
      readonly role: string
      readonly x: number
      readonly y: number
      readonly size: number
      readonly anchor: "start" | "middle" | "end"
      readonly text: string
    }
  | { readonly type: "group"; readonly key: string; readonly role: string; readonly marks: readonly SceneMark[] }

export interface Scene {
  readonly width: number
  readonly height: number
  readonly marks: readonly SceneMark[]
}

/** A rectangle by its four sides. */
export interface Box {
  readonly left: number
  readonly top: number
  readonly right: number
  readonly bottom: number
}

export const boxesMeet = (a: Box, b: Box): boolean => a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom

/** A tenth of a pixel is finer than any screen shows, and keeps paths short. */
export const tenth = (pixels: number): number => Math.round(pixels * 10) / 10

/** Texts of tenths of a pixel, made when first asked for: writing out doubles is most of what long paths cost. */
const tenthTexts: string[] = []

/** A place in a path: both coordinates to a tenth of a pixel. */
export const placeText = (x: number, y: number): string => `${tenthText(x)} ${tenthText(y)}`

function tenthText(pixels: number): string {
  const tenths = Math.round(pixels * 10)
  if (!(tenths >= 0 && tenths < 50_000)) return String(tenths / 10)
  const known = tenthTexts[tenths]
  if (known !== undefined) return known
  const text = String(tenths / 10)
  tenthTexts[tenths] = text
  return text
}

/**
 * How wide a text is likely to be, in pixels: a bound for the system faces in use, since a scene is made without a page to measure on.
 * A browser test holds it against what is drawn.
 */
export function textWidth(text: string, size: number): number {
  let width = 0
  for (const sign of text) width += signWidth(sign)
  return width * size
}

function signWidth(sign: string): number {
  if (/[ilj.,;:'|!\u202f ]/.test(sign)) return 0.36
  if (/[ftr()[\]/ -]/.test(sign)) return 0.42
  if (/[mwMW−+=×→—%@…]/.test(sign)) return sign === "…" ? 1.02 : 0.99
  if (/[A-Z]/.test(sign)) return 0.72
  return 0.645
}

/** The box a text mark takes up. */
export function textBox(mark: Extract<SceneMark, { type: "text" }>): Box {
  const width = textWidth(mark.text, mark.size)
  const left = mark.anchor === "start" ? mark.x : mark.anchor === "end" ? mark.x - width : mark.x - width / 2
  return { left, top: mark.y - mark.size * 0.78, right: left + width, bottom: mark.y + mark.size * 0.22 }
}

/** A text as much of it as fits a width, an ellipsis for the rest. */
export function fitted(text: string, size: number, width: number): string {
  if (textWidth(text, size) <= width) return text
  const signs = [...text]
  while (signs.length > 1 && textWidth(`${signs.join("")}…`, size) > width) signs.pop()
  return `${signs.join("").trimEnd()}…`
}

/** A text broken at its spaces into lines of a width. */
export function brokenIntoLines(text: string, size: number, width: number): readonly string[] {
  const lines: string[] = []
  let line = ""
  for (const word of text.split(" ")) {
    const longer = line === "" ? word : `${line} ${word}`
    if (line !== "" && textWidth(longer, size) > width) {
      lines.push(line)
      line = word
    } else line = longer
  }
  return line === "" ? lines : [...lines, line]
}

/** Every text of a scene, groups included. */
export function textsOf(marks: readonly SceneMark[]): readonly Extract<SceneMark, { type: "text" }>[] {
  return marks.flatMap((mark) => (mark.type === "text" ? [mark] : mark.type === "group" ? textsOf(mark.marks) : []))
}

/** Parallel strokes from lower left to upper right, `gap` apart, cut to a box: the hatching of what cannot be. */
export function hatching(box: Box, gap: number): string {
  let d = ""
  const height = box.bottom - box.top
  // Strokes start on a lattice fixed to the page, so that hatching in neighbouring boxes lines up.
  const first = Math.floor((box.left - height + box.bottom) / gap) * gap - box.bottom
  for (let x = first; x < box.right; x += gap) {
    const fromX = Math.max(x, box.left)
    const toX = Math.min(x + height, box.right)
    if (toX <= fromX) continue
    d += `M${tenth(fromX)} ${tenth(box.bottom - (fromX - x))}L${tenth(toX)} ${tenth(box.bottom - (toX - x))}`
  }
  return d
}
