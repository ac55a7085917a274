/** What a date on a label resolves to, or which part of it cannot be. Days are `YYYY-MM-DD`. */
export type LabelDay =
  | { readonly ok: true; readonly day: string }
  | { readonly ok: false; readonly why: 'length' | 'character' | 'month' | 'day' }

const ISO_DAY = /^(\d{4})-(\d{2})-(\d{2})$/

const isLeapYear = (year: number): boolean => (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0

/** Days in a month, 1 to 12, of a Gregorian year. */
export function daysInMonth(year: number, month: number): number {
  if (month === 2) return isLeapYear(year) ? 29 : 28
  return [4, 6, 9, 11].includes(month) ? 30 : 31
}

/** Whether the text is a day that exists, written `YYYY-MM-DD`. */
export function isCalendarDay(text: string): boolean {
  const found = ISO_DAY.exec(text)
  return found !== null && dayOf(Number(found[1]), Number(found[2]), Number(found[3])).ok
}

/**
 * The year of a house's day.
 * @throws {RangeError} when `today` is not an existing day `YYYY-MM-DD`: the caller's fault, not the label's.
 */
export function yearOfToday(today: string): number {
  if (!isCalendarDay(today)) throw new RangeError(`today must be YYYY-MM-DD, got ${JSON.stringify(today)}`)
  return Number(today.slice(0, 4))
}

/**
 * The full year of a two-digit year: from 49 years back to 50 ahead of `year`.
 * In 2026, 76 is 2076 and 77 is 1977.
 *
 * @see GS1 General Specifications, determination of century in element string dates (section 7.12).
 */
export function fullYear(twoDigits: number, year: number): number {
  const century = year - (year % 100)
  const ahead = twoDigits - (year % 100)
  if (ahead >= 51) return century - 100 + twoDigits
  return ahead <= -50 ? century + 100 + twoDigits : century + twoDigits
}

/** A calendar day from its parts, or which part does not exist. */
export function dayOf(year: number, month: number, day: number): LabelDay {
  if (month < 1 || month > 12) return { ok: false, why: 'month' }
  if (day < 1 || day > daysInMonth(year, month)) return { ok: false, why: 'day' }
  return { ok: true, day: `${pad(year, 4)}-${pad(month, 2)}-${pad(day, 2)}` }
}

/** The last day of a month. */
export function monthEnd(year: number, month: number): LabelDay {
  return month < 1 || month > 12 ? { ok: false, why: 'month' } : dayOf(year, month, daysInMonth(year, month))
}

/** A day from its number in the year, 1 January being 1 (the `JJJ` of HIBC). */
export function dayOfYear(year: number, dayNumber: number): LabelDay {
  let left = dayNumber
  for (let month = 1; left >= 1 && month <= 12; month += 1) {
    const days = daysInMonth(year, month)
    if (left <= days) return dayOf(year, month, left)
    left -= days
  }
  return { ok: false, why: 'day' }
}

/**
 * A GS1 date of six digits, YYMMDD.
 *
 * @param today the house's day, `YYYY-MM-DD`; settles the century.
 * @param dayZero whether DD may be 00, which is the month's last day: yes in AI 11, 12, 13, 15, 16 and 17,
 *   no in 7003, 7006 and 7007.
 * @see GS1 General Specifications, section 7.12; GS1 Barcode Syntax Dictionary, `yymmd0` and `yymmdd`.
 */
export function gs1Day(yymmdd: string, today: string, dayZero: boolean): LabelDay {
  if (yymmdd.length !== 6) return { ok: false, why: 'length' }
  if (!/^\d{6}$/.test(yymmdd)) return { ok: false, why: 'character' }
  const year = fullYear(Number(yymmdd.slice(0, 2)), yearOfToday(today))
  const month = Number(yymmdd.slice(2, 4))
  const day = Number(yymmdd.slice(4, 6))
  return dayZero && day === 0 ? monthEnd(year, month) : dayOf(year, month, day)
}

function pad(value: number, width: number): string {
  return String(value).padStart(width, '0')
}
