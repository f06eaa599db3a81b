// An engine that evaluates nothing: what each cell's state is comes from the test. Transactions, undo and redo are the real ones, so that the
// page can be tried in any state it can ever be given.

import type { Applied, CellId, Notebook, Transaction } from "../../runtime/document.ts"
import { apply } from "../../runtime/document.ts"
import type { Engine, EngineEvent, State } from "../../runtime/engine.ts"
import { atRest, type History, noHistory, recorded, redone, undone } from "../../runtime/history.ts"
import type { Notice } from "../../runtime/notice.ts"

export class CannedEngine implements Engine {
  notebook: Notebook
  /** What was dispatched, in order, with its gesture. */
  readonly dispatched: { readonly transaction: Transaction; readonly gesture: string | null }[] = []
  rests = 0
  #history: History = noHistory
  readonly #listeners = new Set<(event: EngineEvent) => void>()
  readonly #state: (id: CellId, notebook: Notebook) => State
  readonly #notices: (id: CellId, notebook: Notebook) => readonly Notice[]

  constructor(
    notebook: Notebook,
    state: (id: CellId, notebook: Notebook) => State,
    notices: (id: CellId, notebook: Notebook) => readonly Notice[] = () => [],
  ) {
    this.notebook = notebook
    this.#state = state
    this.#notices = notices
  }

  state(id: CellId): State {
    return this.#state(id, this.notebook)
  }

  notices(id: CellId): readonly Notice[] {
    return this.#notices(id, this.notebook)
  }

  dispatch(transaction: Transaction, how?: { readonly gesture: string }): Applied {
    const applied = apply(this.notebook, transaction)
    if (!applied.ok) return applied
    const gesture = how?.gesture ?? null
    this.dispatched.push({ transaction, gesture })
    this.notebook = applied.notebook
    this.#history = recorded(this.#history, transaction, applied.inverse, gesture)
    this.#tell({ type: "notebook", notebook: this.notebook, transaction, gesture })
    return applied
  }

  undo(): boolean {
    return this.#step(undone(this.#history))
  }

  redo(): boolean {
    return this.#step(redone(this.#history))
  }

  get canUndo(): boolean {
    return undone(this.#history) !== null
  }

  get canRedo(): boolean {
    return redone(this.#history) !== null
  }

  rest(): void {
    this.rests++
    this.#history = atRest(this.#history)
    this.#tell({ type: "rest" })
  }

  look(): void {}

  ask(): Promise<null> {
    return Promise.resolve(null)
  }

  settled(): Promise<void> {
    return Promise.resolve()
  }

  get reached(): ReadonlySet<string> {
    return new Set(this.notebook.enclosures.map(({ sha256 }) => sha256))
  }

  subscribe(listen: (event: EngineEvent) => void): () => void {
    this.#listeners.add(listen)
    return () => this.#listeners.delete(listen)
  }

  /** Tells that the state of a cell is another. */
  changed(id: CellId): void {
    this.#tell({ type: "state", id, state: this.state(id) })
  }

  #step(step: { readonly transaction: Transaction; readonly history: History } | null): boolean {
    if (step === null) return false
    const applied = apply(this.notebook, step.transaction)
    if (!applied.ok) return false
    this.notebook = applied.notebook
    this.#history = step.history
    this.#tell({ type: "notebook", notebook: this.notebook, transaction: step.transaction, gesture: null })
    return true
  }

  #tell(event: EngineEvent): void {
    for (const listen of this.#listeners) listen(event)
  }
}
