import { EVENT_TYPES, type EventType, type EventView } from '@bellpull/contracts'
import { expect, test } from 'vitest'
import { i18n } from '@/plugins/i18n'
import { IFEOMA, JORY, JUNIPER, PIM } from '../../../test/calls'
import { reasonWords, sentenceOf, type Telling } from './sentences'

const HEAD = 'item-head'
const CALL = 'call-1'
const people = new Map([IFEOMA, JORY, JUNIPER, PIM].map((person) => [person.id, person]))

const telling: Telling = {
  t: (key, named) => (named ? i18n.global.t(key, named) : i18n.global.t(key)),
  itemName: (id) => (id === HEAD ? 'Head 50 concentric' : null),
  callItems: (id) => (id === CALL ? ['Head 50 concentric', 'Stem 9'] : []),
  person: (id) => people.get(id) ?? null,
  time: (at) => at.slice(11, 16),
}

const event = (type: string, data: Record<string, unknown> = {}): EventView => ({
  id: 'r.1',
  at: '2026-06-02T10:46:00.000Z',
  type,
  caseId: 'case',
  callId: type.startsWith('case.') ? null : CALL,
  itemId: type.startsWith('item.') ? HEAD : null,
  roomId: 'room',
  actor: { id: IFEOMA.id, initials: 'IB', name: IFEOMA.name },
  data,
})
const say = (type: string, data?: Record<string, unknown>): string => sentenceOf(event(type, data), telling)

const CALLED = {
  kind: 'early',
  neededAt: '2026-06-02T11:02:00.000Z',
  calledBy: JUNIPER.id,
  items: [
    { itemId: HEAD, label: 'Head 50', variant: 'concentric', hold: 'held' },
    { itemId: 'x', label: 'Stem 9', variant: null, hold: 'noneFree' },
  ],
}
const LOT = { unitId: 'u', lot: 'L26A014', serial: null, useByOn: '2028-11-30' }

