// Who may import whom: the arrows of the house, held over the resolved imports of every file, types included. The rules are written
// as the only arrows there are; everything else is a fault.

import { existsSync, readdirSync, readFileSync, statSync } from "node:fs"
import { dirname, join, relative, resolve } from "node:path"
import { fileURLToPath } from "node:url"
import { describe, expect, it } from "vitest"

const root = fileURLToPath(new URL("..", import.meta.url))
const folders = ["runtime", "cells", "storage", "ui"]

/** Every source file below a folder, as a path from the root with forward slashes. */
function sources(folder: string): string[] {
  return readdirSync(join(root, folder)).flatMap((name) => {
    const path = `${folder}/${name}`
    if (statSync(join(root, path)).isDirectory()) return sources(path)
    return /\.(ts|mjs)$/.test(name) ? [path] : []
  })
}

/** What a file imports: `import`, `import type`, `export … from`, `import()` and `import("…").Type`, and worker entries by URL. */
function imports(text: string): string[] {
  const code = text.replace(/\/\*[\s\S]*?\*\//g, "").replace(/^\s*\/\/.*$/gm, "")
  const found = [
    ...code.matchAll(/\b(?:import|export)\b[^"'`;]*?\bfrom\s*["']([^"']+)["']/g),
    ...code.matchAll(/\bimport\s*["']([^"']+)["']/g),
    ...code.matchAll(/\bimport\(\s*["']([^"']+)["']\s*\)/g),
    ...code.matchAll(/\bnew URL\(\s*["'](\.[^"']+\.(?:ts|js))["']/g),
  ]
  return found.map((match) => match[1] as string)
}

type Room = string

const kindFolders = readdirSync(join(root, "cells")).filter(
  (name) => statSync(join(root, "cells", name)).isDirectory() && !["language", "table", "statistics", "figure"].includes(name),
)

/** The room a file stands in. A kind's folder is a room of its own. */
function room(path: string): Room {
  const [first, second, third] = path.split("/")
  if (first === "ui") return `ui/${second}`
  if (first === "storage") return "storage"
  if (first === "cells") {
    if (second !== undefined && third !== undefined) return `cells/${second}`
    return path === "cells/index.ts" || path === "cells/words.ts" ? path : "cells/shared"
  }
  return first as Room
}

const shared = ["runtime", "cells/figure", "cells/table", "cells/language", "cells/statistics", "cells/shared"]
const kinds = kindFolders.map((name) => `cells/${name}`)

/** From each room, the rooms it may enter besides itself. */
const arrows: Record<Room, readonly Room[]> = {
  runtime: [],
  "cells/statistics": [],
  "cells/language": ["runtime", "cells/statistics"],
  "cells/table": ["runtime"],
  "cells/figure": ["runtime"],
  "cells/shared": ["runtime", "cells/figure", "cells/table", "cells/language", "cells/statistics"],
  ...Object.fromEntries(kinds.map((kind) => [kind, shared])),
  "cells/words.ts": ["runtime", ...kinds],
  "cells/index.ts": ["runtime", ...kinds],
  storage: ["runtime"],
  "ui/drawing": [...shared],
  "ui/page": [...shared, ...kinds, "cells/words.ts", "cells/index.ts", "storage", "ui/drawing"],
  "ui/terminal": [...shared, "cells/words.ts", "cells/index.ts", "storage", "ui/drawing"],
  "ui/report": [...shared, "cells/words.ts", "cells/index.ts", "storage", "ui/drawing"],
  "ui/build": [],
}

/** A relative import as a path from the root; a `.js` worker entry stands for the `.ts` beside it. */
function target(from: string, specifier: string): string {
  const path = relative(root, resolve(root, dirname(from), specifier)).replaceAll("\\", "/")
  return path.endsWith(".js") && existsSync(join(root, path.replace(/\.js$/, ".ts"))) ? path.replace(/\.js$/, ".ts") : path
}

const all = folders.flatMap(sources).filter((path) => !/-parser(\.terms)?\.ts$/.test(path))

/** Every arrow of the project that goes beyond its room. */
const crossings = all.flatMap((path) =>
  imports(readFileSync(join(root, path), "utf8"))
    .filter((specifier) => specifier.startsWith("."))
    .map((specifier) => ({ from: path, to: target(path, specifier) }))
    .filter(({ from, to }) => room(from) !== room(to) && !to.startsWith("dist/")),
)

describe("imports", () => {
  it("are found in all the ways they can be written", () => {
    const text = `import { a } from "./a.ts"\nimport type { b } from './b.ts'\nexport { c } from "./c.ts"\nimport "./d.ts"
      const e = await import("./e.ts")\ntype F = import("./f.ts").F\nnew URL("./g.worker.js", import.meta.url)\n// import "./no.ts"`
    expect(imports(text).sort()).toEqual(["./a.ts", "./b.ts", "./c.ts", "./d.ts", "./e.ts", "./f.ts", "./g.worker.js"])
  })

  it("point to files that are there", () => {
    expect(crossings.filter(({ to }) => !existsSync(join(root, to))).map(({ from, to }) => `${from} → ${to}`)).toEqual([])
  })

  it("follow the arrows of the house and no others", () => {
    const wrong = crossings.filter(({ from, to }) => !(arrows[room(from)] ?? []).includes(room(to)))
    expect(wrong.map(({ from, to }) => `${from} → ${to}`)).toEqual([])
  })

  it("enter a kind only by its words, its index or, for the page, a function it offers without statistics", () => {
    const doors = /^cells\/[^/]+\/(words|index|start|decimal)\.ts$/
    const wrong = crossings.filter(({ to }) => kinds.includes(room(to)) && !doors.test(to))
    expect(wrong.map(({ from, to }) => `${from} → ${to}`)).toEqual([])
  })

  it("bring no page, file or clock library into the rooms below", () => {
    const banned = /^(lit|d3|idb|codemirror|@codemirror|node:)/
    const wrong = all
      .filter((path) => /^(runtime|cells)\//.test(path))
      .flatMap((path) =>
        imports(readFileSync(join(root, path), "utf8"))
          .filter((specifier) => banned.test(specifier))
          .map((s) => `${path} → ${s}`),
      )
    expect(wrong).toEqual([])
  })
})
