// Forms: the pattern of each clause, as data, and the one function that reads a clause by them. A form is words and slots, such as
// `NAME:successes out of NAME:trials`; a slot is `TYPE:label`. Forms are tried in order and the whole clause must fit; a fault
// stands at the farthest token reached. They are also the source of completion and help.
//
//     NAME a column · CELL another cell · ID a new name · TEXT · NUMBER signed number or percent · BOUND signed number, ±infinity, a cell's
//     name (`BOUND+estimate`: or `estimate`) · CHOICE a text, a truth or BOUND · CALL a word with or without (…) · EXPR to the end of the
//     clause (`EXPR+mu`, `EXPR+eta`, `EXPR+models`: with more that it may hold) · TERMS to the end of the clause · `one|other:label` one of
//     these words · ( )? optional · { }, a comma list

import type { AnyWords, ClauseWords } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Clause, Statement, Token } from "../../runtime/statement.ts"
import { reserved } from "../../runtime/tokens.ts"
import type { Name } from "../../runtime/value.ts"
import type { Expression } from "./expression.ts"
import { type Allowed, expressionFrom, numberFrom, textFrom } from "./expression-tree.ts"
import { type Item, parsedForms, writtenForms } from "./form-pattern.ts"
import {
  clauseTwice,
  hugeNumber,
  moreInHeading,
  nameMissing,
  nearWord,
  notAvailableYet,
  numberSlipAt,
  openText,
  reservedName,
  unexpected,
  unknownClause,
  unknownEscape,
} from "./notices.ts"
import { type Terms, termsFrom } from "./predictor.ts"
import { noticeFrom, type Slip } from "./slip.ts"
import { sourceOf } from "./source.ts"
import { strayIn } from "./stray.ts"

export type Bound =
  | { readonly type: "number"; readonly value: number; readonly text: string }
  | { readonly type: "infinity"; readonly sign: 1 | -1 }
  | { readonly type: "cell"; readonly name: Name; readonly at: Place }
  | { readonly type: "estimate" }

export type Choice = Bound | { readonly type: "text"; readonly text: string } | { readonly type: "truth"; readonly value: boolean }

/** A word with or without arguments: `power(a)`, `stukel(0, dial)`; `quasi_likelihood(EXPR)` keeps its argument as an expression. */
export type Call = { readonly name: string; readonly bounds: readonly Bound[] | null; readonly expression: Expression | null }

/** What stands in one slot. */
export type Filled = { readonly at: Place } & (
  | { readonly type: "NAME" | "CELL" | "ID"; readonly name: Name }
  | { readonly type: "TEXT"; readonly text: string }
  | { readonly type: "NUMBER"; readonly value: number; readonly text: string }
  | { readonly type: "BOUND"; readonly bound: Bound }
  | { readonly type: "CHOICE"; readonly choice: Choice }
  | { readonly type: "CALL"; readonly call: Call }
  | { readonly type: "EXPR"; readonly expression: Expression }
  | { readonly type: "TERMS"; readonly terms: Terms }
)

/** One clause as read: which form fitted, and what stands in its slots, by label (a list where the slot is in `{ },`). */
export interface Matched {
  readonly keyword: string
  /** Which clause of the statement, for places. */
  readonly clause: number
  readonly form: number
  readonly slots: Readonly<Record<string, readonly Filled[]>>
  /** The words of the form that were there, for optional parts such as `( as csv )?`. */
  readonly words: readonly string[]
}

/** Reads one clause by its forms. `nth` counts the clauses with this keyword, for a mend. */
export function match(
  clause: Clause,
  index: number,
  words: ClauseWords,
  nth = 0,
): { readonly matched: Matched | null; readonly notices: readonly Notice[] } {
  const { matched, slips } = read(clause.keyword, clause.tokens, index, 1, words)
  return { matched, notices: slips.map((slip) => noticeFrom(slip, clause, nth)) }
}

/**
 * Reads all clauses of a statement by the words of its kind. Gives the faults every kind shares: an unknown clause (with the nearest
 * keyword and a mend), a clause said twice, a clause not available yet, tokens after the name in the heading, a missing name. What may
 * follow the name is said by `words.heading`; it comes as a clause with the start of the heading for a keyword and −1 for a place.
 */
