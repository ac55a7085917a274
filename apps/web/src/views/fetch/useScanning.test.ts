import type { CallView, LabelView, Scan } from '@bellpull/contracts'
import { parseScan } from '@bellpull/domain'
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { defineComponent, h } from 'vue'
import { labelsApi } from '@/api/labels'
import { ApiProblem, NotSent } from '@/api/problem'
import { fetchList } from '@/components/stock/fetch/fetch-list'
import type { ItemCommand } from '@/composables/useCommand'
import { at, call, instant, item, unit } from '../../../test/calls'
import { mountWith } from '../../../test/mount'
import { useScanning } from './useScanning'

const STEM = '0109521100200059'
const HEAD = '0109521100100489'
const LOT = '1728113010L26A014'

const waits = (gtin: string, label: string, neededAt = '11:02') =>
  call([item({ label, variant: null, unit: unit({ gtin }) })], { neededAt: instant(neededAt) })
const goesBack = () =>
  call([
    item({
      label: 'Head 52',
      variant: null,
      stage: 'pulled',
      outcome: 'returned',
      unit: unit({ gtin: '09521100100441' }),
      putBack: { toCode: 'A1-8', since: instant('10:40'), inspect: false, walkOrder: 80 },
    }),
  ])

/** The house's reading, without a line to it. */
async function parse(scan: Scan): Promise<LabelView> {
  const read = parseScan(scan, '2026-06-02')
  if (read.ok) return { ...read.label, warnings: [...read.label.warnings] }
  throw new ApiProblem('label-unreadable', 422, { detail: read.detail, reason: read.reason })
}

let given: { label: string; command: ItemCommand }[] = []
let refusal: ApiProblem | NotSent | null = null
beforeEach(() => {
  given = []
  refusal = null
  vi.spyOn(labelsApi, 'parse').mockImplementation(parse)
})
afterEach(() => vi.restoreAllMocks())

function scanner(calls: CallView[]) {
  let scanning!: ReturnType<typeof useScanning>
  const actions: Parameters<typeof useScanning>[1] = {
    give: async (of, command) => {
      given.push({ label: of.label, command })
      if (refusal) return { ok: false, why: refusal }
      const answer = calls.find((one) => one.items.some(({ id }) => id === of.id))!
      return {
        ok: true,
        value: { ...answer, items: answer.items.map((one) => ({ ...one, stage: 'pulled' })) },
      }
    },
    send: async () => undefined,
  }
  const Host = defineComponent({
    setup() {
      scanning = useScanning(() => fetchList(calls, at('10:45')), actions)
      return () => h('i')
    },
  })
  mountWith(Host, { role: 'core' })
  const say = async (...scans: Scan[]) => {
    for (const one of scans) await scanning.scan(one)
    const { tone, what, now } = scanning.result.value
    return `${tone}: ${[what, now].filter(Boolean).join(' / ')}`
  }
  return { say, scanning: () => scanning }
}

describe('what is said after a scan, and what was sent', () => {
  test('a whole label marks its item pulled, with the scan as it came', async () => {
    const { say } = scanner([waits('09521100200059', 'Stem 5')])
    expect(await say(STEM + LOT)).toBe('done: Stem 5 for room 3 / Pulled: lay it in the hatch')
    expect(given).toEqual([{ label: 'Stem 5', command: { name: 'pull', scan: STEM + LOT } }])
  })

  test('of several calls of the product the most urgent, and it says how many there are', async () => {
    const { say, scanning } = scanner([
      waits('09521100200059', 'Later', '11:30'),
      waits('09521100200059', 'Sooner', '10:50'),
    ])
    expect(await say(STEM + LOT)).toMatch(/^done: Sooner/)
    expect(scanning().result.value.facts).toEqual(['The most urgent of 2 calls for this product'])
  })

  test('half a label sends nothing and asks for the other barcode; the two go together', async () => {
    const { say } = scanner([waits('09521100200059', 'Stem 5')])
    expect(await say(STEM)).toMatch(/^ask: Half a label/)
    expect(given).toEqual([])
    expect(await say(LOT)).toMatch(/^done: Stem 5/)
    expect(given[0]?.command).toEqual({ name: 'pull', scan: [STEM, LOT] })
  })

  test('a label that has only one barcode may go on alone', async () => {
    const { say, scanning } = scanner([waits('09521100200059', 'Stem 5')])
    await say(STEM)
    scanning().result.value.goOn?.()
    await vi.waitFor(() => expect(given).toHaveLength(1))
    expect(given[0]?.command).toEqual({ name: 'pull', scan: STEM })
  })

  test('what nobody called is named, and nothing is sent', async () => {
    const { say } = scanner([waits('09521100200059', 'Stem 5')])
    expect(await say(HEAD + LOT)).toMatch(/^stop: Not on the list \/ Nobody has called GTIN 09521100100489/)
    expect(given).toEqual([])
  })

  test('a refusal says which rule, with both values', async () => {
    refusal = new ApiProblem('unit-recalled', 409)
    const { say, scanning } = scanner([waits('09521100200059', 'Stem 5')])
    expect(await say(STEM + LOT)).toMatch(/^stop: Stem 5 for room 3: not pulled \/ The lot has been recalled/)
    refusal = new ApiProblem('label-differs', 409, {
      expected: { useByOn: '2028-11-30' },
      scanned: { useByOn: '2029-11-30' },
    })
    await say(STEM + LOT)
    expect(scanning().result.value.facts).toEqual([
      'In the record: use by 30 Nov 2028',
      'On the label: use by 30 Nov 2029',
    ])
  })

  test('with the line away nothing counts as pulled', async () => {
    refusal = new NotSent('offline')
    const { say } = scanner([waits('09521100200059', 'Stem 5')])
    expect(await say(STEM + LOT)).toMatch(/^stop: Not sent/)
    vi.mocked(labelsApi.parse).mockRejectedValueOnce(new NotSent('offline'))
    expect(await say(STEM + LOT)).toMatch(/^stop: Not sent/)
  })

  test('a put-back: the package, then its bin, and no other bin', async () => {
    const { say } = scanner([goesBack()])
    expect(await say('0109521100100441' + LOT)).toBe(
      'ask: Head 52 goes back to A1-8 / Scan the bin when it lies there',
    )
    expect(await say('A1-9')).toBe('stop: A1-9 is not the bin: this package belongs in A1-8')
    expect(given).toEqual([])
    expect(await say('a1-8')).toBe('done: Head 52 is back in A1-8 / It may be used again')
    expect(given).toEqual([{ label: 'Head 52', command: { name: 'shelve', binCode: 'A1-8' } }])
  })

  test('a bin alone puts nothing back', async () => {
    const { say } = scanner([goesBack()])
    expect(await say('A1-8')).toMatch(/^ask: A1-8 is where Head 52 belongs/)
    expect(given).toEqual([])
  })
})
