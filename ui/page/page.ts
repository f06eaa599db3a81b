// The page: its head, the ledger, the shelf, and what it has to say. It opens notebooks and closes them, takes files that are dropped, and
// listens for the keys. Whatever the program itself does wrong is said here, and what was written stays on the page.

import { html, LitElement, nothing, type TemplateResult } from "lit"
import { createRef, ref } from "lit/directives/ref.js"
import { words } from "../../cells/words.ts"
import type { Enclosed } from "../../runtime/document.ts"
import { createEngine } from "../../runtime/index.ts"
import { type Kept, notebookFile } from "../../storage/file/index.ts"
import { type Listed, type Loan, openShelf, type Room, type Shelf } from "../../storage/shelf/index.ts"
import { dataStart } from "./data-start.ts"
import { Desk } from "./desk.ts"
import { type Started, startEvaluator } from "./evaluator.ts"
import { SayEvent } from "./intent.ts"
import { Keeping, type Saved } from "./keeping.ts"
import { type Command, commandOf, keyOf } from "./keys.ts"
import type { ChooseEvent, Ledger } from "./ledger/ledger.ts"
import { chooseLook, chosenLook, type Look } from "./light.ts"
import type { MenuItem } from "./menu.ts"
import { type Book, blankBook, bookOfFile, bookOfSample, now, type Sample, samples, untitled } from "./opening.ts"
import type { KeysSheet } from "./shell/keys-sheet.ts"
import { clock, type ShelfAsk, type ShelfSheet } from "./shell/shelf.ts"
import "./blocks/block.ts"
import "./ledger/ledger.ts"
import "./menu.ts"
import "./shell/keys-sheet.ts"
import "./shell/shelf.ts"

/** Something said over the ledger, with what can be done about it. */
interface Band {
  readonly id: string
  readonly text: string
  readonly trouble: boolean
  /** It cannot be put away: it is true until something is done. */
  readonly stays?: true
  readonly acts: readonly { readonly label: string; act(): void }[]
}

/** Which notebook lay open last in this browser. */
const lastOpen = "etamu.open"

export class Page extends LitElement {
  static override properties = {
    desk: { state: true },
    saved: { state: true },
    bands: { state: true },
    books: { state: true },
    samples: { state: true },
    room: { state: true },
    spoken: { state: true },
    look: { state: true },
    dropping: { state: true },
  }
  declare desk: Desk | null
  declare saved: Saved | null
  declare bands: readonly Band[]
  declare books: readonly Listed[]
  declare samples: readonly Sample[]
  declare room: Room | null
  declare spoken: string
  declare look: Look
  declare dropping: boolean

  #shelf: Shelf | null = null
  #shelfTrouble: string | null = null
  #keeping: Keeping | null = null
  #started: Started | null = null
  #stop: (() => void) | null = null
  /** How the row in focus stood when it was told last. */
  #told = ""
  /** The name a data cell asks for, while the dialog for it is open. */
  #wanted: string | null = null
  readonly #ledger = createRef<Ledger>()
  readonly #sheet = createRef<ShelfSheet>()
  readonly #keys = createRef<KeysSheet>()
  readonly #chooser = createRef<HTMLInputElement>()

