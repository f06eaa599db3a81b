// What an expression over single values and models uses: of a model its fit alone, so that nobody waits for its intervals; of everything
// else all there is.

import type { Use } from "../runtime/kind.ts"
import type { Name } from "../runtime/value.ts"
import { type Expression, namesIn, partsOf } from "./language/expression.ts"
import { modelFunctions } from "./language/functions.ts"
import { fitPart } from "./model-finding.ts"

export function usesOf(expression: Expression): readonly Use[] {
  const models = modelsIn(expression)
  return namesIn(expression).map(({ name, at }) => ({ name, parts: models.has(name) ? [fitPart] : "all", either: false, at }))
}

/** Names that stand only where a model is read: as the first argument of a function of models. */
function modelsIn(expression: Expression): ReadonlySet<Name> {
  const models = new Set<Name>()
  const others = new Set<Name>()
  const visit = (part: Expression): void => {
    if (part.type === "name") others.add(part.name)
    const isOfModel = part.type === "call" && modelFunctions.has(part.name)
    for (const [k, child] of partsOf(part).entries()) {
      if (isOfModel && k === 0 && child.type === "name") models.add(child.name)
      else visit(child)
    }
  }
  visit(expression)
  for (const name of others) models.delete(name)
  return models
}
