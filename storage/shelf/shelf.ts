// The shelf: the notebooks kept in this browser. The first tab to take a notebook writes it, a second reads and takes over when the first
// is done; every save is read back before it is called saved. Clock, lock manager and storage manager are handed in, and whatever the
// browser refuses comes back as a notice, never as an exception.

import { openDB } from "idb"

import type { Notice } from "../../runtime/notice.ts"
import type { Kept } from "../file/index.ts"
import { type Database, erase, readsBack, type Stored, save, stored, sweep } from "./keep.ts"
import { type Held, holders, type Locks, lockLater, lockNow, shareLock } from "./lock.ts"
import * as say from "./notices.ts"
import { type ShelfSchema, shelfVersion, storeKeys } from "./schema.ts"

export type Did<Result> = { readonly ok: true; readonly value: Result } | { readonly ok: false; readonly notice: Notice }

/** A notebook as the list of the shelf has it. */
export interface Listed {
  readonly id: string
  readonly title: string
  readonly made: string
  readonly changed: string
  readonly cells: number
  /** Bytes of its texts and enclosures. */
  readonly size: number
}

/** Room in this browser. */
export interface Room {
  /** Whether the browser has promised not to clear the shelf when it runs short; null where it does not say. */
  readonly persistent: boolean | null
  /** Bytes used and allowed; null where the browser does not say. */
  readonly used: number | null
  readonly allowed: number | null
}

/** What a loan tells of itself later. */
export type LoanEvent =
  /** The other tab is done: this one writes now, from what the other saved last. */
  | { readonly type: "writing"; readonly kept: Kept }
  /** The notebook was taken off the shelf. */
  | { readonly type: "gone" }

/** A notebook taken from the shelf. Who takes it first writes. */
export interface Loan {
  readonly role: "writing" | "reading"
  /** As it was saved last, or when it was taken. */
  readonly kept: Kept
  /**
   * Saves what has changed and reads it back. `value` is the time at which it was read back. Saves are done one after the other.
   * @param bytes  those at hand, by their SHA-256: needed for enclosures that are new
   */
  save(kept: Kept, bytes?: ReadonlyMap<string, Blob>): Promise<Did<string>>
  /** Lets another tab write it. A save under way is finished first. */
  giveBack(): Promise<void>
}

export interface Shelf {
  /** Last changed first. */
  list(): Promise<Did<readonly Listed[]>>
  /** Puts a notebook on the shelf that is not there yet. */
  add(kept: Kept, bytes?: ReadonlyMap<string, Blob>): Promise<Did<string>>
  take(id: string, told: (event: LoanEvent) => void): Promise<Did<Loan>>
  /** Puts a copy beside the notebook, with the id, title and time given; its trail goes along. */
  duplicate(id: string, copy: { readonly id: string; readonly title: string }): Promise<Did<string>>
  /** Takes a notebook off the shelf for good, unless another tab has it open. */
  remove(id: string): Promise<Did<null>>
  /** The bytes of an enclosure; null where the shelf lacks them. */
  bytes(sha256: string): Promise<Did<Blob | null>>
  /**
   * Takes away the bytes that no notebook encloses, and says how many enclosures went. Only while no other tab is there, since its undo may
   * still reach them.
   * @param pinned  SHA-256 of those that this tab's undo reaches
   */
  sweep(pinned: ReadonlySet<string>): Promise<Did<number>>
  room(): Promise<Room>
  /** Asks the browser not to clear the shelf when it runs short. The browser may ask the person. */
  askToPersist(): Promise<boolean>
  /** Gives back what is still on loan, once it is saved, and lets go of the shelf. */
  close(): Promise<void>
}

export interface ShelfOptions {
  /** Now, RFC 3339, UTC. */
  readonly now: () => string
  /** Null where the browser has none. */
  readonly locks: Locks | null
  readonly storage: Pick<StorageManager, "persisted" | "persist" | "estimate"> | null
  /** The name of the database: another one in tests. */
  readonly name?: string
}

