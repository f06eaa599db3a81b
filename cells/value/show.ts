// What a value shows: one sentence.

import type { Block } from "../block.ts"
import { written, writtenInFull } from "../figure/number.ts"
import type { ValueFinding } from "./find.ts"
import type { ValueSaid } from "./words.ts"

export const shown = (value: ValueFinding, said: ValueSaid): readonly Block[] => [
  { type: "sentence", tone: "lead", text: `${said.name ?? "It"} is ${inWords(value)}.` },
]

/** A short number in full, a longer one to six digits. */
function inWords(value: ValueFinding): string {
  if (typeof value !== "number") return typeof value === "boolean" ? `${value}` : `“${value}”`
  return `${value}`.length <= 8 ? writtenInFull(value) : written(value, 6)
}
