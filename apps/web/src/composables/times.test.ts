import { describe, expect, test } from 'vitest'
import { ageAs, dayIn, dayOfInstant, dayText, neededAs, timeOfDay } from './times'

const NOW = Date.parse('2032-05-12T10:52:00Z')

describe('when a call is needed', () => {
  test.each([
    { neededAt: null, expected: { say: 'standby' } },
    { neededAt: '2032-05-12T11:02:00Z', expected: { say: 'at', time: '11:02' } },
    { neededAt: '2032-05-12T10:55:00Z', expected: { say: 'in', minutes: 3 } },
    { neededAt: '2032-05-12T10:54:01Z', expected: { say: 'in', minutes: 3 } },
    { neededAt: '2032-05-12T10:52:30Z', expected: { say: 'now' } },
    { neededAt: '2032-05-12T10:51:30Z', expected: { say: 'now' } },
    { neededAt: '2032-05-12T10:51:00Z', expected: { say: 'passed', time: '10:51' } },
  ])('$neededAt at 10:52 is said as $expected.say', ({ neededAt, expected }) => {
    expect(neededAs(neededAt, NOW, 'UTC')).toEqual(expected)
  })
})

test.each([
  { zone: 'UTC', time: '22:30', day: '31 Mar 2034' },
  { zone: 'Europe/Brussels', time: '00:30', day: '1 Apr 2034' },
])('an instant is told in the zone of the house: $zone', ({ zone, time, day }) => {
  expect(timeOfDay('2034-03-31T22:30:00Z', zone)).toBe(time)
  expect(dayOfInstant('2034-03-31T22:30:00Z', zone)).toBe(day)
})

test('a day has no zone', () => {
  expect(dayText('2034-03-31')).toBe('31 Mar 2034')
  expect(dayText('2033-09-30')).toBe('30 Sep 2033')
})

test.each([
  { ms: 0, age: { unit: 'seconds', n: 0 } },
  { ms: 59_999, age: { unit: 'seconds', n: 59 } },
  { ms: 60_000, age: { unit: 'minutes', n: 1 } },
  { ms: 3_600_000, age: { unit: 'hours', n: 1 } },
  { ms: -5, age: { unit: 'seconds', n: 0 } },
])('$ms ms is $age.n $age.unit', ({ ms, age }) => {
  expect(ageAs(ms)).toEqual(age)
})

test.each([
  ['UTC', '2034-03-31'],
  ['Europe/Brussels', '2034-04-01'],
  ['America/New_York', '2034-03-31'],
])('the day of an instant in %s, to compare days with', (zone, day) => {
  expect(dayIn('2034-03-31T22:30:00Z', zone)).toBe(day)
})