/** Opens the shelf of this browser. */
export async function openShelf(options: ShelfOptions): Promise<Did<Shelf>> {
  const { name = "etamu" } = options
  if (globalThis.indexedDB === undefined || globalThis.indexedDB === null) return { ok: false, notice: say.absent() }
  let lost = false
  let blocked: (notice: Notice) => void = () => {}
  const blocking = new Promise<Notice>((done) => {
    blocked = done
  })
  try {
    const opening = openDB<ShelfSchema>(name, shelfVersion, {
      upgrade(database) {
        for (const [store, keyPath] of Object.entries(storeKeys)) {
          database.createObjectStore(store as keyof typeof storeKeys, { keyPath: typeof keyPath === "string" ? keyPath : [...keyPath] })
        }
      },
      blocked: () => blocked(say.blocked()),
      blocking(_current, _blocked, event) {
        // A newer Etamu wants to open its own form: it must not wait for this tab.
        lost = true
        ;(event.target as IDBDatabase).close()
      },
      terminated() {
        lost = true
      },
    })
    const first = await Promise.race([opening, blocking])
    if ("code" in first) {
      opening.then((late) => late.close()).catch(() => {})
      return { ok: false, notice: first }
    }
    const present = await shareLock(options.locks, presence(name))
    return { ok: true, value: new BrowserShelf(first, { ...options, name }, present, () => lost) }
  } catch (error) {
    // A private window may have the object and refuse to open it.
    const notice = say.noticeOf(error)
    return { ok: false, notice: notice.code === "shelf/newer" || notice.code === "shelf/full" ? notice : say.absent() }
  }
}

/** The lock by which tabs see one another. */
const presence = (name: string): string => `${name} shelf`

class BrowserShelf implements Shelf {
  readonly #database: Database
  readonly #options: Required<ShelfOptions>
  readonly #present: Held
  readonly #isLost: () => boolean
  readonly #loans = new Set<BrowserLoan>()

  constructor(database: Database, options: Required<ShelfOptions>, present: Held, isLost: () => boolean) {
    this.#database = database
    this.#options = options
    this.#present = present
    this.#isLost = isLost
  }

