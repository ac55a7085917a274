/** One decimal, as a caliper shows it. */
export const sayMm = (mm: number): string => mm.toFixed(1)

const shortDay = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'short', timeZone: 'UTC' })

/** "12 Dec". @param day `YYYY-MM-DD`; a day has no time zone. */
export const sayDay = (day: string): string => shortDay.format(new Date(`${day}T00:00:00Z`))
