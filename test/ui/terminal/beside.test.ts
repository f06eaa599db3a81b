// Files beside a notebook: found by name in its folder and below, and nowhere else.

import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs"
import { tmpdir } from "node:os"
import { join } from "node:path"
import { afterAll, beforeAll, describe, expect, it } from "vitest"
import { digest } from "../../../storage/file/index.ts"
import { besideIn, placeIn } from "../../../ui/terminal/beside.ts"

let folder = ""

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "etamu-beside-"))
  mkdirSync(join(folder, "book", "data"), { recursive: true })
  writeFileSync(join(folder, "outside.csv"), "secret")
  writeFileSync(join(folder, "book", "a.csv"), "a\n1\n")
  writeFileSync(join(folder, "book", "data", "b.csv"), "b\n1\n")
})

afterAll(() => rmSync(folder, { recursive: true, force: true }))

describe("a file beside a notebook", () => {
  it.each(["a.csv", "data/b.csv"])("is found: %s", async (name) => {
    const looked = await besideIn(join(folder, "book"), name)
    expect(looked).toMatchObject({
      found: "file",
      file: { enclosed: { name, media: "text/csv", size: 4, sha256: digest(`${name.includes("b.csv") ? "b" : "a"}\n1\n`) } },
    })
  })

  it("is not found where there is none", async () => {
    expect(await besideIn(join(folder, "book"), "c.csv")).toEqual({ found: "nothing" })
    expect(await besideIn(join(folder, "book"), "a.csv/c.csv")).toEqual({ found: "nothing" })
  })

  it.each(["../outside.csv", "data/../../outside.csv", "/etc/hostname", "..", ".", "", "data\\b.csv", "C:b.csv", "a\0.csv", "data/"])(
    "is never looked for elsewhere: %j",
    async (name) => {
      expect(placeIn(join(folder, "book"), name)).toBeNull()
      expect((await besideIn(join(folder, "book"), name)).found).toBe("unfit")
    },
  )

  it("has to be a file", async () => {
    expect(await besideIn(join(folder, "book"), "data")).toEqual({ found: "unfit", why: "data is not a file." })
  })
})
