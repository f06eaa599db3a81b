import { describe, expect, it } from "vitest"

import type { Found } from "../../runtime/evaluator.ts"
import { createMemo } from "../../runtime/memo.ts"
import type { Hash } from "../../runtime/value.ts"

const found = (bytes: Record<string, number>): Found => ({
  ok: true,
  version: 1,
  whole: null,
  parts: {},
  bytes: bytes as Record<Hash, number>,
  shown: { blocks: [], notices: [], summary: null },
  tried: [],
})

const big = 1_000_000

describe("the memo", () => {
  it("gives back what was put under what went in", () => {
    const memo = createMemo(big)
    const finding = found({ x: 10 })
    memo.put("in", finding)
    expect(memo.get("in")).toBe(finding)
    expect(memo.get("other")).toBeNull()
  })

  it("counts a column once, however many findings hold it", () => {
    const memo = createMemo(10 * big)
    memo.put("a", found({ column: big, a: 1 }))
    const alone = memo.bytes
    memo.put("b", found({ column: big, b: 1 }))
    expect(memo.bytes - alone).toBeLessThan(10_000)
    memo.put("b", found({ other: big }))
    expect(memo.bytes - alone).toBeGreaterThan(big)
    expect([...memo.hashes()].sort()).toEqual(["a", "column", "other"])
  })

  it("drops the longest unused first when it is full", () => {
    const memo = createMemo(3.5 * big)
    for (const name of ["a", "b", "c"]) memo.put(name, found({ [name]: big }))
    memo.get("a")
    memo.put("d", found({ d: big }))
    expect(["a", "b", "c", "d"].filter((name) => memo.get(name) !== null)).toEqual(["a", "c", "d"])
    expect(memo.bytes).toBeLessThanOrEqual(3.5 * big)
  })

  it("never drops what is pinned, until the last pin is gone", () => {
    const memo = createMemo(1.5 * big)
    memo.pin("a")
    memo.pin("a")
    memo.put("a", found({ a: big }))
    memo.put("b", found({ b: big }))
    expect(memo.get("a")).not.toBeNull()
    expect(memo.get("b")).toBeNull()
    memo.unpin("a")
    memo.put("c", found({ c: big }))
    expect(memo.get("a")).not.toBeNull()
    memo.unpin("a")
    memo.put("d", found({ d: big }))
    expect(memo.get("a")).toBeNull()
    expect(memo.get("d")).not.toBeNull()
  })

  it("forgets every finding that holds a lost hash, and counts what is left right", () => {
    const memo = createMemo(big)
    memo.put("a", found({ column: 100, a: 1 }))
    const alone = memo.bytes
    memo.put("b", found({ column: 100, b: 1 }))
    memo.put("c", found({ c: 1 }))
    memo.forget(["b" as Hash, "c" as Hash, "nobody" as Hash])
    expect([memo.get("b"), memo.get("c")]).toEqual([null, null])
    expect(memo.bytes).toBe(alone)
    expect(memo.size).toBe(1)
  })
})
