// The words of `link`: a link of the user's own, as an expression of the mean over an open range. What has no place in a link (a function
// with corners, a name that is no constant) is said as the statement is written; what the formula is, find.ts proves.

import type { Names, Use, Words } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { type Expression, partsOf } from "../language/expression.ts"
import { type Bound, type Filled, type Matched, readClauses } from "../language/form.ts"
import { smoothFunctions } from "../language/formula.ts"
import { links } from "../language/vocabulary.ts"
import * as say from "./notices.ts"

export type BoundSaid = { readonly bound: Bound; readonly at: Place }

export type GivenSaid = { readonly name: Name; readonly at: Place } & (
  | { readonly type: "value"; readonly value: BoundSaid }
  | { readonly type: "estimate"; readonly from: number; readonly to: number; readonly texts: readonly [string, string] }
)

export type FormulaSaid = { readonly expression: Expression; readonly at: Place }

export type LinkSaid = {
  readonly name: Name | null
  readonly range: { readonly from: BoundSaid; readonly to: BoundSaid; readonly at: Place } | null
  readonly given: readonly GivenSaid[]
  readonly eta: FormulaSaid | null
  readonly inverse: FormulaSaid | null
}

export const linkWords: Words<LinkSaid> = {
  word: "link",
  name: "needed",
  says: "A link of one's own: the linear predictor as an expression of the mean, proved to be a link or refuted",
  example: "link g\n  mean from 0 to 1\n  eta = ",
  clauses: {
    mean: { forms: ["from BOUND:from to BOUND:to"], says: "The open range of means; -infinity and infinity are ends too" },
    given: {
      forms: ["ID:name = estimate from NUMBER:from to NUMBER:to", "ID:name = BOUND:value"],
      says: "A constant in the formula: a number, a dial, or estimated in each model between two numbers",
      again: true,
    },
    eta: { forms: ["= EXPR+mu:eta"], says: "The linear predictor as an expression in mu" },
    inverse: { forms: ["= EXPR+eta:inverse"], says: "The mean as an expression in eta; left out, it is found numerically" },
  },
  parse(statement) {
    const { clauses, notices } = readClauses(statement, linkWords)
    const all: Notice[] = [...notices]
    const one = (keyword: string): Matched | null => clauses.find((clause) => clause.keyword === keyword) ?? null
    const { name } = statement
    if (name !== null && Object.hasOwn(links, name)) all.push(say.nameTaken(name))
    for (const keyword of ["mean", "eta"] as const)
      if (!statement.clauses.some((clause) => clause.keyword === keyword)) all.push(say.clauseMissing(keyword))
    const given = givenSaid(
      clauses.filter(({ keyword }) => keyword === "given"),
      all,
    )
    const [eta, inverse] = [formula(one("eta"), "eta"), formula(one("inverse"), "inverse")]
    // A constant whose clause has a fault is a constant all the same.
    const names = statement.clauses.flatMap(({ keyword, tokens }) =>
      keyword === "given" && tokens[0] !== undefined ? [tokens[0].text.normalize("NFC")] : [],
    )
    if (eta !== null) hasPlace(eta.expression, "eta", ["mu", ...names], all)
    if (inverse !== null) hasPlace(inverse.expression, "inverse", ["eta", ...names], all)
    return { said: { name, range: rangeSaid(one("mean")), given, eta, inverse }, notices: all }
  },
  names(said): Names {
    const own = new Set(said.given.map(({ name }) => name))
    const uses: Use[] = []
    const add = ({ bound }: BoundSaid): void => {
      if (bound.type === "cell" && bound.name !== said.name) uses.push({ name: bound.name, parts: "all", either: false, at: bound.at })
    }
    for (const each of said.given) if (each.type === "value") add(each.value)
    // An end may also be one of the constants given here.
    for (const end of said.range === null ? [] : [said.range.from, said.range.to])
      if (end.bound.type !== "cell" || !own.has(end.bound.name)) add(end)
    return { defines: said.name, uses, files: [] }
  },
}

const filled = (matched: Matched | null, label: string): Filled | null => matched?.slots[label]?.[0] ?? null

const boundSaid = (slot: Filled | null): BoundSaid | null => (slot?.type === "BOUND" ? { bound: slot.bound, at: slot.at } : null)

function rangeSaid(matched: Matched | null): LinkSaid["range"] {
  const [from, to] = [boundSaid(filled(matched, "from")), boundSaid(filled(matched, "to"))]
  if (matched === null || from === null || to === null) return null
  return { from, to, at: { clause: matched.clause, from: from.at.from, to: to.at.to } }
}

function givenSaid(clauses: readonly Matched[], notices: Notice[]): readonly GivenSaid[] {
  const found: GivenSaid[] = []
  for (const clause of clauses) {
    const name = filled(clause, "name")
    if (name?.type !== "ID") continue
    if (found.some((other) => other.name === name.name)) {
      notices.push(say.givenTwice(name.name, name.at))
      continue
    }
    const [value, from, to] = [boundSaid(filled(clause, "value")), filled(clause, "from"), filled(clause, "to")]
    if (value !== null) {
      if (value.bound.type === "infinity") notices.push(say.givenInfinite(name.name, value.at))
      else found.push({ type: "value", name: name.name, at: name.at, value })
    } else if (from?.type === "NUMBER" && to?.type === "NUMBER") {
      if (!(from.value < to.value)) notices.push(say.rangeTurned("given", from.text, to.text, from.at))
      else found.push({ type: "estimate", name: name.name, at: name.at, from: from.value, to: to.value, texts: [from.text, to.text] })
    }
  }
  return found
}

function formula(matched: Matched | null, label: "eta" | "inverse"): FormulaSaid | null {
  const slot = filled(matched, label)
  return slot?.type === "EXPR" ? { expression: slot.expression, at: slot.at } : null
}

/** Everything in a formula that cannot stand there. */
function hasPlace(expression: Expression, clause: "eta" | "inverse", names: readonly Name[], notices: Notice[]): void {
  const visit = (part: Expression, condition: boolean): void => {
    switch (part.type) {
      case "number":
        return
      case "name":
        if (!names.includes(part.name)) notices.push(say.unknownName(part.name, nearest(part.name, names), clause, part.at))
        return
      case "truth":
        if (!condition) notices.push(say.noPlace(String(part.value), clause, part.at))
        return
      case "text":
      case "missing":
      case "in":
        notices.push(say.noPlace(part.type === "text" ? "a text" : part.type, clause, part.at))
        return
      case "not":
        if (!condition) notices.push(say.noPlace("not", clause, part.at))
        else visit(part.of, true)
        return
      case "minus":
        visit(part.of, false)
        return
      case "pair": {
        const isTruth = !["+", "-", "*", "/", "^"].includes(part.sign)
        if (isTruth && !condition) {
          notices.push(say.noPlace(part.sign, clause, part.at))
          return
        }
        const joins = part.sign === "and" || part.sign === "or"
        visit(part.left, joins)
        visit(part.right, joins)
        return
      }
      case "call":
        if (part.name !== "if" && !smoothFunctions.has(part.name)) {
          notices.push(cornered.has(part.name) ? say.notSmooth(part.name, clause, part.at) : say.noPlace(part.name, clause, part.at))
          return
        }
        partsOf(part).forEach((each, k) => {
          visit(each, part.name === "if" && k === 0)
        })
    }
  }
  visit(expression, false)
}

/** Functions of a number that have corners or steps. */
const cornered: ReadonlySet<string> = new Set(["abs", "ceil", "floor", "max", "min", "mod", "round", "sign"])
