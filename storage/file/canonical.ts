// The canonical form of JSON (RFC 8785): the same value always gives the same text, so that it can be hashed, compared line by line and
// signed. Doubles that JSON cannot hold and halves of surrogate pairs have no canonical form; `plain` says what becomes of them.

import canonicalize from "canonicalize"

import type { Json } from "../../runtime/value.ts"

/** The canonical form of a value. */
export function canonical(value: Json): string {
  const text = canonicalize(plain(value))
  if (text === undefined) throw new RangeError("Only plain data has a canonical form")
  return text
}

/**
 * The value as the format can hold it: what is not available is null, what is unbounded is said in words, and half of a surrogate pair
 * (which UTF-8 cannot hold) becomes U+FFFD. Whatever needs no change is handed back as it is.
 */
export function plain(value: Json): Json {
  if (typeof value === "string") return wellFormed(value)
  if (typeof value === "number") return Number.isFinite(value) ? value : Number.isNaN(value) ? null : value > 0 ? "infinity" : "-infinity"
  if (value === null || typeof value === "boolean") return value
  if (Array.isArray(value)) return value.map(plain)
  // By entries, so that a member called __proto__ stays a member.
  return Object.fromEntries(Object.entries(value).map(([member, of]) => [wellFormed(member), plain(of)]))
}

/** The text with each unpaired surrogate replaced by U+FFFD. */
export const wellFormed = (text: string): string =>
  text.replace(/[\uD800-\uDBFF](?![\uDC00-\uDFFF])|(?<![\uD800-\uDBFF])[\uDC00-\uDFFF]/g, "\uFFFD")
