import fc from "fast-check"
import { describe, expect, it } from "vitest"
import { dialWords } from "../../../cells/dial/words.ts"
import { textRange } from "../../../runtime/place.ts"
import { read, rewritten } from "../../../runtime/statement.ts"

const dial = (...clauses: string[]): string => ["dial k", ...clauses.map((clause) => `  ${clause}`)].join("\n")
const noticed = (text: string): readonly string[] => {
  const statement = read(text)
  return dialWords.parse(statement).notices.map(({ code, at }) => {
    const { from, to } = textRange(statement, at)
    return `${code} <${text.slice(from, to)}>`
  })
}
const standsAt = (text: string): number | string | null => dialWords.parse(read(text)).said.dial?.value ?? null

describe("a dial", () => {
  it.each([
    [["from 0 to 1", "step 0.1", "start 0.3"], 0.3],
    [["from 0 to 1", "step 0.1"], 0],
    [["from -1 to 1", "step 0.5", "start -0.5"], -0.5],
    [["from 0.25 to 3.25", "step 1", "start 2.25"], 2.25],
    [["from 1e3 to 2e3", "step 5e1", "start 1250"], 1250],
    [["from 0% to 100%", "step 5%", "start 0.95"], 0.95],
    [["from 0 to 1", "step 1e-3", "start 0.007"], 0.007],
    [['choice "a", "b"', 'start "b"'], "b"],
    [['choice "a", "b"'], "a"],
  ])("%j stands at %j", (clauses, value) => {
    expect(noticed(dial(...clauses))).toEqual([])
    expect(standsAt(dial(...clauses))).toBe(value)
  })

  it.each([
    [[], ["dial/nothing-to-turn <>"]],
    [["start 3"], ["dial/nothing-to-turn <>"]],
    [["from 0 to 1", "step 0.1", 'choice "a"'], ["dial/range-and-choice <choice>"]],
    [["step 0.1"], ["dial/no-range <step>"]],
    [["from 0 to 1"], ["dial/no-step <from>"]],
    [["from 1 to 0", "step 0.1"], ["dial/empty-range <from>"]],
    [["from 1 to 1", "step 0.1"], ["dial/empty-range <from>"]],
    [["from 0 to 1", "step 0"], ["dial/step-not-positive <0>"]],
    [["from 0 to 1", "step -0.1"], ["dial/step-not-positive <-0.1>"]],
    [["from 0 to 1", "step 2"], ["dial/step-too-long <2>"]],
    [["from 0 to 1", "step 1e-9"], ["dial/too-many-steps <1e-9>"]],
    [["from 0 to 1", "step 0.1", "start 0.35"], ["dial/start-not-on-step <0.35>"]],
    [["from 0 to 1", "step 0.1", "start 2"], ["dial/start-not-on-step <2>"]],
    [["from 0 to 1", "step 0.1", 'start "a"'], ['dial/start-not-on-step <"a">']],
    [["from 0 to 1", "step 0.3"], ["dial/end-not-reached <from>"]],
    [['choice "a", "a"'], ['dial/choice-twice <"a">']],
    [['choice "upper", "lower"', 'start "lwer"'], ['dial/start-not-a-choice <"lwer">']],
    [["from 0 to infinity", "step 1"], ["clause/unexpected <infinity>"]],
    [["from 0 to 1", "step 0.1", "stop 2"], ["clause/unknown <stop>"]],
  ])("%j is noticed", (clauses, expected) => {
    expect(noticed(dial(...clauses))).toEqual(expected)
  })

  it.each([
    [dial("from 0 to 1", "step 0.1", "start 0.36"), dial("from 0 to 1", "step 0.1", "start 0.4")],
    [dial("from 0 to 1", "step 0.1", "start -3"), dial("from 0 to 1", "step 0.1", "start 0.0")],
    [dial("from 0 to 1", "step 0.1", "start 7"), dial("from 0 to 1", "step 0.1", "start 1.0")],
    [dial("from 0 to 1"), dial("from 0 to 1", "step 0.1")],
    [dial("from 0 to 300"), dial("from 0 to 300", "step 10")],
    [dial('choice "upper", "lower"', 'start "lwer"'), dial('choice "upper", "lower"', 'start "lower"')],
  ])("%j has a mend that leaves nothing to say", (text, expected) => {
    const mend = dialWords.parse(read(text)).notices[0]?.mend
    expect(mend?.edits.reduce(rewritten, text)).toBe(expected)
    expect(noticed(expected)).toEqual([])
  })

  it("stops at from + k·step exactly, whatever the digits", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: -500, max: 500 }),
        fc.integer({ min: 1, max: 99 }),
        fc.integer({ min: 0, max: 6 }),
        fc.nat(200),
        (from, step, digits, k) => {
          const decimal = (units: number): string => {
            const figures = `${Math.abs(units)}`.padStart(digits + 1, "0")
            return `${units < 0 ? "-" : ""}${digits === 0 ? figures : `${figures.slice(0, -digits)}.${figures.slice(-digits)}`}`
          }
          const text = dial(
            `from ${decimal(from)} to ${decimal(from + 200 * step)}`,
            `step ${decimal(step)}`,
            `start ${decimal(from + k * step)}`,
          )
          // The double nearest to the decimal is what JavaScript reads it as; −0 is 0.
          expect(standsAt(text)).toBe(Number(decimal(from + k * step)) + 0)
          expect(dialWords.parse(read(text)).said.dial).toMatchObject({ steps: 200 })
        },
      ),
    )
  })
})
