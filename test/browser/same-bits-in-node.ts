// Runs in Node before the tests in the browser start, and hands them what Node computed.

import type { TestProject } from "vitest/node"
import { allBits, type Bits } from "./same-bits.ts"

declare module "vitest" {
  interface ProvidedContext {
    readonly bitsInNode: Bits
  }
}

export async function setup(project: TestProject): Promise<void> {
  project.provide("bitsInNode", await allBits())
}