export function readClauses(
  statement: Statement,
  words: AnyWords,
): { readonly clauses: readonly Matched[]; readonly notices: readonly Notice[] } {
  const clauses: Matched[] = []
  const notices: Notice[] = []
  const first = readHeading(statement, words)
  notices.push(...first.notices)
  if (first.matched !== null) clauses.push(first.matched)

  const counts = new Map<string, number>()
  statement.clauses.forEach((clause, index) => {
    const nth = counts.get(clause.keyword) ?? 0
    counts.set(clause.keyword, nth + 1)
    const at: Place = { clause: index, from: 0, to: 1 }
    const known = Object.hasOwn(words.clauses, clause.keyword) ? words.clauses[clause.keyword] : undefined
    if (known === undefined) {
      const near = nearest(clause.keyword, Object.keys(words.clauses))
      const notice = noticeFrom(unknownClause(at, words.word, clause.keyword, near, Object.keys(words.clauses)), clause, nth)
      const says = near === null ? "" : said(clause)
      const edits = near === null ? [] : [{ cell: null, clause: clause.keyword, nth, says, keyword: near }]
      notices.push(near === null ? notice : { ...notice, mend: { label: `Write ${near}`, edits } })
    } else if (known.later === true) {
      notices.push(noticeFrom(notAvailableYet(at, `the clause ${clause.keyword}`), clause, nth))
    } else if (nth > 0 && known.again !== true) {
      const edits = [{ cell: null, clause: clause.keyword, nth, says: null }]
      const notice = noticeFrom(clauseTwice(at, clause.keyword), clause, nth)
      notices.push({ ...notice, mend: { label: `Take this ${clause.keyword} away`, edits } })
    } else {
      const { matched, notices: found } = match(clause, index, known, nth)
      notices.push(...found)
      if (matched !== null) clauses.push(matched)
    }
  })
  return { clauses, notices }
}

/** The heading: a name where one is needed, and nothing after it but what the kind says. */
function readHeading(statement: Statement, words: AnyWords): { readonly matched: Matched | null; readonly notices: readonly Notice[] } {
  const { rest, name, heading } = statement
  const notices: Notice[] = []
  const first = heading.length - rest.length
  if (name === null && words.name === "needed" && rest.length === 0) notices.push(noticeFrom(nameMissing(words.word), null, 0))
  if (name !== null && reserved.has(name))
    notices.push(noticeFrom(reservedName({ clause: -1, from: first - 1, to: first }, name, "heading"), null, 0))
  if (words.heading !== undefined) {
    if (name === null && rest.length > 0) notices.push(noticeFrom(nameMissing(words.word), null, 0))
    const { matched, slips } = read(`${words.word} ${name ?? "NAME"}`, rest, -1, first, words.heading)
    return { matched, notices: [...notices, ...slips.map((slip) => noticeFrom(slip, null, 0))] }
  }
  const [more] = rest
  if (more !== undefined) {
    const at: Place = { clause: -1, from: first, to: first + 1 }
    if (name === null && words.name === "needed") notices.push(noticeFrom({ ...nameMissing(words.word), at }, null, 0))
    else notices.push(noticeFrom(moreInHeading(at, more.text, words.word), null, 0))
  }
  return { matched: null, notices }
}

/** What a clause says after its keyword, gaps as one blank. */
const said = (clause: Clause): string =>
  clause.tokens.map((token, k, all) => (k > 0 && token.from > (all[k - 1]?.to ?? 0) ? ` ${token.text}` : token.text)).join("")

/** Reads tokens by forms: of a clause or of the rest of a heading. `first` is the number of the first token, as in a Place. */
function read(
  keyword: string,
  tokens: readonly Token[],
  clause: number,
  first: number,
  words: ClauseWords,
): { readonly matched: Matched | null; readonly slips: readonly Slip[] } {
  const forms = parsedForms(words)
  const predictor = forms.some((form) => form.some((item) => item.type === "slot" && item.slot === "TERMS"))
  const never = openTextIn(tokens, clause, first) ?? strayIn(sourceOf(tokens, clause, first), predictor)
  if (never !== null) return { matched: null, slips: [never] }

  const matcher = new Matcher(tokens, clause, first)
  for (const [form, items] of forms.entries()) {
    const found = matcher.fitted(items, form)
    if (found === null) continue
    const inOrder: { readonly label: string; readonly filled: Filled }[] = []
    for (let slot = found.slots; slot !== null; slot = slot.before) inOrder.push(slot)
    const slots: Record<string, Filled[]> = {}
    for (const { label, filled } of inOrder.reverse()) {
      slots[label] ??= []
      slots[label]?.push(filled)
    }
    const said: string[] = []
    for (let word = found.words; word !== null; word = word.before) said.push(word.word)
    return { matched: { keyword, clause, form, slots, words: said.reverse() }, slips: matcher.warnings }
  }
  return { matched: null, slips: matcher.slips(keyword, writtenForms(keyword, words)) }
}

