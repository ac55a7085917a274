import { CALL_COMMANDS, ITEM_COMMANDS, commandsFor, itemCommandPermission, ROLES } from '@bellpull/domain'
import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { z } from 'zod'
import { CALL_COMMAND_BODIES, ITEM_COMMAND_BODIES, NOT_IMPLANTED_REASONS, makeCall } from '../src/index.js'

const ID = '0b0c9c0e-6a5b-4f0e-8d0a-111111111111'
const OTHER_ID = '0b0c9c0e-6a5b-4f0e-8d0a-222222222222'
const HEAD = { catalogueItemId: ID, quantity: 1 }

const call = (over: Record<string, unknown> = {}) => ({
  kind: 'confirmed',
  neededInMinutes: 0,
  calledBy: ID,
  side: 'left',
  items: [HEAD],
  ...over,
})

describe('a call', () => {
  test.each([
    ['now', call()],
    ['in ten hours', call({ kind: 'early', neededInMinutes: 600 })],
    ['stand by, when asked', call({ kind: 'standby', neededInMinutes: null })],
    ['nine of one', call({ items: [{ ...HEAD, quantity: 9 }] })],
    ['twenty lines', call({ items: Array(20).fill(HEAD) })],
    ['in words', call({ items: [{ text: 'Drill bit 2.5 mm' }] })],
    ['60 characters', call({ items: [{ text: 'x'.repeat(60) }] })],
    ['60 characters that JavaScript counts twice', call({ items: [{ text: '🪛'.repeat(60) }] })],
    ['both kinds of line', call({ items: [HEAD, { text: 'Stool' }] })],
  ])('%s is accepted, and comes through JSON as it was', (_what, body) => {
    expect(makeCall.parse(JSON.parse(JSON.stringify(body)))).toEqual(body)
  })

  test.each([
    ['a field that is not known', call({ hurry: true })],
    ['no kind', call({ kind: undefined })],
    ['a kind that is not known', call({ kind: 'provisional' })],
    ['stand by with a time', call({ kind: 'standby', neededInMinutes: 10 })],
    ['early without a time', call({ kind: 'early', neededInMinutes: null })],
    ['confirmed without a time', call({ neededInMinutes: null })],
    ['no word about the time', call({ neededInMinutes: undefined })],
    ['601 minutes', call({ neededInMinutes: 601 })],
    ['minutes ago', call({ neededInMinutes: -1 })],
    ['half a minute', call({ neededInMinutes: 0.5 })],
    ['minutes as text', call({ neededInMinutes: '5' })],
    ['a caller who is no id', call({ calledBy: 'juniper' })],
    ['no side', call({ side: undefined })],
    ['either side', call({ side: 'either' })],
    ['nothing called', call({ items: [] })],
    ['21 lines', call({ items: Array(21).fill(HEAD) })],
    ['none of one', call({ items: [{ ...HEAD, quantity: 0 }] })],
    ['ten of one', call({ items: [{ ...HEAD, quantity: 10 }] })],
    ['one and a half', call({ items: [{ ...HEAD, quantity: 1.5 }] })],
    ['no quantity', call({ items: [{ catalogueItemId: ID }] })],
    ['a line with a field that is not known', call({ items: [{ ...HEAD, size: 50 }] })],
    ['a line that is both', call({ items: [{ ...HEAD, text: 'Head' }] })],
    ['a quantity of words', call({ items: [{ text: 'Stool', quantity: 2 }] })],
    ['61 characters', call({ items: [{ text: 'x'.repeat(61) }] })],
    ['no words', call({ items: [{ text: '' }] })],
    ['blanks', call({ items: [{ text: ' \t ' }] })],
    ['a list', [call()]],
    ['nothing', null],
  ])('%s is refused', (_what, body) => {
    expect(makeCall.safeParse(body).success).toBe(false)
  })

  test('words are taken without the blanks around them; the limit counts what is left', () => {
    const body = makeCall.parse(call({ items: [{ text: `  ${'x'.repeat(60)} ` }] }))
    expect(body.items).toEqual([{ text: 'x'.repeat(60) }])
  })

  test('ids are compared in small letters: nobody becomes another by writing an id in capitals', () => {
    expect(makeCall.parse(call({ calledBy: ID.toUpperCase() })).calledBy).toBe(ID)
  })

  test('any call within the limits is accepted', () => {
    const line = fc.oneof(
      fc.record({ catalogueItemId: fc.constant(ID), quantity: fc.integer({ min: 1, max: 9 }) }),
      fc.record({ text: fc.string({ minLength: 1, maxLength: 60, unit: 'grapheme-ascii' }) }),
    )
    const time = fc.oneof(
      fc.record({
        kind: fc.constantFrom('early', 'confirmed'),
        neededInMinutes: fc.integer({ min: 0, max: 600 }),
      }),
      fc.constant({ kind: 'standby', neededInMinutes: null }),
    )
    fc.assert(
      fc.property(time, fc.array(line, { minLength: 1, maxLength: 20 }), (when, items) => {
        fc.pre(items.every((one) => !('text' in one) || one.text.trim() !== ''))
        expect(makeCall.safeParse(call({ ...when, items })).success).toBe(true)
      }),
    )
  })
})

