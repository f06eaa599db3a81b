// A lock manager for tests, as the Web Locks standard has it: exclusive and shared locks, `ifAvailable`, calling off, and asking who holds
// what. One stands for one browser; the tabs of a test share it.

import type { Locks } from "../../../storage/shelf/index.ts"

interface Request {
  readonly name: string
  readonly mode: LockMode
  readonly grant: () => void
}

export function fakeLocks(): Locks {
  const held: { name: string; mode: LockMode }[] = []
  const waiting: Request[] = []
  const free = (name: string, mode: LockMode): boolean =>
    !held.some((lock) => lock.name === name && (lock.mode === "exclusive" || mode === "exclusive"))
  const next = (): void => {
    for (const request of [...waiting]) {
      const first = waiting.find(({ name }) => name === request.name)
      if (first !== request || !free(request.name, request.mode)) continue
      waiting.splice(waiting.indexOf(request), 1)
      request.grant()
    }
  }
  const request = (name: string, options: LockOptions, callback: (lock: Lock | null) => unknown): Promise<unknown> =>
    new Promise((done, fail) => {
      const { mode = "exclusive", ifAvailable = false, signal } = options
      const run = async (lock: { name: string; mode: LockMode } | null): Promise<void> => {
        try {
          done(await callback(lock))
        } catch (error) {
          fail(error)
        } finally {
          if (lock !== null) held.splice(held.indexOf(lock), 1)
          next()
        }
      }
      const grant = (): void => {
        const lock = { name, mode }
        held.push(lock)
        void run(lock)
      }
      if (free(name, mode) && !waiting.some((other) => other.name === name)) grant()
      else if (ifAvailable) void run(null)
      else {
        const asked = { name, mode, grant }
        waiting.push(asked)
        signal?.addEventListener("abort", () => {
          if (!waiting.includes(asked)) return
          waiting.splice(waiting.indexOf(asked), 1)
          fail(new DOMException("The request was called off.", "AbortError"))
        })
      }
    })
  return {
    request: request as Locks["request"],
    query: async () => ({ held: held.map(({ name, mode }) => ({ name, mode })), pending: [] }),
  }
}
