// The graph: who defines which name, and who reads whom, from the names in the statements. Reading order takes no part in it. Where who reads
// whom is unchanged the graph stays the same object (===), so that an edit inside a clause hardly ever costs more than its own cell. Nothing
// here recurses: a notebook may be one chain of all its cells.

import type { CellId } from "./document.ts"
import type { Reading } from "./reading.ts"
import type { Name } from "./value.ts"

export interface Graph {
  /** Who defines a name: one cell, or several that are all at fault for it; by id. */
  readonly makers: ReadonlyMap<Name, readonly CellId[]>
  /** Cells switched off, by the name they would define; of several the first by id. */
  readonly asleep: ReadonlyMap<Name, CellId>
  /** Whom a cell reads, in the order of its statement, each once. */
  readonly inputs: ReadonlyMap<CellId, readonly CellId[]>
  readonly readers: ReadonlyMap<CellId, readonly CellId[]>
  /** Greater than the rank of everything the cell reads (of what stands outside its cycle, for a cell in one). */
  readonly rank: ReadonlyMap<CellId, number>
  readonly cycles: ReadonlyMap<CellId, Round>
}

/** The way round from a cell to itself: its own name first; of a long one only its own, the next and the last. */
export interface Round {
  readonly names: readonly Name[]
  readonly cells: number
}

/** A round of more cells is told by its ends: nobody reads twenty names, and a ring of all cells would hold each name as often. */
const longestTold = 8

/**
 * The graph of these readings; the former one where nothing in it has changed. `changed` are the readings that differ from those the
 * former graph was made of, or null where cells were put in or taken out.
 */
export function graph(
  readings: ReadonlyMap<CellId, Reading>,
  former: Graph | null,
  changed: readonly { readonly before: Reading; readonly now: Reading }[] | null,
): Graph {
  if (former !== null && changed?.every(({ before, now }) => namesAlike(before, now))) return former
  const makers = new Map<Name, CellId[]>()
  const asleep = new Map<Name, CellId>()
  for (const [id, { defines, asleep: name }] of readings) {
    if (defines !== null) {
      const others = makers.get(defines)
      if (others === undefined) makers.set(defines, [id])
      else others.push(id)
    }
    if (name !== null) {
      const other = asleep.get(name)
      if (other === undefined || id < other) asleep.set(name, id)
    }
  }
  for (const ids of makers.values()) if (ids.length > 1) ids.sort()

  const inputs = new Map<CellId, CellId[]>()
  for (const [id, reading] of readings) inputs.set(id, inputsOf(id, reading, makers))
  if (former !== null && sameArrows(former, makers, asleep, inputs)) return former

  const readers = new Map<CellId, CellId[]>()
  for (const id of inputs.keys()) readers.set(id, [])
  for (const [id, its] of inputs) for (const input of its) readers.get(input)?.push(id)
  const tangles = tanglesOf(inputs, readers)
  return { makers, asleep, inputs, readers, rank: ranks(inputs, readers, tangles), cycles: cycles(inputs, tangles, readings) }
}

/** A use that may be a column becomes an arrow only where such a cell is there, and never to the cell itself. */
function inputsOf(id: CellId, { uses }: Reading, makers: ReadonlyMap<Name, readonly CellId[]>): CellId[] {
  const its = new Set<CellId>()
  for (const { name, either } of uses) {
    for (const maker of makers.get(name) ?? []) if (!either || maker !== id) its.add(maker)
  }
  return [...its]
}

const namesAlike = (a: Reading, b: Reading): boolean =>
  a === b ||
  (a.defines === b.defines &&
    a.asleep === b.asleep &&
    a.uses.length === b.uses.length &&
    a.uses.every(({ name, either }, i) => name === b.uses[i]?.name && either === b.uses[i]?.either))

/** Whether two lists hold the same in the same order; a list that is not there is like no list but another that is not. */
export const listsAlike = (a: readonly string[] | undefined, b: readonly string[] | undefined): boolean =>
  a === b || (a?.length === b?.length && a?.every((item, i) => item === b?.[i]) === true)

function sameArrows(
  former: Graph,
  makers: ReadonlyMap<Name, readonly CellId[]>,
  asleep: ReadonlyMap<Name, CellId>,
  inputs: ReadonlyMap<CellId, readonly CellId[]>,
): boolean {
  if (former.makers.size !== makers.size || former.asleep.size !== asleep.size || former.inputs.size !== inputs.size) return false
  for (const [name, ids] of makers) if (!listsAlike(former.makers.get(name), ids)) return false
  for (const [name, id] of asleep) if (former.asleep.get(name) !== id) return false
  for (const [id, its] of inputs) if (!listsAlike(former.inputs.get(id), its)) return false
  return true
}

type Arrows = ReadonlyMap<CellId, readonly CellId[]>

/** Sets of cells that wait for each other, each cell's set by its id; cells outside every cycle are in none. */
type Tangles = ReadonlyMap<CellId, ReadonlySet<CellId>>

/**
 * Strongly connected sets (Tarjan 1972, SIAM Journal on Computing 1:146), with a stack of its own. It looks only at what is left when cells
 * that read nothing left are taken away again and again, which is nothing at all in a notebook without a cycle.
 */
