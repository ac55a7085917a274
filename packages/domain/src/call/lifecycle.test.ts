import { describe, expect, test } from 'vitest'
import { CATEGORIES, OUTCOMES, STAGES, type Category, type Outcome, type Stage } from './categories.js'
import {
  CALL_COMMANDS,
  ITEM_COMMANDS,
  UNDOABLE,
  UNDO_WITHIN_MS,
  VERIFIED_FOR_MS,
  callCommandPermission,
  commandsFor,
  itemCommandPermission,
  lifecycleRows,
  transition,
  type ItemCommandName,
  type ItemState,
  type Target,
} from './lifecycle.js'
import { ROLES } from '../people/roles.js'

const item = (state: Partial<ItemState> = {}): ItemState => ({
  category: 'implant',
  stage: 'called',
  outcome: null,
  putBackPending: false,
  ...state,
})

/**
 * The design's table of commands, as it is written there: name, stations, where it leads, who may. `-` before a
 * name: this release does not have it yet.
 */
const TABLE = `
  accept            called                                     accepted       circulator runner core charge
  decline           accepted                                   called         circulator runner core charge
  pull              called accepted                            pulled         circulator runner core charge
  deliver           pulled                                     inRoom         circulator runner core charge
  verify            inRoom                                     verified       circulator charge
  open              verified                                   opened         circulator charge
 -openUnverified    inRoom                                     opened         circulator charge
  implant           opened                                     implanted      scrub circulator charge
  use               opened                                     used           scrub circulator charge
  notImplanted      opened                                     notImplanted   scrub circulator charge
  putBack           pulled inRoom verified                     returned       scrub circulator runner charge
  shelve            (put-back)                                 shelved        circulator runner core charge coordinator
 -change            called accepted pulled inRoom verified opened  changed    surgeon scrub circulator charge
 -choose            called                                     changed        surgeon scrub circulator
  cancel            called accepted pulled inRoom verified     cancelled      surgeon scrub circulator charge
 -reject            pulled inRoom verified                     called         circulator runner core charge
 -handOver          accepted pulled inRoom verified            same           circulator runner core charge
 -take              accepted pulled inRoom verified            same           circulator runner core charge
  takeOver          accepted pulled inRoom verified            same           circulator runner core charge
 -askRelease        called                                     same           surgeon scrub circulator core
 -decide            called accepted                            same           charge
  undo              accepted pulled inRoom verified            before         surgeon scrub circulator runner core charge
 -enteredInError    called accepted pulled inRoom verified opened  enteredInError  circulator core charge coordinator
`
interface Row {
  readonly command: ItemCommandName
  readonly from: readonly string[]
  readonly to: string
  readonly by: readonly string[]
  readonly built: boolean
}
const ROWS: readonly Row[] = TABLE.trim()
  .split('\n')
  .map((line) => {
    const [command = '', from = '', to = '', by = ''] = line.trim().split(/ {2,}/)
    return {
      command: command.replace('-', '') as ItemCommandName,
      from: from.split(' '),
      to,
      by: by.split(' '),
      built: !command.startsWith('-'),
    }
  })

/** What is called in words has three stations, nothing to pull, and ends in the room. */
const OTHER: Readonly<Partial<Record<ItemCommandName, readonly string[]>>> = {
  accept: ['called'],
  decline: ['accepted'],
  deliver: ['called', 'accepted'],
  use: ['inRoom'],
  putBack: ['inRoom'],
  cancel: ['called', 'accepted', 'inRoom'],
  takeOver: ['accepted', 'inRoom'],
  undo: ['accepted', 'inRoom'],
}
/** The good end: an implant is implanted, everything else is used. */
const GOOD_END: Readonly<Record<Category, ItemCommandName>> = {
  implant: 'implant',
  sterile: 'use',
  tray: 'use',
  other: 'use',
}
const UNDONE_AFTER: readonly (Outcome | null)[] = ['implanted', 'used', 'notImplanted', 'cancelled']

