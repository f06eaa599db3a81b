// Tokens that a grammar cannot say by itself: words of any script, and the line feeds that part clauses. One factory for all three
// grammars (the numbers of the terms differ in each), so that a name is the same thing in a heading, an expression and a predictor.

import { ExternalTokenizer, type InputStream } from "@lezer/lr"

const lineFeed = 10

/** A name: a letter of any script or `_`, then letters, marks, digits, `_`, read by code point. */
export const words = (Word: number): ExternalTokenizer =>
  new ExternalTokenizer((input) => {
    const length = wordLength(input, 0)
    if (length > 0) input.acceptToken(Word, length)
  })

/**
 * A line feed: `Break` where the next line begins a clause, that is, where its first token is a word other than `and` and `or`;
 * else `Continue`. A blank line and a line of comment continue too, so each line feed needs to look at one line only.
 */
export const breaks = (Break: number, Continue: number): ExternalTokenizer =>
  new ExternalTokenizer((input) => {
    if (input.next !== lineFeed) return
    let at = 1
    while (isBlank(input.peek(at))) at++
    const length = wordLength(input, at)
    input.acceptToken(length > 0 && !joins(input, at, length) ? Break : Continue, 1)
  })

/** All that is left of the text from a line feed on: the body of a note. */
export const prose = (Prose: number): ExternalTokenizer =>
  new ExternalTokenizer(
    (input) => {
      if (input.next !== lineFeed) return
      while (input.next >= 0) input.advance()
      input.acceptToken(Prose)
    },
    { contextual: true },
  )

/** Whatever no other token takes, one character at a time; half a character too, so that no text at all is an error of the grammar. */
export const strays = (Stray: number): ExternalTokenizer =>
  new ExternalTokenizer((input) => {
    if (input.next >= 0 && input.next !== lineFeed) input.acceptToken(Stray, codePoint(input, 0) > 0xffff ? 2 : 1)
  })

/** Whether `text` is a name as a whole. */
export const isWord = (text: string): boolean => /^[\p{L}_][\p{L}\p{M}\p{Nd}_]*$/u.test(text)

/** Words that can name nothing, wherever they stand. */
export const reserved: ReadonlySet<string> = new Set([
  "true",
  "false",
  "missing",
  "infinity",
  "estimate",
  "and",
  "or",
  "not",
  "in",
  "mu",
  "eta",
  "intercept",
  "pi",
])

/** The blanks of `space` in the grammars: blank, tab, carriage return, byte-order mark, no-break space. */
const isBlank = (code: number): boolean => code === 32 || code === 9 || code === 13 || code === 0xfeff || code === 0xa0

const wordStart = /[\p{L}_]/u
const wordPart = /[\p{L}\p{M}\p{Nd}_]/u

const isStart = (code: number): boolean =>
  code < 128 ? (code >= 97 && code <= 122) || (code >= 65 && code <= 90) || code === 95 : wordStart.test(String.fromCodePoint(code))

const isPart = (code: number): boolean =>
  code < 128 ? isStart(code) || (code >= 48 && code <= 57) : wordPart.test(String.fromCodePoint(code))

/** How many UTF-16 units the word at `at` has; 0 where none begins. */
function wordLength(input: InputStream, at: number): number {
  let length = 0
  for (;;) {
    const code = codePoint(input, at + length)
    if (code < 0 || !(length === 0 ? isStart(code) : isPart(code))) return length
    length += code > 0xffff ? 2 : 1
  }
}

/** The grammar reads UTF-16 units, so the two halves of a character are joined here. A half alone is no letter. */
function codePoint(input: InputStream, at: number): number {
  const first = input.peek(at)
  if (first < 0xd800 || first > 0xdbff) return first
  const second = input.peek(at + 1)
  return second >= 0xdc00 && second <= 0xdfff ? (first - 0xd800) * 0x400 + (second - 0xdc00) + 0x10000 : first
}

/** Whether the word is `and` or `or`, which join a line to the one above. */
function joins(input: InputStream, at: number, length: number): boolean {
  if (length !== 2 && length !== 3) return false
  let word = ""
  for (let k = 0; k < length; k++) word += String.fromCharCode(input.peek(at + k))
  return word === "and" || word === "or"
}
