// The evaluator itself: holds values by hash, each column once, and does evaluate, hashing, show and summary. It runs in a worker, in the
// terminal's own process or in a test, and knows none of them: bytes, pauses and the time come from outside.

import type { Evaluator } from "./evaluator.ts"
import type { AnyKind } from "./kind.ts"

export interface EvaluatorOptions {
  readonly kinds: readonly AnyKind[]
  /** The bytes of an enclosure, from the start at each call. */
  bytes(sha256: string): AsyncIterable<Uint8Array>
  /** Gives the event loop a turn, so that a message to cancel can come in. */
  pause(): Promise<void>
  /** Milliseconds from anywhere, only to pause less often; left out: every checkpoint pauses. */
  now?(): number
}

export declare function createEvaluator(options: EvaluatorOptions): Evaluator
