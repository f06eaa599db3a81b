// The ledger in a real browser, over an engine whose states come from the test: what each state looks like, and what a hand does to it.

import { afterEach, describe, expect, it, vi } from "vitest"
import { userEvent } from "vitest/browser"
import type { CellId, Notebook } from "../../runtime/document.ts"
import type { State } from "../../runtime/engine.ts"
import type { Notice } from "../../runtime/notice.ts"
import { read } from "../../runtime/statement.ts"
import type { Hash, Key } from "../../runtime/value.ts"
import { Desk } from "../../ui/page/desk.ts"
import type { Ledger } from "../../ui/page/ledger/ledger.ts"
import { Row } from "../../ui/page/ledger/row.ts"
import { CannedEngine } from "./canned-engine.ts"
import "../../ui/page/page.css"
import "../../ui/page/blocks/block.ts"
import "../../ui/page/ledger/ledger.ts"

const sentence = (text: string): State => ({
  status: "ready",
  shown: { blocks: [{ type: "sentence", text, tone: "plain" } as { type: string }], notices: [], summary: null },
  key: "k" as Key,
  hash: "h" as Hash,
  late: false,
})

const unknownFile: Notice = {
  level: "fault",
  code: "data/no-file",
  text: "There is no file terrace.cvs.",
  hint: "The nearest is terrace.csv.",
  clause: "from",
  at: { clause: 0, from: 1, to: 2 },
  mend: { label: 'Write "terrace.csv"', edits: [{ cell: null, clause: "from", nth: 0, says: '"terrace.csv"' }] },
}

let ledger: Ledger | null = null

afterEach(() => {
  ledger?.remove()
  ledger = null
})

/** A ledger over these cells, which are called c0, c1 and so on. */
async function laid(
  texts: readonly string[],
  state: (id: CellId, notebook: Notebook) => State = () => sentence("found"),
  notices: (id: CellId, notebook: Notebook) => readonly Notice[] = () => [],
) {
  const cells = texts.map((text, i) => ({ id: `c${i}`, text }))
  const engine = new CannedEngine({ id: "n", title: "", cells, enclosures: [], rest: null }, state, notices)
  const bytes = { get: () => null, put: () => {} }
  const desk = new Desk(engine, bytes, false)
  const made = document.createElement("etamu-ledger")
  made.desk = desk
  document.body.append(made)
  ledger = made
  await made.updateComplete
  return { engine, desk, ledger: made }
}

function row(i: number): Row {
  const found = document.querySelectorAll<Row>("etamu-row")[i]
  if (found === undefined) throw new Error(`There is no row ${i}.`)
  return found
}

const statement = (i: number): HTMLElement => {
  const found = row(i).querySelector<HTMLElement>(".statement")
  if (found === null) throw new Error("A row has a statement.")
  return found
}

/** Goes into a row by the keyboard, the caret at its end. */
async function into(i: number): Promise<void> {
  statement(i).focus()
  await userEvent.keyboard("{Enter}")
  await vi.waitFor(() => expect(row(i).querySelector("etamu-editor")?.lines.length).toBeGreaterThan(0))
}

const scales = "scales\n  model kill"

