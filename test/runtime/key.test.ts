import { createHash } from "node:crypto"
import { describe, expect, it } from "vitest"

import type { Keyed } from "../../runtime/key.ts"
import { key, utf8 } from "../../runtime/key.ts"
import type { Key } from "../../runtime/value.ts"

const work: Keyed = {
  kind: "model",
  version: 3,
  statement: 'model m\ndata beetles\nlink cloglog\npredictor "η"',
  uses: { zinc: "b".repeat(64) as Key, beetles: "a".repeat(64) as Key },
  files: { "plots.csv": "c".repeat(64), "lost.csv": null },
}

describe("a key", () => {
  it("is the SHA-256 of the canonical form, as the file format says", () => {
    // The canonical form written out by hand (RFC 8785: members in order, no blanks), and hashed by the platform.
    const a = "a".repeat(64)
    const [b, c] = ["b".repeat(64), "c".repeat(64)]
    const form =
      `{"files":{"lost.csv":null,"plots.csv":"${c}"},"kind":"model",` +
      `"statement":"model m\\ndata beetles\\nlink cloglog\\npredictor \\"η\\"","uses":{"beetles":"${a}","zinc":"${b}"},"version":3}`
    expect(key(work)).toBe(createHash("sha256").update(form).digest("hex"))
  })

  it.each<readonly [string, Partial<Keyed>]>([
    ["the kind", { kind: "value" }],
    ["its version", { version: 4 }],
    ["the statement", { statement: "model m" }],
    ["what is used", { uses: {} }],
    ["the files", { files: {} }],
  ])("changes with %s", (_, change) => {
    expect(key({ ...work, ...change })).not.toBe(key(work))
  })

  it("is there for any text at all", () => {
    expect(key({ ...work, statement: "note\n\ud800 half a pair" })).toMatch(/^[0-9a-f]{64}$/)
    expect(key({ ...work, statement: "note\n\ud800" })).not.toBe(key({ ...work, statement: "note\n\ud801" }))
  })
})

it.each(["", "plain", "ημ", "∞ ≤ €", "𝜂 and 😀", "a\u0000b\r\n\t", "\uffff"])(
  "the bytes of %j are those of the platform's encoder",
  (text) => {
    expect(utf8(text)).toEqual(new TextEncoder().encode(text))
  },
)
