// Makes what is shipped: the page (split, so that the editor is fetched when a hand first asks for it), the evaluator's worker, the
// server and the terminal's command, with the samples beside them. With `--watch` it serves the page and builds again on every change.

import { cpSync, existsSync, mkdirSync, readdirSync, rmSync, watch } from "node:fs"
import { join } from "node:path"
import { fileURLToPath } from "node:url"
import { build } from "esbuild"
import { buildGrammars } from "./grammar.mjs"

const root = fileURLToPath(new URL("../..", import.meta.url))
const page = "dist/page"
const node = "dist/node"

const common = {
  absWorkingDir: root,
  bundle: true,
  format: "esm",
  sourcemap: true,
  minify: true,
  legalComments: "none",
  logLevel: "warning",
  charset: "utf8",
  metafile: true,
}

/** Every bundle, by what it is for. Each worker is an entry of its own, in the folder its starter looks in. */
const bundles = [
  { entryPoints: ["ui/page/page.ts", "ui/page/page.css"], outdir: page, splitting: true, chunkNames: "part-[hash]", target: "es2022" },
  { entryPoints: ["ui/page/evaluator.worker.ts"], outdir: page, target: "es2022" },
  { entryPoints: ["ui/build/server.ts"], outdir: node, platform: "node", target: "node20" },
  ...["ui/terminal/etamu.ts", "ui/terminal/evaluator.worker.ts", "test/bench/bench.ts"]
    .filter((entry) => existsSync(join(root, entry)))
    .map((entry) => ({ entryPoints: [entry], outdir: node, platform: "node", target: "node20" })),
]

/** Builds everything. */
export async function buildAll() {
  buildGrammars()
  for (const folder of [page, node]) {
    rmSync(join(root, folder), { recursive: true, force: true })
    mkdirSync(join(root, folder), { recursive: true })
  }
  await Promise.all(bundles.map((bundle) => build({ ...common, ...bundle })))
  copyStill()
}

/** What is served as it stands. */
function copyStill() {
  for (const file of ["index.html", "icon.svg"]) cpSync(join(root, "ui/page", file), join(root, page, file))
  const samples = join(root, "sample-notebooks")
  mkdirSync(join(root, page, "samples"), { recursive: true })
  for (const file of readdirSync(samples)) {
    if (/\.(cells|etamu|csv|tsv|json)$/.test(file)) cpSync(join(samples, file), join(root, page, "samples", file))
  }
}

/** Serves the page and builds again whenever a source changes; a build that fails says why and waits for the next change. */
async function keepBuilding() {
  const { serve } = await import(new URL("../../dist/node/server.js", import.meta.url).href)
  await serve()
  let due = null
  for (const folder of ["runtime", "cells", "storage", "ui", "sample-notebooks"]) {
    watch(join(root, folder), { recursive: true }, (_event, name) => {
      if (name === null || /-parser(\.terms)?\.ts$/.test(name)) return
      clearTimeout(due)
      due = setTimeout(() => {
        buildAll().then(
          () => console.log("Built again: reload the page."),
          () => console.log("Not built: see above."),
        )
      }, 150)
    })
  }
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  try {
    await buildAll()
  } catch {
    // esbuild has said what is wrong, with file and line.
    process.exit(1)
  }
  if (process.argv.includes("--watch")) await keepBuilding()
}
