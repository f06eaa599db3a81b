// Marks in the text of a note: `{NAME}` or `{EXPR; 3}`, found outside of code. Everything else in braces is text, and so is `\{`. The rest
// of CommonMark is not looked at: a mark stands on one line, so nothing that spans lines can cut it.

import { read, type Token } from "../../runtime/statement.ts"
import type { Expression } from "../language/expression.ts"
import { expressionFrom } from "../language/expression-tree.ts"

export type Mark = {
  /** UTF-16 places in the body, braces included. */
  readonly from: number
  readonly to: number
  readonly expression: Expression
  /** Significant digits, where they are said. */
  readonly digits: number | null
}

export type Marks = {
  readonly marks: readonly Mark[]
  /** Braces whose content almost reads as an expression: more than one token, and none that only text has. */
  readonly odd: readonly { readonly from: number; readonly to: number; readonly why: string }[]
}

/** More digits than a double has are noise. */
const mostDigits = 17

export function marksIn(body: string): Marks {
  const marks: Mark[] = []
  const odd: { from: number; to: number; why: string }[] = []
  let at = 0
  let fence: string | null = null
  let blankBefore = true
  for (const line of body.split("\n")) {
    const opening = /^ {0,3}(`{3,}|~{3,})/.exec(line)?.[1] ?? null
    if (fence !== null) {
      if (opening?.startsWith(fence) === true && line.trim() === opening) fence = null
    } else if (opening !== null) {
      fence = opening
    } else if (!(blankBefore && /^( {4}|\t)/.test(line))) {
      inLine(body, at, at + line.length, marks, odd)
    }
    blankBefore = line.trim() === ""
    at += line.length + 1
  }
  return { marks, odd }
}

function inLine(body: string, start: number, end: number, marks: Mark[], odd: { from: number; to: number; why: string }[]): void {
  let at = start
  while (at < end) {
    const sign = body[at]
    if (sign === "\\") {
      at += 2
    } else if (sign === "`") {
      at = afterCode(body, at)
    } else if (sign === "{") {
      const close = closing(body, at + 1, end)
      if (close === null) return
      const found = markFrom(body.slice(at + 1, close), at, close + 1)
      if (found !== null && "why" in found) odd.push(found)
      else if (found !== null) marks.push(found)
      at = close + 1
    } else {
      at++
    }
  }
}

/** Past the code span that begins here, or past its backticks where it never ends. A span may go on over lines. */
function afterCode(body: string, at: number): number {
  const ticks = /^`+/.exec(body.slice(at))?.[0] ?? "`"
  const rest = body.slice(at + ticks.length)
  const close = new RegExp(`(?<!\`)\`{${ticks.length}}(?!\`)`).exec(rest)
  return close === null ? at + ticks.length : at + ticks.length + close.index + ticks.length
}

/** The brace that closes, outside of texts in double quotes. */
function closing(body: string, from: number, end: number): number | null {
  let quoted = false
  for (let at = from; at < end; at++) {
    const sign = body[at]
    if (quoted && sign === "\\") at++
    else if (sign === '"') quoted = !quoted
    else if (sign === "}" && !quoted) return at
    else if (sign === "{" && !quoted) return null
  }
  return null
}

function markFrom(
  content: string,
  from: number,
  to: number,
): Mark | { readonly from: number; readonly to: number; readonly why: string } | null {
  const parted = /^(.*?)(?:;\s*(\d{1,3})\s*)?$/u.exec(content)
  const says = parted?.[1] ?? content
  const digits = parted?.[2] === undefined ? null : Number(parted[2])
  const tokens = tokensOf(says)
  if (tokens.length === 0 || says.includes("#")) return null
  const { expression, slips } = expressionFrom(tokens, 0, 0, new Set(["models"]))
  if (expression !== null && (digits === null || (digits >= 1 && digits <= mostDigits))) return { from, to, expression, digits }
  const readable = tokens.every(({ type }) => type !== "stray" && type !== "open-text")
  const why = expression === null ? (slips[0]?.text ?? "") : `A number has 1 to ${mostDigits} digits here.`
  return readable && (tokens.length > 1 || expression !== null) ? { from, to, why } : null
}

/** The tokens of an expression that stands by itself. */
const tokensOf = (text: string): readonly Token[] => read(`value v = ${text}`).rest.slice(1)
