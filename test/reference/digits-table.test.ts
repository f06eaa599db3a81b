// The table of digits reached in README.md is what the program reaches now, and that is what is asked for. With DIGITS=write in the
// environment the table is written anew.

import { readFileSync, writeFileSync } from "node:fs"
import { describe, expect, it } from "vitest"
import { askedOf, fewer, figuresIn, files, measures, type Reached, reachedIn, sources, tableOf } from "./digits-table.ts"
import { referenceSets } from "./reference-models.ts"

const readme = new URL("README.md", import.meta.url)
const text = readFileSync(readme, "utf8").split("\n")
const from = text.indexOf("<!-- digits -->") + 1
const to = text.indexOf("<!-- end of digits -->")
const written = figuresIn(text.slice(from, to))

const all: (readonly [string, readonly Reached[]])[] = []

describe.each(files)("%s", (file) => {
  it("is met to the digits that are asked for, and to those that the table states", async () => {
    const reached = await reachedIn(file)
    all.push([file, reached])
    for (const one of reached) {
      const row = written.get(`${file} ${one.set}`) ?? []
      expect(one.models, `${one.set}: all models are fitted`).toBe(referenceSets(file).find(({ id }) => id === one.set)?.models.length)
      if (process.env["DIGITS"] !== "write") expect(row[0], `${one.set}: models`).toBe(String(one.models))
      measures.forEach((measure, k) => {
        const found = one.digits[measure]
        const says = `${one.set}: digits of ${measure}`
        if (found !== null) expect(found, says).toBeGreaterThan(askedOf(one, measure))
        if (process.env["DIGITS"] === "write") return
        const stated = row[k + 1] ?? ""
        if (found === null) expect(stated, says).toBe("–")
        else {
          // Never more than is reached, and hardly less.
          expect(Number(stated), says).toBeLessThanOrEqual(found)
          expect(Number(stated), says).toBeGreaterThan(Math.min(found, 15) - 2.5)
        }
      })
    }
  }, 120_000)
})

describe("the README", () => {
  it("has a row for every set, and no other", () => {
    if (process.env["DIGITS"] === "write")
      writeFileSync(readme, [...text.slice(0, from), "", ...tableOf(all), "", ...sources, "", ...text.slice(to)].join("\n"))
    else expect([...written.keys()]).toEqual(all.flatMap(([file, sets]) => sets.map(({ set }) => `${file} ${set}`)))
  })

  it("says where every set is from", () => {
    if (process.env["DIGITS"] !== "write") expect(text.slice(from, to).filter((line) => line.startsWith("- "))).toEqual(sources)
  })

  it("says why fewer digits are asked for where that is so", () => {
    for (const [set, { why }] of Object.entries(fewer)) expect(text.join(" ")).toContain(`${set}: ${why}`)
  })
})
