// What a dial shows: itself, to be turned.

import type { Block } from "../block.ts"
import type { DialSaid } from "./words.ts"

export function shown(value: number | string, { name, dial }: DialSaid): readonly Block[] {
  if (dial === null || name === null) return []
  return [
    {
      type: "dial",
      name,
      range: dial.type === "range" ? { from: dial.from, to: dial.to, step: dial.step, steps: dial.steps, digits: dial.digits } : null,
      choices: dial.type === "choice" ? dial.choices : null,
      value,
      clause: "start",
    },
  ]
}
