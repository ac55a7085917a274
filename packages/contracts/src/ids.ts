import { z } from 'zod'

/** Ids are opaque to clients; all are UUIDs. Taken in either case and compared in small letters, as PostgreSQL writes them. */
export const id = z.uuid().toLowerCase()

/** A day in the house's time zone, `YYYY-MM-DD`. */
export const day = z.iso.date()

/** An instant, UTC, ISO 8601. */
export const instant = z.iso.datetime({ offset: true })

/** GS1 GTIN, always fourteen digits. */
export const gtin = z.string().regex(/^\d{14}$/, 'A GTIN has 14 digits')