function openTextIn(tokens: readonly Token[], clause: number, first: number): Slip | null {
  const index = tokens.findIndex((token) => token.type === "open-text")
  const token = tokens[index]
  return token === undefined ? null : openText({ clause, from: first + index, to: first + index + 1 }, token.text)
}

/** How far the tokens fit so far. Slots and words are lists from the last back, so that a way that leads nowhere is simply left. */
interface Reached {
  readonly at: number
  readonly slots: { readonly label: string; readonly filled: Filled; readonly before: Reached["slots"] } | null
  readonly words: { readonly word: string; readonly before: Reached["words"] } | null
}

type Then = (state: Reached) => Reached | null

class Matcher {
  warnings: readonly Slip[] = []
  private readonly tokens: readonly Token[]
  private readonly clause: number
  private readonly first: number
  private farthest = 0
  private expected: string[] = []
  /** Words of the forms that would fit at the farthest token, for the nearest. */
  private fitting: string[] = []
  private inner: readonly Slip[] | null = null
  /** Which forms fit as far as the farthest token. */
  private reaching = new Set<number>()
  private form = 0

  constructor(tokens: readonly Token[], clause: number, first: number) {
    this.tokens = tokens
    this.clause = clause
    this.first = first
  }

  /** The way the tokens fit one form to their end; null where they do not. */
  fitted(items: readonly Item[], form: number): Reached | null {
    this.form = form
    return this.run(items, 0, { at: 0, slots: null, words: null }, (state) => this.ended(state))
  }

  private run(items: readonly Item[], index: number, state: Reached, then: Then): Reached | null {
    const item = items[index]
    if (item === undefined) return then(state)
    const next: Then = (reached) => this.run(items, index + 1, reached, then)
    switch (item.type) {
      case "word": {
        const token = this.tokens[state.at]
        if (token === undefined || textOf(token) !== item.word) return this.off(state.at, `"${item.word}"`, [item.word])
        return next({ ...state, at: state.at + 1, words: { word: item.word, before: state.words } })
      }
      case "optional":
        return this.run(item.of, 0, state, next) ?? next(state)
      case "list": {
        let reached: Reached | null = state
        for (;;) {
          reached = this.run(item.of, 0, reached, (end) => end)
          if (reached === null) return null
          if (this.tokens[reached.at]?.text !== ",") break
          reached = { ...reached, at: reached.at + 1 }
        }
        const end = reached.at
        return next(reached) ?? this.off(end, "a comma and another", [])
      }
      case "one-of": {
        const token = this.tokens[state.at]
        if (token === undefined || token.type !== "word" || !item.words.includes(textOf(token))) {
          for (const word of item.words) this.off(state.at, `"${word}"`, [word])
          return null
        }
        const filled: Filled = { type: "ID", name: textOf(token), at: this.place(state.at, state.at + 1) }
        return next({ ...state, at: state.at + 1, slots: { label: item.label, filled, before: state.slots } })
      }
      case "slot": {
        const read = this.slot(item, state.at)
        if (read === null) return null
        return next({ ...state, at: read.end, slots: { label: item.label, filled: read.filled, before: state.slots } })
      }
    }
  }

  slips(keyword: string, written: readonly string[]): readonly Slip[] {
    if (this.inner !== null) return this.inner
    const at = this.place(this.farthest, Math.min(this.farthest + 1, this.tokens.length))
    const found = this.tokens[this.farthest]
    const number = this.numberSlip()
    if (number !== null) return [number]
    const after = this.tokens[this.farthest - 1] ?? null
    const forms = written.filter((_, form) => this.reaching.has(form))
    const slip = unexpected(at, keyword, after, found ?? null, [...new Set(this.expected)], forms)
    const near = found?.type === "word" ? nearest(textOf(found), this.fitting) : null
    return [near === null ? slip : nearWord(slip, at, near)]
  }

