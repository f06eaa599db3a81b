// Every notice of a link, of a model that uses one and of the strip beside: its code, the words it stands on, and what it says.

import { describe, expect, it } from "vitest"
import { textRange } from "../../../runtime/place.ts"
import { read } from "../../../runtime/statement.ts"
import { type Book, settledBook } from "../../book.ts"

const csv = "dose,n,y\n1.6907,59,6\n1.7242,60,13\n1.7552,62,18\n1.7842,56,28\n1.8113,63,52\n1.8369,59,53\n1.861,62,61\n1.8839,60,60\n"
const data = 'data d\n  from "d.csv"\n  column dose number\n  column n count\n  column y count'

const told = (book: Book, name: string, text: string): readonly string[] =>
  book.notices(name).map(({ level, code, at, text: says }) => {
    const { from, to } = textRange(read(text), at)
    return `${level} ${code}${at.clause < 0 ? "" : ` at "${text.slice(from, to)}"`}: ${says}`
  })

async function link(clauses: string, more: readonly string[] = [], name = "g"): Promise<readonly string[]> {
  const text = `link ${name}\n${clauses
    .split("\n")
    .map((line) => `  ${line}`)
    .join("\n")}`
  return told(await settledBook([text, ...more]), name, text)
}

describe("a notice of a link", () => {
  it.each([
    ["eta = mu", ["fault link/clause-missing: This link does not say its mean."]],
    ["mean from 0 to 1", ["fault link/clause-missing: This link does not say its eta."]],
    ["mean from 1 to 0\neta = mu", ['fault link/empty-range at "1 to 0": The range from 1 to 0 holds nothing.']],
    ["mean from nowhere to 1\neta = mu", ['fault cell/missing-cell at "nowhere": There is no cell called nowhere.']],
    ["mean from word to 1\neta = mu", ['fault link/not-a-number at "word": word is not a number here.']],
    ["mean from 0 to 1\ngiven c = word\neta = mu + c", ['fault link/not-a-number at "word": word is not a number here.']],
    ["mean from 0 to 1\ngiven c = 1\ngiven c = 2\neta = mu + c", ['fault link/given-twice at "c": The constant c is given twice.']],
    ["mean from 0 to 1\ngiven c = infinity\neta = mu", ['fault link/given-infinite at "infinity": The constant c is given as infinity.']],
    [
      "mean from 0 to 1\ngiven c = estimate from 2 to 1\neta = c*mu",
      ['fault link/estimate-range at "2": The range from 2 to 1 holds nothing.'],
    ],
    ["mean from 0 to 1\neta = mu + k", ['fault link/unknown-name at "k": k is no constant of this link.']],
    [
      "mean from 0 to 1\neta = abs(mu)",
      ['fault link/not-smooth at "abs(mu)": abs has corners or steps, and a link has a derivative everywhere.'],
    ],
    [
      "mean from 0 to 1\neta = round(mu)",
      ['fault link/not-smooth at "round(mu)": round has corners or steps, and a link has a derivative everywhere.'],
    ],
    ["mean from 0 to 1\neta = mean(mu)", ['fault link/no-place at "mean(mu)": mean has no place in a link.']],
    ["mean from 0 to 1\neta = mu < 1", ['fault link/no-place at "mu < 1": < has no place in a link.']],
    [
      "mean from 0 to 1\neta = if(mu^2 < 0.5, mu, mu)",
      ['fault link/condition at "mu^2 < 0.5": It cannot be said where mu^2 < 0.5 turns from false to true.'],
    ],
    [
      "mean from 0 to 1\neta = mu^3 - mu",
      [
        'fault link/not-monotone at "mu^3 - mu": It does not go one way: it turns at μ = 0.5773502691896258, so one η would stand for several means.',
      ],
    ],
    [
      "mean from 0 to 1\neta = 1/(mu - 0.5)",
      ['fault link/not-defined at "1/(mu - 0.5)": It is not defined at μ = 0.5, so it is no link on this range.'],
    ],
    [
      "mean from 0 to 1\neta = if(mu < 0.5, mu, 2*mu - 0.5)",
      ['fault link/not-differentiable at "if(mu < 0.5, mu, 2*mu - 0.5)": It has no derivative at μ = 0.5.'],
    ],
    [
      "mean from 0 to 1\neta = (mu - 0.25)^3",
      ['warning link/level at "(mu - 0.25)^3": Its derivative is 0 at μ = 0.25, so the mean would change without bound there.'],
    ],
    [
      "mean from 0 to infinity\neta = log(mu)\ninverse = exp(2*eta)",
      [expect.stringMatching(/^fault link\/inverse-off at "exp\(2\*eta\)": The inverse gives .+ at η = .+, where the formula has .+\.$/)],
    ],
    [
      "mean from 0 to infinity\neta = exp(mu) - mu",
      [
        expect.stringMatching(
          /^remark link\/reach-unknown at "exp\(mu\) - mu": How far η goes towards the upper end of the range could not be decided/,
        ),
      ],
    ],
  ])("stands where it should: %s", async (clauses, expected) => {
    expect(await link(clauses, ['dial word\n  choice "a", "b"'])).toEqual(expected)
  })

  it("says that the language has a link of this name", async () => {
    expect(await link("mean from 0 to 1\neta = mu", [], "probit")).toEqual([
      "fault link/name-taken: The language has a link called probit already.",
    ])
  })

  it("says what is undecided, with the interval left", async () => {
    expect(await link("mean from 0 to 2\neta = mu^3 - 3*mu^2 + 3*mu")).toEqual([
      expect.stringMatching(
        /^warning link\/not-monotone-undecided at "mu.+": Whether it is strictly monotone could not be decided between μ = 0\.99999.+ and 1\.00000/,
      ),
    ])
  })

  it("says where the derivative is too small for a double", async () => {
    expect(await link("mean from -infinity to infinity\neta = normal_cdf(mu)")).toEqual([
      expect.stringMatching(/^warning link\/flat at "normal_cdf\(mu\)": Its derivative is too small for a double from μ = .+/),
    ])
  })
})

