import type { CallView } from '@bellpull/contracts'
import type { Role } from '@bellpull/domain'
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { mountWith } from '../../../../test/mount'
import { aCall, anItem, id } from '../../../../test/views'
import { SECOND_TOUCH_MS } from './armed'
import ReadBackPanel from './ReadBackPanel.vue'

beforeEach(() => {
  vi.useFakeTimers()
})
afterEach(() => {
  vi.useRealTimers()
  document.body.innerHTML = ''
})

const BY = { id: id(902), initials: 'IB', name: 'Ifeoma Brindlecombe', role: 'circulator' } as const
const readBack = { by: BY, at: '2026-12-01T10:53:00Z' }

function show(call: CallView, role: Role, props: Record<string, unknown> = {}) {
  return mountWith(ReadBackPanel, {
    role,
    props: {
      call,
      me: { id: id(950), name: 'Pim Ottershaw', initials: 'PO', role },
      busy: false,
      refusal: null,
      undoable: false,
      compact: false,
      ...props,
    },
  })
}
const buttons = (panel: ReturnType<typeof show>): string[] =>
  panel
    .findAll('.last__actions > button')
    .map((button) => button.text())
    .filter((text) => text !== '')

describe('what is offered', () => {
  test.each([
    { what: 'scrub reads back', role: 'scrub', call: {}, offers: ['Read back', 'Cancel call'] },
    { what: 'the surgeon does not', role: 'surgeon', call: {}, offers: ['Cancel call'] },
    {
      what: 'early is confirmed after the read-back',
      role: 'scrub',
      call: { readBack },
      offers: ['Confirm', 'Cancel call'],
    },
    {
      what: 'a confirmed call is not confirmed again',
      role: 'scrub',
      call: { readBack, kind: 'confirmed' },
      offers: ['Cancel call'],
    },
    { what: 'a runner only looks', role: 'runner', call: {}, offers: [] },
  ] as { what: string; role: Role; call: Partial<CallView>; offers: string[] }[])(
    '$what',
    ({ role, call, offers }) => {
      expect(buttons(show(aCall({ items: [anItem()], ...call }), role))).toEqual(offers)
    },
  )

  test('who called it may not read it back, whatever their role', () => {
    const call = aCall({ items: [anItem()], calledBy: { ...BY, id: id(950), role: 'scrub' } })
    expect(buttons(show(call, 'scrub'))).toEqual(['Cancel call'])
  })

  test('something opened cannot be cancelled with the rest', () => {
    const call = aCall({ items: [anItem(), anItem({ id: id(12), stage: 'opened' })] })
    expect(buttons(show(call, 'scrub'))).toEqual(['Read back'])
  })

  test('undo stands there while it may', () => {
    const call = aCall({ items: [anItem({ outcome: 'cancelled', settledAt: '2026-12-01T10:00:00Z' })] })
    expect(buttons(show(call, 'scrub', { undoable: true }))).toEqual(['Undo'])
    expect(buttons(show(call, 'scrub'))).toEqual([])
  })
})

test('says whose word it is, who read it back and when', () => {
  const words = show(aCall({ items: [anItem()], readBack }), 'surgeon').text()
  expect(words).toMatch(/Read back by IB \d\d:\d\d/)
  expect(show(aCall({ items: [anItem()] }), 'surgeon').text()).toContain('Waiting to be read back')
})

test('says that none was free, large, where it was called', () => {
  expect(show(aCall({ items: [anItem({ hold: 'noneFree' })] }), 'surgeon').text()).toContain('none free')
})

test('the second touch of a double touch falls on nothing', async () => {
  const panel = show(aCall({ items: [anItem()] }), 'scrub')
  const button = panel.get('.last__actions > button')
  await button.trigger('click')
  expect(panel.emitted('readBack')).toBeUndefined()
  vi.advanceTimersByTime(SECOND_TOUCH_MS)
  await button.trigger('click')
  expect(panel.emitted('readBack')).toHaveLength(1)
})
