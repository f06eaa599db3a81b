// The Merkle tree hash against the vectors used throughout the trade for RFC 6962 and 9162 (eight leaves, as in the reference log's own
// tests; written down from memory, so each is also checked against the definition, spelt out with the digest alone).

import { describe, expect, it } from "vitest"
import { digest } from "../../../storage/file/digest.ts"
import { treeHash } from "../../../storage/file/merkle.ts"

const bytes = (hex: string): Uint8Array => Uint8Array.from(hex.match(/../g) ?? [], (pair) => Number.parseInt(pair, 16))
const leaves = ["", "00", "10", "2021", "3031", "40414243", "5051525354555657", "606162636465666768696a6b6c6d6e6f"].map(bytes)

const roots = [
  "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855",
  "6e340b9cffb37a989ca544e6bb780a2c78901d3fb33738768511a30617afa01d",
  "fac54203e7cc696cf0dfcb42c92a1d9dbaf70ad9e621f4bd8d98662f00e3c125",
  "aeb6bcfe274b70a14fb067a5e5578264db0fa9b51af5e0ba159158f329e06e77",
  "d37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7",
  "4e3bbb1f7b478dcfe71fb631631519a3bca12c9aefca1612bfce4c13a86264d4",
  "76e67dadbcdf1e10e1b74ddc608abd2f98dfb16fbce75277b5232a127f2087ef",
  "ddb89be403809e325750d3d263cd78929c2942b7942a34b77e122c9594a74c8c",
  "5dc9da79a70659a9ad559cb701ded9a2ab9d823aad2f4960cfe370eff4604328",
]

/** The definition of RFC 9162 §2.1.1, on hex digits and without a thought for speed. */
function definition(entries: readonly Uint8Array[]): string {
  const [only] = entries
  if (only === undefined) return digest("")
  if (entries.length === 1) return digest(Uint8Array.of(0, ...only))
  let k = 1
  while (k * 2 < entries.length) k *= 2
  return digest(Uint8Array.of(1, ...bytes(definition(entries.slice(0, k))), ...bytes(definition(entries.slice(k)))))
}

describe("the Merkle tree hash", () => {
  it.each(roots.map((root, size) => [size, root] as const))("of the first %d leaves is the known one", (size, root) => {
    expect(treeHash(leaves.slice(0, size))).toBe(root)
  })

  it("agrees with its definition for every size up to 40", () => {
    for (let size = 0; size <= 40; size += 1) {
      const entries = Array.from({ length: size }, (_, i) => new TextEncoder().encode(`entry ${i}`))
      expect(treeHash(entries)).toBe(definition(entries))
    }
  })
})
