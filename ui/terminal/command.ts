// The command line read into what it asks for. Whatever is not understood is misuse, said in one sentence above the usage.

import { parseArgs } from "node:util"

export type Command =
  | { readonly type: "run"; readonly file: string; readonly json: boolean }
  | { readonly type: "pack"; readonly file: string; readonly into: string }
  | { readonly type: "unpack"; readonly file: string; readonly into: string | null }
  | { readonly type: "help" }
  | { readonly type: "misuse"; readonly text: string }

export const usage = `Usage:
  etamu run FILE [--json]                    evaluate a notebook and print what its cells find
  etamu pack NAME.cells -o NAME.etamu        make one notebook file of cells and the files beside them
  etamu unpack NAME.etamu [-o DIR]           write the cells and the enclosed files of a notebook into a folder

FILE is a notebook (.etamu) or its plain form (.cells).
Ends with 0 where no cell is at fault or waiting, with 1 otherwise, and with 2 where the command is not understood.
`

/** What the words of a command line ask for. */
export function commandOf(words: readonly string[]): Command {
  const [verb, ...rest] = words
  switch (verb) {
    case undefined:
      return misuse("Say what to do: run, pack or unpack.")
    case "help":
    case "--help":
      return { type: "help" }
    case "run":
      return withFile(rest, "run", (file, { json }) => ({ type: "run", file, json }))
    case "pack":
      return withFile(rest, "pack", (file, { into }) =>
        into === null ? misuse("Say where to: pack needs -o and the name of the notebook file.") : { type: "pack", file, into },
      )
    case "unpack":
      return withFile(rest, "unpack", (file, { into }) => ({ type: "unpack", file, into }))
    default:
      return misuse(`There is no command ${verb}; there are run, pack and unpack.`)
  }
}

interface Options {
  readonly json: boolean
  readonly into: string | null
}

function withFile(rest: readonly string[], verb: "run" | "pack" | "unpack", make: (file: string, options: Options) => Command): Command {
  const allowed = verb === "run" ? { json: { type: "boolean" as const } } : { into: { type: "string" as const, short: "o" } }
  let parsed: { values: { [name: string]: string | boolean | undefined }; positionals: string[] }
  try {
    parsed = parseArgs({ args: [...rest], options: allowed, allowPositionals: true, strict: true })
  } catch {
    const unknown =
      rest.find((word) => word.startsWith("-") && word !== "-o" && word !== "--json") ?? rest.find((word) => word.startsWith("-"))
    return misuse(
      unknown === "-o" && verb !== "run" ? "After -o there has to be a name." : `The command ${verb} does not know ${unknown ?? "this"}.`,
    )
  }
  const [file, more] = parsed.positionals
  if (file === undefined) return misuse(`Say which file to ${verb}.`)
  if (more !== undefined) return misuse(`The command ${verb} takes one file, and ${more} is a second.`)
  const into = parsed.values["into"]
  return make(file, { json: parsed.values["json"] === true, into: typeof into === "string" ? into : null })
}

const misuse = (text: string): Command => ({ type: "misuse", text })
