import { flushPromises } from '@vue/test-utils'
import { afterEach, beforeEach, expect, test, vi } from 'vitest'
import { callsApi } from '@/api/calls'
import { labelsApi } from '@/api/labels'
import { mountWith } from '../../../test/mount'
import { call, instant, item, PIM, unit } from '../../../test/calls'
import { rememberedMethod } from '@/components/calls/verify/remembered'
import VerifyPanel from './VerifyPanel.vue'

const UNIT = unit({ gtin: '09521100100489', lot: 'L26A014', useByOn: '2028-11-30' })
const ITEM = item({ stage: 'inRoom', unit: UNIT, label: 'Head 50', size: '50' })
const SCAN = '(01)09521100100489(17)281130(10)L26A014'

const CASE = {
  id: 'c',
  caseNumber: '0412-6',
  room: { id: 'r', number: 3 },
  startsAt: instant('10:00'),
  status: 'inProgress',
  procedure: { kind: 'shoulder', label: 'Shoulder, anatomic total' },
  side: 'left',
  surgeon: { id: 's', name: 'Juniper Hathersedge' },
  team: [PIM],
  plan: [],
} as const

const mounted: ReturnType<typeof mountWith>[] = []
function panel(over: Parameters<typeof item>[0] = {}) {
  const one = { ...ITEM, ...over }
  const of = call([one])
  const wrapper = mountWith(VerifyPanel, {
    role: 'circulator',
    props: { call: of, item: of.items[0], caseView: CASE, partners: [], queue: [], carried: null },
  })
  mounted.push(wrapper)
  return wrapper
}

/** A wedge scanner types fast and ends with Enter. */
async function scan(text: string): Promise<void> {
  for (const key of [...text, 'Enter'])
    document.body.dispatchEvent(
      new KeyboardEvent('keydown', { key, bubbles: true, composed: true, cancelable: true }),
    )
  await flushPromises()
}

beforeEach(() => {
  rememberedMethod().value = 'spoken'
  vi.spyOn(labelsApi, 'parse').mockResolvedValue({
    scheme: 'gs1',
    gtin: '09521100100489',
    lot: 'L26A014',
    useByOn: '2028-11-30',
    warnings: [],
  })
})
afterEach(() => {
  for (const wrapper of mounted.splice(0)) wrapper.unmount()
  vi.restoreAllMocks()
})

const labelColumn = (wrapper: ReturnType<typeof panel>): string =>
  wrapper
    .findAll('[data-row] .label')
    .map((cell) => cell.text())
    .join(' ')
const verifyButton = (wrapper: ReturnType<typeof panel>) =>
  wrapper.findAll('button').find((button) => /^Verified/.test(button.text()))!
const press = async (wrapper: ReturnType<typeof panel>, text: string) => {
  await wrapper
    .findAll('button')
    .find((button) => button.text() === text)!
    .trigger('click')
  await flushPromises()
}

async function keyHeard(wrapper: ReturnType<typeof panel>, size: string, side: string): Promise<void> {
  await wrapper.find('select').setValue(PIM.id)
  await wrapper.find('input.size').setValue(size)
  await wrapper.find(`input[type=radio][value=${side}]`).setValue(true)
  await wrapper.find('form.heard').trigger('submit')
  await flushPromises()
}

test('the label stays hidden until what was heard has been keyed, and is compared then', async () => {
  const wrapper = panel()
  await scan(SCAN)
  expect(labelColumn(wrapper)).not.toMatch(/50|L26A014|2028|either/)
  expect(wrapper.text()).not.toContain('same')
  await keyHeard(wrapper, '50', 'either')
  expect(labelColumn(wrapper)).toMatch(/50 concentric.*L26A014/)
  expect(wrapper.text()).toContain('Heard 50, either side')
})

test('by PIN the label is shown at once', async () => {
  rememberedMethod().value = 'pin'
  const wrapper = panel()
  await scan(SCAN)
  expect(labelColumn(wrapper)).toContain('L26A014')
})

test('going from PIN to spoken asks for the label again: what was seen cannot be heard blind', async () => {
  rememberedMethod().value = 'pin'
  const wrapper = panel()
  await scan(SCAN)
  await wrapper.find('input[type=radio][value=spoken]').setValue(true)
  await flushPromises()
  expect(labelColumn(wrapper)).toContain('Scan the label of this package')
})

test('what was heard wrong stops it, with both values; nothing is sent', async () => {
  const send = vi.spyOn(callsApi, 'onItem')
  const wrapper = panel()
  await scan(SCAN)
  await keyHeard(wrapper, '48', 'either')
  const stop = wrapper.find('.stop').text()
  expect(stop).toMatch(/Not as heard.*50, either side.*48, either side/)
  expect(verifyButton(wrapper)).toBeUndefined()
  expect(send).not.toHaveBeenCalled()
})

test('the button is off until all is there, then the command bears what was done', async () => {
  const send = vi.spyOn(callsApi, 'onItem').mockImplementation(() => new Promise(() => undefined))
  const wrapper = panel()
  expect(verifyButton(wrapper).attributes('disabled')).toBeDefined()
  await scan(SCAN)
  await keyHeard(wrapper, '50', 'left')
  expect(verifyButton(wrapper).attributes('disabled')).toBeDefined()
  await press(wrapper, 'Looked at it: dry, whole, sealed')
  expect(verifyButton(wrapper).attributes('disabled')).toBeUndefined()
  await press(wrapper, 'Verified by both')
  expect(send).toHaveBeenCalledOnce()
  expect(send.mock.calls[0]?.[1]).toEqual({
    name: 'verify',
    expectedVersion: 1,
    scan: SCAN,
    intact: true,
    secondCheck: { method: 'spoken', checkerId: PIM.id, heard: { size: '50', side: 'left' } },
  })
})

test.each(['sterile', 'tray'] as const)('one person is enough for what is %s', async (category) => {
  const wrapper = panel({ category })
  await scan(SCAN)
  expect(wrapper.find('.second').exists()).toBe(false)
  await press(wrapper, 'Looked at it: dry, whole, sealed')
  expect(verifyButton(wrapper).text()).toBe('Verified')
  expect(verifyButton(wrapper).attributes('disabled')).toBeUndefined()
})

test('a label that is not what was called is put to the house at once, without a look that could verify it', async () => {
  const send = vi.spyOn(callsApi, 'onItem').mockImplementation(() => new Promise(() => undefined))
  vi.mocked(labelsApi.parse).mockResolvedValue({
    scheme: 'gs1',
    gtin: '09521100100496',
    lot: 'X',
    useByOn: '2028-11-30',
    warnings: [],
  })
  panel()
  await scan(SCAN)
  expect(send.mock.calls[0]?.[1]).toEqual({ name: 'verify', expectedVersion: 1, scan: SCAN })
})

test('half a label is held until the other barcode comes; both are read together', async () => {
  vi.mocked(labelsApi.parse).mockResolvedValueOnce({
    scheme: 'gs1',
    gtin: '09521100100489',
    warnings: ['no-lot', 'no-use-by'],
  })
  const wrapper = panel()
  await scan('0109521100100489')
  expect(wrapper.text()).toContain('Scan the other one of this label')
  await scan('1728113010L26A014')
  expect(vi.mocked(labelsApi.parse).mock.calls.at(-1)?.[0]).toEqual(['0109521100100489', '1728113010L26A014'])
  expect(wrapper.find('.label').text()).not.toContain('Scan the other one')
})
