import type { Scan } from '@bellpull/contracts'
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { defineComponent, h } from 'vue'
import { mountWith } from '../../test/mount'
import ScanField from '@/components/common/ScanField.vue'
import { PAIR_WITHIN_MS } from './scanPair'
import { useWedgeScanner } from './useWedgeScanner'

// Invented, GS1 prefix 952 (kept for examples).
const GTIN = '0109521234543213'
const LOT = '17340331107K2201'
const WHOLE = `${GTIN}${LOT}`

let nowMs = 0

/** A page that listens for scans, with a field of its own, the field for scans and a button. */
function aPage() {
  const scans: Scan[] = []
  const pressed: string[] = []
  const page = mountWith(
    defineComponent(() => {
      const { take, half } = useWedgeScanner((scan) => scans.push(scan))
      return () =>
        h('div', [
          h('input', { id: 'theirs' }),
          h('button', { id: 'button', onClick: () => pressed.push('click') }, 'Accept'),
          h(ScanField, { half: half.value !== null, onScan: take }),
        ])
    }),
  )
  return { scans, pressed, page }
}

/** Types as a scanner does, into what has the focus. @returns the keys that the page still saw. */
function scan(text: string, { into = document.body as Element, everyMs = 5, end = 'Enter' } = {}): string[] {
  const seen: string[] = []
  const watch = (event: Event) => seen.push((event as KeyboardEvent).key)
  into.addEventListener('keydown', watch)
  for (const key of [...text, end]) {
    nowMs += everyMs
    const init = key === '\u001d' ? { key: ']', ctrlKey: true } : { key }
    const event = new KeyboardEvent('keydown', { ...init, bubbles: true, cancelable: true, composed: true })
    Object.defineProperty(event, 'timeStamp', { value: nowMs })
    const goesOn = into.dispatchEvent(event)
    if (goesOn && into instanceof HTMLInputElement && key.length === 1 && key !== '\u001d') {
      into.value += key
      into.dispatchEvent(new Event('input', { bubbles: true }))
    }
  }
  into.removeEventListener('keydown', watch)
  nowMs += 1_000
  return seen
}

beforeEach(() => {
  vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] })
})
afterEach(() => {
  vi.useRealTimers()
  document.body.innerHTML = ''
})

describe('a scan', () => {
  test('is heard anywhere on the page, as it was sent', () => {
    const { scans, page } = aPage()
    scan(`${GTIN}${LOT}\u001d21A5`)
    expect(scans).toEqual([`${GTIN}${LOT}\u001d21A5`])
    page.unmount()
  })

  test('does not press the button that has the focus', () => {
    const { scans, page } = aPage()
    const seen = scan(WHOLE, { into: page.get('#button').element })
    expect(scans).toEqual([WHOLE])
    expect(seen).not.toContain('Enter')
    page.unmount()
  })

  test('into the field for scans keeps its separator and leaves the field empty', async () => {
    const { scans, page } = aPage()
    const field = page.get('input[data-scan]').element as HTMLInputElement
    scan(`${GTIN}${LOT}\u001d21A5`, { into: field })
    await page.vm.$nextTick()
    expect(scans).toEqual([`${GTIN}${LOT}\u001d21A5`])
    expect(field.value).toBe('')
    page.unmount()
  })

  test('into another field is that field’s', () => {
    const { scans, page } = aPage()
    const field = page.get('#theirs').element as HTMLInputElement
    scan(WHOLE, { into: field })
    expect(scans).toEqual([])
    expect(field.value).toBe(WHOLE)
    page.unmount()
  })

  test('is heard no more once the page is gone', () => {
    const { scans, page } = aPage()
    page.unmount()
    scan(WHOLE)
    expect(scans).toEqual([])
  })
})

test('what a person types into the field for scans goes by its own button or Enter', async () => {
  const { scans, page } = aPage()
  await page.get('input[data-scan]').setValue(` ${WHOLE} `)
  await page.get('form').trigger('submit')
  expect(scans).toEqual([WHOLE])
  page.unmount()
})

describe('a label with two barcodes', () => {
  test('comes as a pair when the second follows soon', async () => {
    const { scans, page } = aPage()
    scan(GTIN)
    await page.vm.$nextTick()
    expect(scans).toEqual([])
    expect(page.get('[role=status]').text()).not.toBe('')
    scan(LOT)
    expect(scans).toEqual([[GTIN, LOT]])
    page.unmount()
  })

  test('of which the second does not come goes alone', () => {
    const { scans, page } = aPage()
    scan(GTIN)
    vi.advanceTimersByTime(PAIR_WITHIN_MS)
    expect(scans).toEqual([GTIN])
    page.unmount()
  })

  test('scanned twice on the same barcode still waits for the other', () => {
    const { scans, page } = aPage()
    scan(GTIN)
    scan(GTIN)
    scan(LOT)
    expect(scans).toEqual([[GTIN, LOT]])
    page.unmount()
  })

  test('followed by another whole label: each goes alone', () => {
    const { scans, page } = aPage()
    scan(GTIN)
    scan(WHOLE)
    expect(scans).toEqual([GTIN, WHOLE])
    page.unmount()
  })
})
