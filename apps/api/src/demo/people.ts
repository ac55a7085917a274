import { hash } from 'bcryptjs'
import type { Role } from '@bellpull/domain'
import { demoId } from './ids.js'

export interface DemoPerson {
  readonly id: string
  readonly email: string
  readonly name: string
  readonly initials: string
  readonly role: Role
  readonly pin: string
}

/** Everybody's password in the demo, told on the sign-in page. */
export const DEMO_PASSWORD = 'linen-brass-cord'

const STAFF = [
  ['Juniper Hathersedge', 'surgeon', '1301'],
  ['Oswin Thackle', 'surgeon', '1302'],
  ['Marisol Quennelby', 'surgeon', '1303'],
  ['Pim Ottershaw', 'scrub', '2402'],
  ['Lotte Brackenbury', 'scrub', '2403'],
  ['Ifeoma Brindlecombe', 'circulator', '3501'],
  ['Tobiah Luskett', 'circulator', '3502'],
  ['Wren Abernoth', 'circulator', '3503'],
  ['Jory Penhallick', 'runner', '4601'],
  ['Casimir Dolebrook', 'core', '5701'],
  ['Lindy Okorofinch', 'core', '5702'],
  ['Magda Fairweatherly', 'charge', '6801'],
  ['Soren Pellowby', 'coordinator', '7901'],
  ['Nell Ashgrovian', 'admin', '8001'],
] as const satisfies readonly (readonly [string, Role, string])[]

type FirstName =
  | 'juniper'
  | 'oswin'
  | 'marisol'
  | 'pim'
  | 'lotte'
  | 'ifeoma'
  | 'tobiah'
  | 'wren'
  | 'jory'
  | 'casimir'
  | 'lindy'
  | 'magda'
  | 'soren'
  | 'nell'

export const DEMO_PEOPLE: readonly DemoPerson[] = STAFF.map(([name, role, pin]) => {
  const words = name.split(' ')
  const first = words[0]!.toLowerCase()
  return {
    id: demoId('person', first),
    email: `${first}@larchwater.example`,
    name,
    initials: words.map((word) => word[0]).join(''),
    role,
    pin,
  }
})

/** The people of Larchwater by first name, as the story speaks of them. */
export const WHO = Object.fromEntries(
  DEMO_PEOPLE.map((person) => [person.email.split('@')[0], person]),
) as Readonly<Record<FirstName, DemoPerson>>

/**
 * A salt that is always the same, so that loading the demo twice gives the same rows. These secrets are
 * printed on the sign-in page: there is nothing for a salt to keep.
 */
const salt = (name: string): string => `$2b$10$${demoId('salt', name).replace(/-/g, '').slice(0, 21)}O`

/** @returns rows of `person`; one hash for the shared password, one for each PIN, all of cost 10. */
export async function personRows(createdAt: Date): Promise<Record<string, unknown>[]> {
  const passwordHash = await hash(DEMO_PASSWORD, salt('password'))
  return Promise.all(
    DEMO_PEOPLE.map(async ({ pin, ...person }) => ({
      ...person,
      active: true,
      password_hash: passwordHash,
      pin_hash: await hash(pin, salt(person.email)),
      created_at: createdAt,
    })),
  )
}