const given = { expectedVersion: 1 }
const scan = '010952100000011417270630\u001d10LOT1'
const typed = { ref: 'SAL-H-50', lot: 'LOT1', useByOn: '2027-06-30' }
const pin = { method: 'pin', checkerId: ID, pin: '2402' }

describe('commands on an item', () => {
  const bodies: Record<string, z.ZodType> = ITEM_COMMAND_BODIES
  const plain = [
    'accept',
    'decline',
    'deliver',
    'implant',
    'use',
    'putBack',
    'shelve',
    'cancel',
    'takeOver',
    'undo',
  ]

  test('every command that somebody is offered has a body, and no other has', () => {
    const built = ITEM_COMMANDS.filter((name) => ROLES.some((role) => itemCommandPermission(name, role).ok))
    expect(Object.keys(bodies).sort()).toEqual([...built].sort())
    const offered = commandsFor(
      { category: 'implant', stage: 'called', outcome: null, putBackPending: true },
      'charge',
    )
    expect(offered.filter((name) => !(name in bodies))).toEqual([])
  })

  test.each(plain)('%s takes its name and a version, and refuses what it does not know', (name) => {
    const accepts = (body: unknown) => bodies[name]?.safeParse(body).success
    expect(accepts({ name, ...given })).toBe(true)
    expect(accepts({ name })).toBe(false)
    expect(accepts({ name, expectedVersion: 0 })).toBe(false)
    expect(accepts({ name, expectedVersion: '1' })).toBe(false)
    expect(accepts({ name, ...given, hurry: true })).toBe(false)
    expect(accepts({ name: 'open', ...given })).toBe(false)
  })

  test.each([
    ['pull', { scan }, true],
    ['pull', { scan: [scan, '10LOT1'] }, true],
    ['pull', { typed }, true],
    ['pull', { typed: { ...typed, serial: 'S1' } }, true],
    ['pull', {}, true],
    ['pull', { scan, typed }, false],
    ['pull', { scan: '' }, false],
    ['pull', { scan: [scan] }, false],
    ['pull', { scan: [scan, scan, scan] }, false],
    ['pull', { scan: 'x'.repeat(513) }, false],
    ['pull', { typed: { ...typed, useByOn: '30 June 2027' } }, false],
    ['pull', { typed: { ...typed, useByOn: '2027-02-30' } }, false],
    ['pull', { typed: { ref: 'SAL-H-50' } }, false],
    ['pull', { scan, intact: true }, false],
    ['verify', { scan, intact: true, secondCheck: pin }, true],
    ['verify', { typed, intact: true, secondCheck: pin }, true],
    ['verify', { scan }, true],
    ['verify', { intact: true, secondCheck: pin }, false],
    ['verify', { scan, typed, intact: true, secondCheck: pin }, false],
    ['verify', { scan, intact: 'yes' }, false],
    ['verify', { scan, secondCheck: { method: 'pin', checkerId: ID } }, false],
    ['verify', { scan, secondCheck: { method: 'nod', checkerId: ID } }, false],
    ['verify', { scan, secondCheck: { method: 'touch', checkerId: ID } }, true],
    [
      'verify',
      { scan, secondCheck: { method: 'spoken', checkerId: ID, heard: { size: '50', side: 'left' } } },
      true,
    ],
    [
      'verify',
      { scan, secondCheck: { method: 'spoken', checkerId: ID, heard: { size: 50, side: 'either' } } },
      true,
    ],
    ['verify', { scan, secondCheck: { method: 'spoken', checkerId: ID, heard: { size: '50' } } }, false],
    ['verify', { scan, secondCheck: { method: 'spoken', checkerId: ID } }, false],
    ['verify', { scan, override: { surgeonId: ID, reason: 'Surgeon decided' } }, true],
    ['verify', { scan, override: { surgeonId: ID } }, false],
    ['open', {}, true],
    ['open', { scan }, true],
    ['open', { scan, typed }, false],
    ['notImplanted', {}, false],
    ['notImplanted', { reason: 'damaged' }, true],
    ['notImplanted', { reason: 'other', note: 'Fell on the drape' }, true],
    ['notImplanted', { reason: 'Fell on the drape' }, false],
    ['putBack', { infected: true, reason: 'Not needed' }, true],
    ['shelve', { binCode: 'A-01', inspect: true }, true],
    ['shelve', { binCode: ' ' }, false],
    ['cancel', { reason: 'x'.repeat(201) }, false],
  ])('%s with %j: %s', (name, rest, accepted) => {
    expect(bodies[name]?.safeParse({ name, ...given, ...rest }).success).toBe(accepted)
  })

  test('reasons for not implanting are these', () => {
    expect(NOT_IMPLANTED_REASONS).toEqual(['sizeChanged', 'damaged', 'contaminated', 'defect', 'other'])
  })

  test('a size that was heard may come as a number; it is kept as it is said', () => {
    const heard = { size: 50, side: 'left' }
    const body = ITEM_COMMAND_BODIES.verify.parse({
      name: 'verify',
      ...given,
      scan,
      secondCheck: { method: 'spoken', checkerId: ID, heard },
    })
    expect(body.secondCheck).toMatchObject({ heard: { size: '50', side: 'left' } })
  })
})

