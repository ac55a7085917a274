import type { ProblemCode } from '@bellpull/contracts'
import { expect, test } from 'vitest'
import { ApiProblem } from '@/api/problem'
import { call, item, unit } from '../../../../test/calls'
import { notAsHeard, stopOf, type Stop } from './stop'

const ITEM = item({ stage: 'inRoom', unit: unit({ lot: 'L26A014', serial: '000731' }) })
const facts = { call: call([ITEM]), item: ITEM, label: null, heard: { size: '48', side: 'left' } as const }
const stop = (code: ProblemCode, members: Record<string, unknown> = {}): Stop | null =>
  stopOf(new ApiProblem(code, 409, members), facts)

const product = (label: string, side: string) => ({ ref: 'R', label, variant: null, side })

test.each<[ProblemCode, Record<string, unknown>, object, object | null, string]>([
  [
    'wrong-item',
    { expected: product('Head 50', 'either'), scanned: product('Head 52', 'either') },
    { is: 'product', name: 'Head 50' },
    { is: 'product', name: 'Head 52' },
    'scanAgain',
  ],
  [
    'wrong-item',
    { expected: product('Head 50', 'either'), scanned: { gtin: '09521100100496' } },
    { name: 'Head 50' },
    { is: 'unknownGtin', gtin: '09521100100496' },
    'scanAgain',
  ],
  [
    'wrong-side',
    { expected: product('Femur 5', 'left'), scanned: product('Femur 5', 'right') },
    { name: 'Femur 5', side: 'left' },
    { name: 'Femur 5', side: 'right' },
    'scanAgain',
  ],
  [
    'not-the-pulled-unit',
    { expected: { lot: 'A', serial: '1' }, scanned: { lot: 'B', serial: null } },
    { is: 'package', lot: 'A', serial: '1' },
    { is: 'package', lot: 'B', serial: null },
    'scanAgain',
  ],
  [
    'label-differs',
    { expected: { useByOn: '2028-11-30' }, scanned: { useByOn: '2029-11-30' } },
    { is: 'useBy', day: '30 Nov 2028' },
    { is: 'useBy', day: '30 Nov 2029' },
    'callAnother',
  ],
  [
    'unit-expired',
    { useByOn: '2026-06-01', today: '2026-06-02' },
    { is: 'day', day: '2 Jun 2026' },
    { is: 'useBy', day: '1 Jun 2026' },
    'callAnother',
  ],
  [
    'unit-recalled',
    {},
    { is: 'usable' },
    { is: 'state', rule: 'unit-recalled', lot: 'L26A014' },
    'callAnother',
  ],
  ['unit-quarantined', {}, { is: 'usable' }, { is: 'state', rule: 'unit-quarantined' }, 'callAnother'],
  ['unit-not-sterile', {}, { is: 'usable' }, { is: 'state', rule: 'unit-not-sterile' }, 'callAnother'],
  [
    'not-as-heard',
    {},
    { is: 'heard', size: '50', side: 'either' },
    { is: 'heard', size: '48', side: 'left' },
    'readAgain',
  ],
])('%s names both values %j', (code, members, expected, scanned, first) => {
  const said = stop(code, members)
  expect(said).toMatchObject({ rule: code, expected: { value: expected }, found: { value: scanned } })
  expect(said?.actions[0]).toBe(first)
})

test.each<[ProblemCode, string]>([
  ['wrong-pin', 'pinAgain'],
  ['not-read-back', 'readBack'],
  ['second-checker-needed', 'goBack'],
  ['not-intact', 'goBack'],
  ['label-unreadable', 'scanAgain'],
])('%s is a stop with %s as the next thing', (code, first) => {
  expect(stop(code)?.actions[0]).toBe(first)
})

test.each<ProblemCode>(['item-moved-on', 'too-many-requests', 'not-permitted', 'unexpected'])(
  '%s is no hard stop',
  (code) => expect(stop(code)).toBeNull(),
)

test.each<ProblemCode>([
  'unit-expired',
  'unit-recalled',
  'unit-quarantined',
  'unit-not-sterile',
  'label-differs',
  'wrong-item',
  'wrong-side',
])('%s drafts the replacement call', (code) => expect(stop(code)?.actions).toContain('callAnother'))

test('what was heard wrong is a stop before anything is sent', () => {
  expect(notAsHeard(facts)).toMatchObject({
    rule: 'not-as-heard',
    found: { where: 'heard', value: { size: '48', side: 'left' } },
    actions: ['readAgain', 'putBack'],
  })
})
