// Values: what findings are made of, and the three identities a piece of work can have. A value is plain data, so that it can be
// hashed, stored and sent; it holds no function, no class and no view into a larger buffer. Hashing lives in hash.ts, keys in key.ts.

/** The name of a cell, or of a column: a letter or `_`, then letters, marks, digits, `_`; in NFC. */
export type Name = string

/** What JSON can hold. */
export type Json = null | boolean | number | string | readonly Json[] | { readonly [member: string]: Json }

/** What a finding can hold. Findings are type aliases, never interfaces, so that they fit the index signature. */
export type Value =
  | null
  | boolean
  | number
  | string
  | Float64Array
  | Uint32Array
  | Int32Array
  | Uint8Array
  | readonly Value[]
  | { readonly [part: string]: Value }

declare const mark: unique symbol

/** Names the work (kind, version, statement, keys of what is used): the same on every machine; for file and trail. Lower-case hex SHA-256. */
export type Key = string & { readonly [mark]: "key" }

/** 128 bits of a value's content, as 32 hex digits: decides whether readers run again. It never leaves the engine. */
export type Hash = string & { readonly [mark]: "hash" }
