// Math.exp and its like differ between browsers in the last bit; findings must not. So all of cells goes by one module of plain arithmetic,
// which itself asks nothing of Math but square roots and rounding.

import { readdirSync, readFileSync } from "node:fs"
import { join } from "node:path"
import { fileURLToPath } from "node:url"
import { describe, expect, it } from "vitest"

const root = fileURLToPath(new URL("../../cells", import.meta.url))
const files = readdirSync(root, { recursive: true, encoding: "utf8" }).filter(
  (path) => path.endsWith(".ts") && !path.endsWith("-parser.ts"),
)

/** Members of Math whose value IEEE 754 and ECMAScript leave no freedom in. */
const exact = new Set("abs ceil floor fround imul max min round sign sqrt trunc clz32 E LN10 LN2 LOG10E LOG2E PI SQRT1_2 SQRT2".split(" "))

/** The code of a file without its comments and texts. */
const code = (text: string): string =>
  text
    .replace(/\/\*[\s\S]*?\*\//g, "")
    .replace(/"(?:[^"\\\n]|\\.)*"/g, '""')
    .replace(/\/\/.*$/gm, "")

const inexact = (text: string): readonly string[] => {
  const plain = code(text)
  const members = [...plain.matchAll(/\bMath\s*\.\s*(\w+)/g)].map((match) => match[1] as string).filter((name) => !exact.has(name))
  const others = /\bMath\s*\[|\bMath\b(?!\s*\.)/.test(plain) ? ["Math itself"] : []
  return [...members.map((name) => `Math.${name}`), ...others, ...(plain.includes("**") ? ["**"] : [])]
}

describe("arithmetic in cells", () => {
  it("is found out where it is not plain", () => {
    expect(inexact("const a = Math.exp(1) + 2 ** 0.5")).toEqual(["Math.exp", "**"])
    expect(inexact("const { log } = Math")).toEqual(["Math itself"])
    expect(inexact('// Math.exp\n/** Math.log */ const a = Math.sqrt(2) + "Math.pow".length')).toEqual([])
  })

  it("looks at the files that matter", () => {
    expect(files.map((path) => path.replaceAll("\\", "/"))).toEqual(
      expect.arrayContaining(["statistics/elementary.ts", "statistics/links.ts", "index.ts"]),
    )
  })

  it.each(files)("%s takes nothing from Math that differs between browsers", (path) => {
    expect(inexact(readFileSync(join(root, path), "utf8"))).toEqual([])
  })
})
