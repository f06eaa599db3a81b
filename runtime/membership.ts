// What is wrong with a statement as a member of its notebook: a name that several cells define, a name that none does, cells that wait for
// each other. Found from readings and graph alone, so it is known at once, before anything is evaluated.

import type { Graph } from "./graph.ts"
import { nearest } from "./nearest.ts"
import type { Notice, Place } from "./notice.ts"
import { cycle, doubledName, missingCell } from "./notices.ts"
import type { Reading } from "./reading.ts"
import { nameAt, replacement } from "./reading.ts"
import type { Name } from "./value.ts"

/** The faults a cell has by its place in the graph. */
export function membershipFaults(reading: Reading, graph: Graph): readonly Notice[] {
  const { cell, defines, statement, uses } = reading
  const faults: Notice[] = []
  const makers = defines === null ? 0 : (graph.makers.get(defines)?.length ?? 0)
  if (defines !== null && makers > 1) faults.push(doubledName(defines, makers, nameAt(statement)))
  const round = graph.cycles.get(cell.id)
  if (round !== undefined) {
    const next = round.names[1 % round.names.length]
    faults.push(cycle(round.names, round.cells, uses.find(({ name }) => name === next)?.at ?? nameAt(statement)))
  }
  for (const { name, at } of missingUses(reading, graph)) faults.push(missing(reading, graph, name, at))
  return faults.map((fault) => ({ ...fault, clause: statement.clauses[fault.at.clause]?.keyword ?? null }))
}

/** Uses of a name that no cell defines, not even one switched off; where the name may be a column, that is for the kind to say. */
export const missingUses = ({ uses }: Reading, graph: Graph): readonly { readonly name: Name; readonly at: Place }[] =>
  uses.filter(({ name, either }) => !either && !graph.makers.has(name) && !graph.asleep.has(name))

function missing(reading: Reading, graph: Graph, name: Name, at: Place): Notice {
  const names = [...graph.makers.keys()].filter((other) => other !== reading.defines).sort()
  const near = nearest(name, names)
  // A mend is offered only where one name is near and no other: else a click would guess.
  const sure =
    near !== null &&
    nearest(
      name,
      names.filter((other) => other !== near),
    ) === null
  return missingCell(name, near, at, sure ? replacement(reading.statement, at, near) : null)
}
