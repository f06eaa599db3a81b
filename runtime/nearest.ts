// The nearest name: what a misspelt word was probably meant to be. Distance counts letters put in, left out, changed, and two neighbours
// that changed places, each as one; a name is near only where most of its letters are there.

/** The name nearest to `name` among those there are; null where none is near enough to suggest. The first of several equally near. */
export function nearest(name: string, among: Iterable<string>): string | null {
  const wanted = folded(name)
  let best: string | null = null
  let least = Number.POSITIVE_INFINITY
  for (const other of among) {
    if (other === name) continue
    const candidate = folded(other)
    const allowed = allowance(wanted, candidate)
    if (Math.abs(wanted.length - candidate.length) > allowed && !candidate.startsWith(wanted)) continue
    const apart = candidate.startsWith(wanted) && wanted.length >= 3 ? 0.5 : distance(wanted, candidate)
    if (apart <= allowed && apart < least) {
      best = other
      least = apart
    }
  }
  return best
}

/** A case written otherwise is the commonest slip of all, and a `_` the second: neither counts as a letter. */
const folded = (name: string): string => name.normalize("NFC").toLowerCase().replaceAll("_", "")

/** One letter in three may be wrong, at least one, at most three; a name of one letter is never near to another. */
const allowance = (a: string, b: string): number => {
  const shorter = Math.min(a.length, b.length)
  return shorter < 2 ? 0 : Math.min(3, Math.max(1, Math.floor(Math.max(a.length, b.length) / 3)))
}

/** Optimal string alignment distance (Damerau 1964, Communications of the ACM 7:171), by three rows of the table. */
function distance(a: string, b: string): number {
  let before: number[] = []
  let above = Array.from({ length: b.length + 1 }, (_, j) => j)
  for (let i = 1; i <= a.length; i++) {
    const row = [i]
    for (let j = 1; j <= b.length; j++) {
      const same = a[i - 1] === b[j - 1]
      let least = Math.min((above[j] ?? 0) + 1, (row[j - 1] ?? 0) + 1, (above[j - 1] ?? 0) + (same ? 0 : 1))
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) least = Math.min(least, (before[j - 2] ?? 0) + 1)
      row.push(least)
    }
    before = above
    above = row
  }
  return above[b.length] ?? 0
}
