// The evaluator's worker: all kinds, whole, and the bytes of the enclosures that the page has handed over. It is the only place in the
// browser where anything is computed.

import { kinds } from "../../cells/index.ts"
import { createEvaluator, serveEvaluator } from "../../runtime/index.ts"
import { pieces } from "../../storage/file/index.ts"
import type { Asked, Heard, Placed } from "./placed.ts"

declare const self: DedicatedWorkerGlobalScope

const blobs = new Map<string, Blob>()

/** A turn of the event loop, without the delay that timers are held to. */
const turns = new MessageChannel()
const waiting: (() => void)[] = []
turns.port1.onmessage = () => waiting.shift()?.()

const evaluator = createEvaluator({
  kinds,
  bytes: (sha256) => {
    const blob = blobs.get(sha256)
    if (blob === undefined) throw new Error(`The bytes with the SHA-256 ${sha256} were not handed to the evaluator.`)
    return pieces(blob)
  },
  pause: () =>
    new Promise((done) => {
      waiting.push(done)
      turns.port2.postMessage(null)
    }),
  now: () => performance.now(),
})

serveEvaluator(
  {
    post: (message, transfer) => self.postMessage(message, [...transfer]),
    listen(hear) {
      self.addEventListener("message", ({ data }: MessageEvent<unknown>) => {
        if (isPlaced(data)) blobs.set(data.placed, data.blob)
        else if (isAsked(data)) self.postMessage({ heard: true } satisfies Heard)
        else hear(data)
      })
    },
  },
  evaluator,
)

// It is there, and any silence from here on is one of its work.
self.postMessage({ heard: true } satisfies Heard)

function isAsked(message: unknown): message is Asked {
  return typeof message === "object" && message !== null && "asked" in message
}

function isPlaced(message: unknown): message is Placed {
  return typeof message === "object" && message !== null && "placed" in message
}
