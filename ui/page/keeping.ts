// Keeping: the notebook that lies open goes to the shelf whenever it comes to rest, and is called saved only once it was read back. It says
// how that stands, in words for the head of the page, and never hides that something was refused.

import type { Notebook } from "../../runtime/document.ts"
import type { Notice } from "../../runtime/notice.ts"
import { appended, type Kept, writer } from "../../storage/file/index.ts"
import type { Loan } from "../../storage/shelf/index.ts"
import type { Desk } from "./desk.ts"
import { now } from "./opening.ts"

export type Saved =
  | { readonly status: "saving" }
  | { readonly status: "saved" /** When it was read back. */; readonly at: string }
  | { readonly status: "reading" }
  /** It is not as it was written or sealed, and the person has not decided yet. */
  | { readonly status: "undecided" }
  | { readonly status: "trouble"; readonly notice: Notice }

export class Keeping {
  readonly #desk: Desk
  readonly #told: (saved: Saved) => void
  #kept: Kept
  /** Trail and standing as they are to be kept: they change by what a person decides, not by edits. */
  #trail: Kept["trail"]
  #doubt: Kept["doubt"]
  #whole: { readonly of: Notebook; readonly notebook: Notebook } | null = null
  #loan: Loan | null
  #due = false
  #busy: Promise<void> | null = null
  readonly #stop: () => void

  /** `loan` is null where there is no shelf; `why` then says so. */
  constructor(desk: Desk, kept: Kept, loan: Loan | null, why: Notice | null, told: (saved: Saved) => void) {
    this.#desk = desk
    this.#kept = kept
    this.#trail = kept.trail
    this.#doubt = kept.doubt
    this.#loan = loan
    this.#told = told
    if (loan === null && why !== null) told({ status: "trouble", notice: why })
    else if (loan?.role === "reading") told({ status: "reading" })
    else if (kept.doubt !== null) told({ status: "undecided" })
    else told({ status: "saved", at: kept.changed })
    this.#stop = desk.listen((event) => {
      if (event.type === "rest" || (event.type === "settled" && desk.isAtRest)) this.save()
    })
  }

  /** The notebook as it is now, as it would be kept. */
  get kept(): Kept {
    const notebook = this.#notebook
    const findings = notebook.cells.flatMap(({ id }) => {
      const state = this.#desk.state(id)
      return state.status === "ready" ? [{ cell: id, key: state.key as string, summary: state.shown.summary }] : []
    })
    const same = notebook === this.#kept.notebook
    const changed = same && this.#doubt === this.#kept.doubt ? this.#kept.changed : now()
    return { ...this.#kept, notebook, findings, writer, trail: this.#trail, doubt: this.#doubt, changed }
  }

  /** Everything is on the shelf as it is. */
  get isSaved(): boolean {
    return !this.#due && this.#busy === null && (this.#desk.readOnly || this.#kept.notebook === this.#notebook)
  }

  /** What stands against writing in it, until the person decides. */
  get doubt(): string | null {
    return this.#doubt
  }

  /** The person writes in it all the same: the trail says so, since the next seal will hold again. */
  decide(): void {
    if (this.#doubt === null) return
    const body = { seal: this.#kept.seal?.sha256 ?? null, intact: false, first: this.#doubt }
    this.#trail = appended(this.#trail, { time: now(), by: "this browser", kind: "opened", body })
    this.#doubt = null
    this.#desk.readOnly = this.#loan?.role === "reading"
    if (this.#loan !== null) this.save()
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
      if (kept.notebook === this.#kept.notebook && kept.doubt === this.#kept.doubt && sameFindings(kept, this.#kept)) continue
      this.#told({ status: "saving" })
      const did = await this.#loan.save(kept, this.#bytes(kept))
      if (did.ok) {
        this.#kept = kept
        this.#told({ status: "saved", at: did.value })
      } else this.#told({ status: "trouble", notice: did.notice })
    }
  }

  /** The notebook with the enclosures it states and whose bytes are not here, in their places: they are written back as they came. */
  get #notebook(): Notebook {
    const { notebook, stated } = this.#desk
    if (stated.length === 0) return notebook
    if (this.#whole?.of !== notebook) this.#whole = { of: notebook, notebook: this.#rejoined(notebook) }
    return this.#whole.notebook
  }

  #rejoined(notebook: Notebook): Notebook {
    const held = new Map([...this.#desk.stated, ...notebook.enclosures].map((file) => [file.name, file]))
    const known = this.#kept.notebook.enclosures.flatMap(({ name }) => held.get(name) ?? [])
    const names = new Set(known.map(({ name }) => name))
    const enclosures = [...known, ...[...held.values()].filter(({ name }) => !names.has(name))]
    const before = this.#kept.notebook
    const same = enclosures.length === before.enclosures.length && enclosures.every((file, i) => file === before.enclosures[i])
    const next = { ...notebook, enclosures: same ? before.enclosures : enclosures }
    return same && next.cells === before.cells && next.title === before.title ? before : next
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