function expected(row: Row, state: ItemState, role: string): string {
  if (!row.by.includes(role)) return 'wrong-role'
  if (!row.built) return 'not-built'
  return stands(row, state) ? 'ok' : 'wrong-stage'
}
function stands(row: Row, { category, stage, outcome, putBackPending }: ItemState): boolean {
  if (row.command === 'shelve') return putBackPending
  if (outcome !== null) return row.command === 'undo' && UNDONE_AFTER.includes(outcome)
  if ((row.command === 'implant' || row.command === 'use') && row.command !== GOOD_END[category]) return false
  return ((category === 'other' ? OTHER[row.command] : row.from) ?? []).includes(stage)
}

const ENDS: readonly string[] = OUTCOMES
const targetOf = (to: string): Target => {
  if (to === 'same') return { same: true }
  if (to === 'before') return { before: true }
  if (to === 'shelved') return { task: 'shelved' }
  return ENDS.includes(to) ? { outcome: to as Outcome } : { stage: to as Stage }
}

describe('the table of the lifecycle', () => {
  test('has every command once, in the order of the job', () => {
    expect(ROWS.map((row) => row.command)).toEqual(ITEM_COMMANDS)
  })

  test.each(ROWS)('$command: from $from, to $to, by $by', (row) => {
    const actual = lifecycleRows().find(({ command }) => command === row.command)
    expect(actual).toMatchObject({ to: targetOf(row.to), built: row.built })
    expect([...(actual?.by ?? [])].sort()).toEqual([...row.by].sort())
    expect([...(actual?.from ?? [])].sort()).toEqual(row.command === 'shelve' ? [] : [...row.from].sort())
  })

  test.each(ROWS)(
    '$command is allowed exactly where the table says, for every role, station, end and kind',
    (row) => {
      const wrong: string[] = []
      for (const role of ROLES)
        for (const category of CATEGORIES)
          for (const stage of STAGES)
            for (const outcome of [null, ...OUTCOMES])
              for (const putBackPending of [false, true]) {
                const state = { category, stage, outcome, putBackPending }
                const is = transition(state, row.command, role)
                const want = expected(row, state, role)
                if ((is.ok ? 'ok' : is.because) !== want)
                  wrong.push(
                    `${role} ${category} ${stage} ${outcome} put-back ${putBackPending}: not ${want}`,
                  )
                if (is.ok) expect(is.to).toEqual(targetOf(row.to))
              }
      expect(wrong).toEqual([])
    },
  )

  test.each(ROWS)(
    '$command: whether a role may give it at all does not depend on where the item stands',
    (row) => {
      for (const role of ROLES) {
        const is = itemCommandPermission(row.command, role)
        const want = !row.by.includes(role) ? 'wrong-role' : row.built ? 'ok' : 'not-built'
        expect(is.ok ? 'ok' : is.because, role).toBe(want)
      }
    },
  )
})

describe('transition', () => {
  test.each<[string, ItemState, ItemCommandName, 'ok' | 'wrong-stage']>([
    ['accept and pull in one', item({ stage: 'called' }), 'pull', 'ok'],
    ['pull of what has been pulled', item({ stage: 'pulled' }), 'pull', 'wrong-stage'],
    ['deliver before pulling', item({ stage: 'accepted' }), 'deliver', 'wrong-stage'],
    ['verify on the way', item({ stage: 'pulled' }), 'verify', 'wrong-stage'],
    ['open without verifying', item({ stage: 'inRoom' }), 'open', 'wrong-stage'],
    ['use of an implant', item({ stage: 'opened' }), 'use', 'wrong-stage'],
    ['implanting cement', item({ category: 'sterile', stage: 'opened' }), 'implant', 'wrong-stage'],
    ['cement opened and left over', item({ category: 'sterile', stage: 'opened' }), 'notImplanted', 'ok'],
    ['cancel of what has been opened', item({ stage: 'opened' }), 'cancel', 'wrong-stage'],
    ['free text straight to the room', item({ category: 'other', stage: 'accepted' }), 'deliver', 'ok'],
    ['pull of free text', item({ category: 'other', stage: 'accepted' }), 'pull', 'wrong-stage'],
    ['use of free text on its way', item({ category: 'other', stage: 'accepted' }), 'use', 'wrong-stage'],
    ['shelve of what still lies in its bin', item({ outcome: 'cancelled' }), 'shelve', 'wrong-stage'],
    ['shelve of a put-back', item({ outcome: 'returned', putBackPending: true }), 'shelve', 'ok'],
    ['undo of a put-back', item({ stage: 'pulled', outcome: 'returned' }), 'undo', 'wrong-stage'],
  ])('%s: %j %s: %s', (_what, state, command, want) => {
    const is = transition(state, command, 'circulator')
    expect(is.ok ? 'ok' : is.because).toBe(want)
  })

  test('after an end, an item is not taken up again except by undo', () => {
    for (const role of ROLES)
      for (const outcome of OUTCOMES)
        expect(
          commandsFor(item({ stage: 'opened', outcome }), role).filter((name) => name !== 'undo'),
        ).toEqual([])
  })
})

