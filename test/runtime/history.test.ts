import { describe, expect, it } from "vitest"

import type { Notebook, Transaction } from "../../runtime/document.ts"
import { apply } from "../../runtime/document.ts"
import type { History } from "../../runtime/history.ts"
import { atRest, enclosuresOf, noHistory, recorded, redone, undone } from "../../runtime/history.ts"

/** A notebook and its history, by hand: every step as the engine takes it. */
class Hand {
  history: History = noHistory
  notebook: Notebook = {
    id: "book",
    title: "",
    cells: [
      { id: "p", text: "0" },
      { id: "q", text: "0" },
    ],
    enclosures: [],
    rest: null,
  }

  do(transaction: Transaction, gesture: string | null = null): void {
    const applied = apply(this.notebook, transaction)
    if (!applied.ok) throw new Error(applied.notice.text)
    this.history = recorded(this.history, transaction, applied.inverse, gesture)
    this.notebook = applied.notebook
  }

  write(id: string, text: string, gesture: string | null = null): void {
    this.do({ changes: [{ type: "write", id, text }] }, gesture)
  }

  rest(): void {
    this.history = atRest(this.history)
  }

  undo(): string | null {
    return this.travel(undone(this.history))
  }

  redo(): string | null {
    return this.travel(redone(this.history))
  }

  private travel(step: ReturnType<typeof undone>): string | null {
    if (step === null) return null
    const applied = apply(this.notebook, step.transaction)
    if (!applied.ok) throw new Error(applied.notice.text)
    this.notebook = applied.notebook
    this.history = step.history
    return this.texts
  }

  get texts(): string {
    return this.notebook.cells.map(({ text }) => text).join(" ")
  }
}

describe("undo", () => {
  it("takes back a run of writes to one cell at once, and redo does them again", () => {
    const hand = new Hand()
    for (const text of ["1", "12", "123"]) hand.write("p", text)
    expect(hand.undo()).toBe("0 0")
    expect(hand.undo()).toBeNull()
    expect(hand.redo()).toBe("123 0")
    expect(hand.redo()).toBeNull()
  })

  it("stops at a rest, and where another cell is written to", () => {
    const hand = new Hand()
    hand.write("p", "1")
    hand.rest()
    hand.write("p", "2")
    hand.write("q", "3")
    hand.write("p", "4")
    expect([hand.undo(), hand.undo(), hand.undo(), hand.undo()]).toEqual(["2 3", "2 0", "1 0", "0 0"])
  })

  it("takes back a whole gesture at once, however many cells it wrote to", () => {
    const hand = new Hand()
    hand.write("p", "before")
    for (let i = 1; i < 300; i++) {
      hand.write("p", String(i), "drag")
      hand.write("q", String(-i), "drag")
    }
    expect(hand.history.done?.top.forward.changes).toHaveLength(2)
    hand.write("p", "0.5", "another drag")
    expect([hand.undo(), hand.undo(), hand.undo()]).toEqual(["299 -299", "before 0", "0 0"])
    expect([hand.redo(), hand.redo(), hand.redo()]).toEqual(["before 0", "299 -299", "0.5 -299"])
  })

  it("finds nothing where a gesture ended where it began", () => {
    const hand = new Hand()
    hand.write("p", "1")
    hand.write("p", "7", "drag")
    hand.write("p", "1", "drag")
    hand.rest()
    expect(hand.undo()).toBe("0 0")
  })

  it("joins what is not only writes in order", () => {
    const hand = new Hand()
    hand.do({ changes: [{ type: "insert", at: 0, cell: { id: "n", text: "new" } }] }, "drag")
    hand.write("n", "newer", "drag")
    hand.do({ changes: [{ type: "move", id: "n", to: 2 }] }, "drag")
    expect(hand.texts).toBe("0 0 newer")
    expect(hand.undo()).toBe("0 0")
    expect(hand.redo()).toBe("0 0 newer")
  })

  it("is followed by no redo once something else was done", () => {
    const hand = new Hand()
    hand.write("p", "1")
    hand.undo()
    hand.write("p", "2")
    expect(hand.redo()).toBeNull()
    expect(hand.undo()).toBe("0 0")
  })

  it("names the files it could bring back", () => {
    const hand = new Hand()
    hand.do({ changes: [{ type: "enclose", file: { name: "f", media: "", size: 1, sha256: "a".repeat(64) } }] })
    hand.do({ changes: [{ type: "release", name: "f" }] })
    expect([...enclosuresOf(hand.history)]).toEqual(["a".repeat(64)])
  })
})
