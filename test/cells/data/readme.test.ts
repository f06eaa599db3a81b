// Every example of the kind's README is run: files as they come, each cell with what it finds.

import { readFileSync } from "node:fs"
import { fileURLToPath } from "node:url"
import { describe, expect, it } from "vitest"
import { account } from "../../../cells/data/show.ts"
import { finding } from "./laboratory.ts"

const readme = readFileSync(fileURLToPath(new URL("../../../cells/data/README.md", import.meta.url)), "utf8")
const fences = [...readme.matchAll(/^```(\w+)(?: (\S+))?\n([\s\S]*?)^```$/gm)].map(([, language = "", name = "", body = ""]) => ({
  language,
  name,
  body,
}))
const files = Object.fromEntries(fences.filter(({ language }) => language === "csv").map(({ name, body }) => [name, body]))
const examples = fences.flatMap(({ language, body }, i) =>
  language === "cells" ? [{ cell: body.trimEnd(), finds: fences[i + 1]?.body.trimEnd() }] : [],
)

describe("the README of data", () => {
  it("has its examples", () => {
    expect(examples.length).toBeGreaterThanOrEqual(5)
  })

  it.each(examples)("finds what it says: $cell", async ({ cell, finds }) => {
    const { found, notices } = await finding(cell, files)
    if (found === null) throw new Error(notices.map(({ text }) => text).join("\n"))
    const columns = found.profiles.map(({ name, type }) => `${name} ${type}`).join(", ")
    expect([account(found), columns, ...notices.map(({ level, text }) => `${level}: ${text}`)].join("\n")).toBe(finds)
  })
})
