// A small notebook of toy cells for tests, addressed by the names of its cells, with the account of what ran.

import type { Change, Notebook } from "../../runtime/document.ts"
import type { Engine, EngineEvent, EngineOptions, State } from "../../runtime/engine.ts"
import { createEngine } from "../../runtime/engine.ts"
import type { Evaluator } from "../../runtime/evaluator.ts"
import { read } from "../../runtime/statement.ts"
import type { Json } from "../../runtime/value.ts"
import { words } from "./kinds.ts"
import { calm } from "./troubled-evaluator.ts"

export interface Book {
  readonly engine: Engine
  readonly events: readonly EngineEvent[]
  /** The cells that were sent to the evaluator since this was asked last. */
  ran(): readonly string[]
  id(name: string): string
  state(name: string): State
  /** The value that is shown, out of date or not. */
  value(name: string): Json
  text(name: string): string
  write(name: string, text: string, gesture?: string): void
  change(...changes: Change[]): void
  /** At rest, and settled. */
  rested(): Promise<void>
}

export const notebook = (...texts: readonly string[]): Notebook => ({
  id: "book",
  title: "A book",
  cells: texts.map((text, i) => ({ id: `cell-${i}`, text })),
  enclosures: [],
  rest: null,
})

export function book(texts: readonly string[], evaluator: Evaluator = calm(), options: Partial<EngineOptions> = {}): Book {
  const engine = createEngine({ words, notebook: notebook(...texts), evaluator, ...options })
  const events: EngineEvent[] = []
  let seen = 0
  engine.subscribe((event) => events.push(event))
  const nameOf = (text: string): string => read(text).name ?? read(text).kind ?? text
  const cellOf = (name: string) => {
    const { cells } = engine.notebook
    const cell = cells.find(({ id }) => id === name) ?? cells.find(({ text }) => nameOf(text) === name)
    if (cell === undefined) throw new Error(`The book has no cell ${name}`)
    return cell
  }
  const checked = (changes: readonly Change[], gesture?: string): void => {
    const applied = gesture === undefined ? engine.dispatch({ changes }) : engine.dispatch({ changes }, { gesture })
    if (!applied.ok) throw new Error(applied.notice.text)
  }
  return {
    engine,
    events,
    ran: () => {
      const names = events.slice(seen).flatMap((event) => (event.type === "ran" ? [nameOf(cellOf(event.id).text)] : []))
      seen = events.length
      return names
    },
    id: (name) => cellOf(name).id,
    state: (name) => engine.state(cellOf(name).id),
    value: (name) => {
      const state = engine.state(cellOf(name).id)
      const shown = state.status === "ready" ? state.shown : "last" in state ? state.last : null
      return (shown?.summary as { value?: Json } | null)?.value ?? null
    },
    text: (name) => cellOf(name).text,
    write: (name, text, gesture) => checked([{ type: "write", id: cellOf(name).id, text }], gesture),
    change: (...changes) => checked(changes),
    rested: async () => {
      engine.rest()
      await engine.settled()
    },
  }
}

export async function settledBook(...texts: readonly string[]): Promise<Book> {
  const made = book(texts)
  await made.rested()
  made.ran()
  return made
}
