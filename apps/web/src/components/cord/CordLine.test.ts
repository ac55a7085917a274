import { describe, expect, test } from 'vitest'
import { mountWith } from '../../../test/mount'
import CordLine from './CordLine.vue'

const drawn = (props: Record<string, unknown>) => {
  const cord = mountWith(CordLine, { props })
  return {
    name: cord.get('[role=img]').attributes('aria-label'),
    passed: cord.findAll('.passed').length,
    coming: cord.findAll('.coming').length,
    beadAt: cord.find('.bead').exists() ? cord.get('.bead').attributes('cx') : null,
    broken: cord.find('.broken').exists(),
    tone: cord
      .get('.cord')
      .classes()
      .filter((name) => ['going', 'waits', 'arrived', 'ended'].includes(name))[0],
    note: cord.find('.note').exists() ? cord.get('.note').text() : null,
  }
}

describe('the cord says where an item is, in a picture and in words', () => {
  test.each([
    {
      what: 'called: a bead at the first of six stations',
      props: { stage: 'called' },
      expected: {
        name: 'Called, station 1 of 6',
        passed: 0,
        coming: 5,
        beadAt: '0%',
        broken: false,
        tone: 'going',
      },
    },
    {
      what: 'in the room: solid behind, dotted ahead',
      props: { stage: 'inRoom', note: 'second check to do' },
      expected: {
        name: 'In room, station 4 of 6, second check to do',
        passed: 3,
        coming: 2,
        beadAt: '60%',
        tone: 'going',
        note: 'second check to do',
      },
    },
    {
      what: 'opened: all the way, and no bead that still has to move',
      props: { stage: 'opened' },
      expected: { name: 'Opened, station 6 of 6', passed: 6, coming: 0, beadAt: null, tone: 'arrived' },
    },
    {
      what: 'implanted: arrived',
      props: { stage: 'opened', outcome: 'implanted' },
      expected: { name: 'Implanted, after Opened', tone: 'arrived', passed: 6 },
    },
    {
      what: 'none free: a broken stretch to the next station',
      props: { stage: 'called', noneFree: true },
      expected: { name: 'Called, station 1 of 6, none free', broken: true, tone: 'waits' },
    },
    {
      what: 'late: a broken stretch where it waits',
      props: { stage: 'accepted', late: true },
      expected: { name: 'Accepted, station 2 of 6, late', broken: true, tone: 'waits', beadAt: '20%' },
    },
    {
      what: 'cancelled: ended where it was, late no more',
      props: { stage: 'pulled', outcome: 'cancelled', late: true },
      expected: { name: 'Cancelled, after Pulled', broken: false, tone: 'ended', beadAt: '40%' },
    },
    {
      what: 'something else passes three stations, each at its own place',
      props: { stage: 'accepted', category: 'other' },
      expected: { name: 'Accepted, station 2 of 3', passed: 1, coming: 1, beadAt: '20%' },
    },
    {
      what: 'compact: the note is said but not drawn',
      props: { stage: 'called', note: 'core C3-09', compact: true },
      expected: { name: 'Called, station 1 of 6, core C3-09', note: null },
    },
  ])('$what', ({ props, expected }) => {
    expect(drawn(props)).toMatchObject(expected)
  })
})
