// The command line: what is understood, and that all else is misuse said in one sentence.

import { describe, expect, it } from "vitest"
import { commandOf } from "../../../ui/terminal/command.ts"

describe("the command line", () => {
  it.each([
    ["run a.cells", { type: "run", file: "a.cells", json: false }],
    ["run a.cells --json", { type: "run", file: "a.cells", json: true }],
    ["run --json a.etamu", { type: "run", file: "a.etamu", json: true }],
    ["pack a.cells -o b.etamu", { type: "pack", file: "a.cells", into: "b.etamu" }],
    ["pack -o b.etamu a.cells", { type: "pack", file: "a.cells", into: "b.etamu" }],
    ["unpack a.etamu", { type: "unpack", file: "a.etamu", into: null }],
    ["unpack a.etamu -o there", { type: "unpack", file: "a.etamu", into: "there" }],
    ["help", { type: "help" }],
  ])("understands %j", (line, command) => {
    expect(commandOf(line.split(" "))).toEqual(command)
  })

  it.each([
    ["", "Say what to do: run, pack or unpack."],
    ["fit a.cells", "There is no command fit; there are run, pack and unpack."],
    ["run", "Say which file to run."],
    ["run a b", "The command run takes one file, and b is a second."],
    ["run a --jsn", "The command run does not know --jsn."],
    ["run a -o b", "The command run does not know -o."],
    ["pack a.cells", "Say where to: pack needs -o and the name of the notebook file."],
    ["pack a.cells -o", "After -o there has to be a name."],
    ["unpack a.etamu --json", "The command unpack does not know --json."],
  ])("says what is wrong with %j", (line, text) => {
    expect(commandOf(line === "" ? [] : line.split(" "))).toEqual({ type: "misuse", text })
  })
})
