import { z } from 'zod'
import { id } from './ids.js'
import { role } from './session.js'

/** A person as others see them at work: enough to speak to them, nothing more. */
export const personRef = z
  .object({ id, initials: z.string(), name: z.string(), role })
  .meta({ id: 'PersonRef' })
export type PersonRef = z.infer<typeof personRef>
