// Whether the evaluator's worker still answers. The engine has no clock, the page has: while work is under way the worker is asked again and
// again, and answers whenever its work gives the event loop a turn. Silence that lasts is told once; what is done about it is not known here.

/** How often the worker is asked, in milliseconds. */
const beat = 1000

/** How long a worker may be silent: work gives a turn every few milliseconds, so this is far beyond the slowest honest machine. */
export const mostSilence = 10_000

/** How long it may be silent when something was taken back meanwhile: a person has gone on and waits for other work. */
export const mostSilenceAfterCancel = 3000

/** How long a worker that was never heard may take: its script may come over a slow line. */
const mostStart = 60_000

/** A page that was asleep for so many beats has heard nothing either. */
const mostSleep = 3

export interface PulseOptions {
  /** Sends a question to the worker. */
  ask(): void
  /** The worker has not answered for so many milliseconds. */
  silent(milliseconds: number): void
  /** Milliseconds from anywhere. */
  now(): number
}

export class Pulse {
  readonly #options: PulseOptions
  #working = 0
  #timer: ReturnType<typeof setInterval> | undefined
  #lastBeat = 0
  #askedAt: number | null = null
  /** Something was taken back, and whether a question was sent after that: only its answer shows that the worker has heard of it. */
  #cancelled = false
  #askedSince = false
  #everHeard = false

  constructor(options: PulseOptions) {
    this.#options = options
  }

  /** Work was sent. */
  began(): void {
    this.#working += 1
    if (this.#timer !== undefined) return
    this.#lastBeat = this.#options.now()
    this.#timer = setInterval(() => this.#beat(), beat)
  }

  /** Work came back, whatever came of it. */
  ended(): void {
    this.#working -= 1
    if (this.#working > 0) return
    this.#askedAt = null
    this.#cancelled = false
  }

  /** Work that was sent is not wanted any more. */
  cancelled(): void {
    if (this.#working === 0) return
    this.#cancelled = true
    this.#askedSince = false
  }

  /** The worker said something. */
  heard(): void {
    this.#everHeard = true
    this.#askedAt = null
    if (this.#askedSince) this.#cancelled = false
  }

  /** Another worker stands in its place. */
  renewed(): void {
    this.#everHeard = false
    this.#askedAt = null
    this.#cancelled = false
  }

  #beat(): void {
    if (this.#working === 0) {
      // It ends only when a whole beat was idle: a drag is work and idle many times a second.
      clearInterval(this.#timer)
      this.#timer = undefined
      return
    }
    const now = this.#options.now()
    const slept = now - this.#lastBeat > beat * mostSleep
    this.#lastBeat = now
    if (this.#askedAt === null || slept) {
      this.#askedAt = now
      this.#askedSince = true
      this.#options.ask()
      return
    }
    const silence = now - this.#askedAt
    const most = this.#cancelled ? mostSilenceAfterCancel : mostSilence
    if (silence >= (this.#everHeard ? most : mostStart)) this.#options.silent(silence)
  }
}
