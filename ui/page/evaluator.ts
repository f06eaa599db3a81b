// Starts the evaluator's worker and hands it the bytes it may read. The one address of a script that the page ever makes is made here, under
// a policy that lets only our own origin through. A worker that fails, or does not answer any more, is replaced, and the engine asks again for
// what was under way.

import type { Evaluator } from "../../runtime/evaluator.ts"
import { type Port, remoteEvaluator } from "../../runtime/index.ts"
import type { Bytes } from "./desk.ts"
import type { Asked, Placed } from "./placed.ts"
import { Pulse } from "./pulse.ts"
import { withSuspects } from "./suspects.ts"

export interface Started {
  readonly evaluator: Evaluator
  readonly bytes: Bytes
}

/** Starts the worker; `trouble` is told when it fails and is replaced, and again when it cannot be replaced. */
export function startEvaluator(trouble: (text: string) => void): Started {
  const blobs = new Map<string, Blob>()
  let failures = 0
  const pulse = new Pulse({ ask: () => worker.postMessage({ asked: true } satisfies Asked), silent, now: () => performance.now() })
  let worker = begin()
  const remote = remoteEvaluator(port(worker))
  const evaluator = withSuspects(remote, {
    began: () => pulse.began(),
    ended: () => pulse.ended(),
    cancelled: () => pulse.cancelled(),
  })

  function begin(): Worker {
    const started = new Worker(scriptAddress("evaluator.worker.js"), { type: "module" })
    for (const [sha256, blob] of blobs) place(started, sha256, blob)
    started.addEventListener("error", (event) => failed(started, event.message))
    started.addEventListener("messageerror", () => failed(started, "a message could not be read"))
    started.addEventListener("message", () => {
      if (started === worker) pulse.heard()
    })
    return started
  }

  function failed(from: Worker, why: string): void {
    if (from !== worker) return
    failures++
    if (failures > mostFailures) {
      worker.terminate()
      trouble(`The part of the program that computes has stopped: ${why}. Loading the page again starts it anew.`)
    } else replace()
  }

  function silent(milliseconds: number): void {
    const seconds = Math.round(milliseconds / 1000)
    evaluator.silent(
      `it did not answer for ${seconds} seconds, and again when it was tried alone. Any change of the cell tries it once more.`,
    )
    trouble(`The part of the program that computes did not answer for ${seconds} seconds and was started anew. Nothing you wrote is lost.`)
    replace()
  }

  function replace(): void {
    worker.terminate()
    worker = begin()
    pulse.renewed()
    remote.replace(port(worker))
  }

  return {
    evaluator,
    bytes: {
      get: (sha256) => blobs.get(sha256) ?? null,
      put(sha256, blob) {
        if (blobs.has(sha256)) return
        blobs.set(sha256, blob)
        place(worker, sha256, blob)
      },
    },
  }
}

/** After so many it is not the work but the worker that is broken. */
const mostFailures = 3

function place(worker: Worker, sha256: string, blob: Blob): void {
  const placed: Placed = { placed: sha256, blob }
  worker.postMessage(placed)
}

function port(worker: Worker): Port {
  return {
    post: (message, transfer) => worker.postMessage(message, [...transfer]),
    listen: (hear) => worker.addEventListener("message", ({ data }: MessageEvent<unknown>) => hear(data)),
  }
}

interface ScriptPolicy {
  createScriptURL(address: string): string
}

declare global {
  interface Window {
    readonly trustedTypes?: { createPolicy(name: string, rules: ScriptPolicy): ScriptPolicy }
  }
}

/** Only an address of our own origin becomes a script. */
const rules: ScriptPolicy = {
  createScriptURL(address) {
    const url = new URL(address, import.meta.url)
    if (url.origin !== location.origin) throw new TypeError(`A script of ${url.origin} is not started here.`)
    return url.href
  },
}

let policy: ScriptPolicy | null = null

function scriptAddress(address: string): string {
  policy ??= window.trustedTypes?.createPolicy("etamu", rules) ?? rules
  return policy.createScriptURL(address)
}
