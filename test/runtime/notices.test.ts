// The wording of every notice of the runtime, kept honest by being written out.

import { expect, it } from "vitest"

import type { Notice } from "../../runtime/notice.ts"
import { heading } from "../../runtime/notice.ts"
import * as notices from "../../runtime/notices.ts"

const says = ({ text, hint }: Notice): string => `${text} ${hint}`

it.each<readonly [keyof typeof notices, Notice, string]>([
  ["unknownCell", notices.unknownCell("k3"), "The notebook has no cell with the id k3. It may have been removed before this change came."],
  ["knownCell", notices.knownCell("k3"), "The notebook has a cell with the id k3 already. A new cell needs an id of its own."],
  ["outOfPlace", notices.outOfPlace(7, 4), "There is no place 7 in a notebook of 4 cells. Places count from 0 to 4."],
  ["tooManyCells", notices.tooManyCells(10_000), "A notebook holds at most 10,000 cells. Remove cells, or go on in another notebook."],
  [
    "tooLongText",
    notices.tooLongText(1_048_576),
    "The text of a cell holds at most 1,048,576 bytes. Enclose the long part as a file, or part the cell in two.",
  ],
  [
    "tooLargeFile",
    notices.tooLargeFile("plots.csv", 536_870_912),
    "The file plots.csv is larger than 536,870,912 bytes. Enclose a smaller file: fewer rows, or only the columns that are read.",
  ],
  [
    "badFile",
    notices.badFile("plots.csv"),
    "The file plots.csv is not described as an enclosure has to be. " +
      "It needs a name, its size in bytes, and its SHA-256 as 64 lower-case hexadecimal digits.",
  ],
  [
    "unknownFile",
    notices.unknownFile("plots.csv"),
    "The notebook encloses no file called plots.csv. Only a file that is enclosed can be let go.",
  ],
  [
    "unknownKind",
    notices.unknownKind("modle", "model", ["data", "model"], heading, null),
    "There is no kind of cell called modle. The nearest kind is model.",
  ],
  [
    "unknownKind",
    notices.unknownKind("xyz", null, ["data", "model", "note"], heading, null),
    "There is no kind of cell called xyz. A cell begins with one of data, model or note.",
  ],
  [
    "notAvailableYet",
    notices.notAvailableYet("compare", heading),
    "Cells of the kind compare are not available yet. The statement is kept as it is; a later version of the program will read it.",
  ],
  [
    "doubledName",
    notices.doubledName("kill", 2, heading),
    "Two cells are called kill. Give each a name of its own, or switch off all but one.",
  ],
  ["missingCell", notices.missingCell("kil", "kill", heading, null), "There is no cell called kil. The nearest name is kill."],
  [
    "missingCell",
    notices.missingCell("plots", null, heading, null),
    "There is no cell called plots. Add a cell called plots, or name another.",
  ],
  ["cycle", notices.cycle(["a"], 1, heading), "a waits for itself. A cell cannot use its own name."],
  ["cycle", notices.cycle(["frost", "kill"], 2, heading), "frost and kill wait for each other. One of them has to do without the other."],
  ["cycle", notices.cycle(["a", "b", "c"], 3, heading), "a waits for b, b for c, and c for a. One of them has to do without the next."],
  [
    "missingFile",
    notices.missingFile("plots.csv", heading),
    "The notebook encloses no file called plots.csv. Drop the file on the page, or lay it beside the notebook.",
  ],
])("%s", (_, notice, expected) => {
  expect(says(notice)).toBe(expected)
  expect(notice.level).toBe("fault")
})

it("each code belongs to one notice", () => {
  expect(Object.keys(notices)).toHaveLength(14)
})
