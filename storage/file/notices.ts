// Every notice that reading or writing a file can give. They are the notices of the house with one thing more: the line of the file.

import { heading, type Level, type Notice } from "../../runtime/notice.ts"
import type { Wrong } from "./record.ts"

/** A notice about a file. `line` counts from 1; null where it is about the file as a whole. */
export interface FileNotice extends Notice {
  readonly line: number | null
}

const notice = (level: Level, code: string, line: number | null, text: string, hint: string | null): FileNotice => ({
  level,
  code: `file/${code}`,
  text,
  hint,
  clause: null,
  at: heading,
  mend: null,
  line,
})

const number = (n: number): string => n.toString().replace(/\B(?=(\d{3})+$)/g, ",")
const mebibytes = (bytes: number): string => `${number(bytes / 1024 / 1024)} MiB`

/** The first record is not the head of a notebook, nor is any other line a record. */
export const notANotebook = (): FileNotice =>
  notice("fault", "not-a-notebook", 1, "This file is not a notebook of Etamu.", "A notebook file begins with a record of the type etamu.")

export const empty = (): FileNotice =>
  notice("fault", "empty", null, "The file is empty.", "A notebook file begins with a record of the type etamu.")

export const newerVersion = (line: number, version: number): FileNotice =>
  notice(
    "fault",
    "newer-version",
    line,
    `The file is written in version ${version} of the format, and this program reads version 1.`,
    "A newer Etamu opens it.",
  )

export const noHead = (): FileNotice =>
  notice(
    "fault",
    "no-head",
    1,
    "The file does not begin with a record of the type etamu.",
    "Its title and its times are lost; the cells below are read.",
  )

export const secondHead = (line: number): FileNotice =>
  notice(
    "fault",
    "second-head",
    line,
    "A second record of the type etamu stands here.",
    "A file holds one notebook; the first head counts.",
  )

export const tooLong = (line: number, bound: number): FileNotice =>
  notice(
    "fault",
    "line-too-long",
    line,
    `Line ${number(line)} is longer than ${mebibytes(bound)}, so it is not read.`,
    `A line holds at most ${mebibytes(bound)}.`,
  )

export const tooDeep = (line: number, bound: number): FileNotice =>
  notice(
    "fault",
    "nested-too-deep",
    line,
    `The record on line ${number(line)} has more than ${bound} objects and lists inside one another, so it is not read.`,
    `A record nests at most ${bound} deep.`,
  )

export const tooManyCells = (line: number, bound: number): FileNotice =>
  notice(
    "fault",
    "too-many-cells",
    line,
    `The file has more than ${number(bound)} cells; those from line ${number(line)} on are not read.`,
    `A notebook holds at most ${number(bound)} cells.`,
  )

export const tooMuchText = (line: number | null, cell: string, bound: number): FileNotice =>
  notice(
    "fault",
    "cell-too-long",
    line,
    `The text of the cell ${cell} is longer than ${mebibytes(bound)}${line === null ? "." : ", so it is not read."}`,
    `A cell holds at most ${mebibytes(bound)} of text.`,
  )

export const enclosureTooLarge = (line: number | null, name: string, bound: number): FileNotice =>
  notice(
    "fault",
    "enclosure-too-large",
    line,
    `The enclosure ${name} is larger than ${mebibytes(bound)}${line === null ? "." : ", so it is not read."}`,
    `An enclosure holds at most ${mebibytes(bound)}.`,
  )

export const notText = (line: number): FileNotice =>
  notice(
    "fault",
    "not-utf-8",
    line,
    `Line ${number(line)} is not valid UTF-8, so it is not read.`,
    "A notebook file is UTF-8 text from end to end.",
  )

export const plainNotText = (): FileNotice =>
  notice("fault", "not-utf-8", null, "The file is not valid UTF-8, so it is not read.", "Save it as UTF-8 text.")

export const notARecord = (line: number): FileNotice =>
  notice(
    "fault",
    "not-a-record",
    line,
    `Line ${number(line)} is not a record, so it is not read.`,
    'A record is a JSON object with the member "@record".',
  )

