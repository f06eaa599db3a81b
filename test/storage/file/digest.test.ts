// SHA-256 against the examples of FIPS 180-2 (appendix B) and the digest of nothing, in each of its three ways; base64 against RFC 4648 §10.

import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { base64, bytesOfBase64 } from "../../../storage/file/base64.ts"
import { blobDigest, digest, runningDigest } from "../../../storage/file/digest.ts"

const examples = [
  ["", "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855"],
  ["abc", "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"],
  ["abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq", "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1"],
  ["a".repeat(1_000_000), "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0"],
] as const

describe("SHA-256", () => {
  it.each(examples)("gives the published digest, whole, running and of a Blob", async (text, expected) => {
    expect(digest(text)).toBe(expected)
    expect(await blobDigest(new Blob([text]))).toBe(expected)
    const running = runningDigest()
    for (let at = 0; at < text.length; at += 9_973) running.add(new TextEncoder().encode(text.slice(at, at + 9_973)))
    expect(running.value()).toBe(expected)
  })

  it("can be asked along the way and goes on", () => {
    const running = runningDigest()
    running.add(new TextEncoder().encode("ab"))
    expect(running.value()).toBe(digest("ab"))
    running.add(new TextEncoder().encode("c"))
    expect(running.value()).toBe(digest("abc"))
  })
})

describe("base64", () => {
  it.each([
    ["", ""],
    ["f", "Zg=="],
    ["fo", "Zm8="],
    ["foo", "Zm9v"],
    ["foob", "Zm9vYg=="],
    ["fooba", "Zm9vYmE="],
    ["foobar", "Zm9vYmFy"],
  ])("of %j is %j, and back", (text, encoded) => {
    expect(base64(new TextEncoder().encode(text))).toBe(encoded)
    expect(new TextDecoder().decode(bytesOfBase64(encoded) ?? undefined)).toBe(text)
  })

  it("gives any bytes back", () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 100 }), (bytes) => {
        expect(bytesOfBase64(base64(bytes))).toEqual(bytes)
      }),
    )
  })

  it.each(["Zg", "Zg=", "Zh==", "Zm9=", "Zm 9", "Zm9v\n", "====", "Z===", "Zm=v", "Zmé9", "Zm9\u1234"])("refuses %j", (text) => {
    expect(bytesOfBase64(text)).toBeNull()
  })
})
