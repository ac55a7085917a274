import type { CallView, ItemView } from '@bellpull/contracts'
import { describe, expect, test } from 'vitest'
import { IFEOMA, JORY, at, call, instant, item, unit } from '../../../../test/calls'
import {
  cordNote,
  countWords,
  neededWords,
  placeWords,
  shortAlternative,
  withWords,
  type Words,
} from './notes'
import { boardSections } from './rows'

const timeOfDay = (one: string) => one.slice(11, 16)
const rowOf = (one: Partial<ItemView>, of: Partial<CallView> = {}, nowMs = at('10:45')) =>
  boardSections([call([item(one)], of)], { role: 'circulator', roomIds: null, nowMs })[0]!.rows[0]!
const brief = (words: Words | null) =>
  words && [words.key.replace('dispatch.', ''), ...Object.values(words.named)].join(' ')

describe('what the cord says at the station reached', () => {
  const note = (one: Partial<ItemView>, of: Partial<CallView> = {}, time = '10:45') =>
    brief(cordNote(rowOf(one, of, at(time)), at(time), 'core A1-7', timeOfDay))

  test.each<[string, Partial<ItemView>, Partial<CallView>, string, string]>([
    ['called early', {}, { kind: 'early' }, '10:45', 'note.early core A1-7'],
    ['called', {}, {}, '10:45', 'note.confirmed core A1-7'],
    ['stand by', {}, { kind: 'standby', neededAt: null }, '10:45', 'note.standby core A1-7'],
    ['nobody accepted', {}, { neededAt: instant('10:40') }, '10:42', 'note.notAccepted 2 core A1-7'],
    ['accepted', { stage: 'accepted' }, {}, '10:45', 'note.toFetch core A1-7 A1-7'],
    ['accepted and late', { stage: 'accepted' }, {}, '11:03', 'note.stillIn core A1-7 A1-7'],
    ['just pulled', { stage: 'pulled', pulledAt: instant('10:45') }, {}, '10:45', 'note.pulled'],
    ['pulled', { stage: 'pulled', pulledAt: instant('10:43') }, {}, '10:45', 'note.pulledAgo 2'],
    ['in the room', { stage: 'inRoom' }, {}, '10:45', 'note.twoChecks'],
    ['cement in the room', { stage: 'inRoom', category: 'sterile' }, {}, '10:45', 'note.oneCheck'],
    ['in the room unread', { stage: 'inRoom' }, { readBack: null }, '10:45', 'note.readBackToDo'],
    ['opened', { stage: 'opened', openedAt: instant('10:47') }, {}, '10:50', 'note.opened 10:47'],
    ['none free, nothing near', { hold: 'noneFree' }, {}, '10:45', 'note.nothingNear'],
  ])('%s', (_what, one, of, time, want) => {
    expect(note(one, of, time)).toBe(want)
  })

  test('none free: says which sizes are there', () => {
    const alternatives = ['Head 48 concentric', 'Head 52 concentric', 'Head 50 eccentric'].map((label) => ({
      catalogueItemId: 'x',
      label,
      inRoom: 0,
      inCore: 1,
    }))
    expect(note({ hold: 'noneFree', alternatives })).toBe('note.twoNear 48 52')
    expect(note({ hold: 'noneFree', alternatives: alternatives.slice(2) })).toBe('note.oneNear 50 eccentric')
  })
})

test.each([
  [{ label: 'Shell 54', size: '54', variant: null }, 'Shell 52', '52'],
  [{ label: 'Head 50', size: '50', variant: 'concentric' }, 'Head 48 concentric', '48'],
  [{ label: 'Head 50', size: '50', variant: 'concentric' }, 'Head 50 eccentric', '50 eccentric'],
  [{ label: 'Glenoid M', size: 'M', variant: 'pegged' }, 'Glenoid L pegged', 'L'],
  [{ label: 'Insert', size: null, variant: null }, 'Insert 11', 'Insert 11'],
])('%j beside %s: %s', (of, label, want) => {
  expect(shortAlternative(item(of), label)).toBe(want)
})

test.each([
  ['as called', {}, '10:45', 'needed.at 11:02'],
  ['soon', {}, '10:58', 'needed.in 4'],
  ['in the last minute', {}, '11:01', 'needed.in 1'],
  ['at the moment', {}, '11:02', 'needed.now'],
  ['late', {}, '11:03', 'needed.late 11:02'],
  ['in the room it is not late', { stage: 'inRoom' }, '11:03', 'needed.at 11:02'],
  ['opened', { stage: 'opened', openedAt: instant('10:47') }, '11:03', 'needed.opened 10:47'],
] as const)('needed, %s', (_what, one, time, want) => {
  expect(brief(neededWords(rowOf(one, {}, at(time)), at(time), timeOfDay))).toBe(want)
})

test('a now call says "now" in its first minute', () => {
  const row = rowOf({}, { calledAt: instant('10:45'), neededAt: instant('10:45') }, at('10:45') + 30_000)
  expect(brief(neededWords(row, at('10:45') + 30_000, timeOfDay))).toBe('needed.now')
})

test('with whom it is', () => {
  expect(brief(withWords(item(), IFEOMA))).toBe('with.nobody')
  expect(brief(withWords(item({ acceptedBy: IFEOMA }), IFEOMA))).toBe('with.you')
  expect(brief(withWords(item({ acceptedBy: JORY }), IFEOMA))).toBe('with.person J. Penhallick runner')
})

test('where the package lies', () => {
  const place = (zone: string, code: string) => {
    const of = call([item({ unit: unit({ zone, code }) })])
    return brief(placeWords(of, of.items[0]!))
  }
  expect(place('core', 'A1-7')).toBe('place.core A1-7')
  expect(place('room', 'R3')).toBe('place.room 3')
  expect(place('loanerRack', 'LR-1')).toBe('place.loanerRack LR-1')
  expect(place('attic', 'X')).toBe('place.elsewhere X')
})

test('the head of the board counts what there is and leaves out what there is not', () => {
  expect(countWords({ noneFree: 1, waiting: 2, moving: 4, putBack: 0 }).map(brief)).toEqual([
    'counts.noneFree 1',
    'counts.waiting 2',
    'counts.moving 4',
  ])
  expect(countWords({ noneFree: 0, waiting: 0, moving: 0, putBack: 0 })).toEqual([])
})
