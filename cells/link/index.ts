// `link`: a link of the user's own, proved to be one or refuted, for every model to use by its name.

import type { Kind } from "../../runtime/kind.ts"
import type { Json } from "../../runtime/value.ts"
import type { LinkFinding, LinkVerdict } from "../link-finding.ts"
import { found } from "./find.ts"
import { shown } from "./show.ts"
import { type LinkSaid, linkWords } from "./words.ts"

export const link: Kind<LinkSaid, LinkFinding> = {
  words: linkWords,
  version: 1,
  evaluate: found,
  show: shown,
  summary: ({ defined, strictlyMonotone, differentiable, slope, reach, canonical }) => ({
    defined: verdict(defined),
    strictly_monotone: verdict(strictlyMonotone),
    differentiable: verdict(differentiable),
    slope,
    reach: reach.map(number),
    canonical_for: canonical,
  }),
  tried: () => [],
}

const verdict = ({ verdict: says, witness }: LinkVerdict): Json => ({
  verdict: says,
  witness: typeof witness === "number" ? number(witness) : witness === null ? null : witness.map(number),
})

const number = (value: number | null): Json =>
  value === null || Number.isNaN(value) ? null : value === Infinity ? "infinity" : value === -Infinity ? "-infinity" : value
