import type { CallView } from '@bellpull/contracts'
import { flushPromises, type VueWrapper } from '@vue/test-utils'
import { defineComponent, h } from 'vue'
import { afterEach, describe, expect, test } from 'vitest'
import { IFEOMA, JORY, PIM, at, call, item } from '../../../../test/calls'
import { mountWith } from '../../../../test/mount'
import BoardSections from './BoardSections.vue'
import { drawSections } from './lines'
import type { Viewer } from './next-action'
import { boardSections } from './rows'
import { useRowWords } from './useRowWords'

let shown: VueWrapper | null = null
afterEach(() => shown?.unmount())

/** The board as a person sees it, and what its buttons have asked for. */
function board(calls: CallView[], viewer: Viewer, wide = true) {
  const asked: string[] = []
  const Board = defineComponent({
    setup() {
      const { wordsOf } = useRowWords()
      const view = { role: viewer.role, roomIds: null, nowMs: at('10:45') }
      const sections = drawSections(boardSections(calls, view), (row) =>
        wordsOf(row, viewer, at('10:45'), false),
      )
      return () =>
        h(BoardSections, {
          sections,
          wide,
          isBusy: () => false,
          onAct: (action, row) => asked.push(`${action} ${row.item.label}`),
          onTogether: (block) => asked.push(`together ${block.lines.length}`),
        })
    },
  })
  const wrapper = mountWith(Board)
  shown = wrapper
  const buttons = () => wrapper.findAll('[data-next]').map((button) => button.text())
  return { wrapper, asked, buttons }
}

const head = () => item({ label: 'Head 50', walkOrder: 70 })
const stem = () => item({ label: 'Stem 9', variant: 'press-fit', walkOrder: 190 })

describe.each([
  ['desk', true],
  ['phone', false],
])('on the %s', (_where, wide) => {
  test('two items on one walk have one button, and it takes both', async () => {
    const { wrapper, asked, buttons } = board([call([head(), stem()])], JORY, wide)
    expect(buttons()).toEqual(['Accept both'])
    await wrapper.get('[data-next]').trigger('click')
    expect(asked).toEqual(['together 2'])
  })

  test('the read-back comes first for who may give it, once for the call', async () => {
    const { wrapper, asked, buttons } = board([call([head(), stem()], { readBack: null })], IFEOMA, wide)
    expect(buttons()).toEqual(['Read back'])
    await wrapper.get('[data-next]').trigger('click')
    expect(asked).toEqual(['readBack Head 50'])
  })

  test('Enter on a row does what its button does', async () => {
    const { wrapper, asked } = board([call([item({ stage: 'pulled', acceptedBy: JORY })])], JORY, wide)
    await wrapper.get('[data-row]').trigger('keydown', { key: 'Enter' })
    expect(asked).toEqual(['deliver Head 50'])
  })

  test('without anything to do there is no button, and words say what it waits for', () => {
    const { wrapper, buttons } = board([call([item()])], PIM, wide)
    expect(buttons()).toEqual([])
    expect(wrapper.text()).toContain('waits to be accepted')
  })

  test('side, kind, place and caller are said in words', () => {
    const { wrapper } = board([call([item({ side: 'left' })], { kind: 'early' })], JORY, wide)
    expect(wrapper.text()).toContain('LEFT')
    expect(wrapper.text()).toMatch(/early, core A1-7/)
    expect(wrapper.text()).toMatch(/called \d\d:\d\d by J\. Hathersedge/)
  })
})

test('j walks down the rows and k up, and only one row stands in the way of the Tab key', async () => {
  const calls = [call([head()]), call([stem()], { number: 5 })]
  const { wrapper } = board(calls, JORY)
  const focused = () => document.activeElement?.getAttribute('data-row')
  const press = async (key: string) => {
    document.activeElement?.dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true }))
    await flushPromises()
  }
  const [first, second] = wrapper.findAll('[data-row]').map((row) => row.attributes('data-row'))
  await press('j')
  expect(focused()).toBe(first)
  await press('j')
  expect(focused()).toBe(second)
  await press('j')
  expect(focused()).toBe(second)
  await press('k')
  expect(focused()).toBe(first)
  expect(wrapper.findAll('[data-row][tabindex="0"]')).toHaveLength(1)
})
