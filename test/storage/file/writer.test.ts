// The name of the writer in every file is this program's, in this version.

import { readFileSync } from "node:fs"
import { expect, it } from "vitest"
import { writer } from "../../../storage/file/writer.ts"

it("a file names the version of package.json as its writer", () => {
  const { name, version } = JSON.parse(readFileSync(new URL("../../../package.json", import.meta.url), "utf8")) as {
    name: string
    version: string
  }
  expect(writer).toBe(`${name} ${version}`)
})
