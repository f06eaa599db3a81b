// The columns of a file laid over the column clauses: which clause speaks of which column, and what a column is called that no clause
// speaks of. A clause finds its column by the head it states, by its name, or, where the file has no header, by its place.

import type { Name } from "../../runtime/value.ts"
import { headText, namesFor } from "../table/header.ts"
import type { ColumnSaid } from "./words.ts"

export type Placed = {
  readonly name: Name
  /** As the file heads it; null without a header. */
  readonly head: string | null
  /** A unit read off the head; null where there is a clause, which then says. */
  readonly unit: string | null
  readonly said: ColumnSaid | null
}

export type Layout = {
  /** One for each column of the file, in its order. */
  readonly columns: readonly Placed[]
  /** Clauses whose column the file does not have. */
  readonly absent: readonly ColumnSaid[]
}

export const layout = (heads: readonly (string | null)[], said: readonly ColumnSaid[]): Layout => {
  const claims = new Map<number, ColumnSaid>()
  const absent: ColumnSaid[] = []
  const own = namesFor(heads)
  const free = (matches: (index: number) => boolean): number => heads.findIndex((_, index) => !claims.has(index) && matches(index))
  for (const clause of said) {
    const wanted = headText(clause.headed ?? clause.name)
    let index = free((i) => heads[i] === wanted)
    // A name made of a head is a way to speak of its column too, and so is its place where there is no header.
    if (index < 0 && clause.headed === null) index = free((i) => own[i]?.name === clause.name)
    if (index < 0 && clause.headed === null && heads[0] === null) index = free(() => true)
    if (index < 0) absent.push(clause)
    else claims.set(index, clause)
  }
  const names = namesFor(
    heads.map((head, index) => (claims.has(index) ? null : head)),
    new Set([...said.map(({ name }) => name)]),
  )
  const columns = heads.map((head, index): Placed => {
    const clause = claims.get(index) ?? null
    if (clause !== null) return { name: clause.name, head, unit: null, said: clause }
    const made = names[index]
    return { name: made?.name ?? `column_${index + 1}`, head, unit: made?.unit ?? null, said: null }
  })
  return { columns, absent }
}

/** What a column clause has to state as `headed`: null where the name is how the file heads it. */
export const headedFor = (placed: { readonly name: Name; readonly head: string | null }): string | null =>
  placed.head === null || placed.head === placed.name ? null : placed.head
