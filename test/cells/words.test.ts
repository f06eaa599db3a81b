// What the page loads of the kinds is their words only: nothing that is reached from them may be part of the statistics, or the special
// functions would be in the page's first load. Types are erased, so they do not count.

import { readFileSync } from "node:fs"
import { dirname, relative, resolve } from "node:path"
import { fileURLToPath } from "node:url"
import { expect, it } from "vitest"

const root = fileURLToPath(new URL("../..", import.meta.url))

/** Files of ours that a file loads, types left out. */
function loads(file: string): readonly string[] {
  const text = readFileSync(file, "utf8")
  return [...text.matchAll(/^(import|export)\s+(type\s)?([^"'\n]*(?:\n[^"'\n]*)*?)from\s+"(\.[^"]+)"/gm)].flatMap(
    ([, , type, names = "", path = ""]) => {
      const members = /^\{([\s\S]*)\}\s*$/.exec(names.trim())?.[1]
      const allTypes = members?.split(",").every((member) => member.trim() === "" || member.trim().startsWith("type ")) ?? false
      return type !== undefined || allTypes ? [] : [resolve(dirname(file), path)]
    },
  )
}

it("loads no statistics with the words of the kinds", () => {
  const from = new Map<string, string | null>([[resolve(root, "cells/words.ts"), null]])
  for (const file of from.keys()) for (const next of loads(file)) if (!from.has(next)) from.set(next, file)
  const way = (file: string | null): string => (file === null ? "" : `${way(from.get(file) ?? null)} → ${relative(root, file)}`)
  const loaded = [...from.keys()]
  expect(loaded.filter((file) => relative(root, file).startsWith("cells/statistics/")).map(way)).toEqual([])
  // The walk did get somewhere: to the forms, and to the grammar of expressions.
  expect(loaded.map((file) => relative(root, file))).toEqual(
    expect.arrayContaining(["cells/language/form.ts", "cells/language/expression-parser.ts"]),
  )
})
