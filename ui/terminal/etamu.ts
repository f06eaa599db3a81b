// The command `etamu`: hands the words of the command line to whoever does what they ask for, and ends with their exit code. Everything it
// needs of the process is handed on from here, so that the rest can be tested without one.

import { commandOf, usage } from "./command.ts"
import { pack } from "./pack.ts"
import { run } from "./run.ts"
import type { Terminal } from "./terminal.ts"
import { unpack } from "./unpack.ts"

/** Does what the words ask for. Gives the exit code: 0, 1 where something is wrong with the notebook, 2 for misuse. */
async function etamu(words: readonly string[], terminal: Terminal): Promise<number> {
  const command = commandOf(words)
  switch (command.type) {
    case "misuse":
      terminal.complain(`${command.text}\n\n${usage}`)
      return 2
    case "help":
      terminal.print(usage)
      return 0
    case "run":
      return run(command, terminal)
    case "pack":
      return pack(command, terminal)
    case "unpack":
      return unpack(command, terminal)
  }
}

// Whoever reads what is printed may stop reading, and then nothing more is to be said.
process.stdout.on("error", (error: NodeJS.ErrnoException) => process.exit(error.code === "EPIPE" ? 0 : 1))

/** npm runs a command from the folder of package.json and says where the person stands. */
const folder = process.env["npm_lifecycle_event"] === "etamu" ? (process.env["INIT_CWD"] ?? process.cwd()) : process.cwd()

process.exitCode = await etamu(process.argv.slice(2), {
  folder,
  width: Math.min(Math.max(process.stdout.columns ?? 100, 40), 100),
  print: (text) => process.stdout.write(text),
  complain: (text) => process.stderr.write(text),
  now: () => new Date().toISOString(),
  newId: () => crypto.randomUUID(),
})