  constructor() {
    super()
    this.desk = null
    this.saved = null
    this.bands = []
    this.books = []
    this.samples = []
    this.room = null
    this.spoken = ""
    this.look = chosenLook()
    this.dropping = false
    chooseLook(this.look)
    this.addEventListener(SayEvent.type, (event) => {
      this.spoken = event.detail
    })
    this.addEventListener("etamu-choose", (event) => this.#choose((event as ChooseEvent).detail.name))
    this.addEventListener("etamu-shelf", (event) => void this.#asked((event as CustomEvent<ShelfAsk>).detail))
  }

  protected override createRenderRoot(): HTMLElement {
    return this
  }

  override connectedCallback(): void {
    super.connectedCallback()
    addEventListener("error", (event) => this.#failed(event.message))
    addEventListener("unhandledrejection", (event) =>
      this.#failed(event.reason instanceof Error ? event.reason.message : String(event.reason)),
    )
    addEventListener("keydown", (event) => this.#key(event))
    addEventListener("dragover", (event) => this.#dragged(event))
    addEventListener("dragleave", (event) => {
      if (event.relatedTarget === null) this.dropping = false
    })
    addEventListener("drop", (event) => this.#dropped(event))
    addEventListener("beforeunload", (event) => this.#leaving(event))
    document.addEventListener("visibilitychange", () => {
      if (document.visibilityState === "hidden") this.desk?.rest()
    })
    void this.#begin()
  }

  override render() {
    return html`
      <header class="head">
        ${this.#title()}
        <span class=${this.saved?.status === "trouble" ? "saved trouble" : "saved"}>${savedSays(this.saved)}</span>
        <nav aria-label="Notebook">
          <button type="button" aria-disabled=${!this.#can("undo")} title=${keyOf("undo")} @click=${() => this.#do("undo")}>Undo</button>
          <button type="button" aria-disabled=${!this.#can("redo")} title=${keyOf("redo")} @click=${() => this.#do("redo")}>Redo</button>
          <button type="button" title=${keyOf("shelf")} @click=${() => this.#do("shelf")}>Shelf</button>
          <button type="button" title=${keyOf("open")} @click=${() => this.#do("open")}>Open</button>
          <button type="button" title=${keyOf("file")} @click=${() => this.#do("file")}>Hand over</button>
          <etamu-menu text="View" label="View: light or dark, keys, print" .items=${this.#views()}></etamu-menu>
        </nav>
      </header>
      ${this.bands.map((band) => this.#band(band))}
      <main aria-label="Ledger" class=${this.dropping ? "dropping" : ""}>
        ${this.desk === null ? nothing : html`<etamu-ledger ${ref(this.#ledger)} .desk=${this.desk}></etamu-ledger>`}
      </main>
      <etamu-shelf ${ref(this.#sheet)} .books=${this.books} .samples=${this.samples} .room=${this.room} .trouble=${this.#shelfTrouble}
        .current=${this.desk?.notebook.id ?? ""}></etamu-shelf>
      <etamu-keys ${ref(this.#keys)}></etamu-keys>
      <input type="file" hidden multiple ${ref(this.#chooser)} @change=${() => void this.#chosen()} />
      <div class="unseen" role="status" aria-live="polite">${this.spoken}</div>
    `
  }

  protected override updated(): void {
    const title = this.desk?.notebook.title ?? ""
    document.title = title === "" ? "Etamu" : `${title} · Etamu`
  }

  #title(): TemplateResult {
    const title = this.desk?.notebook.title ?? ""
    return html`<h1 class="unseen">${title === "" ? "Etamu" : title}</h1>
      <input class="title" aria-label="Title of the notebook" placeholder="Without a title" spellcheck="false" .value=${title}
        ?readonly=${this.desk?.readOnly ?? true} @change=${(event: Event) => this.desk?.rename((event.target as HTMLInputElement).value.trim())}
        @keydown=${(event: KeyboardEvent) => {
          if (event.key === "Enter") (event.target as HTMLInputElement).blur()
        }} />`
  }

  #band(band: Band): TemplateResult {
    return html`<div class=${band.trouble ? "band trouble" : "band"} role=${band.trouble ? "alert" : "status"}>
      <p>${band.text}</p>
      ${band.acts.map(({ label, act }) => html`<button type="button" @click=${act}>${label}</button>`)}
      ${band.stays ? nothing : html`<button type="button" @click=${() => this.#unsay(band.id)}>Put away</button>`}
    </div>`
  }

  #views(): readonly MenuItem[] {
    const look = (look: Look, label: string): MenuItem => ({
      label: this.look === look ? `${label} (now)` : label,
      act: () => {
        this.look = look
        chooseLook(look)
      },
    })
    return [
      look("system", "As the system has it"),
      look("light", "Light"),
      look("dark", "Dark"),
      { label: "Keys", keys: keyOf("keys"), act: () => this.#do("keys") },
      { label: "Print", act: () => print() },
    ]
  }

  // Opening and closing.

  async #begin(): Promise<void> {
    this.#started = startEvaluator((text) => this.#say({ id: "evaluator", text, trouble: true, acts: [] }))
    const did = await openShelf({ now, locks: navigator.locks ?? null, storage: navigator.storage ?? null })
    if (did.ok) this.#shelf = did.value
    else this.#shelfTrouble = `${did.notice.text} ${did.notice.hint ?? ""}`
    this.samples = await samples().catch(() => [])
    await this.#list()
    const last = kept(lastOpen)
    const known = this.books.find(({ id }) => id === last) ?? this.books[0]
    if (known === undefined || !(await this.#take(known.id))) {
      const [first] = this.samples
      await this.#put(first === undefined ? await blankBook() : await bookOfSample(first))
    }
    // The editor is fetched while nobody waits for it, so that the first key into a statement is not lost.
    void this.desk?.engine.settled().then(() => import("./statement/editor.ts"))
    // Bytes that nothing reaches any more go; undo begins anew with each load, so now is the time.
    if (this.desk !== null) await this.#shelf?.sweep(this.desk.engine.reached)
  }

  async #list(): Promise<void> {
    if (this.#shelf === null) return
    const [did, room] = await Promise.all([this.#shelf.list(), this.#shelf.room()])
    if (did.ok) this.books = did.value
    this.room = room
  }

  /** Puts a notebook on the shelf and opens it; without a shelf it is opened all the same, and said not to be kept. */
  async #put(book: Book): Promise<void> {
    const { kept: made, bytes, notices } = book
    this.bands = []
    if (this.#shelf !== null) {
      const did = await this.#shelf.add(made, bytes)
      if (did.ok && (await this.#take(made.notebook.id, book))) return
      if (!did.ok && did.notice.code === "shelf/already-there") {
        this.#alreadyThere(book)
        return
      }
      if (!did.ok) this.#say({ id: "shelf", text: `${did.notice.text} ${did.notice.hint ?? ""}`, trouble: true, acts: [] })
    }
    await this.#lay(made, bytes, null)
    this.#sayNotices(notices)
  }

  #alreadyThere(book: Book): void {
    const { notebook } = book.kept
    this.#say({
      id: "there",
      text: `“${notebook.title}” is on the shelf already, perhaps as it was before.`,
      trouble: false,
      acts: [
        { label: "Open the one on the shelf", act: () => void this.#take(notebook.id) },
        {
          label: "Open the file beside it, as a copy",
          act: () =>
            void this.#put({
              ...book,
              kept: {
                ...book.kept,
                seal: null,
                notebook: { ...notebook, id: crypto.randomUUID(), title: `${notebook.title} (from a file)` },
              },
            }),
        },
      ],
    })
  }

  /** Opens a notebook of the shelf. False where that could not be done, which is then said. */
  async #take(id: string, from: Book | null = null): Promise<boolean> {
    const shelf = this.#shelf
    if (shelf === null) return false
    if (this.desk?.notebook.id === id) return true
    const did = await shelf.take(id, (event) => {
      if (this.desk?.notebook.id !== id) return
      if (event.type === "gone") {
        this.desk.readOnly = true
        this.#say({
          id: "gone",
          text: "This notebook was taken off the shelf in another tab. Hand it over as a file to keep it.",
          trouble: true,
          acts: [],
        })
      } else {
        this.#say({ id: "writing", text: "The other tab is done: this one writes from here on.", trouble: false, acts: [] })
        this.#unsay("reading")
        void this.#lay(event.kept, new Map(), loan)
      }
    })
    if (!did.ok) {
      this.#say({ id: "take", text: `${did.notice.text} ${did.notice.hint ?? ""}`, trouble: true, acts: [] })
      return false
    }
    const loan = did.value
    this.bands = []
    await this.#lay(loan.kept, from?.bytes ?? new Map(), loan)
    if (from !== null) this.#sayNotices(from.notices)
    if (loan.role === "reading") {
      this.#say({
        id: "reading",
        text: "This notebook is open in another tab, which writes it; here it is only read. Close it there to write here.",
        trouble: false,
        acts: [],
      })
    }
    keep(lastOpen, id)
    return true
  }

  /** Lays a notebook on the desk: engine, bytes, keeping. */
  async #lay(book: Kept, bytes: ReadonlyMap<string, Blob>, loan: Loan | null): Promise<void> {
    const started = this.#started
    if (started === null) return
    await this.#close(loan)
    for (const { sha256 } of book.notebook.enclosures) {
      const blob = bytes.get(sha256) ?? started.bytes.get(sha256) ?? (await this.#fromShelf(sha256))
      if (blob !== null) started.bytes.put(sha256, blob)
    }
    // What has no bytes here is left out of what is evaluated, so that the cell that reads it asks for the file by name.
    const isHere = ({ sha256 }: Enclosed): boolean => started.bytes.get(sha256) !== null
    const stated = book.notebook.enclosures.filter((file) => !isHere(file))
    const notebook = stated.length === 0 ? book.notebook : { ...book.notebook, enclosures: book.notebook.enclosures.filter(isHere) }
    const engine = createEngine({ words, notebook, evaluator: started.evaluator })
    const desk = new Desk(engine, started.bytes, book.doubt !== null || loan?.role === "reading", stated)
    const why =
      loan === null && this.#shelfTrouble !== null
        ? ({
            level: "fault",
            code: "shelf/none",
            text: this.#shelfTrouble,
            hint: null,
            clause: null,
            at: { clause: -1, from: 0, to: 0 },
            mend: null,
          } as const)
        : null
    this.#keeping = new Keeping(desk, book, loan, why, (saved) => {
      this.saved = saved
      if (saved.status === "trouble") {
        this.#say({
          id: "saving",
          text: `Not saved. ${saved.notice.text} ${saved.notice.hint ?? ""}`,
          trouble: true,
          acts: [{ label: "Save as a file", act: () => this.#do("file") }],
        })
      } else this.#unsay("saving")
    })
    this.#stop = desk.listen((event) => {
      this.requestUpdate()
      if (event.type === "notebook") this.#told = ""
      if (event.type === "settled" && desk.isAtRest) this.#tellStanding()
    })
    this.desk = desk
    if (book.doubt !== null && loan?.role !== "reading") this.#sayDoubt(book.doubt)
    desk.rest()
    scrollTo(0, 0)
  }

  /** What the row in focus has come to, once it is all there and only if it is news: a reading told meanwhile is not talked over. */
  #tellStanding(): void {
    const standing = this.#ledger.value?.spoken ?? ""
    if (standing === "" || standing === this.#told || standing.endsWith("more to come")) return
    this.#told = standing
    this.spoken = standing
  }

  async #close(next: Loan | null): Promise<void> {
    this.#stop?.()
    this.#stop = null
    this.desk?.rest()
    await this.#keeping?.close(next)
    this.#keeping = null
    this.desk?.close()
  }

  async #fromShelf(sha256: string): Promise<Blob | null> {
    const did = await this.#shelf?.bytes(sha256)
    return did?.ok === true ? did.value : null
  }

  async #asked(ask: ShelfAsk): Promise<void> {
    switch (ask.type) {
      case "open":
        await this.#take(ask.id)
        break
      case "sample":
        await this.#put(await bookOfSample(ask.sample))
        break
      case "blank": {
        // One that was begun before and never written in is as good, and the shelf does not fill up with nothing.
        const untouched = this.books.find(({ title, cells }) => title === untitled && cells === 0)
        if (untouched === undefined || !(await this.#take(untouched.id))) await this.#put(await blankBook())
        break
      }
      case "file":
        this.#choose(null)
        break
      case "remove": {
        const did = await this.#shelf?.remove(ask.id)
        if (did?.ok === false) this.#say({ id: "remove", text: `${did.notice.text} ${did.notice.hint ?? ""}`, trouble: true, acts: [] })
        await this.#list()
      }
    }
  }

  // Files in and out.

  #choose(name: string | null): void {
    const chooser = this.#chooser.value
    if (chooser === undefined) return
    this.#wanted = name
    chooser.accept = name === null ? ".csv,.tsv,.txt,.etamu,.cells" : ""
    chooser.value = ""
    chooser.click()
  }

  async #chosen(): Promise<void> {
    const files = [...(this.#chooser.value?.files ?? [])]
    const wanted = this.#wanted
    this.#wanted = null
    const [only] = files
    if (wanted !== null && only !== undefined && only.name !== wanted) {
      // The cell asks by a name of its own: the file is enclosed under that name.
      await this.#enclose(renamed(only, wanted))
    } else await this.#takeIn(files)
  }

  async #takeIn(files: readonly File[]): Promise<void> {
    for (const file of files) {
      if (/\.(etamu|cells)$/i.test(file.name)) await this.#openFile(file)
      else if (/\.(csv|tsv|tab|txt)$/i.test(file.name)) await this.#enclose(file)
      else {
        this.#say({
          id: `file ${file.name}`,
          text: `${file.name} is neither a notebook (.etamu, .cells) nor a data file that can be read here (.csv, .tsv).`,
          trouble: true,
          acts: [],
        })
      }
    }
  }

  async #openFile(file: File): Promise<void> {
    const { book, notices } = await bookOfFile(file)
    if (book !== null) return this.#put(book)
    const [first] = notices
    this.#say({ id: "open", text: `${file.name} was not opened. ${first?.text ?? ""} ${first?.hint ?? ""}`, trouble: true, acts: [] })
  }

  /** Encloses a data file; where no cell reads it yet, a data cell is proposed that does. */
  async #enclose(given: File, meant = false): Promise<void> {
    const desk = this.desk
    if (desk === null) return
    const file = await desk.asStated(given)
    const at = desk.notebook.cells.length
    const start = await dataStart(file, desk.notebook)
    const did = await desk.enclose(file, start === null ? null : { at, text: start }, meant)
    const id = `enclose ${file.name}`
    if (!did.ok) {
      const { stated } = did
      const use = { label: "Use it all the same", act: () => void this.#enclose(file, true) }
      const other = { label: "Choose another", act: () => this.#choose(file.name) }
      this.#say({ id, text: did.why, trouble: true, acts: stated === null ? [] : [use, other] })
      return
    }
    this.#unsay(id)
    if (desk.stated.length === 0) this.#unsay("file")
    if (did.replaced) {
      this.#say({
        id,
        text: `${file.name} has taken the place of the file of that name; undo brings that one back.`,
        trouble: false,
        acts: [],
      })
    }
    this.spoken = did.cell === null ? `${file.name} is enclosed.` : `${file.name} is enclosed, and a cell was added that reads it.`
    if (did.cell === null) return
    await this.updateComplete
    await this.#ledger.value?.edit(did.cell, start?.length ?? 0, false)
    document.querySelector(`[data-cell="${CSS.escape(did.cell)}"]`)?.scrollIntoView({ block: "start" })
  }

  async #handOver(): Promise<void> {
    const { desk } = this
    const keeping = this.#keeping
    if (desk === null || keeping === null) return
    if (keeping.doubt !== null) {
      this.#say({
        id: "file",
        text: "Not handed over: a new seal would hide that this notebook is not as it was. Decide first; the file you opened is untouched.",
        trouble: true,
        acts: [],
      })
      return
    }
    desk.rest()
    await desk.engine.settled()
    const file = await notebookFile(keeping.kept, async (sha256) => desk.bytes.get(sha256))
    const address = URL.createObjectURL(file)
    const link = document.createElement("a")
    link.href = address
    link.download = `${fileName(desk.notebook.title)}.etamu`
    link.click()
    setTimeout(() => URL.revokeObjectURL(address), 60_000)
    this.spoken = `${link.download} is handed over to the browser to be saved.`
  }

  #dragged(event: DragEvent): void {
    if (event.dataTransfer?.types.includes("Files") !== true) return
    event.preventDefault()
    this.dropping = true
  }

  #dropped(event: DragEvent): void {
    this.dropping = false
    const files = [...(event.dataTransfer?.files ?? [])]
    if (files.length === 0) return
    event.preventDefault()
    void this.#takeIn(files)
  }

  // Keys and what they do.

  #key(event: KeyboardEvent): void {
    const command = commandOf(event)
    if (command === null || document.querySelector("dialog[open]") !== null) return
    // A field of text has an undo of its own until it is left.
    if ((command === "undo" || command === "redo") && event.target instanceof HTMLInputElement && event.target.type !== "range") return
    event.preventDefault()
    this.#do(command)
  }

  #can(command: "undo" | "redo"): boolean {
    const desk = this.desk
    return desk !== null && !desk.readOnly && (command === "undo" ? desk.engine.canUndo : desk.engine.canRedo)
  }

  #do(command: Command): void {
    switch (command) {
      case "undo":
        this.desk?.undo()
        break
      case "redo":
        this.desk?.redo()
        break
      case "shelf":
        void this.#list()
        this.#sheet.value?.show()
        break
      case "open":
        this.#choose(null)
        break
      case "file":
        void this.#handOver()
        break
      case "keys":
        this.#keys.value?.show()
        break
      case "add":
      case "up":
      case "down":
      case "off":
      case "remove":
        this.#ledger.value?.command(command)
        break
    }
  }

  #leaving(event: BeforeUnloadEvent): void {
    this.desk?.rest()
    // Only where closing would lose something: what is under way is saved by the browser all the same.
    if (this.saved?.status === "trouble" && this.#keeping?.isSaved === false) event.preventDefault()
  }

  // What there is to say.

  #say(band: Band): void {
    this.bands = [...this.bands.filter(({ id }) => id !== band.id), band]
  }

  #unsay(id: string): void {
    if (this.bands.some((band) => band.id === id)) this.bands = this.bands.filter((band) => band.id !== id)
  }

  /** It stays said, and the notebook is only read, until the person has decided: after loading the page again too. */
  #sayDoubt(doubt: string): void {
    const write = {
      label: "Write in it all the same",
      act: () => {
        this.#keeping?.decide()
        this.#unsay("doubt")
      },
    }
    this.#say({
      id: "doubt",
      text: `${doubt} Until you decide, this notebook is only read here.`,
      trouble: true,
      stays: true,
      acts: [write],
    })
  }

  /** What there is to say about a file that was opened, but for what is said as long as it is in doubt. */
  #sayNotices(notices: Book["notices"]): void {
    const doubt = this.#keeping?.doubt ?? null
    const [first, ...others] = notices.filter(({ text, hint }) => `${text} ${hint ?? ""}`.trim() !== doubt)
    if (first === undefined) return
    const more =
      others.length === 0 ? "" : ` There ${others.length === 1 ? "is one more such place" : `are ${others.length} more such places`}.`
    this.#say({ id: "file", text: `${first.text} ${first.hint ?? ""}${more}`, trouble: true, acts: [] })
  }

  #failed(why: string): void {
    // A browser's note that a size changed while it was being observed: nothing is lost and nothing is wrong.
    if (why.includes("ResizeObserver")) return
    this.#say({
      id: "failed",
      text: `The program itself failed: ${why} What you wrote is still on the page; hand it over as a file to be safe.`,
      trouble: true,
      acts: [{ label: "Save as a file", act: () => this.#do("file") }],
    })
  }
}

function savedSays(saved: Saved | null): string {
  switch (saved?.status) {
    case undefined:
      return ""
    case "saving":
      return "saving"
    case "saved":
      return `saved and read back ${clock(saved.at)}`
    case "reading":
      return "read only: another tab writes"
    case "undecided":
      return "read only until you decide"
    case "trouble":
      return "not saved"
  }
}

const renamed = (file: File, name: string): File => new File([file], name, { type: file.type })

/** A title as the name of a file. */
function fileName(title: string): string {
  const plain = title
    .normalize("NFC")
    .replace(/[^\p{L}\p{N}]+/gu, "-")
    .replace(/^-+|-+$/g, "")
  return plain === "" ? "notebook" : plain.slice(0, 80)
}

function kept(name: string): string | null {
  try {
    return localStorage.getItem(name)
  } catch {
    return null
  }
}

function keep(name: string, value: string): void {
  try {
    localStorage.setItem(name, value)
  } catch {
    // A private window: next time the notebook changed last is opened instead.
  }
}

customElements.define("etamu-page", Page)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-page": Page
  }
}
