// Days of the Gregorian calendar as whole numbers since 1970-01-01, and back, by integer arithmetic alone: no clock, no time zone, no locale.

/** The day that `YYYY-MM-DD` (ISO 8601) says, or NaN for anything else and for days that do not exist. */
export const dayOf = (words: string): number => {
  const parts = /^(\d{4})-(\d{2})-(\d{2})$/.exec(words)
  if (parts === null) return Number.NaN
  const year = Number(parts[1])
  const month = Number(parts[2])
  const day = Number(parts[3])
  if (month < 1 || month > 12 || day < 1 || day > daysIn(year, month)) return Number.NaN
  return dayNumber(year, month, day)
}

/** `YYYY-MM-DD` of a day, whole and within the years 0 to 9999. */
export const dateText = (day: number): string => {
  // The civil calendar by eras of 400 years that begin on 1 March, so that the leap day ends its year (Richards 2013, Explanatory
  // Supplement to the Astronomical Almanac, §15.11, in the form with March first).
  const shifted = day + 719468
  const era = Math.floor(shifted / 146097)
  const ofEra = shifted - era * 146097
  const yearOfEra = Math.floor((ofEra - Math.floor(ofEra / 1460) + Math.floor(ofEra / 36524) - Math.floor(ofEra / 146096)) / 365)
  const ofYear = ofEra - (365 * yearOfEra + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100))
  const monthFromMarch = Math.floor((5 * ofYear + 2) / 153)
  const dayOfMonth = ofYear - Math.floor((153 * monthFromMarch + 2) / 5) + 1
  const month = monthFromMarch < 10 ? monthFromMarch + 3 : monthFromMarch - 9
  const year = yearOfEra + era * 400 + (month <= 2 ? 1 : 0)
  return `${String(year).padStart(4, "0")}-${String(month).padStart(2, "0")}-${String(dayOfMonth).padStart(2, "0")}`
}

const isLeap = (year: number): boolean => (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0

const daysIn = (year: number, month: number): number => (month === 2 ? (isLeap(year) ? 29 : 28) : [4, 6, 9, 11].includes(month) ? 30 : 31)

const dayNumber = (year: number, month: number, day: number): number => {
  const y = month <= 2 ? year - 1 : year
  const era = Math.floor(y / 400)
  const yearOfEra = y - era * 400
  const ofYear = Math.floor((153 * (month > 2 ? month - 3 : month + 9) + 2) / 5) + day - 1
  const ofEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + ofYear
  return era * 146097 + ofEra - 719468
}
