// What is around a cell, for completion: the other cells, the columns of the data it reads, and the vocabulary. Columns come from what a
// data cell has found, with types and units; while it has found nothing, from what its text says.

import type { Block } from "../../../cells/block.ts"
import { functions, modelFunctions } from "../../../cells/language/functions.ts"
import { makers } from "../../../cells/language/predictor.ts"
import { families, legalLinks, links } from "../../../cells/language/vocabulary.ts"
import { words } from "../../../cells/words.ts"
import type { Cell, CellId } from "../../../runtime/document.ts"
import type { State } from "../../../runtime/engine.ts"
import type { Desk } from "../desk.ts"
import type { KnownColumn, Surroundings } from "./completion.ts"
import { reading } from "./reading.ts"

/** The surroundings of one cell. */
export function surroundings(desk: Desk, id: CellId): Surroundings | null {
  const cell = desk.notebook.cells.find((each) => each.id === id)
  if (cell === undefined) return null
  const read = upstream(desk.notebook.cells, cell)
  const table = read.find((each) => reading(each).statement.kind === "data")
  const model = read.find((each) => reading(each).statement.kind === "model")
  return {
    kinds: words,
    cells: desk.notebook.cells.flatMap((each) => {
      const { names, statement, words: kind } = reading(each)
      return each === cell || names.defines === null ? [] : [{ name: names.defines, kind: statement.kind ?? "", says: kind?.word ?? "" }]
    }),
    columns: table === undefined ? [] : columns(desk.state(table.id), table),
    files: desk.notebook.enclosures.map(({ name }) => name),
    families: Object.values(families),
    links: (family) => linksFor(family === null ? Object.keys(links) : legalLinks(family)),
    functions: [...functions, ...modelFunctions].map(([name, { form, says }]) => ({ name, says: `${form}: ${says}` })),
    predictorCalls: [...makers].map(([name, { form, says }]) => ({ name, says: `${form}: ${says}` })),
    family:
      model === undefined ? null : (reading(model).statement.clauses.find(({ keyword }) => keyword === "family")?.tokens[0]?.text ?? null),
  }
}

/** The links of these names, with g(μ) and one line each. */
function linksFor(names: readonly string[]): ReturnType<Surroundings["links"]> {
  return names
    .flatMap((name) => links[name] ?? [])
    .map(({ name, says, formula, parameters }) => ({ name, says: `${formula} · ${says}`, takes: parameters.length > 0 }))
}

/** The cell itself and all it reads, however distantly, nearest first. */
function upstream(cells: readonly Cell[], cell: Cell): readonly Cell[] {
  const found = [cell]
  for (const each of found) {
    for (const { name } of reading(each).names.uses) {
      const made = cells.find((other) => reading(other).names.defines === name)
      if (made !== undefined && !found.includes(made)) found.push(made)
    }
  }
  return found
}

function columns(state: State, cell: Cell): readonly KnownColumn[] {
  const shown = state.status === "ready" ? state.shown : "last" in state ? state.last : null
  const tapes = ((shown?.blocks ?? []) as readonly Block[]).flatMap((block) => (block.type === "tapes" ? block.tapes : []))
  if (tapes.length > 0) {
    return tapes.map(({ name, columnType, unit, called, levels }) => ({
      name,
      type: columnType,
      unit,
      called,
      levels: levels?.map(({ level }) => level) ?? [],
    }))
  }
  return reading(cell).statement.clauses.flatMap(({ keyword, tokens }) => {
    const name = tokens[0]
    if ((keyword !== "column" && keyword !== "make") || name?.type !== "word") return []
    return [{ name: name.text, type: keyword === "make" ? "made here" : (tokens[1]?.text ?? ""), unit: null, called: null, levels: [] }]
  })
}
