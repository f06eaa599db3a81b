// Family and link as the clauses say them: known, available, with the parameters they want, and legal with each other. All of this is read
// off the words, so that the page says it while the statement is written.

import { nearest } from "../../runtime/nearest.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Statement } from "../../runtime/statement.ts"
import type { Bound, Filled } from "../language/form.ts"
import { families, legalLinks, links } from "../language/vocabulary.ts"
import * as say from "./notices.ts"
import type { CallSaid } from "./words.ts"

type CallSlot = Extract<Filled, { type: "CALL" }> | null

/** The family said; null where there is none that can be fitted, once that was said. */
export function familySaid(slot: CallSlot, statement: Statement, notices: Notice[]): CallSaid | null {
  if (slot === null) return null
  const { call, at } = slot
  const known = Object.hasOwn(families, call.name) ? families[call.name] : undefined
  const available = Object.values(families)
  if (known === undefined) {
    const near = nearest(call.name, Object.keys(families))
    const names = available.map(({ name }) => name)
    notices.push(say.noSuchFamily(call.name, near, names, clauseOf(statement, "family"), { ...at, to: at.from + 1 }))
    return null
  }
  if (known.name === "quasi_likelihood") {
    if (call.expression === null) {
      notices.push(say.varianceMissing(at))
      return null
    }
    return { name: known.name, parameters: [], expression: call.expression, at }
  }
  // Of a family all parameters may be left out, and are then estimated.
  const parameters: readonly Bound[] = call.bounds ?? known.parameters.map(() => ({ type: "estimate" }))
  if (parameters.length !== known.parameters.length || call.expression !== null) {
    notices.push(say.parametersOff("family", known.name, known.parameters, at))
    return null
  }
  if (parameters.some(({ type }) => type === "infinity")) notices.push(say.parameterInfinite("family", known.name, at))
  return { name: known.name, parameters, at }
}

/** The link said; null where there is none that can be fitted, once that was said, and where nothing is said. */
export function linkSaid(slot: CallSlot, family: CallSaid | null, statement: Statement, notices: Notice[]): CallSaid | null {
  if (slot === null) return null
  const { call, at } = slot
  const known = Object.hasOwn(links, call.name) ? links[call.name] : undefined
  const legal = family === null ? Object.keys(links) : legalLinks(family.name)
  // A link of the user's own is made by a cell; whether there is one of this name, the evaluation knows.
  if (known === undefined && call.bounds === null && call.expression === null) return { name: call.name, parameters: [], at }
  if (known === undefined) {
    const near = nearest(call.name, Object.keys(links))
    notices.push(say.noSuchLink(call.name, near, legal, clauseOf(statement, "link"), { ...at, to: at.from + 1 }))
    return null
  }
  const parameters = call.bounds ?? []
  if (parameters.length !== known.parameters.length || call.expression !== null) {
    notices.push(say.parametersOff("link", known.name, known.parameters, at))
    return null
  }
  if (parameters.some(({ type }) => type === "infinity")) notices.push(say.parameterInfinite("link", known.name, at))
  if (family !== null && !legal.includes(known.name)) {
    const plain = legal.filter((name) => links[name]?.parameters.length === 0)
    const goesWith = Object.values(families).filter(({ name }) => legalLinks(name).includes(known.name))
    const names = goesWith.map(({ name }) => name)
    notices.push(say.linkNotLegal(known.name, family.name, plain, names, at))
  }
  return { name: known.name, parameters, at }
}

const clauseOf = (statement: Statement, keyword: string) => statement.clauses.find((clause) => clause.keyword === keyword)
