// How a cell stands, as the ledger says it: the form of the hairline, the state in words, and which finding is shown and whether it is still
// true of the text. One function from the engine's state, so that form and words can never disagree.

import type { State } from "../../../runtime/engine.ts"
import type { Shown } from "../../../runtime/evaluator.ts"

export interface Standing {
  /** The form of the hairline. `more` is a finding that is there while late parts are still to come. */
  readonly form: "ready" | "more" | "due" | "working" | "fault" | "waiting" | "off" | "crash" | "empty"
  /** For everyone, in house words. */
  readonly words: string
  readonly shown: Shown | null
  /** What is shown is the last good finding, and the text has moved on. */
  readonly stale: boolean
}

/** `waitsFor` is what the cell waited for is called. */
export function standing(state: State, empty: boolean, faults: number, waitsFor: string): Standing {
  switch (state.status) {
    case "off":
      return empty
        ? { form: "empty", words: "nothing said yet", shown: null, stale: false }
        : { form: "off", words: "off: kept, not evaluated", shown: null, stale: false }
    case "due":
      return { form: "due", words: outOfDate("due", state.last), shown: state.last, stale: state.last !== null }
    case "working":
      return { form: "working", words: outOfDate("working", state.last), shown: state.last, stale: state.last !== null }
    case "waiting":
      return { form: "waiting", words: outOfDate(`waits for ${waitsFor}`, state.last), shown: state.last, stale: state.last !== null }
    case "fault": {
      const words = faults === 1 ? "one fault" : `${faults} faults`
      if (state.shown !== null) return { form: "fault", words, shown: state.shown, stale: false }
      return { form: "fault", words: outOfDate(words, state.last), shown: state.last, stale: state.last !== null }
    }
    case "crash":
      return { form: "crash", words: outOfDate("our fault, not yours", state.last), shown: state.last, stale: state.last !== null }
    case "ready":
      return state.late
        ? { form: "more", words: "ready, more to come", shown: state.shown, stale: false }
        : { form: "ready", words: "ready", shown: state.shown, stale: false }
  }
}

const outOfDate = (words: string, last: Shown | null): string => (last === null ? words : `${words}; what is shown is out of date`)
