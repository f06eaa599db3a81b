// How a cell stands, in form and in words: each state of the engine has one of each.

import { describe, expect, it } from "vitest"
import type { State } from "../../../../runtime/engine.ts"
import type { Shown } from "../../../../runtime/evaluator.ts"
import type { Hash, Key } from "../../../../runtime/value.ts"
import { standing } from "../../../../ui/page/ledger/standing.ts"

const shown: Shown = { blocks: [], notices: [], summary: null }
const ready = (late: boolean): State => ({ status: "ready", shown, key: "k" as Key, hash: late ? null : ("h" as Hash), late })

const stands = (state: State, faults = 0, empty = false) => standing(state, empty, faults, "frost")

describe("a row", () => {
  it.each<[string, State, string, string]>([
    ["ready", ready(false), "ready", "ready"],
    ["ready with late parts to come", ready(true), "more", "ready, more to come"],
    ["working for the first time", { status: "working", last: null }, "working", "working"],
    ["due", { status: "due", last: null }, "due", "due"],
    ["waiting", { status: "waiting", for: "c1", last: null }, "waiting", "waits for frost"],
    ["off", { status: "off" }, "off", "off: kept, not evaluated"],
    ["crashed", { status: "crash", text: "", stack: "", last: null }, "crash", "our fault, not yours"],
  ])("that is %s says so", (_, state, form, words) => {
    expect(stands(state)).toMatchObject({ form, words, stale: false })
  })

  it("counts its faults in words", () => {
    const fault: State = { status: "fault", notices: [], shown: null, last: null }
    expect(stands(fault, 1).words).toBe("one fault")
    expect(stands(fault, 2).words).toBe("2 faults")
  })

  it("keeps the last good finding and says that it is out of date", () => {
    expect(stands({ status: "working", last: shown })).toMatchObject({ shown, stale: true, words: "working; what is shown is out of date" })
    expect(stands({ status: "fault", notices: [], shown: null, last: shown }, 1)).toMatchObject({ shown, stale: true })
  })

  it("shows what a fault has found as it is: a refuted claim with its reason is not out of date", () => {
    expect(stands({ status: "fault", notices: [], shown, last: null }, 1)).toMatchObject({ shown, stale: false })
  })

  it("of an empty cell asks for something to be said", () => {
    expect(stands({ status: "off" }, 0, true)).toMatchObject({ form: "empty", words: "nothing said yet" })
  })
})
