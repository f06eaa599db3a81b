// A link of the user's own on the strip: the finding of its cell as a link to fit with, where the family can have it.

import { nearest } from "../../runtime/nearest.ts"
import type { Notice, Place } from "../../runtime/notice.ts"
import type { Call } from "../language/form.ts"
import { families, legalLinks, links } from "../language/vocabulary.ts"
import { linkIn } from "../link-finding.ts"
import { isLegalOn } from "../statistics/index.ts"
import type { LinkSpec } from "../statistics/problem.ts"
import * as say from "./notices.ts"
import type { Inputs } from "./plan.ts"

/** Null once a fault was said. */
export function ownLinkOf(call: Call, at: Place, family: string, inputs: Inputs, fault: (notice: Notice) => null): LinkSpec | null {
  const { name } = call
  const input = inputs.get(name)
  if (input === undefined || call.bounds !== null || call.expression !== null)
    return fault(say.noSuchLink(name, nearest(name, Object.keys(links)), at))
  const found = linkIn(input.value)
  if (found === null) return fault(say.notALink(name, at))
  if (found.own === null) return fault(say.estimateNotYet(name, at))
  if (!isLegalOn(family, found.range)) return fault(say.linkNotLegal(name, families[family]?.name ?? family, legalLinks(family), at))
  return { name, parameters: [], own: found.own }
}
