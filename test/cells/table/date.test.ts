import { describe, expect, it } from "vitest"
import { dateText, dayOf } from "../../../cells/table/date.ts"

describe("dates", () => {
  it("agree with the platform's calendar on every day of eight centuries, and back", () => {
    const first = Date.UTC(1600, 0, 1) / 86_400_000
    for (let day = first; day < first + 292_194; day++) {
      const text = new Date(day * 86_400_000).toISOString().slice(0, 10)
      if (dayOf(text) !== day || dateText(day) !== text) expect([text, dayOf(text), dateText(day)]).toEqual([text, day, text])
    }
  })

  it.each([
    "2024-02-30",
    "2023-02-29",
    "1900-02-29",
    "2024-13-01",
    "2024-00-10",
    "2024-1-05",
    "20240105",
    "2024-01-05T10:00",
    "05.01.2024",
    "",
  ])("does not take %j for a day", (text) => {
    expect(dayOf(text)).toBeNaN()
  })

  it("begin on the first of January 1970", () => {
    expect([dayOf("1970-01-01"), dayOf("1969-12-31"), dayOf("2000-02-29")]).toEqual([0, -1, 11016])
  })
})
