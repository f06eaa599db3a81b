// The words of `terms`: a model, and what is to be taken out of its predictor.

import type { Names, Use, Words } from "../../runtime/kind.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { type Matched, readClauses } from "../language/form.ts"
import type { Terms } from "../language/predictor.ts"
import { fitPart } from "../model-finding.ts"
import { constantStays, noModel, nothingTakenOut } from "./notices.ts"

export type Named = { readonly name: Name; readonly at: Place }

/** One `without` clause; `nth` counts them. */
export type WithoutSaid = { readonly terms: Terms; readonly at: Place; readonly nth: number }

export type TermsSaid = {
  readonly model: Named | null
  /** Empty where nothing is said: each term that may go by itself. */
  readonly without: readonly WithoutSaid[]
}

export const termsWords: Words<TermsSaid> = {
  word: "terms",
  name: "optional",
  says: "What each term of a model leaves behind when it is taken out",
  example: "terms\n  model ",
  clauses: {
    model: { forms: ["CELL:model"], says: "The model whose terms are taken out" },
    without: {
      forms: ["TERMS:terms"],
      says: "Terms taken out together; left out, each term that may go by itself",
      again: true,
    },
  },
  parse(statement) {
    const { clauses, notices } = readClauses(statement, termsWords)
    const all: Notice[] = [...notices]
    const model = clauses.find(({ keyword }) => keyword === "model")?.slots["model"]?.[0]
    const said: TermsSaid = {
      model: model?.type === "CELL" ? { name: model.name, at: model.at } : null,
      without: clauses.filter(({ keyword }) => keyword === "without").flatMap((clause, nth) => withoutSaid(clause, nth, all)),
    }
    if (!statement.clauses.some(({ keyword }) => keyword === "model")) all.push(noModel())
    return { said, notices: all }
  },
  names(said): Names {
    const uses: Use[] = said.model === null ? [] : [{ name: said.model.name, parts: [fitPart], either: false, at: said.model.at }]
    return { defines: null, uses, files: [] }
  },
}

function withoutSaid(clause: Matched, nth: number, notices: Notice[]): readonly WithoutSaid[] {
  const slot = clause.slots["terms"]?.[0]
  if (slot?.type !== "TERMS") return []
  if (!slot.terms.intercept) notices.push(constantStays(slot.at))
  else if (slot.terms.terms.length === 0) notices.push(nothingTakenOut(slot.at))
  return [{ terms: slot.terms, at: slot.at, nth }]
}
