import { z } from 'zod'

/** How far each room's events have been told: room id to the last number told. */
export type Cursor = Readonly<Record<string, number>>

const shape = z.record(z.uuid(), z.int().nonnegative())

/** Opaque to clients. */
export const writeCursor = (cursor: Cursor): string =>
  Buffer.from(JSON.stringify(cursor)).toString('base64url')

/** `null` when it is none of ours. */
export function readCursor(text: string): Cursor | null {
  try {
    const parsed = shape.safeParse(JSON.parse(Buffer.from(text, 'base64url').toString('utf8')))
    return parsed.success ? parsed.data : null
  } catch {
    return null
  }
}