describe("the ledger", () => {
  it("names what a row waits for, and goes there", async () => {
    await laid(["dial shift", scales], (id) => (id === "c1" ? { status: "waiting", for: "c0", last: null } : sentence("found")))
    expect(row(1).getAttribute("aria-label")).toBe("scales: waits for shift")
    expect(row(1).querySelector(".hair circle")).not.toBeNull()
    row(1).querySelector<HTMLElement>(".waits button")?.click()
    await vi.waitFor(() => expect(document.activeElement).toBe(statement(0)))
  })

  it("breaks the hairline at the height of the clause at fault and offers the mend in words", async () => {
    const text = 'data frost\n  from "terrace.cvs"'
    const isWrong = (notebook: Notebook): boolean => notebook.cells[0]?.text === text
    const { engine } = await laid(
      [text],
      (_, notebook) => (isWrong(notebook) ? { status: "fault", notices: [], shown: null, last: null } : sentence("found")),
      (_, notebook) => (isWrong(notebook) ? [unknownFile] : []),
    )
    await vi.waitFor(() => expect(row(0).tops).toHaveLength(2))
    await row(0).updateComplete
    const gap = [...row(0).querySelectorAll(".hair line")].map((line) => [line.getAttribute("y1"), line.getAttribute("y2")])
    const line = (row(0).tops[1] ?? 0) - 10
    expect(gap).toContainEqual(["0", String(line - 9)])
    expect(gap).toContainEqual([String(line + 9), "100%"])
    expect(row(0).querySelector(".saying .notices")?.textContent).toContain("There is no file terrace.cvs.")
    expect(statement(0).querySelector(".wrong.fault")?.textContent).toBe('"terrace.cvs"')
    row(0).querySelector<HTMLElement>(".mend")?.click()
    expect(engine.notebook.cells[0]?.text).toBe('data frost\n  from "terrace.csv"')
    expect(engine.rests).toBe(1)
    engine.changed("c0")
    await vi.waitFor(() => expect(row(0).querySelector(".notices")).toBeNull())
  })

  it("is live while it is typed: every key is a transaction, and leaving is rest", async () => {
    const { engine } = await laid(["dial shift"])
    await into(0)
    await userEvent.keyboard("s2")
    expect(engine.dispatched.map(({ transaction }) => transaction.changes[0])).toEqual([
      { type: "write", id: "c0", text: "dial shifts" },
      { type: "write", id: "c0", text: "dial shifts2" },
    ])
    expect(engine.rests).toBe(0)
    await userEvent.keyboard("{Escape}")
    await vi.waitFor(() => expect(document.activeElement).toBe(statement(0)))
    expect(engine.rests).toBeGreaterThan(0)
    expect(row(0).querySelector("etamu-editor")).toBeNull()
  })

  it("takes back a run of typing by one undo, in the editor too", async () => {
    const { desk } = await laid(["dial shift"])
    await into(0)
    await userEvent.keyboard("ing")
    desk.undo()
    await vi.waitFor(() => expect(row(0).querySelector("etamu-editor")?.text).toBe("dial shift"))
    desk.redo()
    await vi.waitFor(() => expect(row(0).querySelector("etamu-editor")?.text).toBe("dial shifting"))
  })

  it("keeps one editor, in the row in focus", async () => {
    await laid(["dial a", "dial b"])
    await into(0)
    await userEvent.keyboard("{Escape}{ArrowDown}{Enter}")
    await vi.waitFor(() => expect(row(1).querySelector("etamu-editor")).not.toBeNull())
    expect(document.querySelectorAll("etamu-editor")).toHaveLength(1)
  })

  it("puts the caret where the statement was clicked", async () => {
    const { engine } = await laid(["dial shift\n  from 0 to 1"])
    const word = [...statement(0).querySelectorAll(".m-word")].find(({ textContent }) => textContent === "to")
    if (!(word instanceof HTMLElement)) throw new Error("The word is coloured.")
    await userEvent.click(word, { position: { x: 1, y: 8 } })
    await vi.waitFor(() => expect(row(0).querySelector("etamu-editor")?.lines.length).toBe(2))
    await userEvent.keyboard("5")
    expect(engine.notebook.cells[0]?.text).toBe("dial shift\n  from 0 5to 1")
  })

  it("dims the last good finding and says that it is out of date", async () => {
    const ready = sentence("the last finding")
    await laid(["dial a"], () => ({ status: "working", last: ready.status === "ready" ? ready.shown : null }))
    expect(row(0).querySelector(".blocks")?.classList.contains("stale")).toBe(true)
    expect(row(0).getAttribute("aria-label")).toContain("out of date")
  })

  it("says a crash as ours and keeps the statement to be written", async () => {
    await laid(["dial a"], () => ({ status: "crash", text: "a bug", stack: "at fit", last: null }))
    expect(row(0).querySelector(".crash")?.textContent).toContain("our fault")
    await into(0)
    expect(row(0).querySelector("etamu-editor")).not.toBeNull()
  })

  it("says that a finding could not be drawn, and leaves the statement and the neighbours alone", async () => {
    const broken = sentence("")
    const bad: State =
      broken.status === "ready"
        ? { ...broken, shown: { ...broken.shown, blocks: [{ type: "table", columns: null, rows: null } as unknown as { type: string }] } }
        : broken
    await laid(["dial a", "dial b"], (id) => (id === "c0" ? bad : sentence("beside it")))
    await vi.waitFor(() => expect(row(0).querySelector(".finding")?.textContent).toMatch(/drawn|draw/))
    expect(statement(0).textContent).toBe("dial a")
    expect(row(1).querySelector("etamu-block")?.shadowRoot?.textContent).toContain("beside it")
  })

  it("adds a cell by the keyboard, goes into it, and takes it away again, all of it undoable", async () => {
    const { engine, ledger: made } = await laid(["dial a"])
    statement(0).focus()
    made.command("add")
    await vi.waitFor(() => expect(document.activeElement?.getAttribute("role")).toBe("menuitem"))
    const item = [...document.querySelectorAll<HTMLElement>("[role=menuitem]")].find(({ textContent }) => textContent?.includes("note"))
    item?.click()
    await vi.waitFor(() => expect(document.querySelectorAll("etamu-row")).toHaveLength(2))
    expect(read(engine.notebook.cells[1]?.text ?? "").kind).toBe("note")
    await vi.waitFor(() => expect(row(1).querySelector("etamu-editor")).not.toBeNull())
    made.command("remove")
    await vi.waitFor(() => expect(document.querySelectorAll("etamu-row")).toHaveLength(1))
    engine.undo()
    await vi.waitFor(() => expect(document.querySelectorAll("etamu-row")).toHaveLength(2))
  })

  it("moves a cell and switches it off and on by its text", async () => {
    const { engine, ledger: made } = await laid(["dial a", "dial b"])
    statement(1).focus()
    made.command("up")
    await vi.waitFor(() => expect(engine.notebook.cells.map(({ text }) => text)).toEqual(["dial b", "dial a"]))
    made.command("off")
    expect(engine.notebook.cells[0]?.text).toBe("off dial b")
    made.command("off")
    expect(engine.notebook.cells[0]?.text).toBe("dial b")
  })

  it("only reads where another tab writes", async () => {
    const { desk, engine } = await laid(["dial a"])
    desk.readOnly = true
    await vi.waitFor(() => expect(document.querySelector(".adder")).toBeNull())
    statement(0).focus()
    await userEvent.keyboard("{Enter}x")
    desk.typed("c0", "dial b")
    expect(engine.dispatched).toEqual([])
    expect(document.querySelector("etamu-editor")).toBeNull()
  })

  it("fades the text of a note only where it is cut off, and shows all that is wrong with one", async () => {
    const long = `note\n${"A line of a note that goes on for a while.\n\n".repeat(30)}`
    const wrong = { ...unknownFile, clause: null, at: { clause: -1, from: 0, to: 0 } }
    await laid(
      ["note\nShort.", long, "note\n{nothing}"],
      (id) => (id === "c2" ? { status: "fault", notices: [wrong], shown: null, last: null } : sentence("found")),
      (id) => (id === "c2" ? [wrong] : []),
    )
    await vi.waitFor(() => expect([0, 1].map((i) => row(i).hasAttribute("data-cut"))).toEqual([false, true]))
    const notices = row(2).querySelector(".saying .notices")?.getBoundingClientRect()
    expect(notices?.height).toBeGreaterThan(10)
    expect(notices?.bottom).toBeLessThanOrEqual(row(2).getBoundingClientRect().bottom)
  })

  it("draws no other row again while a text changes", async () => {
    const { desk, ledger } = await laid(["dial shift\n  start 1", "value twice = shift * 2", "note\nNothing to do with it."])
    const drawn: CellId[] = []
    const render = vi.spyOn(Row.prototype, "render")
    desk.typed("c0", "dial shift\n  start 2")
    await ledger.updateComplete
    await row(0).updateComplete
    for (const each of render.mock.contexts) drawn.push((each as Row).cell.id)
    render.mockRestore()
    expect([...new Set(drawn)]).toEqual(["c0"])
  })
})
