// `etamu unpack`: writes the cells of a notebook in the plain form, and its enclosures as files beside them. It writes nothing outside the
// folder, and nothing over a file that holds something else.

import { mkdir, readFile, writeFile } from "node:fs/promises"
import { basename, dirname, join, resolve } from "node:path"

import { plainForm } from "../../storage/file/index.ts"
import { isMissing, messageOf, placeIn } from "./beside.ts"
import type { Command } from "./command.ts"
import { openNotebook } from "./notebook.ts"
import type { Terminal } from "./terminal.ts"

/** Gives the exit code: 0 where everything is written, 1 otherwise, 2 where there is no such file. */
export async function unpack(command: Extract<Command, { type: "unpack" }>, terminal: Terminal): Promise<number> {
  const from = resolve(terminal.folder, command.file)
  const folder = command.into === null ? dirname(from) : resolve(terminal.folder, command.into)
  const opening = await openNotebook(from)
  if (!opening.ok) {
    terminal.complain(`${opening.text}\n`)
    return opening.missing ? 2 : 1
  }
  const { kept, notebook, remarks, bytes, broken } = opening.open
  if (kept === null) {
    terminal.complain(`${command.file} is the plain form already; unpack takes a notebook.\n`)
    return 2
  }
  for (const remark of remarks) terminal.complain(`${remark}\n`)

  let whole = !broken
  const files: { readonly path: string; readonly bytes: Uint8Array }[] = []
  const plan = (name: string, contents: Uint8Array): void => {
    const path = placeIn(folder, name)
    if (path === null) {
      terminal.complain(`The enclosure ${JSON.stringify(name)} has no name a file could have here, so it is not written.\n`)
      whole = false
    } else if (files.some((file) => file.path === path)) {
      terminal.complain(`The enclosure ${name} would stand where another file goes, so it is not written.\n`)
      whole = false
    } else files.push({ path, bytes: contents })
  }
  const plainName = `${basename(from).replace(/\.etamu$/, "")}.cells`
  files.push({ path: join(folder, plainName), bytes: new TextEncoder().encode(plainForm(notebook.cells.map(({ text }) => text))) })
  for (const { name } of kept.notebook.enclosures) {
    const file = notebook.enclosures.find((each) => each.name === name)
    if (file === undefined) whole = false
    else plan(name, await joined(bytes(file.sha256)))
  }

  try {
    const inTheWay: string[] = []
    for (const file of files) if (await holdsSomethingElse(file.path, file.bytes)) inTheWay.push(file.path)
    if (inTheWay.length > 0) {
      for (const path of inTheWay) terminal.complain(`${path} is there already and holds something else.\n`)
      terminal.complain("Nothing was written. Name another folder with -o, or move what is there.\n")
      return 1
    }
    for (const file of files) {
      await mkdir(dirname(file.path), { recursive: true })
      await writeFile(file.path, file.bytes)
    }
  } catch (error) {
    terminal.complain(`${folder} cannot be written to: ${messageOf(error)}.\n`)
    return 1
  }
  return whole ? 0 : 1
}

async function holdsSomethingElse(path: string, bytes: Uint8Array): Promise<boolean> {
  try {
    return !(await readFile(path)).equals(bytes)
  } catch (error) {
    if (isMissing(error)) return false
    throw error
  }
}

async function joined(source: AsyncIterable<Uint8Array>): Promise<Uint8Array> {
  const parts: Uint8Array[] = []
  for await (const part of source) parts.push(part)
  return Buffer.concat(parts)
}
