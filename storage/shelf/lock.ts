// Locks between the tabs of one browser, by the browser's own lock manager: it lets go when a tab closes or crashes, so nothing is ever left
// locked. Where there is no manager a tab takes itself to be alone, and a save over another's is caught by its revision.

/** What is used of a browser's lock manager. */
export type Locks = Pick<LockManager, "request" | "query">

export interface Held {
  release(): void
}

/** Holds the lock if nobody else does; null where somebody does. */
export function lockNow(locks: Locks | null, name: string): Promise<Held | null> {
  if (locks === null) return Promise.resolve(unlocked)
  return new Promise((done, fail) => {
    locks
      .request(name, { mode: "exclusive", ifAvailable: true }, (lock) => {
        if (lock === null) {
          done(null)
          return
        }
        return held(done)
      })
      .catch(fail)
  })
}

/** Waits for the lock, however long; null where the waiting was called off. */
export function lockLater(locks: Locks | null, name: string, signal: AbortSignal): Promise<Held | null> {
  if (locks === null) return Promise.resolve(unlocked)
  return new Promise((done) => {
    locks.request(name, { mode: "exclusive", signal }, () => held(done)).catch(() => done(null))
  })
}

/** Shows all other tabs that this one is there. */
export function shareLock(locks: Locks | null, name: string): Promise<Held> {
  if (locks === null) return Promise.resolve(unlocked)
  return new Promise((done, fail) => {
    locks.request(name, { mode: "shared" }, () => held(done)).catch(fail)
  })
}

/** How many hold the lock, in all tabs; null where nobody knows. */
export async function holders(locks: Locks | null, name: string): Promise<number | null> {
  if (locks === null) return null
  const { held: all } = await locks.query()
  return (all ?? []).filter((lock) => lock.name === name).length
}

/** A lock is held for as long as the promise given to the manager is open. */
const held = (done: (held: Held) => void): Promise<void> => new Promise((release) => done({ release }))

const unlocked: Held = { release() {} }
