import { describe, expect, test } from 'vitest'
import { createWedge, type Key } from './wedge'

const GS = '\u001d'
const key = (name: string, atMs: number, more: Partial<Key> = {}): Key => ({
  key: name,
  ctrl: false,
  alt: false,
  repeat: false,
  atMs,
  ...more,
})

/** Types keys `everyMs` apart and gives back what was read. */
function type(keys: readonly (string | Partial<Key>)[], everyMs = 8): { scans: string[]; taken: number } {
  const wedge = createWedge()
  const scans: string[] = []
  let taken = 0
  keys.forEach((one, i) => {
    const pressed = typeof one === 'string' ? key(one, i * everyMs) : key(one.key ?? '', i * everyMs, one)
    if (pressed.key === 'AltUp') return wedge.releaseAlt()
    const read = wedge.press(pressed)
    if (read.take) taken += 1
    if (read.take && read.scan !== null) scans.push(read.scan)
  })
  return { scans, taken }
}

const ELEMENTS = '0109521234543213'
const scanOf = (...parts: (string | Partial<Key>)[]): (string | Partial<Key>)[] => [
  ...parts.flatMap<string | Partial<Key>>((part) => (typeof part === 'string' ? [...part] : [part])),
  'Enter',
]

describe('a burst of keys that ends in Enter is a scan', () => {
  test.each([
    { what: 'plain', keys: scanOf(ELEMENTS), scan: ELEMENTS },
    {
      what: 'a separator as ASCII 29',
      keys: scanOf(ELEMENTS, { key: GS }, '17340331'),
      scan: `${ELEMENTS}${GS}17340331`,
    },
    {
      what: 'a separator as Ctrl+]',
      keys: scanOf(ELEMENTS, { key: 'Control', ctrl: true }, { key: ']', ctrl: true }, '17'),
      scan: `${ELEMENTS}${GS}17`,
    },
    { what: 'a separator as F8', keys: scanOf(ELEMENTS, { key: 'F8' }, '17'), scan: `${ELEMENTS}${GS}17` },
    {
      what: 'a separator as Alt+029',
      keys: scanOf(
        ELEMENTS,
        { key: 'Alt', alt: true },
        { key: '0', alt: true },
        { key: '2', alt: true },
        { key: '9', alt: true },
        { key: 'AltUp' },
        '17',
      ),
      scan: `${ELEMENTS}${GS}17`,
    },
    { what: 'capitals with Shift', keys: scanOf('+A', { key: 'Shift' }, 'B123C'), scan: '+AB123C' },
    { what: 'ended by Tab', keys: [...ELEMENTS, 'Tab'], scan: ELEMENTS },
    { what: 'a space inside', keys: scanOf('+A99912 345'), scan: '+A99912 345' },
  ])('$what', ({ keys, scan }) => {
    expect(type(keys).scans).toEqual([scan])
  })

  test('all of it but the first key is kept from the page, the closing Enter too', () => {
    expect(type(scanOf(ELEMENTS)).taken).toBe(ELEMENTS.length)
  })
})

describe('a person at the keyboard is left alone', () => {
  test.each([
    { what: 'slow typing', keys: scanOf('hello world'), everyMs: 120 },
    { what: 'a lone Enter on a button', keys: ['Enter'], everyMs: 8 },
    { what: 'fewer keys than a barcode has', keys: scanOf('12345'), everyMs: 8 },
    {
      what: 'a held key',
      keys: ['a', ...Array.from({ length: 20 }, () => ({ key: 'a', repeat: true })), 'Enter'],
      everyMs: 8,
    },
    { what: 'a shortcut in between', keys: scanOf('123', { key: 'c', ctrl: true }, '456'), everyMs: 8 },
    { what: 'F8 alone', keys: [{ key: 'F8' }, 'Enter'], everyMs: 8 },
  ])('$what', ({ keys, everyMs }) => {
    expect(type(keys, everyMs).scans).toEqual([])
  })
})

test('a short code is a bin only where bins are awaited', () => {
  const read = (wedge: ReturnType<typeof createWedge>) =>
    ['B', '6', 'Enter'].map((name, i) => wedge.press(key(name, i * 8))).at(-1)
  expect(read(createWedge())).toEqual({ take: false })
  expect(read(createWedge(() => 2))).toEqual({ take: true, scan: 'B6' })
})
