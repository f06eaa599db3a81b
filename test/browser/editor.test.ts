// The editor in a real browser: completion as it is typed, notices underlined in place, and texts that change from outside.

import { afterEach, describe, expect, it, vi } from "vitest"
import { userEvent } from "vitest/browser"
import { words } from "../../cells/words.ts"
import type { Notice } from "../../runtime/notice.ts"
import { IntentEvent } from "../../ui/page/intent.ts"
import type { Surroundings } from "../../ui/page/statement/completion.ts"
import { LeaveEvent, type StatementEditor, TextEvent } from "../../ui/page/statement/editor.ts"

const around: Surroundings = {
  kinds: words,
  cells: [{ name: "kill", kind: "model", says: "A generalized linear model" }],
  columns: [{ name: "night", type: "number", unit: "°C", called: null, levels: [] }],
  files: [],
  families: [],
  links: () => [{ name: "cloglog", says: "", takes: false }],
  functions: [],
  predictorCalls: [],
  family: null,
}

let editor: StatementEditor | null = null

afterEach(() => {
  editor?.remove()
  editor = null
})

function open(text: string): StatementEditor {
  const made = document.createElement("etamu-editor")
  made.text = text
  made.surroundings = () => around
  document.body.append(made)
  made.take(text.length)
  editor = made
  return made
}

/** A list that has just come up takes no key yet, so that nothing is chosen by a key that was meant for the text. */
const aMoment = () => new Promise((done) => setTimeout(done, 150))

const offered = (): string[] =>
  [...(editor?.shadowRoot?.querySelectorAll(".cm-completionLabel") ?? [])].map((each) => each.textContent ?? "")

describe("the editor", () => {
  it("completes a clause, then at once what it may say, each with a line of help", async () => {
    const made = open("scales\n  ")
    await userEvent.keyboard("mod")
    await vi.waitFor(() => expect(offered()).toContain("model"))
    expect(made.shadowRoot?.querySelector(".cm-completionDetail")?.textContent).not.toBe("")
    await aMoment()
    await userEvent.keyboard("{Enter}")
    await vi.waitFor(() => expect(offered()).toEqual(["kill"]))
    await aMoment()
    await userEvent.keyboard("{Tab}")
    await vi.waitFor(() => expect(made.text).toBe("scales\n  model kill"))
  })

  it("goes on to the next line where the word stands there whole already", async () => {
    const made = open("scales\n  across ")
    await userEvent.keyboard("night")
    await vi.waitFor(() => expect(offered()).toEqual(["night"]))
    await aMoment()
    await userEvent.keyboard("{Enter}")
    expect(made.text).toBe("scales\n  across night\n  ")
  })

  it("stands a new clause in under the heading", async () => {
    const made = open("scales")
    await userEvent.keyboard("{Enter}across")
    expect(made.text).toBe("scales\n  across")
  })

  it("tells every change, but none that came from outside", async () => {
    const made = open("scales")
    const told: string[] = []
    made.addEventListener(TextEvent.type, (event) => told.push((event as TextEvent).detail))
    await userEvent.keyboard("x")
    made.text = "scales\n  model kill"
    expect(told).toEqual(["scalesx"])
    expect(made.text).toBe("scales\n  model kill")
  })

  it("underlines what is wrong and offers its mend", async () => {
    const mend = { label: "Write kill", edits: [{ cell: null, clause: "model", nth: 0, says: "kill" }] }
    const notice: Notice = {
      level: "fault",
      code: "runtime/no-cell",
      text: "There is no cell kil.",
      hint: null,
      clause: "model",
      at: { clause: 0, from: 1, to: 2 },
      mend,
    }
    const made = open("scales\n  model kil")
    made.notices = [notice]
    const wrong = await vi.waitFor(() => {
      const found = made.shadowRoot?.querySelector(".cm-lintRange-error")
      if (!(found instanceof HTMLElement)) throw new Error("Nothing is underlined.")
      return found
    })
    expect(wrong.textContent).toBe("kil")
    const asked: string[] = []
    made.addEventListener(IntentEvent.type, (event) => asked.push((event as IntentEvent).detail.intent.label))
    await userEvent.hover(wrong)
    const action = await vi.waitFor(() => {
      const found = made.shadowRoot?.querySelector<HTMLElement>(".cm-diagnosticAction")
      if (found === null || found === undefined) throw new Error("No mend is offered.")
      return found
    })
    action.click()
    expect(asked).toEqual(["Write kill"])
  })

  it("leaves by Escape, and by the arrows at its ends", async () => {
    const made = open("scales\n  model kill")
    const left: string[] = []
    made.addEventListener(LeaveEvent.type, (event) => left.push((event as LeaveEvent).detail))
    await userEvent.keyboard("{ArrowDown}")
    made.take(0)
    await userEvent.keyboard("{ArrowUp}{Escape}")
    expect(left).toEqual(["below", "above", "stay"])
  })

  it("has no undo of its own: the notebook has the only one", async () => {
    const made = open("scales")
    await userEvent.keyboard("x{Control>}z{/Control}")
    expect(made.text).toBe("scalesx")
  })
})
