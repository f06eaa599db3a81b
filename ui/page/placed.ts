// The one message between the page and the evaluator's worker that is not the runtime's: bytes of an enclosure, handed over once.

export interface Placed {
  /** The SHA-256 of the bytes. */
  readonly placed: string
  readonly blob: Blob
}
