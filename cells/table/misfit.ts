// Entries that are not of the type their column is said to have: how many, the first few with their places, and whether there is one text
// only that a `missing` clause could name.

export type MisfitReason =
  | "not-a-number"
  | "too-large"
  | "rounded"
  | "negative"
  | "not-whole"
  | "not-a-truth"
  | "not-a-date"
  | "not-a-level"

export type Misfit = { readonly record: number; readonly text: string; readonly reason: MisfitReason }

export type Misfits = {
  readonly count: number
  readonly first: readonly Misfit[]
  /** Every different text among them, with its reason; null where there are more than `textsKept`. */
  readonly texts: ReadonlyMap<string, MisfitReason> | null
  readonly reasons: ReadonlySet<MisfitReason>
}

const firstKept = 3
const textsKept = 8

export class MisfitTally {
  private count = 0
  private readonly first: Misfit[] = []
  private readonly texts = new Map<string, MisfitReason>()
  private tooMany = false
  private readonly reasons = new Set<MisfitReason>()

  add(record: number, text: string, reason: MisfitReason): void {
    this.count++
    if (this.first.length < firstKept) this.first.push({ record, text, reason })
    this.reasons.add(reason)
    if (!this.tooMany) this.texts.set(text, reason)
    if (this.texts.size > textsKept) this.tooMany = true
  }

  taken(): Misfits | null {
    if (this.count === 0) return null
    return { count: this.count, first: this.first, texts: this.tooMany ? null : this.texts, reasons: this.reasons }
  }
}
