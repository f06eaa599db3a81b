// Runs the command `etamu`, and builds it first where its sources are not those it was built from. Nothing of the building goes to standard
// output, which belongs to the command; the exit code is the command's own.

import { createHash, randomUUID } from "node:crypto"
import { mkdirSync, readdirSync, readFileSync, renameSync, writeFileSync } from "node:fs"
import { join } from "node:path"
import { fileURLToPath } from "node:url"
import { build } from "esbuild"
import { buildGrammars } from "./grammar.mjs"

const root = fileURLToPath(new URL("../..", import.meta.url))
const folder = join(root, "dist/node")
const bundle = join(folder, "etamu.js")
// Beside the bundle, so that whoever clears the folder clears both.
const mark = join(folder, "etamu.sources")

/** A hash of everything the bundle is made from. */
function sourceHash() {
  const hash = createHash("sha256")
  const add = (path) =>
    hash
      .update(path)
      .update("\0")
      .update(readFileSync(join(root, path)))
      .update("\0")
  const walk = (path) => {
    for (const entry of readdirSync(join(root, path), { withFileTypes: true }).sort((a, b) => (a.name < b.name ? -1 : 1))) {
      if (entry.isDirectory()) walk(`${path}/${entry.name}`)
      else if (/\.(ts|grammar)$/.test(entry.name) && !/-parser(\.terms)?\.ts$/.test(entry.name)) add(`${path}/${entry.name}`)
    }
  }
  for (const path of ["runtime", "cells", "storage/file", "ui/drawing", "ui/terminal"]) walk(path)
  for (const path of ["package-lock.json", "ui/build/etamu.mjs", "ui/build/grammar.mjs"]) add(path)
  return hash.digest("hex")
}

function isBuiltFrom(hash) {
  try {
    readFileSync(bundle)
    return readFileSync(mark, "utf8") === hash
  } catch {
    return false
  }
}

/** Writes whole files only, since another `etamu` may be reading them. */
function put(path, contents) {
  const unfinished = `${path}.${randomUUID()}`
  writeFileSync(unfinished, contents)
  renameSync(unfinished, path)
}

/** Builds the command where that is needed. */
export async function buildEtamu() {
  const hash = sourceHash()
  if (isBuiltFrom(hash)) return
  buildGrammars()
  const { outputFiles } = await build({
    absWorkingDir: root,
    entryPoints: ["ui/terminal/etamu.ts"],
    outfile: bundle,
    bundle: true,
    write: false,
    platform: "node",
    target: "node20",
    format: "esm",
    minify: true,
    legalComments: "none",
    charset: "utf8",
    logLevel: "error",
  })
  mkdirSync(folder, { recursive: true })
  for (const file of outputFiles) put(file.path, file.contents)
  put(mark, hash)
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  try {
    await buildEtamu()
  } catch (error) {
    console.error(`The command etamu could not be built: ${error.message}`)
    process.exit(1)
  }
  // In this process, so that exit code, streams and signals are the command's own. It reads its words from the third on, as here.
  await import(new URL("../../dist/node/etamu.js", import.meta.url).href)
}
