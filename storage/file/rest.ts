// What a newer program put into a file of this version: members and whole records that are unknown here. They are kept in the notebook's
// `rest`, each beside the record it belongs to or stood after, and written back in place; nothing here looks inside them.

import type { Json } from "../../runtime/value.ts"

/**
 * Names a record of a file: `etamu`, `cell ID`, `enclosure NAME`, `bytes SHA256 AT`, `finding CELL`, `trail SEQ` or `seal`. An unknown
 * record is anchored to the known one above it.
 */
export type Anchor = string

export type JsonObject = { readonly [member: string]: Json }

/** Unknown members by the record that has them, and unknown records by the known record above them. */
export interface Rest {
  readonly members: readonly (readonly [Anchor, JsonObject])[]
  readonly records: readonly (readonly [Anchor, JsonObject])[]
}

/** As the notebook holds it: null where the file had nothing unknown. */
export const restAsJson = (rest: Rest): Json =>
  rest.members.length === 0 && rest.records.length === 0 ? null : { members: rest.members, records: rest.records }

/** What a notebook's `rest` says. Whatever is not of the shape above is passed over: it did not come from a file. */
export function restOf(json: Json): Rest {
  if (!isObject(json)) return { members: [], records: [] }
  return { members: pairs(json["members"]), records: pairs(json["records"]) }
}

export const isObject = (value: Json | undefined): value is JsonObject =>
  typeof value === "object" && value !== null && !Array.isArray(value)

function pairs(list: Json | undefined): readonly (readonly [Anchor, JsonObject])[] {
  if (!Array.isArray(list)) return []
  const found: (readonly [Anchor, JsonObject])[] = []
  for (const pair of list as readonly Json[]) {
    if (!Array.isArray(pair)) continue
    const [anchor, of] = pair as readonly Json[]
    if (typeof anchor === "string" && isObject(of)) found.push([anchor, of])
  }
  return found
}
