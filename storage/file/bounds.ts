// The bounds of reading: what a notebook file may hold at most. They keep a file made to do harm from filling the memory, and they are
// part of the format, so writing keeps to them too.

const MiB = 1024 * 1024

/** Cells of one notebook. */
export const mostCells = 10_000
/** The text of one cell, in bytes of UTF-8. */
export const mostTextBytes = MiB
/** One line of the file, without its line feed, in bytes. */
export const mostLineBytes = 8 * MiB
/** Objects and arrays inside one another, the record itself being the first. */
export const mostNesting = 32
/** The bytes of one enclosure. */
export const mostEnclosureBytes = 512 * MiB
/** The bytes of an enclosure that one `bytes` record carries, before they are encoded. */
export const mostChunkBytes = MiB

/** How many bytes of UTF-8 a text takes; unpaired surrogates count as the three bytes of their replacement. */
export function textBytes(text: string): number {
  let bytes = text.length
  for (let i = 0; i < text.length; i += 1) {
    const unit = text.charCodeAt(i)
    if (unit > 0x7f) bytes += 1
    if (unit > 0x7ff) bytes += 1
    // A pair is two units and four bytes: three for the first, one for the second, which is passed over here.
    if (unit >= 0xd800 && unit < 0xdc00 && isLowSurrogate(text.charCodeAt(i + 1))) i += 1
  }
  return bytes
}

/**
 * How deep the objects and arrays of a JSON text lie in one another, found without parsing it, so that a text made to exhaust a parser is
 * refused before one sees it. Stops counting one past the bound.
 */
export function nesting(json: string): number {
  let depth = 0
  let deepest = 0
  for (let i = 0; i < json.length; i += 1) {
    const unit = json.charCodeAt(i)
    if (unit === quote) i = endOfString(json, i)
    else if (unit === openBracket || unit === openBrace) {
      depth += 1
      if (depth > deepest) deepest = depth
      if (deepest > mostNesting) return deepest
    } else if (unit === closeBracket || unit === closeBrace) depth -= 1
  }
  return deepest
}

const quote = 0x22
const backslash = 0x5c
const openBracket = 0x5b
const closeBracket = 0x5d
const openBrace = 0x7b
const closeBrace = 0x7d

const isLowSurrogate = (unit: number): boolean => unit >= 0xdc00 && unit < 0xe000

/** The place of the quote that closes the string opened at `from`, or the end of the text where none does. */
function endOfString(json: string, from: number): number {
  let end = json.indexOf('"', from + 1)
  while (end !== -1) {
    let before = end - 1
    while (json.charCodeAt(before) === backslash) before -= 1
    // An even number of backslashes before the quote escape one another.
    if ((end - before) % 2 === 1) return end
    end = json.indexOf('"', end + 1)
  }
  return json.length
}
