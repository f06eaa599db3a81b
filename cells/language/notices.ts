// Every notice the language itself can give: about clauses, expressions and predictors, whatever kind of cell they stand in. Each is a
// slip with a stable code; `slip.ts` makes it a notice of its clause.

import type { Place } from "../../runtime/notice.ts"
import type { Token } from "../../runtime/statement.ts"
import { type FunctionWords, functions } from "./functions.ts"
import type { Put, Slip } from "./slip.ts"
import { placeAt, type Source } from "./source.ts"

/** A list in words: `a`, `a and b`, `a, b or c`. */
export const listed = (words: readonly string[], last: "and" | "or"): string =>
  words.length <= 1 ? (words[0] ?? "") : `${words.slice(0, -1).join(", ")} ${last} ${words.at(-1)}`

// Clauses and the heading.

export const unknownClause = (at: Place, kind: string, keyword: string, near: string | null, known: readonly string[]): Slip =>
  fault(
    "clause/unknown",
    at,
    `A ${kind} has no clause ${keyword}.`,
    near !== null
      ? `The nearest of its clauses is ${near}.`
      : known.length === 0
        ? `A ${kind} is said on its heading line alone.`
        : `Its clauses are ${listed(known, "and")}.`,
  )

export const clauseTwice = (at: Place, keyword: string): Slip =>
  fault(
    "clause/twice",
    at,
    `The clause ${keyword} stands here a second time.`,
    "Only one can hold: keep the one that is meant, and take the other away.",
  )

export const notAvailableYet = (at: Place, what: string): Slip =>
  fault(
    "clause/not-available-yet",
    at,
    `${what.slice(0, 1).toUpperCase()}${what.slice(1)} is not available yet.`,
    "It belongs to the language and comes with a later version; until then this cell needs to do without it.",
  )

/** `after` is the token before the place, `found` that at it; null for the keyword and for the end of the clause. */
export const unexpected = (
  at: Place,
  keyword: string,
  after: Token | null,
  found: Token | null,
  expected: readonly string[],
  written: readonly string[],
): Slip => {
  const text =
    found === null
      ? `The clause ${keyword} ends too soon${after === null ? "" : `, after ${quoted(after)}`}.`
      : `After ${after === null ? keyword : quoted(after)}, ${quoted(found)} does not fit.`
  const hint = `What fits here is ${listed(expected, "or")}; the clause is written ${listed(written.slice(0, 3), "or")}.`
  return fault("clause/unexpected", at, text, hint)
}

export const nearWord = (slip: Slip, at: Place, word: string): Slip => ({
  ...slip,
  hint: `The nearest word that fits here is ${word}.`,
  mend: { label: `Write ${word}`, puts: [{ from: at.from, to: at.from + 1, text: word }] },
})

export const nameMissing = (kind: string): Slip =>
  fault(
    "heading/name-missing",
    { clause: -1, from: 0, to: 0 },
    `A ${kind} cell needs a name, by which other cells use it.`,
    `The name follows the word ${kind}: it starts with a letter, then come letters, digits or _.`,
  )

export const moreInHeading = (at: Place, found: string, kind: string): Slip =>
  fault(
    "heading/more",
    at,
    `The heading ends with the name, but ${found} follows.`,
    `What a ${kind} cell says stands in clauses, each on a line of its own below the heading.`,
  )

export const reservedName = (at: Place, name: string, where: "heading" | "name" | "expression" | "predictor"): Slip =>
  fault(
    "name/reserved",
    at,
    `${name} is a word of the language, so nothing can be called that.`,
    where === "heading"
      ? "Another name is needed; with a letter more it would do."
      : where === "name"
        ? `A column the file heads ${name} is given another name on reading: column NAME headed "${name}".`
        : (reservedHints[name] ?? "The name of a column or of another cell belongs here."),
  )

// Tokens that never fit.