const model = (linkName: string, family = "binomial", response = "y out of n"): string =>
  `model m\n  data d\n  response ${response}\n  family ${family}\n  link ${linkName}\n  predictor dose\n  interval wald`

const onLink = async (cells: readonly string[], text: string): Promise<readonly string[]> =>
  told(await settledBook([data, ...cells, text], { "d.csv": csv }), "m", text).filter((each) => /\/(not-|link-|no-such)/.test(each))

describe("a notice of a model about a link of one's own", () => {
  const log = "link g\n  mean from 0 to infinity\n  eta = log(mu)"
  const logit = "link g\n  mean from 0 to 1\n  eta = log(mu/(1 - mu))"

  it("is none where all is proved and legal", async () => {
    expect(await onLink([logit], model("g"))).toEqual([])
  })

  it.each([
    [[], model("gg"), 'fault model/no-such-link at "gg": There is no link called gg.'],
    [["dial g\n  from 0 to 1\n  step 0.5"], model("g"), 'fault model/not-a-link at "g": g is not a link.'],
    [
      [logit],
      model("g", "poisson", "y"),
      'fault model/link-not-legal at "g": The link g is not defined for every mean that the family poisson can have.',
    ],
    [
      ["link g\n  mean from 0 to infinity\n  given a = estimate from 0.5 to 2\n  eta = mu^a"],
      model("g", "poisson", "y"),
      'fault model/not-available-yet at "g": Estimating a of the link g is not available yet.',
    ],
    [
      [log],
      model("g"),
      'remark model/link-reaches-beyond at "g": g is a link, but some η give it means above 1, which binomial cannot have.',
    ],
    [
      ["link g\n  mean from 0 to 2\n  eta = mu^3 - 3*mu^2 + 3*mu"],
      model("g", "normal", "y"),
      'warning model/link-undecided at "g": Whether g is strictly monotone was not decided, and this fit rests on it.',
    ],
  ])("stands at the name", async (cells, text, expected) => {
    expect(await onLink(cells, text)).toContain(expected)
  })

  it("is that of the link where it is refuted: the model waits", async () => {
    const book = await settledBook([data, "link g\n  mean from 0 to 1\n  eta = mu^3 - mu", model("g")], { "d.csv": csv })
    expect(book.state("m").status).toBe("waiting")
    const state = book.state("g")
    // What was found is shown all the same.
    expect(state.status === "fault" && state.shown?.summary).toMatchObject({ strictly_monotone: { verdict: "refuted" } })
  })
})

describe("the strip beside a model", () => {
  const own = "link g\n  mean from 0 to 1\n  eta = log(-log(1 - mu))"
  const scales = (beside: string): string => `scales\n  model m\n  across dose\n  beside ${beside}`

  it("has links of one's own, and the model's own link where it is one", async () => {
    const book = await settledBook([data, own, model("cloglog"), scales("g, logit")], { "d.csv": csv })
    const strip = book.summary("scales")["strip"] as readonly { readonly link: string; readonly delta_aic: number }[]
    expect(strip.map(({ link: name }) => name)).toEqual(["cloglog", "g", "logit"])
    expect(Math.abs(strip[1]?.delta_aic ?? 1)).toBeLessThan(1e-10)
    await book.say("m", "link", "g")
    await book.say("scales", "beside", null)
    const after = book.summary("scales")["strip"] as readonly { readonly link: string }[]
    expect(after.map(({ link: name }) => name)).toContain("g")
  })

  it.each([
    ["gg", [], 'fault scales/no-such-link at "gg": There is no link called gg.'],
    ["k", ["dial k\n  from 0 to 1\n  step 0.5"], 'fault scales/not-a-link at "k": k is not a link.'],
    [
      "k",
      ["link k\n  mean from 2 to 3\n  eta = mu"],
      'fault scales/link-not-legal at "k": The link k is not defined for every mean the family binomial can have.',
    ],
    [
      "k",
      ["link k\n  mean from 0 to 1\n  given a = estimate from 1 to 2\n  eta = a*mu"],
      'fault scales/not-available-yet at "k": Estimating a constant of the link k is not available yet.',
    ],
  ])("says what is wrong with %s", async (beside, cells, expected) => {
    const text = scales(beside)
    expect(told(await settledBook([data, ...cells, model("logit"), text], { "d.csv": csv }), "scales", text)).toEqual([expected])
  })
})
