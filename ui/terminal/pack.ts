// `etamu pack`: makes a sealed notebook file of cells in the plain form and the files that lie beside them.

import { randomUUID } from "node:crypto"
import { open, readFile, rename, rm } from "node:fs/promises"
import { basename, dirname, join, resolve } from "node:path"

import { newlyKept, obstacles, writeNotebook, writer } from "../../storage/file/index.ts"
import { messageOf } from "./beside.ts"
import type { Command } from "./command.ts"
import { openNotebook } from "./notebook.ts"
import type { Terminal } from "./terminal.ts"

/** Gives the exit code: 0 where the file is written with all that the cells name, 1 otherwise, 2 where there is no such file. */
export async function pack(command: Extract<Command, { type: "pack" }>, terminal: Terminal): Promise<number> {
  const from = resolve(terminal.folder, command.file)
  const into = resolve(terminal.folder, command.into)
  const opening = await openNotebook(from)
  if (!opening.ok) {
    terminal.complain(`${opening.text}\n`)
    return opening.missing ? 2 : 1
  }
  if (opening.open.kept !== null) {
    terminal.complain(`${command.file} is a notebook already; pack takes the plain form.\n`)
    return 2
  }
  const { broken, notebook, missing, paths, remarks, title } = opening.open
  for (const remark of remarks) terminal.complain(`${remark}\n`)
  for (const name of missing) terminal.complain(`The file ${name} is not beside ${basename(from)}, so it is not enclosed.\n`)

  // A notebook of half the cells would look whole.
  if (broken) return 1

  const kept = newlyKept({
    id: terminal.newId(),
    title,
    cells: notebook.cells,
    enclosures: notebook.enclosures,
    time: terminal.now(),
    by: "etamu pack",
    writer,
  })
  const against = obstacles(kept)
  for (const { text, hint } of against) terminal.complain(`${text}${hint === null ? "" : ` ${hint}`}\n`)
  if (against.length > 0) return 1
  try {
    const store = async (sha256: string): Promise<Blob | null> => {
      const path = paths.get(sha256)
      return path === undefined ? null : new Blob([await readFile(path)])
    }
    await writeWhole(into, writeNotebook(kept, store))
  } catch (error) {
    terminal.complain(`${command.into} cannot be written: ${messageOf(error)}.\n`)
    return 1
  }
  return missing.length === 0 && remarks.length === 0 ? 0 : 1
}

/** Writes beside the place and moves it there when it is whole, so that what stood there is not lost to half a file. */
async function writeWhole(path: string, chunks: AsyncIterable<Uint8Array>): Promise<void> {
  const unfinished = join(dirname(path), `.${basename(path)}.${randomUUID()}`)
  try {
    const file = await open(unfinished, "wx")
    try {
      for await (const chunk of chunks) await file.writeFile(chunk)
      await file.sync()
    } finally {
      await file.close()
    }
    await rename(unfinished, path)
  } catch (error) {
    await rm(unfinished, { force: true })
    throw error
  }
}
