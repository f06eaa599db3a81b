// The messages between the page and the evaluator's worker that are not the runtime's: bytes of an enclosure, handed over once, and the
// question by which the page knows that the worker still answers.

export interface Placed {
  /** The SHA-256 of the bytes. */
  readonly placed: string
  readonly blob: Blob
}

/** Asked by the page while work is under way. */
export interface Asked {
  readonly asked: true
}

/** Said by the worker when it is there, and answered as soon as its work gives the event loop a turn. */
export interface Heard {
  readonly heard: true
}
