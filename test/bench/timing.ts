// How things are timed: contestants take turns, a round each, so that a slow minute of the machine is everyone's; of each the median counts.

export type Contestant = { readonly name: string; readonly run: () => Promise<unknown> | unknown }

/** Fewest rounds a figure rests on. */
export const rounds = 7

/** Median milliseconds of each contestant over the rounds, after one round that does not count. */
export async function medians(contestants: readonly Contestant[], count = rounds): Promise<ReadonlyMap<string, number>> {
  const times = new Map<string, number[]>(contestants.map(({ name }) => [name, []]))
  for (let round = -1; round < count; round++) {
    for (const { name, run } of contestants) {
      const before = performance.now()
      await run()
      const taken = performance.now() - before
      if (round >= 0) times.get(name)?.push(taken)
    }
  }
  return new Map([...times].map(([name, all]) => [name, medianOf(all)]))
}

export const medianOf = (values: readonly number[]): number => {
  const sorted = values.toSorted((a, b) => a - b)
  const middle = Math.floor(sorted.length / 2)
  return sorted.length % 2 === 1 ? (sorted[middle] as number) : ((sorted[middle - 1] as number) + (sorted[middle] as number)) / 2
}

export const milliseconds = (time: number): string => `${time >= 100 ? time.toFixed(0) : time >= 10 ? time.toFixed(1) : time.toFixed(2)} ms`
export const ratio = (of: number, to: number): string => {
  const times = of / to
  return `${times >= 100 ? times.toFixed(0) : times >= 10 ? times.toFixed(1) : times.toFixed(2)}×`
}

/** Rows of cells as lines of text, columns lined up, the first to the left and the others to the right. */
export function table(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const all = [head, ...rows]
  const widths = head.map((_, j) => Math.max(...all.map((row) => (row[j] ?? "").length)))
  const line = (row: readonly string[]): string =>
    `  ${row.map((cell, j) => (j === 0 ? cell.padEnd(widths[j] as number) : cell.padStart(widths[j] as number))).join("   ")}`
  return all.map(line).join("\n")
}