function tanglesOf(inputs: Arrows, readers: Arrows): Tangles {
  const left = withoutFirsts(inputs, readers)
  const tangles = new Map<CellId, ReadonlySet<CellId>>()
  const number = new Map<CellId, number>()
  const low = new Map<CellId, number>()
  const path: CellId[] = []
  const onPath = new Set<CellId>()
  for (const root of left) {
    if (number.has(root)) continue
    const stack: { id: CellId; next: number }[] = []
    const enter = (id: CellId): void => {
      number.set(id, number.size)
      low.set(id, number.size - 1)
      path.push(id)
      onPath.add(id)
      stack.push({ id, next: 0 })
    }
    enter(root)
    for (let frame = stack.at(-1); frame !== undefined; frame = stack.at(-1)) {
      const { id } = frame
      const input = inputs.get(id)?.[frame.next++]
      if (input === undefined) {
        stack.pop()
        const above = stack.at(-1)?.id
        const its = low.get(id) as number
        if (above !== undefined) low.set(above, Math.min(low.get(above) as number, its))
        if (its === number.get(id)) {
          const set = new Set(path.splice(path.lastIndexOf(id)))
          for (const member of set) onPath.delete(member)
          if (set.size > 1 || inputs.get(id)?.includes(id)) for (const member of set) tangles.set(member, set)
        }
      } else if (left.has(input)) {
        if (!number.has(input)) enter(input)
        else if (onPath.has(input)) low.set(id, Math.min(low.get(id) as number, number.get(input) as number))
      }
    }
  }
  return tangles
}

/** What remains when cells that read nothing that remains are taken away: cycles and what reads them. */
function withoutFirsts(inputs: Arrows, readers: Arrows): ReadonlySet<CellId> {
  const left = new Set(inputs.keys())
  const open = new Map<CellId, number>()
  const firsts: CellId[] = []
  for (const [id, its] of inputs) {
    open.set(id, its.length)
    if (its.length === 0) firsts.push(id)
  }
  for (let id = firsts.pop(); id !== undefined; id = firsts.pop()) {
    left.delete(id)
    for (const reader of readers.get(id) ?? []) {
      const rest = (open.get(reader) as number) - 1
      open.set(reader, rest)
      if (rest === 0) firsts.push(reader)
    }
  }
  return left
}

/** One more than the greatest rank among what is read; arrows within a cycle are left out, as its cells are settled by their fault. */
function ranks(inputs: Arrows, readers: Arrows, tangles: Tangles): ReadonlyMap<CellId, number> {
  const rank = new Map<CellId, number>()
  const open = new Map<CellId, number>()
  const ready: CellId[] = []
  const within = (a: CellId, b: CellId): boolean => tangles.get(a)?.has(b) === true
  for (const [id, its] of inputs) {
    const outside = its.filter((input) => !within(id, input)).length
    rank.set(id, 0)
    open.set(id, outside)
    if (outside === 0) ready.push(id)
  }
  for (let id = ready.pop(); id !== undefined; id = ready.pop()) {
    const next = (rank.get(id) as number) + 1
    for (const reader of readers.get(id) ?? []) {
      if (within(reader, id)) continue
      rank.set(reader, Math.max(rank.get(reader) as number, next))
      const rest = (open.get(reader) as number) - 1
      open.set(reader, rest)
      if (rest === 0) ready.push(reader)
    }
  }
  return rank
}

/** For each cell in a cycle the shortest way round from it to itself. Cells go by name, so that no order of cells decides which is named. */
function cycles(inputs: Arrows, tangles: Tangles, readings: ReadonlyMap<CellId, Reading>): ReadonlyMap<CellId, Round> {
  const found = new Map<CellId, Round>()
  const nameOf = (id: CellId): Name => readings.get(id)?.defines ?? id
  const members = [...tangles.keys()].sort((a, b) => (nameOf(a) < nameOf(b) || (nameOf(a) === nameOf(b) && a < b) ? -1 : 1))
  for (const start of members) {
    if (found.has(start)) continue
    const round = shortestRound(start, inputs, tangles.get(start) as ReadonlySet<CellId>)
    const names = round.map(nameOf)
    const cells = names.length
    round.forEach((id, i) => {
      const told = cells > longestTold ? [0, 1, cells - 1] : names.keys()
      if (!found.has(id)) found.set(id, { names: Array.from(told, (step) => names[(i + step) % cells] as Name), cells })
    })
  }
  return found
}

function shortestRound(start: CellId, inputs: Arrows, tangle: ReadonlySet<CellId>): readonly CellId[] {
  const from = new Map<CellId, CellId>()
  const queue = [start]
  for (let i = 0; i < queue.length; i++) {
    const id = queue[i] as CellId
    for (const input of inputs.get(id) ?? []) {
      if (input === start) {
        const round: CellId[] = []
        for (let step: CellId | undefined = id; step !== undefined; step = from.get(step)) round.push(step)
        return round.reverse()
      }
      if (tangle.has(input) && !from.has(input)) {
        from.set(input, id)
        queue.push(input)
      }
    }
  }
  return [start]
}
