// The records of the file format, as schemas: every member of every record is checked here before anything else sees it. A message says
// what the member should be, so that it can be put into a notice as it stands.

import * as v from "valibot"

import type { Json } from "../../runtime/value.ts"
import type { JsonObject } from "./rest.ts"

/** Members that are missing or not what they should be, each with what it should be. */
export type Wrong = readonly { readonly member: string; readonly shouldBe: string }[]

export type Checked<Said> = { readonly ok: true; readonly said: Said } | { readonly ok: false; readonly wrong: Wrong }

/** The members of a record as its schema has them; unknown members are left out. */
export function checked<Said>(schema: v.GenericSchema<unknown, Said>, record: JsonObject): Checked<Said> {
  const result = v.safeParse(schema, record)
  if (result.success) return { ok: true, said: result.output }
  const wrong = new Map<string, string>()
  for (const issue of result.issues) {
    const member = String(issue.path?.[0]?.key ?? "")
    if (!wrong.has(member)) wrong.set(member, issue.path?.[0] !== undefined && !Object.hasOwn(record, member) ? "there" : issue.message)
  }
  return { ok: false, wrong: [...wrong].map(([member, shouldBe]) => ({ member, shouldBe })) }
}

/** The members of a record that its schema does not know; null where there are none. */
export function unknownMembers(members: readonly string[], record: JsonObject): JsonObject | null {
  const others = Object.entries(record).filter(([member]) => member !== "@record" && !members.includes(member))
  return others.length === 0 ? null : Object.fromEntries(others)
}

const text = v.string("a text")
const count = v.pipe(v.number("a whole number from 0"), v.safeInteger("a whole number from 0"), v.minValue(0, "a whole number from 0"))
const sha256 = v.pipe(v.string("64 digits of lower-case hex"), v.regex(/^[0-9a-f]{64}$/, "64 digits of lower-case hex"))
const json = v.custom<Json>((value) => value !== undefined, "there")

/** RFC 3339 in UTC, such as 2024-05-01T08:30:00Z. */
const instant = v.pipe(
  v.string("a time in UTC as in RFC 3339"),
  v.regex(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d(\.\d+)?Z$/, "a time in UTC as in RFC 3339"),
  v.check((time) => !Number.isNaN(Date.parse(time)), "a time in UTC as in RFC 3339"),
)

const uuid = v.pipe(v.string("a UUID"), v.regex(/^[0-9a-fA-F]{8}(-[0-9a-fA-F]{4}){3}-[0-9a-fA-F]{12}$/, "a UUID"))

/** The id of a cell, as short as the format says it is. */
const cellId = v.pipe(v.string("a short text"), v.minLength(1, "a short text"), v.maxLength(64, "a text of at most 64 characters"))

export const head = v.object({ version: v.literal(1, "1"), id: uuid, title: text, made: instant, changed: instant, writer: text })
export const cell = v.object({ id: cellId, text })
export const enclosure = v.object({ name: v.pipe(text, v.minLength(1, "a name")), media: text, size: count, sha256 })
export const bytes = v.object({ sha256, at: count, data: text, as: v.picklist(["text", "base64"], '"text" or "base64"') })
export const finding = v.object({ cell: cellId, key: sha256, summary: json })
export const trail = v.object({
  seq: v.pipe(count, v.minValue(1, "a whole number from 1")),
  time: text,
  by: text,
  kind: text,
  body: json,
  previous: sha256,
  hash: sha256,
})
export const seal = v.object({ sha256, trail_size: count, trail_root: sha256, signatures: v.array(json, "a list") })

/** All records this version knows. */
export const schemas = { etamu: head, cell, enclosure, bytes, finding, trail, seal } as const

export type RecordName = keyof typeof schemas

export const isRecordName = (name: string): name is RecordName => Object.hasOwn(schemas, name)

/** The members that a record of this name has in this version. */
export const membersOf = (name: RecordName): readonly string[] => Object.keys(schemas[name].entries)
