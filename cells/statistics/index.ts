// The front door of the statistics: numbers in, numbers out. No function here knows a cell, a name or a page.

export { denseColumns, designOf, presentRows, recipeOf } from "./design.ts"
export * from "./elementary.ts"
export { familyOf } from "./families.ts"
export { fit } from "./fit.ts"
export { criticalValue } from "./inference.ts"
export { parameterIntervals } from "./joint-profile.ts"
export { canonicalLink, isCanonical, isLegal, isLegalOn, legalFamilies, legalLinks } from "./legal-pairs.ts"
export { linkOf } from "./links.ts"
export { containing, fitWithout, type NestedTest, nestedTest, without } from "./nested.ts"
export { designAt, predicted, workingRows } from "./prediction.ts"
export { type IntervalEnd, type ProfileInterval, profileIntervals, profilesAreLight } from "./profile.ts"
export { collapsedRatios } from "./wald-collapse.ts"
