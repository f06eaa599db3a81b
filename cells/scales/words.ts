// The words of `scales`: the mean scale and the linear-predictor scale of one model, side by side.

import type { Names, Use, Words } from "../../runtime/kind.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import type { Bound, Call, Choice, Filled, Matched } from "../language/form.ts"
import { readClauses } from "../language/form.ts"
import { links } from "../language/vocabulary.ts"
import { fitPart } from "../model-finding.ts"
import { noModel } from "./notices.ts"

export type Named = { readonly name: Name; readonly at: Place }
export type Held = { readonly column: Named; readonly value: Choice; readonly at: Place }
export type Beside = { readonly call: Call; readonly at: Place }

export type ScalesSaid = {
  readonly model: Named | null
  readonly across: Named | null
  readonly split: Named | null
  readonly hold: readonly Held[]
  readonly averaged: boolean
  readonly range: { readonly from: Bound; readonly to: Bound; readonly at: Place } | null
  readonly points: boolean
  readonly beside: readonly Beside[] | null
  readonly aligned: boolean
}

export const scalesWords: Words<ScalesSaid> = {
  word: "scales",
  name: "optional",
  says: "A model on the mean scale and on the linear-predictor scale, side by side, tied by its link",
  example: "scales\n  model \n  across ",
  clauses: {
    model: { forms: ["CELL:model"], says: "The model whose fit is drawn" },
    compare: { forms: ["CELL:compare"], says: "All candidates of a comparison", later: true },
    across: { forms: ["NAME:column"], says: "The predictor on the horizontal axis" },
    split: { forms: ["NAME:column"], says: "One curve for each level of this category" },
    hold: {
      forms: ["{ NAME:column = CHOICE:value },"],
      says: "What other predictors are held at; left out, the mean of a number and the first level of a category",
    },
    averaged: { forms: ["yes", "no"], says: "Average over the rows of the data instead of holding the other predictors" },
    from: { forms: ["BOUND:from to BOUND:to"], says: "The horizontal range; beyond the data it is marked as extrapolation" },
    points: { forms: ["yes", "no"], says: "Observed means on the left and working responses on the right (yes unless said otherwise)" },
    beside: { forms: ["{ CALL:link },"], says: "The candidates on the link strip; left out, the named links legal for the family" },
    aligned: { forms: ["yes", "no"], says: "Draw every link on one linear-predictor panel, rescaled to agree at the middle of the data" },
  },
  parse(statement) {
    const { clauses, notices } = readClauses(statement, scalesWords)
    const all: Notice[] = [...notices]
    const one = (keyword: string): Matched | null => clauses.find((clause) => clause.keyword === keyword) ?? null
    const named = (keyword: string): Named | null => {
      const filled = Object.values(one(keyword)?.slots ?? {})[0]?.[0]
      return filled !== undefined && (filled.type === "NAME" || filled.type === "CELL") ? { name: filled.name, at: filled.at } : null
    }
    const range = one("from")
    const [from, to] = [bound(range?.slots["from"]?.[0]), bound(range?.slots["to"]?.[0])]
    const model = named("model")
    if (model === null && !statement.clauses.some(({ keyword }) => keyword === "model" || keyword === "compare")) all.push(noModel())
    return {
      said: {
        model,
        across: named("across"),
        split: named("split"),
        hold: held(one("hold")),
        averaged: isYes(one("averaged"), false),
        range:
          range !== null && from !== null && to !== null
            ? { from, to, at: { clause: range.clause, from: 0, to: (statement.clauses[range.clause]?.tokens.length ?? 0) + 1 } }
            : null,
        points: isYes(one("points"), true),
        beside:
          one("beside")?.slots["link"]?.flatMap((filled) => (filled.type === "CALL" ? [{ call: filled.call, at: filled.at }] : [])) ?? null,
        aligned: isYes(one("aligned"), false),
      },
      notices: all,
    }
  },
  names(said): Names {
    const uses: Use[] = []
    if (said.model !== null) uses.push({ name: said.model.name, parts: [fitPart], either: false, at: said.model.at })
    const bounds: readonly (Bound | Choice)[] = [
      ...(said.range === null ? [] : [said.range.from, said.range.to]),
      ...said.hold.map(({ value }) => value),
      ...(said.beside ?? []).flatMap(({ call }) => call.bounds ?? []),
    ]
    // Links of the language are no cells; any other name is one, or misspelt, which the evaluation says.
    for (const { call, at } of said.beside ?? [])
      if (!Object.hasOwn(links, call.name)) uses.push({ name: call.name, parts: "all", either: true, at: { ...at, to: at.from + 1 } })
    for (const item of bounds) if (item.type === "cell") uses.push({ name: item.name, parts: "all", either: false, at: item.at })
    return { defines: null, uses, files: [] }
  },
}

const bound = (filled: Filled | undefined): Bound | null => (filled?.type === "BOUND" ? filled.bound : null)

/** `averaged`, said without a word after it that reads, counts as what it is when left out. */
const isYes = (matched: Matched | null, otherwise: boolean): boolean => (matched === null ? otherwise : matched.words.includes("yes"))

function held(matched: Matched | null): Held[] {
  const columns = matched?.slots["column"] ?? []
  const values = matched?.slots["value"] ?? []
  return columns.flatMap((column, i) => {
    const value = values[i]
    if (column.type !== "NAME" || value?.type !== "CHOICE") return []
    return [{ column: { name: column.name, at: column.at }, value: value.choice, at: value.at }]
  })
}
