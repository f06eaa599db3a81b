// Numbers as a face sets them: written out by the one module that kinds use too, and lined up on the decimal point. Lining up adds only
// spaces, so that nothing is shown to more digits than it was given.

export {
  absent,
  decimalsOf,
  plain,
  written,
  writtenAsPower,
  writtenCount,
  writtenFixed,
  writtenInFull,
  writtenProbability,
  writtenRange,
  writtenShare,
} from "../../cells/figure/number.ts"

/** Enough decimals to tell apart places a few pixels from each other on an axis of that extent. */
export function decimalsForExtent(extent: number): number {
  if (extent > 400) return 0
  if (extent > 12) return 1
  let decimals = 2
  for (let left = extent; left < 0.8 && decimals < 9; left *= 10) decimals += 1
  return decimals
}

/** A written number in two, words before it included: up to the decimal point, and from the point on (empty where there is none). */
export function atPoint(text: string): { readonly before: string; readonly after: string } {
  const [, before = text, after = ""] = /^((?:[^\d.]* )?[−\d\u202f]+)(\.\d.*)$/u.exec(text) ?? []
  return { before, after }
}

/** Texts of one column, padded with ordinary spaces so that points stand under each other where every sign is equally wide. */
export function pointAligned(texts: readonly string[]): readonly string[] {
  const halves = texts.map(atPoint)
  const before = Math.max(0, ...halves.map((half) => [...half.before].length))
  const after = Math.max(0, ...halves.map((half) => [...half.after].length))
  return halves.map((half) => spaces(before - [...half.before].length) + half.before + half.after + spaces(after - [...half.after].length))
}

const spaces = (count: number): string => " ".repeat(Math.max(0, count))