  private ended(state: Reached): Reached | null {
    return state.at >= this.tokens.length ? state : this.off(state.at, "the end of the clause", [])
  }

  private slot(item: Extract<Item, { type: "slot" }>, at: number): { readonly filled: Filled; readonly end: number } | null {
    const token = this.tokens[at]
    switch (item.slot) {
      case "NAME":
      case "CELL":
      case "ID": {
        const description = item.slot === "NAME" ? "the name of a column" : item.slot === "CELL" ? "the name of a cell" : "a name"
        const name = this.name(at, description)
        return name === null ? null : { filled: { type: item.slot, name, at: this.place(at, at + 1) }, end: at + 1 }
      }
      case "TEXT": {
        const text = this.text(at)
        return text === null ? null : { filled: { type: "TEXT", text: text.text, at: this.place(at, text.end) }, end: text.end }
      }
      case "NUMBER": {
        const number = this.number(at)
        if (number === null) return this.off(at, "a number", [])
        return { filled: { type: "NUMBER", value: number.value, text: number.text, at: this.place(at, number.end) }, end: number.end }
      }
      case "BOUND": {
        const bound = this.bound(at, item.more.has("estimate"))
        return bound === null ? null : { filled: { type: "BOUND", bound: bound.bound, at: this.place(at, bound.end) }, end: bound.end }
      }
      case "CHOICE": {
        const choice = this.choice(at)
        return choice === null
          ? null
          : { filled: { type: "CHOICE", choice: choice.choice, at: this.place(at, choice.end) }, end: choice.end }
      }
      case "CALL": {
        const call = this.call(at)
        return call === null ? null : { filled: { type: "CALL", call: call.call, at: this.place(at, call.end) }, end: call.end }
      }
      case "EXPR": {
        if (token === undefined) return this.off(at, "an expression", [])
        const { expression, slips } = expressionFrom(this.tokens.slice(at), this.clause, this.first + at, allowedBy(item.more))
        if (expression === null) return this.within(slips)
        return { filled: { type: "EXPR", expression, at: this.place(at, this.tokens.length) }, end: this.tokens.length }
      }
      case "TERMS": {
        if (token === undefined) return this.off(at, "a term", [])
        const { terms, slips } = termsFrom(this.tokens.slice(at), this.clause, this.first + at)
        if (terms === null) return this.within(slips)
        this.warnings = slips
        return { filled: { type: "TERMS", terms, at: this.place(at, this.tokens.length) }, end: this.tokens.length }
      }
    }
  }

  private name(at: number, description: string): Name | null {
    const token = this.tokens[at]
    if (token?.type !== "word") return this.off(at, description, [])
    const name = textOf(token)
    if (reserved.has(name)) return this.within([reservedName(this.place(at, at + 1), name, "name")])
    return name
  }

  /** Texts side by side are one, joined by a space. */
  private text(at: number): { readonly text: string; readonly end: number } | null {
    const texts: string[] = []
    let end = at
    for (let token = this.tokens[end]; token?.type === "text"; token = this.tokens[++end]) {
      const text = textFrom(token.text)
      if (text === null) return this.within([unknownEscape(this.place(end, end + 1), token.text)])
      texts.push(text)
    }
    return end === at ? this.off(at, "a text in double quotes", []) : { text: texts.join(" "), end }
  }

  private number(at: number): { readonly value: number; readonly text: string; readonly end: number } | null {
    const sign = this.tokens[at]?.text === "-" ? "-" : ""
    const start = this.tokens[at]?.text === "-" || this.tokens[at]?.text === "+" ? at + 1 : at
    const token = this.tokens[start]
    if (token?.type !== "number" && token?.type !== "percent") return null
    const value = numberFrom(token.text)
    if (!Number.isFinite(value)) return this.within([hugeNumber(this.place(at, start + 1), token.text)])
    // A zero keeps no sign: −0 and 0 are one number to whoever writes them.
    return { value: sign === "-" && value !== 0 ? -value : value, text: sign + token.text, end: start + 1 }
  }

