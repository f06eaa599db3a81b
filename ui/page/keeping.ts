// Keeping: the notebook that lies open goes to the shelf whenever it comes to rest, and is called saved only once it was read back. It says
// how that stands, in words for the head of the page, and never hides that something was refused.

import type { Notice } from "../../runtime/notice.ts"
import { type Kept, writer } from "../../storage/file/index.ts"
import type { Loan } from "../../storage/shelf/index.ts"
import type { Desk } from "./desk.ts"
import { now } from "./opening.ts"

export type Saved =
  | { readonly status: "saving" }
  | { readonly status: "saved" /** When it was read back. */; readonly at: string }
  | { readonly status: "reading" }
  | { readonly status: "trouble"; readonly notice: Notice }

export class Keeping {
  readonly #desk: Desk
  readonly #told: (saved: Saved) => void
  #kept: Kept
  #loan: Loan | null
  #due = false
  #busy: Promise<void> | null = null
  readonly #stop: () => void

  /** `loan` is null where there is no shelf; `why` then says so. */
  constructor(desk: Desk, kept: Kept, loan: Loan | null, why: Notice | null, told: (saved: Saved) => void) {
    this.#desk = desk
    this.#kept = kept
    this.#loan = loan
    this.#told = told
    if (loan === null && why !== null) told({ status: "trouble", notice: why })
    else if (loan?.role === "reading") told({ status: "reading" })
    else told({ status: "saved", at: kept.changed })
    this.#stop = desk.listen((event) => {
      if (event.type === "rest" || (event.type === "settled" && desk.isAtRest)) this.save()
    })
  }

  /** The notebook as it is now, as it would be kept. */
  get kept(): Kept {
    const { notebook } = this.#desk
    const findings = notebook.cells.flatMap(({ id }) => {
      const state = this.#desk.state(id)
      return state.status === "ready" ? [{ cell: id, key: state.key as string, summary: state.shown.summary }] : []
    })
    const same = notebook === this.#kept.notebook
    return { ...this.#kept, notebook, findings, writer, changed: same ? this.#kept.changed : now() }
  }

  /** Everything is on the shelf as it is. */
  get isSaved(): boolean {
    return !this.#due && this.#busy === null && (this.#desk.readOnly || this.#kept.notebook === this.#desk.notebook)
  }

  /** Saves once more when what is being saved is through; many asks in between are one. */
  save(): void {
    if (this.#loan === null || this.#loan.role === "reading" || this.#desk.readOnly) return
    this.#due = true
    this.#busy ??= this.#work().finally(() => {
      this.#busy = null
    })
  }

  /** When all that was asked for is saved. */
  async finished(): Promise<void> {
    while (this.#busy !== null) await this.#busy
  }

  /** Ends, once all is saved, and gives the notebook back to the shelf unless `next` goes on with the same loan. */
  async close(next: Loan | null): Promise<void> {
    this.#stop()
    await this.finished()
    if (this.#loan !== next) await this.#loan?.giveBack()
    this.#loan = null
  }

  async #work(): Promise<void> {
    while (this.#due && this.#loan !== null) {
      this.#due = false
      const kept = this.kept
      if (kept.notebook === this.#kept.notebook && sameFindings(kept, this.#kept)) continue
      this.#told({ status: "saving" })
      const did = await this.#loan.save(kept, this.#bytes(kept))
      if (did.ok) {
        this.#kept = kept
        this.#told({ status: "saved", at: did.value })
      } else this.#told({ status: "trouble", notice: did.notice })
    }
  }

  #bytes(kept: Kept): ReadonlyMap<string, Blob> {
    const found = new Map<string, Blob>()
    for (const { sha256 } of kept.notebook.enclosures) {
      const blob = this.#desk.bytes.get(sha256)
      if (blob !== null) found.set(sha256, blob)
    }
    return found
  }
}

function sameFindings(one: Kept, other: Kept): boolean {
  return (
    one.findings.length === other.findings.length &&
    one.findings.every((finding, i) => finding.cell === other.findings[i]?.cell && finding.key === other.findings[i]?.key)
  )
}
