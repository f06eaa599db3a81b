// An evaluator in a worker: the messages between the page's side and the worker's. Neither side knows what a worker is: whoever starts
// one hands in a port. Blocks own fresh arrays, which are transferred; the arrays of values never leave the evaluator.

import type { Evaluator } from "./evaluator.ts"

/** One end of a connection. `listen` is called once. */
export interface Port {
  post(message: unknown, transfer: readonly ArrayBuffer[]): void
  listen(hear: (message: unknown) => void): void
}

export interface RemoteEvaluator extends Evaluator {
  /** Takes another worker in place of one that does not answer: what was under way is lost, and the engine asks for it again. */
  replace(port: Port): void
}

/** The page's side. */
export declare function remoteEvaluator(port: Port): RemoteEvaluator

/** The worker's side. */
export declare function serveEvaluator(port: Port, evaluator: Evaluator): void