  private bound(at: number, estimate: boolean): { readonly bound: Bound; readonly end: number } | null {
    const number = this.number(at)
    if (number !== null) return { bound: { type: "number", value: number.value, text: number.text }, end: number.end }
    const signed = this.tokens[at]?.text === "-" || this.tokens[at]?.text === "+"
    const token = this.tokens[signed ? at + 1 : at]
    if (token?.type === "word" && token.text === "infinity")
      return { bound: { type: "infinity", sign: this.tokens[at]?.text === "-" ? -1 : 1 }, end: signed ? at + 2 : at + 1 }
    if (signed || token?.type !== "word") return this.off(signed ? at + 1 : at, "a number or the name of a cell", [])
    if (token.text === "estimate" && estimate) return { bound: { type: "estimate" }, end: at + 1 }
    const name = this.name(at, "a number or the name of a cell")
    return name === null ? null : { bound: { type: "cell", name, at: this.place(at, at + 1) }, end: at + 1 }
  }

  private choice(at: number): { readonly choice: Choice; readonly end: number } | null {
    const token = this.tokens[at]
    if (token?.type === "text") {
      const text = this.text(at)
      return text === null ? null : { choice: { type: "text", text: text.text }, end: text.end }
    }
    if (token?.type === "word" && (token.text === "true" || token.text === "false"))
      return { choice: { type: "truth", value: token.text === "true" }, end: at + 1 }
    if (token?.type !== "word" && token?.type !== "number" && token?.type !== "percent" && token?.text !== "-" && token?.text !== "+")
      return this.off(at, "a text, a number or the name of a cell", [])
    const bound = this.bound(at, false)
    return bound === null ? null : { choice: bound.bound, end: bound.end }
  }

  private call(at: number): { readonly call: Call; readonly end: number } | null {
    const token = this.tokens[at]
    const name = this.name(at, "a name")
    if (token === undefined || name === null) return null
    if (this.tokens[at + 1]?.text !== "(") return { call: { name, bounds: null, expression: null }, end: at + 1 }
    if (name === "quasi_likelihood") return this.expressionCall(name, at)
    const bounds: Bound[] = []
    let end = at + 2
    for (;;) {
      const bound = this.bound(end, true)
      if (bound === null) return null
      bounds.push(bound.bound)
      end = bound.end
      const sign = this.tokens[end]?.text
      if (sign === ")") return { call: { name, bounds, expression: null }, end: end + 1 }
      if (sign !== ",") {
        this.off(end, "a comma", [])
        return this.off(end, "a closing bracket", [])
      }
      end++
    }
  }

  /** The one call whose argument is an expression: of the mean. */
  private expressionCall(name: Name, at: number): { readonly call: Call; readonly end: number } | null {
    let depth = 0
    let end = at + 1
    for (; end < this.tokens.length; end++) {
      const text = this.tokens[end]?.text
      if (text === "(") depth++
      else if (text === ")" && --depth === 0) break
    }
    if (end >= this.tokens.length) return this.off(end, "a closing bracket", [])
    const { expression, slips } = expressionFrom(this.tokens.slice(at + 2, end), this.clause, this.first + at + 2, new Set(["mu"]))
    return expression === null ? this.within(slips) : { call: { name, bounds: null, expression }, end: end + 1 }
  }

  /** Notes that the tokens do not fit at this one, and what would. */
  private off(at: number, expected: string, words: readonly string[]): null {
    if (at > this.farthest) {
      this.farthest = at
      this.expected = []
      this.fitting = []
      this.reaching = new Set()
      this.inner = null
    }
    if (at === this.farthest) {
      this.reaching.add(this.form)
      this.expected.push(expected)
      this.fitting.push(...words)
    }
    return null
  }

  /** Notes that the tokens fit but something inside does not read. */
  private within(slips: readonly Slip[]): null {
    const at = Math.max(0, (slips[0]?.at.from ?? this.first) - this.first)
    if (at >= this.farthest) {
      this.farthest = at
      this.expected = []
      this.fitting = []
      this.inner = slips
    }
    return null
  }

  private numberSlip(): Slip | null {
    const source = sourceOf(this.tokens, this.clause, this.first)
    return numberSlipAt(source, this.farthest) ?? numberSlipAt(source, this.farthest + 1)
  }

  private place(from: number, to: number): Place {
    return { clause: this.clause, from: this.first + from, to: this.first + to }
  }
}

const textOf = (token: Token): string => (token.type === "word" ? token.text.normalize("NFC") : token.text)

const allowedBy = (more: ReadonlySet<string>): Allowed => {
  const allowed = new Set<"mu" | "eta" | "models">()
  for (const each of ["mu", "eta", "models"] as const) if (more.has(each)) allowed.add(each)
  return allowed
}
