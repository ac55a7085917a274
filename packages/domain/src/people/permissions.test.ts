import { describe, expect, test } from 'vitest'
import { CASE_COMMANDS, PERMISSIONS, UNIT_COMMANDS, may, type Permission } from './permissions.js'
import { ROLES } from './roles.js'

/** The design's table, row by row; `x` where the role may. The last two are not in it: who signed in may read names. */
const TABLE = `
                    surgeon scrub circulator runner core charge coordinator admin
  rooms.read           x      x       x        x     x     x        x         x
  cases.read           x      x       x        x     x     x        x         x
  sizes.read           x      x       x        x     x     x        x         x
  board.read           x      x       x        x     x     x        x         x
  events.readCase      x      x       x        x     x     x        x         x
  labels.parse         x      x       x        x     x     x        x         x
  sizing.read          x      x       x        x     x     x        x         x
  events.readHouse     -      -       -        -     -     x        -         x
  call.make            x      x       x        -     -     x        -         -
  case.start           x      x       x        -     -     x        -         -
  case.timeOut         x      x       x        -     -     x        -         -
  case.signOut         -      -       x        -     -     x        x         -
  case.reopen          -      -       -        -     -     x        x         -
  case.cancel          -      -       -        -     -     x        x         -
  turnaround.read      -      -       -        -     -     x        -         x
  readiness.read       -      -       -        -     -     x        x         x
  stock.read           -      -       x        x     x     x        x         -
  stock.receive        -      -       -        -     x     -        x         -
  unit.move            -      -       -        x     x     -        x         -
  unit.quarantine      -      -       -        -     x     x        x         -
  unit.release         -      -       -        -     -     -        x         -
  unit.writeOff        -      -       -        -     -     -        x         -
  unit.shipBack        -      -       -        -     -     -        x         -
  recall.make          -      -       -        -     -     -        x         -
  stock.import         -      -       -        -     -     -        x         -
  catalogue.manage     -      -       -        -     -     -        x         x
  house.manage         -      -       -        -     -     -        -         x
  fhir.read            -      -       -        -     -     -        x         x
  people.read          x      x       x        x     x     x        x         x
`
const [head = [], ...rows] = TABLE.trim()
  .split('\n')
  .map((line) => line.trim().split(/ +/))

describe('who may do what', () => {
  test('the table has every role and every permission', () => {
    expect(head).toEqual(ROLES)
    expect(rows.map(([permission]) => permission).sort()).toEqual(Object.keys(PERMISSIONS).sort())
  })

  test.each(rows.map(([permission, ...marks]) => ({ permission: permission as Permission, marks })))(
    '$permission',
    ({ permission, marks }) => {
      expect(ROLES.map((role) => (may(role, permission) ? 'x' : '-'))).toEqual(marks)
    },
  )

  test('every command on a case, and every command on a package, has its row', () => {
    expect(CASE_COMMANDS.filter((name) => !(`case.${name}` in PERMISSIONS))).toEqual([])
    expect(UNIT_COMMANDS.filter((name) => !(`unit.${name}` in PERMISSIONS))).toEqual([])
  })
})