describe('commandsFor', () => {
  test.each<[string, ItemState, (typeof ROLES)[number], ItemCommandName[]]>([
    ['the core takes or pulls what is called', item(), 'core', ['accept', 'pull']],
    ['the surgeon may only cancel', item(), 'surgeon', ['cancel']],
    [
      'who has it may give it back',
      item({ stage: 'accepted' }),
      'runner',
      ['decline', 'pull', 'takeOver', 'undo'],
    ],
    [
      'in the room the nurse verifies',
      item({ stage: 'inRoom' }),
      'charge',
      ['verify', 'putBack', 'cancel', 'takeOver', 'undo'],
    ],
    ['the scrub person settles', item({ stage: 'opened' }), 'scrub', ['implant', 'notImplanted']],
    ['cement is used', item({ category: 'sterile', stage: 'opened' }), 'scrub', ['use', 'notImplanted']],
    ['a put-back is shelved', item({ outcome: 'returned', putBackPending: true }), 'coordinator', ['shelve']],
    [
      'free text is brought',
      item({ category: 'other', stage: 'accepted' }),
      'runner',
      ['decline', 'deliver', 'takeOver', 'undo'],
    ],
    ['the administrator touches nothing', item({ stage: 'opened' }), 'admin', []],
  ])('%s', (_what, state, role, want) => {
    expect(commandsFor(state, role)).toEqual(want)
  })

  test('offers nothing that this release cannot do', () => {
    const notBuilt = ROWS.filter((row) => !row.built).map((row) => row.command)
    for (const role of ROLES)
      for (const stage of STAGES)
        expect(commandsFor(item({ stage }), role).filter((name) => notBuilt.includes(name))).toEqual([])
  })
})

describe('commands on a whole call', () => {
  test.each([
    ['readBack', 'scrub circulator charge'],
    ['confirm', 'surgeon scrub circulator charge'],
    ['accept', 'circulator runner core charge'],
    ['cancel', 'surgeon scrub circulator charge'],
    ['verify', 'circulator charge'],
  ] as const)('%s by %s and nobody else', (command, by) => {
    const may = ROLES.filter((role) => callCommandPermission(command, role).ok)
    expect([...may].sort()).toEqual(by.split(' ').sort())
    expect(CALL_COMMANDS).toContain(command)
    expect(CALL_COMMANDS).toHaveLength(5)
  })

  test('a role that may not is told so, not that it is unknown', () => {
    expect(callCommandPermission('verify', 'runner')).toEqual({ ok: false, because: 'wrong-role' })
  })
})

describe('limits of time', () => {
  test('a step is taken back within 2 minutes; a package verified 15 minutes ago is scanned again', () => {
    expect(UNDO_WITHIN_MS).toBe(120_000)
    expect(VERIFIED_FOR_MS).toBe(900_000)
  })

  test('these steps can be taken back, and opening is not among them', () => {
    expect([...UNDOABLE].sort()).toEqual(
      ['accept', 'pull', 'deliver', 'verify', 'implant', 'use', 'notImplanted', 'cancel'].sort(),
    )
  })
})