const SENTENCES: Record<EventType, [Record<string, unknown>, string]> = {
  'call.called': [
    CALLED,
    'Ifeoma Brindlecombe called: head 50 concentric, stem 9; early; on the word of Juniper Hathersedge; needed 11:02; none free: stem 9',
  ],
  'call.readBack': [{}, 'Ifeoma Brindlecombe read back the call: head 50 concentric, stem 9'],
  'call.confirmed': [
    { from: 'early', neededAt: '2026-06-02T11:02:00.000Z' },
    'Ifeoma Brindlecombe confirmed the call: head 50 concentric, stem 9; needed 11:02',
  ],
  'call.accepted': [{}, 'Ifeoma Brindlecombe accepted the call: head 50 concentric, stem 9'],
  'call.cancelled': [
    { reason: 'size changed' },
    'Ifeoma Brindlecombe cancelled the call: head 50 concentric, stem 9; reason: size changed',
  ],
  'item.accepted': [{}, 'Ifeoma Brindlecombe accepted head 50 concentric'],
  'item.declined': [{}, 'Ifeoma Brindlecombe gave back head 50 concentric'],
  'item.pulled': [
    { ...LOT, typed: true, insteadOfUnitId: 'u2' },
    'Ifeoma Brindlecombe pulled head 50 concentric, lot L26A014, label typed, another package than the one held',
  ],
  'item.delivered': [LOT, 'Ifeoma Brindlecombe brought head 50 concentric into the room, lot L26A014'],
  'item.verified': [
    { ...LOT, checkedBy: PIM.id, method: 'spoken', typed: false },
    'Ifeoma Brindlecombe verified head 50 concentric, lot L26A014, second check by Pim Ottershaw, spoken',
  ],
  'item.opened': [
    { ...LOT, scannedAgain: true },
    'Ifeoma Brindlecombe opened head 50 concentric, lot L26A014, scanned again',
  ],
  'item.openedUnverified': [
    { ...LOT, reason: 'no time' },
    'Ifeoma Brindlecombe opened head 50 concentric without verifying it, lot L26A014, reason: no time',
  ],
  'item.implanted': [LOT, 'Head 50 concentric was implanted, recorded by Ifeoma Brindlecombe, lot L26A014'],
  'item.used': [LOT, 'Head 50 concentric was used, recorded by Ifeoma Brindlecombe, lot L26A014'],
  'item.notImplanted': [
    { ...LOT, reason: 'sizeChanged' },
    'Head 50 concentric was opened and not implanted, recorded by Ifeoma Brindlecombe, lot L26A014, reason: another size was chosen',
  ],
  'item.returned': [
    { ...LOT, reason: null, inspect: true },
    'Ifeoma Brindlecombe sent head 50 concentric back to its bin, lot L26A014, to inspection',
  ],
  'item.shelved': [
    { ...LOT, inspect: false, binCode: 'A1-7' },
    'Ifeoma Brindlecombe put head 50 concentric back on the shelf, in A1-7',
  ],
  'item.changed': [
    { label: 'Head 52', variant: 'concentric', reason: 'too small' },
    'Ifeoma Brindlecombe changed head 50 concentric, to head 52 concentric, reason: too small',
  ],
  'item.cancelled': [{ reason: null, ...LOT }, 'Ifeoma Brindlecombe cancelled head 50 concentric'],
  'item.rejected': [
    { ...LOT, reason: 'torn' },
    'Ifeoma Brindlecombe rejected the package of head 50 concentric, lot L26A014, reason: torn',
  ],
  'item.handedOver': [
    { toPersonId: JORY.id },
    'Ifeoma Brindlecombe offered head 50 concentric to a colleague, to Jory Penhallick',
  ],
  'item.taken': [
    { fromPersonId: JORY.id },
    'Ifeoma Brindlecombe took head 50 concentric, as offered, from Jory Penhallick',
  ],
  'item.takenOver': [
    { fromPersonId: JORY.id },
    'Ifeoma Brindlecombe took over head 50 concentric, from Jory Penhallick',
  ],
  'item.undone': [
    { command: 'verify', ...LOT },
    'Ifeoma Brindlecombe took back the last step on head 50 concentric, the step was: verified',
  ],
  'item.heldAgain': [
    LOT,
    'A package was held for head 50 concentric, when Ifeoma Brindlecombe acted, lot L26A014',
  ],
  'item.holdLost': [
    {},
    'The package held for head 50 concentric went to another call, when Ifeoma Brindlecombe acted',
  ],
  'item.enteredInError': [
    { reason: 'wrong case' },
    'Ifeoma Brindlecombe marked head 50 concentric as entered in error, reason: wrong case',
  ],
  'item.verifyRefused': [
    { problem: 'wrong-side' },
    'Stopped at verify: head 50 concentric, scanned by Ifeoma Brindlecombe, The label is for the other side. Do not open it.',
  ],
  'case.started': [{}, 'Ifeoma Brindlecombe started the case'],
  'case.timeOutStarted': [{}, 'Ifeoma Brindlecombe began the time-out'],
  'case.timeOutEnded': [{}, 'Ifeoma Brindlecombe ended the time-out'],
  'case.patientOut': [{}, 'Ifeoma Brindlecombe recorded that the patient has left the room'],
  'case.signedOut': [{}, 'Ifeoma Brindlecombe signed the case out'],
  'case.reopened': [{ reason: 'label found' }, 'Ifeoma Brindlecombe reopened the case, reason: label found'],
  'case.cancelled': [
    { reason: 'patient unwell' },
    'Ifeoma Brindlecombe cancelled the case, reason: patient unwell',
  ],
}

test.each(EVENT_TYPES.map((type) => [type, ...SENTENCES[type]] as const))(
  '%s %j: %s',
  (type, data, sentence) => {
    expect(say(type, data)).toBe(sentence)
  },
)

test('what a house newer than this screen records is still told', () => {
  expect(say('item.blessed')).toBe('Ifeoma Brindlecombe: item.blessed')
})

test('a part the screen does not know and data it cannot read make no sentence fail', () => {
  for (const type of EVENT_TYPES)
    expect(
      sentenceOf(
        { ...event(type, { items: 'x', lot: 3, reason: {}, checkedBy: 1 }), itemId: 'unknown' },
        telling,
      ),
    ).not.toBe('')
})

test.each([
  ['sizeChanged', 'another size was chosen'],
  ['other: dropped by the cart', 'something else: dropped by the cart'],
  ['no longer wanted', 'no longer wanted'],
])('the reason %s reads: %s', (kept, words) => {
  expect(reasonWords(kept, telling.t)).toBe(words)
})
