import { expect, it } from "vitest"
import { nearest } from "../../runtime/nearest.ts"

const links = ["identity", "log", "logit", "loglog", "reciprocal", "square_root", "probit", "cauchit", "cloglog"]

it.each([
  ["logti", "logit"],
  ["lgo", "log"],
  ["Probit", "probit"],
  ["squareroot", "square_root"],
  ["recip", "reciprocal"],
  ["clolog", "cloglog"],
  ["idnetity", "identity"],
  ["frost", null],
  ["x", null],
  ["", null],
])("the link nearest to %j is %j", (name, expected) => {
  expect(nearest(name, links)).toBe(expected)
})

it("never suggests the name itself, nor one that shares hardly a letter", () => {
  expect(nearest("log", ["log"])).toBeNull()
  expect(nearest("a", ["b"])).toBeNull()
  expect(nearest("ab", ["xy"])).toBeNull()
})
