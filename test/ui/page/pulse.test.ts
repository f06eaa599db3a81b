// The pulse of the evaluator's worker, in virtual time: asked only while work is under way, told silent only when it is.

import { afterEach, beforeEach, describe, expect, it, vi } from "vitest"
import { Pulse } from "../../../ui/page/pulse.ts"

beforeEach(() => void vi.useFakeTimers())
afterEach(() => void vi.useRealTimers())

/** A pulse whose worker answers at once while `answers` is true. */
function worker(): { readonly pulse: Pulse; answers: boolean; asked: number; readonly silences: number[] } {
  const made = {
    answers: true,
    asked: 0,
    silences: [] as number[],
    pulse: new Pulse({
      ask: () => {
        made.asked += 1
        if (made.answers) made.pulse.heard()
      },
      silent: (milliseconds) => {
        made.silences.push(milliseconds)
        made.pulse.renewed()
      },
      now: () => Date.now(),
    }),
  }
  return made
}

describe("the pulse", () => {
  it("asks nothing while nothing is under way", () => {
    const made = worker()
    vi.advanceTimersByTime(60_000)
    expect(made.asked).toBe(0)
    made.pulse.began()
    vi.advanceTimersByTime(3000)
    made.pulse.ended()
    vi.advanceTimersByTime(60_000)
    expect(made.asked).toBe(3)
    expect(vi.getTimerCount()).toBe(0)
  })

  it("lets work that answers take as long as it takes", () => {
    const made = worker()
    made.pulse.began()
    vi.advanceTimersByTime(3_600_000)
    expect(made.silences).toEqual([])
  })

  it("tells a silence of ten seconds, once", () => {
    const made = worker()
    made.pulse.began()
    vi.advanceTimersByTime(2000)
    made.answers = false
    vi.advanceTimersByTime(12_000)
    expect(made.silences).toEqual([10_000])
  })

  it("waits no longer than three seconds once the work is not wanted any more", () => {
    const made = worker()
    made.pulse.began()
    vi.advanceTimersByTime(2000)
    made.answers = false
    vi.advanceTimersByTime(1000)
    made.pulse.cancelled()
    vi.advanceTimersByTime(3000)
    expect(made.silences).toEqual([3000])
  })

  it("forgets a cancel that was heard", () => {
    const made = worker()
    made.pulse.began()
    vi.advanceTimersByTime(2000)
    made.pulse.cancelled()
    vi.advanceTimersByTime(1000)
    made.answers = false
    vi.advanceTimersByTime(9000)
    expect(made.silences).toEqual([])
  })

  it("takes nothing a worker says for an answer to a cancel that was sent later", () => {
    const made = worker()
    made.pulse.began()
    vi.advanceTimersByTime(2000)
    made.answers = false
    made.pulse.cancelled()
    made.pulse.heard()
    vi.advanceTimersByTime(4000)
    expect(made.silences).toEqual([3000])
  })

  it("gives a worker that was never heard a minute to arrive", () => {
    const made = worker()
    made.answers = false
    made.pulse.began()
    vi.advanceTimersByTime(60_000)
    expect(made.silences).toEqual([])
    vi.advanceTimersByTime(2000)
    expect(made.silences).toEqual([60_000])
  })

  it("blames no worker for the time in which the page itself was asleep", () => {
    const made = worker()
    made.pulse.began()
    vi.advanceTimersByTime(2000)
    made.answers = false
    vi.advanceTimersByTime(1000)
    vi.setSystemTime(Date.now() + 3_600_000)
    vi.advanceTimersByTime(9000)
    expect(made.silences).toEqual([])
    vi.advanceTimersByTime(2000)
    expect(made.silences).toEqual([10_000])
  })
})
