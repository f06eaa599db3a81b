// The words of a note: CommonMark text with live values in it.

import type { Use, Words } from "../../runtime/kind.ts"
import { readClauses } from "../language/form.ts"
import { usesOf } from "../model-uses.ts"
import { type Mark, marksIn } from "./marks.ts"
import { bracesAreText, placeOf } from "./notices.ts"

export type NoteSaid = { readonly body: string; readonly marks: readonly Mark[] }

export const noteWords: Words<NoteSaid> = {
  word: "note",
  name: "optional",
  says: "Text for the reader, in CommonMark, with live values in it",
  example: "note\nWhat was found, and why it matters.",
  clauses: {},
  parse(statement) {
    const { notices } = readClauses(statement, noteWords)
    const body = statement.prose === null ? "" : statement.text.slice(statement.prose.from, statement.prose.to)
    const { marks, odd } = marksIn(body)
    return { said: { body, marks }, notices: [...notices, ...odd.map((braces) => bracesAreText(placeOf(braces), braces.why))] }
  },
  names(said) {
    const uses = new Map<string, Use>()
    for (const mark of said.marks) {
      for (const use of usesOf(mark.expression)) {
        const { name, parts } = use
        if (!uses.has(`${name} ${parts}`)) uses.set(`${name} ${parts}`, { ...use, at: placeOf(mark) })
      }
    }
    return { defines: null, uses: [...uses.values()], files: [] }
  },
}
