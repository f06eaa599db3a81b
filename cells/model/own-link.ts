// A link of the user's own in a model: the finding of its cell as the link of the problem, where the family can have it. What was not decided of
// the link is said again here, since the fit rests on it.

import type { Input } from "../../runtime/kind.ts"
import { nearest } from "../../runtime/nearest.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { families, legalLinks, links } from "../language/vocabulary.ts"
import { linkIn, undecidedIn } from "../link-finding.ts"
import { isLegalOn } from "../statistics/index.ts"
import type { LinkSpec } from "../statistics/problem.ts"
import * as say from "./notices.ts"
import type { CallSaid, ModelSaid } from "./words.ts"

/** The link of a cell with this name; null once a fault was said. */
export function ownLinkOf(
  { name, at }: CallSaid,
  family: string,
  said: ModelSaid,
  inputs: ReadonlyMap<Name, Input>,
  notice: (notice: Notice) => void,
): LinkSpec | null {
  const input = inputs.get(name)
  const legal = legalLinks(family)
  if (input === undefined) {
    notice(say.noSuchLink(name, nearest(name, Object.keys(links)), legal, said.clauses["link"], { ...at, to: at.from + 1 }))
    return null
  }
  const found = linkIn(input.value)
  if (found === null) {
    notice(say.notALink(name, at))
    return null
  }
  if (found.own === null) {
    notice(
      say.constantEstimateNotYet(
        name,
        found.given.filter(({ value }) => value === null).map((given) => given.name),
        at,
      ),
    )
    return null
  }
  const [low, high] = found.range
  if (!isLegalOn(family, found.range)) {
    const plain = legal.filter((other) => links[other]?.parameters.length === 0)
    const goesWith = Object.values(families).filter((other) => isLegalOn(other.name, found.range))
    notice(
      say.linkNotLegal(
        name,
        family,
        plain,
        goesWith.map((other) => other.name),
        at,
      ),
    )
    return null
  }
  const undecided = undecidedIn(found)
  if (undecided.length > 0) notice(say.linkUndecided(name, undecided, at))
  const possible = possibleMeans[families[family]?.mean ?? "any"]
  const [below, above] = [low < possible[0] ? possible[0] : null, high > possible[1] ? possible[1] : null]
  if (below !== null || above !== null) notice(say.linkReachesBeyond(name, family, below, above, at))
  return { name, parameters: [], own: found.own }
}

/** The open range of the means a family can have. */
const possibleMeans = { any: [-Infinity, Infinity], positive: [0, Infinity], unit: [0, 1] } as const