describe('commands on a call', () => {
  const items = [
    { itemId: ID, scan },
    { itemId: OTHER_ID, typed },
  ]

  test('each has its body', () => {
    expect(Object.keys(CALL_COMMAND_BODIES).sort()).toEqual([...CALL_COMMANDS].sort())
  })

  test.each([
    ['readBack', {}, true],
    ['readBack', { reason: 'why' }, false],
    ['confirm', {}, true],
    ['confirm', { neededInMinutes: 0 }, true],
    ['confirm', { neededInMinutes: null }, false],
    ['confirm', { neededInMinutes: 601 }, false],
    ['accept', {}, true],
    ['accept', { items }, false],
    ['cancel', { reason: 'Not needed' }, true],
    ['verify', { items, intact: true, secondCheck: pin }, true],
    ['verify', { items: [] }, false],
    ['verify', { intact: true, secondCheck: pin }, false],
    ['verify', { items: [{ itemId: ID }] }, false],
    ['verify', { items: [{ itemId: ID, scan, typed }] }, false],
    ['verify', { items: [{ itemId: ID, scan, intact: true }] }, false],
    ['verify', { items: [items[0], { ...items[0], itemId: ID.toUpperCase() }] }, false],
  ])('%s with %j: %s', (name, rest, accepted) => {
    const schema: z.ZodType = CALL_COMMAND_BODIES[name as keyof typeof CALL_COMMAND_BODIES]
    expect(schema.safeParse({ name, ...given, ...rest }).success).toBe(accepted)
  })
})
