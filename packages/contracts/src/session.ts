import { z } from 'zod'
import { ROLES } from '@bellpull/domain'
import { day, id } from './ids.js'

export const role = z.enum(ROLES)

export const signIn = z.strictObject({
  email: z.string().trim().min(3).max(254),
  password: z.string().min(1).max(1024),
})
export type SignIn = z.infer<typeof signIn>

export const signedInUser = z.object({ id, name: z.string(), initials: z.string(), role })
export type SignedInUser = z.infer<typeof signedInUser>

export const sessionView = z
  .object({ accessToken: z.string(), expiresInS: z.int().positive(), user: signedInUser })
  .meta({ id: 'Session' })
export type SessionView = z.infer<typeof sessionView>

/** What every screen has to know of the house. */
export const houseView = z.object({
  /** IANA time zone; days and times of day are shown in it. */
  zone: z.string(),
  today: day,
  /** The sizing arithmetic is shown; off until the house has settled its intended purpose. */
  sizingArithmetic: z.boolean(),
  /** Kinds of second check that count here. */
  secondCheckMethods: z.array(z.enum(['pin', 'spoken', 'touch'])),
})
export type HouseView = z.infer<typeof houseView>

/** `GET /me`: the person, where they are today, and the house. */
export const meView = signedInUser.extend({
  house: houseView,
  /** Rooms of today's cases on whose team this person is. */
  rooms: z.array(z.object({ id, number: z.int() })),
})
export type MeView = z.infer<typeof meView>

/** `GET /session/options`: what the sign-in page may offer; the demo's accounts only where demo data is loaded. */
export const signInOptions = z.object({
  houseName: z.string(),
  demo: z
    .object({
      password: z.string(),
      accounts: z.array(z.object({ email: z.string(), name: z.string(), role })),
    })
    .nullable(),
})
export type SignInOptions = z.infer<typeof signInOptions>
