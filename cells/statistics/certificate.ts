// What can be certified about a fit: which class it is of, and whether its maximum is known to be the only one.

import { isConcave } from "./concavity.ts"
import type { Certificate } from "./fit.ts"
import type { Factor } from "./gram.ts"
import type { Findings } from "./inference.ts"

export type CertificateBasis = Pick<Certificate, "class" | "global">

export async function certified(given: Findings, factor: Factor | null, arrived: boolean): Promise<CertificateBasis> {
  const global = isConcave(given.problem.family, given.problem.link)
  if (!arrived || factor === null) return { class: "gave_up", global: false }
  if (given.dependences.length > 0) return { class: "unidentified", global }
  return { class: "interior", global }
}
