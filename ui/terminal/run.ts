// `etamu run`: evaluates a notebook in this process and prints what its cells find, for people or as one JSON object. What is wrong with
// the file itself goes beside it, to the other stream.

import { resolve } from "node:path"

import { kinds } from "../../cells/index.ts"
import { words } from "../../cells/words.ts"
import { createEngine, createEvaluator } from "../../runtime/index.ts"
import type { Command } from "./command.ts"
import { findings, findingsAsJson, isWell } from "./findings.ts"
import { openNotebook } from "./notebook.ts"
import { printed } from "./print.ts"
import type { Terminal } from "./terminal.ts"

/** Gives the exit code: 0 where no cell is at fault or waiting or could not be read, 1 otherwise, 2 where there is no such file. */
export async function run(command: Extract<Command, { type: "run" }>, terminal: Terminal): Promise<number> {
  const opening = await openNotebook(resolve(terminal.folder, command.file))
  if (!opening.ok) {
    terminal.complain(`${opening.text}\n`)
    return opening.missing ? 2 : 1
  }
  const { open } = opening
  for (const remark of open.remarks) terminal.complain(`${remark}\n`)

  const evaluator = createEvaluator({
    kinds,
    bytes: open.bytes,
    pause: () => new Promise((done) => setImmediate(done)),
    now: () => performance.now(),
  })
  const engine = createEngine({ words, notebook: open.notebook, evaluator })
  // At rest late parts come too, and everything is evaluated cold.
  engine.rest()
  await engine.settled()

  const all = findings(engine)
  if (command.json) terminal.print(`${JSON.stringify(findingsAsJson(open.kept === null ? null : open.notebook.id, all))}\n`)
  else terminal.print(printed(open.title, all, { width: terminal.width, lines: open.lines, name: (id) => nameOf(all, id) }))
  return all.every(isWell) && !open.partial ? 0 : 1
}

const nameOf = (all: ReturnType<typeof findings>, id: string): string => {
  const found = all.find(({ cell }) => cell === id)
  return found?.name ?? found?.kind ?? id
}