export const wrongMembers = (line: number, record: string, wrong: Wrong): FileNotice => {
  const said = wrong.map(({ member, shouldBe }) => `"${member}" should be ${shouldBe}`).join(", ")
  return notice("fault", "wrong-member", line, `The ${record} record on line ${number(line)} is not as the format asks: ${said}.`, null)
}

export const sameCellId = (line: number, id: string, given: string): FileNotice =>
  notice(
    "fault",
    "same-cell-id",
    line,
    `A second cell with the id ${id} stands here; it is read as ${given}.`,
    "The id of a cell stands once in a file.",
  )

export const sameEnclosure = (line: number, name: string): FileNotice =>
  notice(
    "fault",
    "same-enclosure",
    line,
    `A second enclosure with the name ${name} stands here, so it is not read.`,
    "The name of an enclosure stands once in a file.",
  )

export const sameFinding = (line: number, cell: string): FileNotice =>
  notice("fault", "same-finding", line, `A second finding of the cell ${cell} stands here, so it is not read.`, "A cell has one finding.")

export const strayBytes = (line: number): FileNotice =>
  notice(
    "fault",
    "stray-bytes",
    line,
    `The bytes on line ${number(line)} belong to no enclosure above them, so they are not read.`,
    "Bytes follow the enclosure they belong to.",
  )

export const misplacedBytes = (line: number, name: string, at: number, expected: number): FileNotice =>
  notice(
    "fault",
    "misplaced-bytes",
    line,
    `The bytes on line ${number(line)} say they begin at ${number(at)} of the enclosure ${name}, and those above end at ${number(expected)}.`,
    "The enclosure is not used.",
  )

export const undecodable = (line: number, name: string): FileNotice =>
  notice(
    "fault",
    "not-base64",
    line,
    `The bytes on line ${number(line)} of the enclosure ${name} are not base64.`,
    "The enclosure is not used.",
  )

export const alteredEnclosure = (line: number, name: string): FileNotice =>
  notice(
    "fault",
    "altered-enclosure",
    line,
    `The bytes of the enclosure ${name} are not those it was sealed with: their SHA-256 or size differs, so it is not used.`,
    `Enclose ${name} again, from the file it came from.`,
  )

export const missingBytes = (line: number, name: string): FileNotice =>
  notice("warning", "missing-bytes", line, `The file names the enclosure ${name} and does not hold its bytes.`, `Enclose ${name} again.`)

/** The file ends inside a line. */
export const cutShort = (line: number): FileNotice =>
  notice("fault", "cut-short", line, `The file was cut short in line ${number(line)}.`, "Every whole record before it is read.")

export const unreadable = (line: number, because: string): FileNotice =>
  notice(
    "fault",
    "unreadable",
    line,
    `Reading the file stopped at line ${number(line)}: ${because}.`,
    "Every whole record before it is read.",
  )

export const moreNotices = (count: number): FileNotice =>
  notice("fault", "more", null, `${number(count)} more lines are not as the format asks.`, null)

export const unsealed = (): FileNotice =>
  notice(
    "remark",
    "unsealed",
    null,
    "The file has no seal, so it cannot be told whether it is whole and as it was written.",
    "Saving it as a file seals it.",
  )

export const brokenSeal = (line: number): FileNotice =>
  notice(
    "fault",
    "broken-seal",
    line,
    "The file is not as it was sealed: what stands before the seal was changed.",
    "Compare it with the copy it came from.",
  )

export const afterSeal = (line: number): FileNotice =>
  notice(
    "fault",
    "after-seal",
    line,
    `Line ${number(line)} stands after the seal, so it was added later.`,
    "The seal is the last line of a file.",
  )

export const brokenChain = (line: number | null, seq: number, why: "order" | "previous" | "hash"): FileNotice => {
  const what = {
    order: "it is out of order",
    previous: "it does not follow on the entry before",
    hash: "it was changed after it was written",
  }[why]
  return notice(
    "fault",
    "broken-chain",
    line,
    `The trail does not hold from entry ${number(seq)} on: ${what}.`,
    "What the trail says before that entry holds.",
  )
}

export const otherTrail = (line: number): FileNotice =>
  notice(
    "fault",
    "other-trail",
    line,
    "The trail is not the one that was sealed: its size or its tree hash differs.",
    "Compare it with the copy it came from.",
  )
