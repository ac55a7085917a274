import { createPinia, setActivePinia } from 'pinia'
import { beforeEach, describe, expect, test } from 'vitest'
import { ApiProblem, NotSent } from '@/api/problem'
import type { Tap } from '@/api/tap'
import { useCommandsStore } from './commands'

const ITEM = 'item'
const ACCEPT = { name: 'accept', expectedVersion: 1 }

beforeEach(() => {
  setActivePinia(createPinia())
})

/** Sends that wait for the test, and the taps that they were given. */
function line() {
  const taps: Tap[] = []
  const ends: { give: (value: string) => void; fail: (error: Error) => void }[] = []
  const send = (tap: Tap) => {
    taps.push(tap)
    return new Promise<string>((give, fail) => ends.push({ give, fail }))
  }
  return { taps, send, end: (nth: number) => ends[nth] ?? { give: () => undefined, fail: () => undefined } }
}

describe('a double tap', () => {
  test('is one: the second gets the answer of the first', async () => {
    const commands = useCommandsStore()
    const { send, taps, end } = line()
    const first = commands.give(ITEM, ACCEPT, send)
    const second = commands.give(ITEM, ACCEPT, send)
    expect(commands.isBusy(ITEM)).toBe(true)
    end(0).give('done')
    expect(await Promise.all([first, second])).toEqual([
      { ok: true, value: 'done' },
      { ok: true, value: 'done' },
    ])
    expect(taps).toHaveLength(1)
    expect(commands.isBusy(ITEM)).toBe(false)
  })

  test('on two items is two', () => {
    const commands = useCommandsStore()
    const { send, taps } = line()
    void commands.give('one', ACCEPT, send)
    void commands.give('other', ACCEPT, send)
    expect(new Set(taps.map(({ key }) => key)).size).toBe(2)
  })
})

describe('the key of a tap', () => {
  test.each([
    {
      what: 'not sent, the same again: the same key',
      error: new NotSent('offline'),
      again: ACCEPT,
      same: true,
    },
    {
      what: 'not sent, something else: another key',
      error: new NotSent('deadline'),
      again: { name: 'pull', expectedVersion: 1 },
      same: false,
    },
    {
      what: 'not sent, the same on a newer state: another key',
      error: new NotSent('offline'),
      again: { ...ACCEPT, expectedVersion: 2 },
      same: false,
    },
    {
      what: 'refused, the same again: another key',
      error: new ApiProblem('item-moved-on', 409),
      again: ACCEPT,
      same: false,
    },
  ])('$what', async ({ error, again, same }) => {
    const commands = useCommandsStore()
    const { send, taps, end } = line()
    const first = commands.give(ITEM, ACCEPT, send)
    end(0).fail(error)
    await first
    void commands.give(ITEM, again, send)
    expect(taps[0]?.key === taps[1]?.key).toBe(same)
  })
})

describe('a refusal', () => {
  test('stands beside what was tapped, until the next tap', async () => {
    const commands = useCommandsStore()
    const { send, end } = line()
    const first = commands.give(ITEM, ACCEPT, send)
    end(0).fail(new ApiProblem('item-moved-on', 409))
    expect(await first).toMatchObject({ ok: false, why: { code: 'item-moved-on' } })
    expect(commands.refusalOf(ITEM)).toMatchObject({ code: 'item-moved-on' })
    expect(commands.refusalOf('another')).toBeNull()
    void commands.give(ITEM, ACCEPT, send)
    expect(commands.refusalOf(ITEM)).toBeNull()
  })

  test('is dismissed', async () => {
    const commands = useCommandsStore()
    const { send, end } = line()
    const first = commands.give(ITEM, ACCEPT, send)
    end(0).fail(new NotSent('offline'))
    await first
    commands.dismiss(ITEM)
    expect(commands.refusalOf(ITEM)).toBeNull()
  })

  test('a fault of the program is none: it comes out', async () => {
    const commands = useCommandsStore()
    const { send, end } = line()
    const first = commands.give(ITEM, ACCEPT, send)
    end(0).fail(new RangeError('a mistake'))
    await expect(first).rejects.toThrow('a mistake')
    expect(commands.isBusy(ITEM)).toBe(false)
  })
})
