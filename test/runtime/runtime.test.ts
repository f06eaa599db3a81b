// What the runtime deliberately does not know: the clock, randomness, and the platform.

import { readdirSync, readFileSync } from "node:fs"
import { fileURLToPath } from "node:url"
import { expect, it } from "vitest"

const folder = fileURLToPath(new URL("../../runtime/", import.meta.url))
const files = readdirSync(folder).filter((name) => name.endsWith(".ts") && !name.includes("-parser"))

/** The code of a file without its comments and texts. */
const codeOf = (name: string): string =>
  readFileSync(folder + name, "utf8")
    .replace(/\/\*[\s\S]*?\*\//g, "")
    .replace(/\/\/.*$/gm, "")
    .replace(/"(?:[^"\\\n]|\\.)*"/g, '""')

it.each(files)("%s knows nothing of time or chance", (name) => {
  expect(codeOf(name)).not.toMatch(/\b(Date|performance|setTimeout|setInterval|setImmediate|requestAnimationFrame|queueMicrotask)\b/)
  expect(codeOf(name)).not.toMatch(/\bMath\s*\.\s*random\b|\bcrypto\b/)
})

it("has files to know it of", () => {
  expect(files.length).toBeGreaterThan(15)
})