  list(): Promise<Did<readonly Listed[]>> {
    return this.#attempt(async () => {
      const heads = await this.#database.getAll("notebook")
      return heads
        .map(({ id, title, made, changed, order, size }) => ({ id, title, made, changed, cells: order.length, size }))
        .sort((a, b) => (a.changed < b.changed ? 1 : a.changed > b.changed ? -1 : 0))
    })
  }

  add(kept: Kept, bytes: ReadonlyMap<string, Blob> = new Map()): Promise<Did<string>> {
    return this.#tried(async () => {
      const written = await save(this.#database, null, kept, bytes)
      if (written === null) return failed(say.alreadyThere(kept.notebook.title))
      return (await readsBack(this.#database, written, kept)) ? done(this.#options.now()) : failed(say.differs())
    })
  }

  take(id: string, told: (event: LoanEvent) => void): Promise<Did<Loan>> {
    return this.#tried(async () => {
      const held = await lockNow(this.#options.locks, this.#lockName(id))
      const found = await stored(this.#database, id)
      if (found === null) {
        held?.release()
        return failed(say.gone())
      }
      const loan: BrowserLoan = new BrowserLoan(found, held, {
        save: (was, kept, bytes) => this.#save(was, kept, bytes),
        read: () => this.#attempt(() => stored(this.#database, id)),
        wait: (signal) => lockLater(this.#options.locks, this.#lockName(id), signal),
        left: () => this.#loans.delete(loan),
        told,
      })
      this.#loans.add(loan)
      return done(loan)
    })
  }

  duplicate(id: string, copy: { readonly id: string; readonly title: string }): Promise<Did<string>> {
    return this.#tried(async () => {
      const found = await stored(this.#database, id)
      if (found === null) return failed(say.gone())
      const time = this.#options.now()
      const kept: Kept = {
        ...found.kept,
        notebook: { ...found.kept.notebook, id: copy.id, title: copy.title },
        made: time,
        changed: time,
        // A signature is over the notebook's id too.
        seal: null,
      }
      return this.add(kept)
    })
  }

  remove(id: string): Promise<Did<null>> {
    return this.#tried(async () => {
      const own = [...this.#loans].find((loan) => loan.kept.notebook.id === id && loan.role === "writing")
      const held = own === undefined ? await lockNow(this.#options.locks, this.#lockName(id)) : null
      if (own === undefined && held === null) {
        const head = await this.#database.get("notebook", id)
        return failed(head === undefined ? say.gone() : say.openElsewhere(head.title))
      }
      try {
        await own?.finished()
        await erase(this.#database, id)
      } finally {
        held?.release()
      }
      await own?.giveBack()
      return done(null)
    })
  }

  bytes(sha256: string): Promise<Did<Blob | null>> {
    return this.#attempt(async () => (await this.#database.get("bytes", sha256))?.blob ?? null)
  }

  sweep(pinned: ReadonlySet<string>): Promise<Did<number>> {
    return this.#attempt(async () => {
      // This tab is one of those there. A tab that opens from here on has no undo yet, and reaches only what a notebook encloses.
      if ((await holders(this.#options.locks, presence(this.#options.name))) !== 1) return 0
      return sweep(this.#database, pinned)
    })
  }

  async room(): Promise<Room> {
    const { storage } = this.#options
    if (storage === null) return { persistent: null, used: null, allowed: null }
    const [persistent, estimate] = await Promise.all([storage.persisted().catch(() => null), storage.estimate().catch(() => null)])
    return { persistent, used: estimate?.usage ?? null, allowed: estimate?.quota ?? null }
  }

  async askToPersist(): Promise<boolean> {
    return (await this.#options.storage?.persist().catch(() => false)) ?? false
  }

  async close(): Promise<void> {
    await Promise.all([...this.#loans].map((loan) => loan.giveBack()))
    this.#present.release()
    this.#database.close()
  }

  /** Saves, reads back, and says the time at which that was done. */
  #save(was: Stored, kept: Kept, bytes: ReadonlyMap<string, Blob>): Promise<Did<Saved>> {
    return this.#tried(async () => {
      const written = await save(this.#database, was, kept, bytes)
      if (written === null) {
        return failed((await this.#database.getKey("notebook", kept.notebook.id)) === undefined ? say.gone() : say.overtaken())
      }
      const same = await readsBack(this.#database, written, kept)
      return done({ stored: { kept, revision: written.head.revision }, time: same ? this.#options.now() : null })
    })
  }

  #lockName(id: string): string {
    return `${this.#options.name} notebook ${id}`
  }

  #attempt<Result>(work: () => Promise<Result>): Promise<Did<Result>> {
    return this.#tried(async () => done(await work()))
  }

  async #tried<Result>(work: () => Promise<Did<Result>>): Promise<Did<Result>> {
    if (this.#isLost()) return failed(say.closed())
    try {
      return await work()
    } catch (error) {
      return failed(this.#isLost() ? say.closed() : say.noticeOf(error))
    }
  }
}

/** What lies on the shelf after a save, and when it was read back; null where it did not read back the same. */
interface Saved {
  readonly stored: Stored
  readonly time: string | null
}

/** What a loan needs of its shelf. */
interface Lender {
  save(was: Stored, kept: Kept, bytes: ReadonlyMap<string, Blob>): Promise<Did<Saved>>
  read(): Promise<Did<Stored | null>>
  wait(signal: AbortSignal): Promise<Held | null>
  left(): void
  told(event: LoanEvent): void
}

class BrowserLoan implements Loan {
  #stored: Stored
  #held: Held | null
  readonly #lender: Lender
  readonly #waiting = new AbortController()
  #saving: Promise<unknown> = Promise.resolve()
  #given = false

  constructor(found: Stored, held: Held | null, lender: Lender) {
    this.#stored = found
    this.#held = held
    this.#lender = lender
    if (held === null) void this.#takeOver()
  }

  get role(): "writing" | "reading" {
    return this.#held === null ? "reading" : "writing"
  }

  get kept(): Kept {
    return this.#stored.kept
  }

  save(kept: Kept, bytes: ReadonlyMap<string, Blob> = new Map()): Promise<Did<string>> {
    const saving = this.#saving.then(async (): Promise<Did<string>> => {
      if (this.#given || this.#held === null) return failed(this.#given ? say.gone() : say.onlyReading())
      const did = await this.#lender.save(this.#stored, kept, bytes)
      if (!did.ok) return did
      this.#stored = did.value.stored
      return did.value.time === null ? failed(say.differs()) : done(did.value.time)
    })
    this.#saving = saving
    return saving
  }

  /** When what is being saved has been. */
  async finished(): Promise<void> {
    await this.#saving
  }

  async giveBack(): Promise<void> {
    if (this.#given) return
    await this.finished()
    this.#given = true
    this.#waiting.abort()
    this.#held?.release()
    this.#held = null
    this.#lender.left()
  }

  /** Waits until the tab that writes is done, then writes from what it saved last. */
  async #takeOver(): Promise<void> {
    const held = await this.#lender.wait(this.#waiting.signal)
    if (held === null) return
    if (this.#given) {
      held.release()
      return
    }
    const now = await this.#lender.read()
    if (this.#given || !now.ok || now.value === null) {
      held.release()
      if (!this.#given) this.#lender.told({ type: "gone" })
      return
    }
    this.#stored = now.value
    this.#held = held
    this.#lender.told({ type: "writing", kept: now.value.kept })
  }
}

const done = <Result>(value: Result): Did<Result> => ({ ok: true, value })
const failed = (notice: Notice): Did<never> => ({ ok: false, notice })
