// A notebook for tests: texts and files in, the real engine with the real kinds, states and findings out.

import { kinds } from "../cells/index.ts"
import { words } from "../cells/words.ts"
import type { Engine, EngineEvent, Json, Notice, State } from "../runtime/index.ts"
import { createEngine, createEvaluator, read, rewritten } from "../runtime/index.ts"

export interface Book {
  readonly engine: Engine
  /** The state of a cell by its name, or by its kind where it has no name. */
  state(name: string): State
  notices(name: string): readonly Notice[]
  /** The summary of a cell that is ready. */
  summary(name: string): { readonly [member: string]: Json }
  /** Writes the text of a cell, and waits until all is settled. */
  write(name: string, text: string): Promise<void>
  /** Rewrites one clause, and waits until all is settled. */
  say(name: string, clause: string, says: string | null): Promise<void>
  /** Names of the cells sent to the evaluator since it was last asked. */
  ran(): readonly string[]
}

/** A notebook of these cells, settled. `files` gives the text of each file by name. */
export async function settledBook(texts: readonly string[], files: Readonly<Record<string, string>> = {}): Promise<Book> {
  const encoder = new TextEncoder()
  const bytes = new Map(Object.entries(files).map(([name, text]) => [digest(name), encoder.encode(text)]))
  const evaluator = createEvaluator({
    kinds,
    bytes: async function* (sha256) {
      yield bytes.get(sha256) ?? new Uint8Array()
    },
    pause: async () => {},
  })
  const engine = createEngine({
    words,
    evaluator,
    notebook: {
      id: "test",
      title: "",
      cells: texts.map((text, i) => ({ id: `c${i}`, text })),
      enclosures: Object.entries(files).map(([name, text]) => ({
        name,
        media: "text/csv",
        size: encoder.encode(text).length,
        sha256: digest(name),
      })),
      rest: null,
    },
  })
  let ran: string[] = []
  const called = (id: string): string => {
    const statement = read(engine.notebook.cells.find((cell) => cell.id === id)?.text ?? "")
    return statement.name ?? statement.kind ?? ""
  }
  engine.subscribe((event: EngineEvent) => {
    if (event.type === "ran") ran.push(called(event.id))
  })
  const id = (name: string): string => {
    const found = engine.notebook.cells.find((cell) => called(cell.id) === name)
    if (found === undefined) throw new Error(`The notebook has no cell called ${name}`)
    return found.id
  }
  const settle = async (): Promise<void> => {
    engine.rest()
    await engine.settled()
  }
  await settle()
  return {
    engine,
    state: (name) => engine.state(id(name)),
    notices: (name) => engine.notices(id(name)),
    summary: (name) => {
      const state = engine.state(id(name))
      if (state.status !== "ready") throw new Error(`${name} is ${state.status}: ${JSON.stringify(engine.notices(id(name)))}`)
      return state.shown.summary as { readonly [member: string]: Json }
    },
    write: async (name, text) => {
      engine.dispatch({ changes: [{ type: "write", id: id(name), text }] })
      await settle()
    },
    say: async (name, clause, says) => {
      const text = engine.notebook.cells.find((cell) => cell.id === id(name))?.text ?? ""
      engine.dispatch({ changes: [{ type: "write", id: id(name), text: rewritten(text, { cell: null, clause, nth: 0, says }) }] })
      await settle()
    },
    ran: () => {
      const names = ran
      ran = []
      return names
    },
  }
}

/** Stands in for a SHA-256: tests need only that two files differ. */
const digest = (name: string): string =>
  Array.from(name.padEnd(64, "0").slice(0, 64), (sign) => (sign.charCodeAt(0) % 16).toString(16)).join("")
