// Every notice the runtime can give: about a change that does not fit, and about a statement as a member of its notebook (its kind, its
// name, the names it uses). What a clause says is for the kinds to judge.

import type { Intent, Notice, Place } from "./notice.ts"
import { heading } from "./notice.ts"

const fault = (code: string, text: string, hint: string | null, at: Place = heading, mend: Intent | null = null): Notice => ({
  level: "fault",
  code,
  text,
  hint,
  clause: null,
  at,
  mend,
})

/** Names as a sentence lists them: `a`, `a and b`, `a, b and c`. */
const list = (names: readonly string[], last = "and"): string =>
  names.length < 2 ? names.join("") : `${names.slice(0, -1).join(", ")} ${last} ${names.at(-1)}`

/** A whole number with its thousands parted. */
const grouped = (whole: number): string => String(whole).replace(/\B(?=(\d{3})+$)/g, ",")

// Changes that do not fit.

export const unknownCell = (id: string): Notice =>
  fault("document/unknown-cell", `The notebook has no cell with the id ${id}.`, "It may have been removed before this change came.")

export const knownCell = (id: string): Notice =>
  fault("document/known-cell", `The notebook has a cell with the id ${id} already.`, "A new cell needs an id of its own.")

export const outOfPlace = (at: number, cells: number): Notice =>
  fault("document/out-of-place", `There is no place ${at} in a notebook of ${cells} cells.`, `Places count from 0 to ${cells}.`)

export const tooManyCells = (bound: number): Notice =>
  fault("document/too-many-cells", `A notebook holds at most ${grouped(bound)} cells.`, "Remove cells, or go on in another notebook.")

export const tooLongText = (bound: number): Notice =>
  fault(
    "document/too-long-text",
    `The text of a cell holds at most ${grouped(bound)} bytes.`,
    "Enclose the long part as a file, or part the cell in two.",
  )

export const tooLargeFile = (name: string, bound: number): Notice =>
  fault(
    "document/too-large-file",
    `The file ${name} is larger than ${grouped(bound)} bytes.`,
    "Enclose a smaller file: fewer rows, or only the columns that are read.",
  )

export const badFile = (name: string): Notice =>
  fault(
    "document/bad-file",
    `The file ${name} is not described as an enclosure has to be.`,
    "It needs a name, its size in bytes, and its SHA-256 as 64 lower-case hexadecimal digits.",
  )

export const unknownFile = (name: string): Notice =>
  fault("document/unknown-file", `The notebook encloses no file called ${name}.`, "Only a file that is enclosed can be let go.")

// The statement as a member of its notebook.

export const unknownKind = (kind: string, near: string | null, kinds: readonly string[], at: Place, mend: Intent | null): Notice =>
  fault(
    "cell/unknown-kind",
    `There is no kind of cell called ${kind}.`,
    near === null ? `A cell begins with one of ${list(kinds, "or")}.` : `The nearest kind is ${near}.`,
    at,
    mend,
  )

export const notAvailableYet = (kind: string, at: Place): Notice =>
  fault(
    "cell/not-available-yet",
    `Cells of the kind ${kind} are not available yet.`,
    "The statement is kept as it is; a later version of the program will read it.",
    at,
  )

export const doubledName = (name: string, cells: number, at: Place): Notice =>
  fault(
    "cell/doubled-name",
    `${cells === 2 ? "Two" : String(cells)} cells are called ${name}.`,
    "Give each a name of its own, or switch off all but one.",
    at,
  )

export const missingCell = (name: string, near: string | null, at: Place, mend: Intent | null): Notice =>
  fault(
    "cell/missing-cell",
    `There is no cell called ${name}.`,
    near === null ? `Add a cell called ${name}, or name another.` : `The nearest name is ${near}.`,
    at,
    mend,
  )

/** The names in order, the cell's own first: each waits for the next, and the last for the first. Of many `cells` there are three names. */
export const cycle = (names: readonly string[], cells: number, at: Place): Notice =>
  fault("cell/cycle", waitingRound(names, cells), hintForRound(cells), at)

/** No enclosure of that name: said where the kind has not said so itself. */
export const missingFile = (name: string, at: Place): Notice =>
  fault(
    "cell/missing-file",
    `The notebook encloses no file called ${name}.`,
    "Drop the file on the page, or lay it beside the notebook.",
    at,
  )

const hintForRound = (cells: number): string => {
  if (cells === 1) return "A cell cannot use its own name."
  return cells === 2 ? "One of them has to do without the other." : "One of them has to do without the next."
}

function waitingRound(names: readonly string[], cells: number): string {
  const [first = "", second = ""] = names
  if (cells === 1) return `${first} waits for itself.`
  if (cells === 2) return `${first} and ${second} wait for each other.`
  if (names.length < cells) {
    return `${first} waits for ${second}, and so on through ${cells - 3} more cells to ${names.at(-1)}, which waits for ${first}.`
  }
  const steps = names.map((name, i) => {
    const next = names[(i + 1) % names.length]
    return i === 0 ? `${name} waits for ${next}` : `${name} for ${next}`
  })
  return `${steps.slice(0, -1).join(", ")}, and ${steps.at(-1)}.`
}
