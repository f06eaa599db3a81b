// Every notice a dial can give. All of them are about its text, so they stand there while it is typed.

import type { Intent, Notice, Place } from "../../runtime/notice.ts"

const fault = (code: string, clause: string | null, at: Place, text: string, hint: string, mend: Intent | null = null): Notice => ({
  level: "fault",
  code,
  text,
  hint,
  clause,
  at,
  mend,
})

const heading: Place = { clause: -1, from: 0, to: 0 }

export const nothingToTurn = (): Notice =>
  fault(
    "dial/nothing-to-turn",
    null,
    heading,
    "This dial does not say what it can be turned to.",
    'It needs a range, from 0 to 1 and step 0.1, or a choice, choice "a", "b".',
  )

export const rangeAndChoice = (at: Place): Notice =>
  fault(
    "dial/range-and-choice",
    "choice",
    at,
    "This dial has a range and a choice.",
    "One of the two has to go: a dial turns over numbers or over texts.",
    { label: "Take the choice away", edits: [{ cell: null, clause: "choice", nth: 0, says: null }] },
  )

export const noRange = (at: Place): Notice =>
  fault("dial/no-range", "step", at, "This dial has a step, but no range to step over.", "The range is written from 0 to 1.")

export const noStep = (at: Place, step: string): Notice =>
  fault(
    "dial/no-step",
    "from",
    at,
    "This dial has a range, but no step.",
    `The step says which numbers it stops at, such as step ${step}.`,
    {
      label: `Add step ${step}`,
      edits: [{ cell: null, clause: "step", nth: 0, says: step }],
    },
  )

export const rangeTurned = (at: Place, from: string, to: string): Notice =>
  fault(
    "dial/empty-range",
    "from",
    at,
    `The range from ${from} to ${to} holds no two numbers.`,
    "The lower end comes first and lies below the upper.",
  )

export const stepNotPositive = (at: Place, step: string): Notice =>
  fault("dial/step-not-positive", "step", at, `A dial cannot go in steps of ${step}.`, "The step is a number above 0.")

export const stepTooLong = (at: Place, step: string, from: string, to: string): Notice =>
  fault(
    "dial/step-too-long",
    "step",
    at,
    `The step ${step} is longer than the range from ${from} to ${to}.`,
    "At least one step has to fit into the range.",
  )

export const tooManySteps = (at: Place, most: number): Notice =>
  fault("dial/too-many-steps", "step", at, `This range has more than ${most} steps.`, "A longer step makes fewer.")

export const startNotOnStep = (at: Place, start: string, nearest: string): Notice =>
  fault("dial/start-not-on-step", "start", at, `The dial never stops at ${start}.`, `The nearest of its steps is ${nearest}.`, {
    label: `Start at ${nearest}`,
    edits: [{ cell: null, clause: "start", nth: 0, says: nearest }],
  })

export const startNotAChoice = (at: Place, start: string, choices: readonly string[], nearest: string | null): Notice =>
  fault(
    "dial/start-not-a-choice",
    "start",
    at,
    `${start} is none of the choices.`,
    nearest === null ? `They are ${choices.join(", ")}.` : `The nearest is ${nearest}.`,
    nearest === null ? null : { label: `Start at ${nearest}`, edits: [{ cell: null, clause: "start", nth: 0, says: nearest }] },
  )

export const choiceTwice = (at: Place, choice: string): Notice =>
  fault("dial/choice-twice", "choice", at, `The choice ${choice} is there twice.`, "Each text can be chosen once.")

export const endNotReached = (at: Place, to: string, last: string): Notice => ({
  level: "remark",
  code: "dial/end-not-reached",
  text: `No step ends at ${to}; the last one is ${last}.`,
  hint: "A range that is a whole number of steps long reaches its end.",
  clause: "from",
  at,
  mend: null,
})
