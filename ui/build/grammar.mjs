// Builds the parser beside each grammar: NAME.grammar gives NAME-parser.ts and NAME-parser.terms.ts, which git does not keep.

import { existsSync, readdirSync, readFileSync, writeFileSync } from "node:fs"
import { basename, dirname, join } from "node:path"
import { fileURLToPath } from "node:url"
import { buildParserFile } from "@lezer/generator"

const root = fileURLToPath(new URL("../..", import.meta.url))

/** Writes `text` unless the file already holds it, so that file times stay true. */
function put(path, text) {
  if (existsSync(path) && readFileSync(path, "utf8") === text) return
  writeFileSync(path, text)
}

/** Builds every grammar of the project. */
export function buildGrammars() {
  for (const folder of ["runtime", "cells/language"]) {
    for (const file of readdirSync(join(root, folder)).filter((name) => name.endsWith(".grammar"))) {
      const path = join(root, folder, file)
      const name = basename(file, ".grammar")
      const { parser, terms } = buildParserFile(readFileSync(path, "utf8"), {
        fileName: path,
        moduleStyle: "es",
        typeScript: true,
        includeNames: false,
        warn: (message) => console.warn(`${file}: ${message}`),
      })
      put(join(dirname(path), `${name}-parser.ts`), parser.replaceAll(`./${name}-parser.terms`, `./${name}-parser.terms.ts`))
      put(join(dirname(path), `${name}-parser.terms.ts`), terms)
    }
  }
}

if (process.argv[1] === fileURLToPath(import.meta.url)) buildGrammars()
