// Dates as expressions need them: ISO 8601 text to whole days since 1970-01-01 and back to year and month, in the proleptic Gregorian
// calendar. No clock and no time zone.

/** Days since 1970-01-01 of a text such as `2024-02-29`; null where it is no date. */
export function daysFrom(text: string): number | null {
  const found = /^(\d{4})-(\d{2})-(\d{2})$/.exec(text.trim())
  if (found === null) return null
  const [year, month, day] = [Number(found[1]), Number(found[2]), Number(found[3])]
  if (month < 1 || month > 12 || day < 1) return null
  const days = daysOf(year, month, day)
  const back = monthOf(days)
  return back.year === year && back.month === month ? days : null
}

/** Year and month (1 to 12) of a day. */
export function monthOf(days: number): { readonly year: number; readonly month: number } {
  // Counted in eras of 400 years, which have 146,097 days each, from 1 March of year 0, so that the leap day comes last.
  const shifted = Math.floor(days) + 719_468
  const era = Math.floor(shifted / 146_097)
  const dayOfEra = shifted - era * 146_097
  const yearOfEra = Math.floor(
    (dayOfEra - Math.floor(dayOfEra / 1_460) + Math.floor(dayOfEra / 36_524) - Math.floor(dayOfEra / 146_096)) / 365,
  )
  const dayOfYear = dayOfEra - (365 * yearOfEra + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100))
  const marchMonth = Math.floor((5 * dayOfYear + 2) / 153)
  const month = marchMonth < 10 ? marchMonth + 3 : marchMonth - 9
  return { year: yearOfEra + era * 400 + (month <= 2 ? 1 : 0), month }
}

function daysOf(year: number, month: number, day: number): number {
  const shifted = month <= 2 ? year - 1 : year
  const era = Math.floor(shifted / 400)
  const yearOfEra = shifted - era * 400
  const dayOfYear = Math.floor((153 * (month > 2 ? month - 3 : month + 9) + 2) / 5) + day - 1
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear
  return era * 146_097 + dayOfEra - 719_468
}