/** One character that is no token of the language. `puts` mends all of them in the clause at once, where that is sure. */
export const strayCharacter = (at: Place, character: string, puts: readonly Put[] | null, predictor: boolean): Slip => {
  const code = (character.codePointAt(0) ?? 0).toString(16).toUpperCase().padStart(4, "0")
  const hint = (predictor ? predictorHints[character] : undefined) ?? strayHints[character] ?? "It may stand in a text or a comment only."
  return fault(
    "clause/stray-character",
    at,
    `The character ${character} (U+${code}) has no meaning here.`,
    hint,
    puts === null ? null : { label: "Write it with the signs of the language", puts },
  )
}

export const openText = (at: Place, text: string): Slip =>
  fault(
    "clause/open-text",
    at,
    "A text begins here and is not closed before the end of its line.",
    'A text ends with " on the line it begins on; a longer one goes on as another text on the next line.',
    {
      label: 'Close the text with "',
      puts: [{ from: at.from, to: at.to, text: `${text.trimEnd().replace(/(^|[^\\])((?:\\\\)*)\\$/, "$1$2")}"` }],
    },
  )

export const unknownEscape = (at: Place, text: string): Slip => {
  const mended = text.replace(/\\(["\\])|\\/g, (whole, escaped: string | undefined) => (escaped === undefined ? "\\\\" : whole))
  return fault(
    "text/escape",
    at,
    'In this text a backslash stands before something other than " or \\.',
    "A backslash itself is written \\\\.",
    {
      label: "Double the backslash",
      puts: [{ from: at.from, to: at.to, text: mended }],
    },
  )
}

export const fractionWithoutDigit = (at: Place, written: string, right: string): Slip =>
  fault("number/fraction", at, `The number ${written} lacks a digit beside its point.`, `It is written ${right}.`, {
    label: `Write ${right}`,
    puts: [{ from: at.from, to: at.to, text: right }],
  })

export const hugeNumber = (at: Place, text: string): Slip =>
  fault("number/too-large", at, `The number ${text} is beyond what a computer's number can hold.`, "The largest is about 1.797e308.")

// Expressions.

/** The first place at which the tokens of `source` stop being an expression: the slip that says so best. */
export function brokenPlace(source: Source, index: number): Slip {
  const token = source.tokens[index]
  const before = source.tokens[index - 1]
  const next = source.tokens[index + 1]
  const at = placeAt(source, index)
  const here = source.first + index
  if (token === undefined) return endsTooSoon(source, at, before)

  const number = numberSlipAt(source, index)
  if (number !== null) return number
  const pair = foreignSigns.find(({ tokens }) => {
    const [first, second] = tokens
    return second === undefined
      ? first === token.text
      : (first === token.text && second === next?.text && next.from === token.to) ||
          (first === before?.text && second === token.text && before.to === token.from)
  })
  if (pair !== undefined) {
    const from = pair.tokens.length === 1 || pair.tokens[0] === token.text ? here : here - 1
    const doubled = pair.tokens.length === 2 && pair.tokens[0] === pair.tokens[1] && before?.text === token.text
    const start = doubled ? here - 1 : from
    const place: Place = { clause: source.clause, from: start, to: start + pair.tokens.length }
    return fault(
      "expression/foreign-sign",
      place,
      `${pair.tokens.join("")} is no sign of the language.`,
      `It is written ${pair.write} here.`,
      {
        label: `Write ${pair.write}`,
        puts: [{ from: place.from, to: place.to, text: pair.write }],
      },
    )
  }
  if (comparisons.has(token.text) && !wantsValue(before)) {
    const chain = chainedComparison(source, index)
    if (chain !== null) return chain
  }
  // The parser gives up on some hundred signs from left to right once they cover this many characters, where the next token would fit.
  const isSign = joining.has(token.text)
  const isValue = !isSign && (token.type === "word" || token.type === "number" || token.type === "text")
  if (source.text.length > 2_000 && (wantsValue(before) ? isValue : isSign))
    return fault(
      "expression/too-long",
      at,
      "This expression has too many signs in a row to be read in one piece.",
      "Made in steps, each with a name of its own, it will do.",
    )
  if (token.text === "in" || before?.text === "in") {
    return fault("expression/list", at, `After in stands a list in brackets, not ${quoted(token)}.`, 'It is written x in ("a", "b").')
  }
  if (token.text === ".")
    return fault(
      "expression/point",
      at,
      "A point joins terms of a predictor; an expression has none.",
      "A product is written with *, a decimal with a digit on both sides of the point.",
    )
  if (before?.type === "number" && token.type === "word" && before.to === token.from)
    return fault(
      "expression/product-sign",
      at,
      `Between ${before.text} and ${token.text} a sign is missing.`,
      `A product is written ${before.text}*${token.text}.`,
      {
        label: `Write ${before.text}*${token.text}`,
        puts: [{ from: here - 1, to: here + 1, text: `${before.text}*${token.text}` }],
      },
    )
  if (before?.type === "word" && functions.has(before.text) && token.text !== "(")
    return fault(
      "expression/call-brackets",
      at,
      `${before.text} is a function, and what it takes stands in brackets.`,
      `It is written ${functions.get(before.text)?.form}.`,
    )
  return fault(
    "expression/unexpected",
    at,
    before === undefined ? `An expression cannot begin with ${quoted(token)}.` : `After ${quoted(before)}, ${quoted(token)} does not fit.`,
    wantsValue(before)
      ? "A value belongs here: a number, a name, a call or brackets."
      : openBracket(source, index) !== null
        ? "A sign such as + or *, a comma or a closing bracket belongs here."
        : "A sign such as + or * belongs here, or nothing.",
  )
}

export const comparedWithMissing = (at: Place, sign: string, other: string): Slip => {
  const says = sign === "=" ? `not known(${other})` : `known(${other})`
  return fault(
    "expression/compared-with-missing",
    at,
    "A comparison with missing is itself missing, never true.",
    `Whether ${other} is there is asked by known(${other}).`,
    sign === "=" || sign === "!=" ? { label: `Write ${says}`, puts: [{ from: at.from, to: at.to, text: says }] } : null,
  )
}

export const unknownFunction = (at: Place, name: string, near: string | null, ofModels: boolean): Slip =>
  fault(
    "expression/unknown-function",
    at,
    ofModels ? `${name} reads a number of a model, which only a value can.` : `There is no function ${name}.`,
    ofModels
      ? `A cell value NAME = ${name}(…) gives it a name that can stand here.`
      : near === null
        ? "The functions are in the help of expressions; brackets after a name always make a call."
        : `The nearest is ${near}.`,
    near === null || ofModels ? null : { label: `Write ${near}`, puts: [{ from: at.from, to: at.to, text: near }] },
  )

export const argumentsOff = (at: Place, name: string, words: FunctionWords, given: number): Slip =>
  fault(
    "expression/arguments",
    at,
    `${name} takes ${words.least === words.most ? words.least : given < words.least ? `at least ${words.least}` : `at most ${words.most}`} ${
      (given < words.least ? words.least : words.most) === 1 ? "argument" : "arguments"
    }, but ${given === 0 ? "none is" : given === 1 ? "1 is" : `${given} are`} given.`,
    `It is written ${words.form}: ${words.says}.`,
  )

export const deepExpression = (at: Place, depth: number): Slip =>
  fault(
    "expression/too-deep",
    at,
    `This expression has more than ${depth} parts within one another.`,
    "Made in steps, each with a name of its own, it will do.",
  )

export const longExpression = (at: Place, most: number): Slip =>
  fault(
    "expression/too-long",
    at,
    `This is too long to be read in one piece: it has more than ${most} words and signs.`,
    "Made in steps, each with a name of its own, it will do.",
  )

// Predictors.

export const brokenPredictor = (source: Source, index: number, insideCall: string | null): Slip => {
  const token = source.tokens[index]
  const before = source.tokens[index - 1]
  const at = placeAt(source, index)
  if (token === undefined) return endsTooSoon(source, at, before)
  const here = source.first + index
  if (insideCall !== null && token.text !== ",")
    return fault(
      "predictor/arithmetic",
      at,
      `Inside ${insideCall}(…) stands one column, then settings; ${quoted(token)} does not fit.`,
      "Other arithmetic is made into a column first, with make in the data cell.",
    )
  if (token.type === "number" || token.type === "percent")
    return fault(
      "predictor/number",
      at,
      `A number is no term: ${token.text} does not fit in a predictor.`,
      "The constant is the term intercept, there unless taken away with - intercept.",
      token.text === "1" ? { label: "Write intercept", puts: [{ from: here, to: here + 1, text: "intercept" }] } : null,
    )
  const hint = predictorHints[token.text]
  if (hint !== undefined) return fault("predictor/sign", at, `The sign ${token.text} has no meaning in a predictor.`, hint)
  return fault(
    "predictor/unexpected",
    at,
    before === undefined ? `A predictor cannot begin with ${quoted(token)}.` : `After ${quoted(before)}, ${quoted(token)} does not fit.`,
    wantsValue(before) || before?.text === "."
      ? "A term belongs here: a column, a call such as log(x), or brackets."
      : "A sign that joins terms belongs here: + - * / or a point.",
  )
}

export const unknownMaker = (at: Place, name: string, near: string | null, makers: readonly string[], isFunction: boolean): Slip =>
  fault(
    "predictor/unknown-call",
    at,
    `A predictor has no call ${name}.`,
    isFunction
      ? `A column ${name}(…) is made first, with make in the data cell.`
      : near === null
        ? `Its calls are ${listed(makers, "and")}; other columns are made with make in the data cell.`
        : `The nearest is ${near}.`,
    near === null || isFunction ? null : { label: `Write ${near}`, puts: [{ from: at.from, to: at.to, text: near }] },
  )

export const settingOff = (at: Place, name: string, form: string, mend: Slip["mend"]): Slip =>
  fault("predictor/setting", at, `The call ${name} is not written so.`, `It is written ${form}.`, mend)

export const interceptInside = (at: Place): Slip =>
  fault(
    "predictor/intercept-inside",
    at,
    "The constant cannot be joined to another term.",
    "The term intercept is added with + or taken away with - only.",
  )

export const nothingTakenAway = (at: Place, term: string): Slip => ({
  ...fault(
    "predictor/nothing-to-take-away",
    at,
    `There is no term ${term} to the left that could be taken away.`,
    "A term is taken away as it stands when brackets, * and / are written out.",
  ),
  level: "warning",
})

export const tooManyTerms = (at: Place, most: number): Slip =>
  fault(
    "predictor/too-many-terms",
    at,
    `Written out, this predictor has more than ${most} terms.`,
    "Each * doubles their number; a point or + in its place makes fewer.",
  )

// Shared below.

const fault = (code: string, at: Place, text: string, hint: string | null, mend: Slip["mend"] = null): Slip => ({
  level: "fault",
  code,
  at,
  text,
  hint,
  mend,
})

/** A token as it stands in a sentence: a sign by name, since `after 1, , does not fit` is hard to read. */
const quoted = (token: Token): string =>
  token.type === "text"
    ? `the text ${token.text}`
    : token.type === "symbol"
      ? (signNames[token.text] ?? `the sign ${token.text}`)
      : token.text

const signNames: Readonly<Record<string, string>> = {
  ",": "the comma",
  ".": "the point",
  "(": "the opening bracket",
  ")": "the closing bracket",
}

const reservedHints: Readonly<Record<string, string>> = {
  mu: "mu stands for the mean in a link and in quasi_likelihood(…) only.",
  eta: "eta stands for the linear predictor in a link only.",
  intercept: 'The constant is a term of a predictor; its number is read by coefficient(M, "intercept") in a value.',
  infinity: "infinity is an end of a range; an expression has none.",
  estimate: "estimate stands for a parameter of a link or a family only.",
}

const strayHints: Readonly<Record<string, string>> = {
  "−": "Minus is the hyphen of the keyboard, -.",
  "–": "Minus is the hyphen of the keyboard, -.",
  "—": "Minus is the hyphen of the keyboard, -.",
  "×": "A product is written with *.",
  "·": "A product is written with *, an interaction of terms with a point.",
  "∙": "A product is written with *, an interaction of terms with a point.",
  "÷": "A quotient is written with /.",
  "≤": "It is written <=.",
  "≥": "It is written >=.",
  "≠": "It is written !=.",
  "²": "A square is written ^2.",
  "³": "A cube is written ^3.",
  "∞": "It is written infinity.",
  "√": "It is written square_root(x).",
  "“": 'A text stands between two straight quotes, ".',
  "”": 'A text stands between two straight quotes, ".',
  "„": 'A text stands between two straight quotes, ".',
  "‘": 'A text stands between two straight quotes, ".',
  "’": 'A text stands between two straight quotes, ".',
  "'": 'A text stands between two straight quotes, ".',
  "`": 'A text stands between two straight quotes, "; a name needs none.',
  ";": "Each clause takes a line of its own, and commas part what is listed.",
  "&": "Both conditions at once is written and.",
  "!": "It is written not, or != between two values.",
  "%": "A percentage is written without a space, as in 95%; what is left of a division is mod(x, m).",
  "[": "Brackets are round: ( and ).",
  "]": "Brackets are round: ( and ).",
  "~": "The language has no such sign; what depends on what is said by clauses.",
  ":": "The language has no such sign; a range is written from A to B.",
  "\\": "A backslash stands in texts only.",
}

const predictorHints: Readonly<Record<string, string>> = {
  "~": "The response has a clause of its own; the predictor says the terms only.",
  ":": "An interaction is written with a point, A.B.",
  "^": "A power is written power(x, 2), and terms with all interactions A*B*C.",
  "|": "Random effects are not part of the language; a category enters as a term like any other.",
  "=": "Terms are only named here; a new column is made with make in the data cell.",
}

/** Pairs of tokens (or one) that mean something elsewhere, with what they are called here. */
const foreignSigns: readonly { readonly tokens: readonly [string, string?]; readonly write: string }[] = [
  { tokens: ["=", "="], write: "=" },
  { tokens: ["!=", "="], write: "!=" },
  { tokens: ["<", ">"], write: "!=" },
  { tokens: ["=", ">"], write: ">=" },
  { tokens: ["=", "<"], write: "<=" },
  { tokens: ["*", "*"], write: "^" },
  { tokens: ["|", "|"], write: "or" },
  { tokens: ["|"], write: "or" },
]

const joining: ReadonlySet<string> = new Set(["+", "-", "*", "/", "^", "and", "or"])

const comparisons: ReadonlySet<string> = new Set(["=", "!=", "<", "<=", ">", ">="])

/** What is wrong with a number at this token: `.5` and `1.`, a decimal comma, a blank between its digits; null where nothing is. */
export function numberSlipAt(source: Source, index: number): Slip | null {
  const token = source.tokens[index]
  const before = source.tokens[index - 1]
  const after = source.tokens[index + 1]
  const here = source.first + index
  if (token?.text === "," && before?.type === "number" && after?.type === "number" && before.to === token.from && token.to === after.from) {
    const right = `${before.text}.${after.text}`
    const place = { clause: source.clause, from: here - 1, to: here + 2 }
    return fault(
      "number/decimal-comma",
      place,
      `The number ${before.text},${after.text} is written with a comma.`,
      `It is written ${right}.`,
      {
        label: `Write ${right}`,
        puts: [{ from: place.from, to: place.to, text: right }],
      },
    )
  }
  if (token?.type === "number" && before?.type === "number" && /^\d{3}$/.test(token.text) && /^\d{1,3}$/.test(before.text)) {
    const right = before.text + token.text
    const place = { clause: source.clause, from: here - 1, to: here + 1 }
    return fault(
      "number/blank",
      place,
      `The number ${before.text} ${token.text} has a blank between its digits.`,
      `It is written ${right}.`,
      {
        label: `Write ${right}`,
        puts: [{ from: place.from, to: place.to, text: right }],
      },
    )
  }
  return fractionAt(source, index)
}

/** A point that lacks a digit on one side, where the place is about it. */
function fractionAt(source: Source, index: number): Slip | null {
  const point = source.tokens[index]
  if (point?.text !== ".") return null
  const before = source.tokens[index - 1]
  const after = source.tokens[index + 1]
  const here = source.first + index
  if (after?.type === "number" && after.from === point.to && !(before?.to === point.from && before.type === "word"))
    return fractionWithoutDigit({ clause: source.clause, from: here, to: here + 2 }, `.${after.text}`, `0.${after.text}`)
  if (before?.type === "number" && before.to === point.from)
    return fractionWithoutDigit({ clause: source.clause, from: here - 1, to: here + 1 }, `${before.text}.`, before.text)
  return null
}

const endsTooSoon = (source: Source, at: Place, before: Token | undefined): Slip => {
  const open = openBracket(source, source.tokens.length)
  if (before === undefined) return fault("expression/empty", at, "Nothing is said here yet.", "An expression or a term belongs here.")
  if (wantsValue(before) || before.text === ".")
    return fault("expression/ends-too-soon", at, `After ${quoted(before)} something is missing.`, "A value or a name belongs after it.")
  if (open !== null) {
    const token = source.tokens[open]
    const text = `The bracket opened ${open > 0 && source.tokens[open - 1]?.type === "word" ? `after ${source.tokens[open - 1]?.text}` : "here"} is not closed.`
    const place = placeAt(source, open)
    return token === undefined
      ? fault("expression/open-bracket", at, text, "A closing bracket belongs at the end.")
      : fault("expression/open-bracket", place, text, "A closing bracket ) is missing.", {
          label: "Close the bracket at the end",
          puts: [{ from: source.first + source.tokens.length - 1, to: source.first + source.tokens.length, text: `${before.text})` }],
        })
  }
  return fault("expression/ends-too-soon", at, `After ${quoted(before)} something is missing.`, "A value or a name belongs after it.")
}

/** Which token before `end` opens a bracket that is not closed before `end`; the innermost, null where there is none. */
function openBracket(source: Source, end: number): number | null {
  const open: number[] = []
  for (let k = 0; k < end; k++) {
    const text = source.tokens[k]?.text
    if (text === "(") open.push(k)
    else if (text === ")") open.pop()
  }
  return open.at(-1) ?? null
}

const wantsValue = (before: Token | undefined): boolean =>
  before === undefined ||
  (before.type === "symbol" && before.text !== ")" && before.text !== ".") ||
  ["and", "or", "not", "in"].includes(before.text)

/** `a < b < c`: the second comparison, with what it would be as two; null where the first is not in the same brackets. */
function chainedComparison(source: Source, index: number): Slip | null {
  let depth = 0
  let first = -1
  let start = 0
  for (let k = index - 1; k >= 0; k--) {
    const token = source.tokens[k]
    if (token === undefined) break
    if (token.text === ")") depth++
    else if (token.text === "(") {
      depth--
      if (depth < 0) {
        start = k + 1
        break
      }
    } else if (depth === 0 && first < 0 && comparisons.has(token.text)) first = k
    else if (depth === 0 && (token.text === "," || token.text === "and" || token.text === "or" || token.text === "not")) {
      start = k + 1
      break
    }
  }
  if (first < start || first < 0) return null
  const words = (from: number, to: number): string =>
    source.tokens
      .slice(from, to)
      .map((token, k, all) => (k > 0 && token.from > (all[k - 1]?.to ?? 0) ? ` ${token.text}` : token.text))
      .join("")
  const middle = words(first + 1, index)
  const sign = source.tokens[index]?.text ?? ""
  const here = source.first + index
  return fault(
    "expression/comparison-chain",
    { clause: source.clause, from: here, to: here + 1 },
    "A comparison compares two values, not three.",
    `As two it is written ${words(start, index)} and ${middle} ${sign} ….`,
    { label: "Write it as two comparisons", puts: [{ from: here, to: here + 1, text: `and ${middle} ${sign}` }] },
  )
}
