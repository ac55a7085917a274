import type { RailView, SizeView } from '@bellpull/contracts'
import { describe, expect, test } from 'vitest'
import {
  firstVariant,
  fractionOf,
  isMeasured,
  mmAt,
  needsVariant,
  pagesOf,
  planMark,
  railKey,
  rowsOf,
  ruleOf,
  sizesOf,
  soonUseBy,
  spokenSize,
  toCutStep,
  type PlanLine,
} from './rails'

const aSize = (label: string, given: Partial<SizeView> = {}): SizeView => ({
  catalogueItemId: `${label}/${given.variant ?? ''}`,
  ref: label,
  label,
  variant: null,
  diameterMm: null,
  heightMm: null,
  side: 'either',
  inRoom: 0,
  inCore: 1,
  heldElsewhere: 0,
  stocked: true,
  soonestUseByOn: null,
  ...given,
})
const aRail = (kind: RailView['kind'], sizes: SizeView[], given: Partial<RailView> = {}): RailView => ({
  kind,
  label: kind,
  system: 'Sallowby',
  sizes,
  ...given,
})
const HEADS = [38, 40, 42, 44, 46, 48, 50, 52, 54, 56]
const heads = (variant: string): SizeView[] =>
  HEADS.map((mm) => aSize(String(mm), { variant, diameterMm: mm, heightMm: mm * 0.387 }))
const HEAD_RAIL = aRail('head', [...heads('concentric'), ...heads('eccentric')])
const plan = (given: Partial<PlanLine> = {}): PlanLine => ({
  kind: 'head',
  system: 'Sallowby',
  variant: 'concentric',
  planned: '50',
  from: '48',
  to: '52',
  hint: null,
  ...given,
})

describe('screenfuls of rails', () => {
  const of = (...kinds: RailView['kind'][]) => kinds.map((kind) => aRail(kind, [aSize('1'), aSize('2')]))
  test.each([
    {
      what: 'a shoulder',
      kinds: ['head', 'stem', 'glenoid', 'cement'],
      pages: ['head stem', 'glenoid cement'],
    },
    {
      what: 'a hip',
      kinds: ['head', 'stem', 'shell', 'liner', 'cement'],
      pages: ['shell liner', 'stem head', 'cement'],
    },
    {
      what: 'a knee',
      kinds: ['femur', 'tibia', 'insert', 'patella', 'cement'],
      pages: ['femur tibia', 'insert patella', 'cement'],
    },
  ] as { what: string; kinds: RailView['kind'][]; pages: string[] }[])(
    '$what: $pages',
    ({ kinds, pages }) => {
      const found = pagesOf(of(...kinds)).map((page) => page.rails.map(({ kind }) => kind).join(' '))
      expect(found).toEqual(pages)
    },
  )

  test('supplies of one kind stand side by side; every rail is on one page only', () => {
    const supply = (label: string) => aRail('other', [aSize(label)], { system: '', label })
    const pages = pagesOf([...of('head', 'stem'), supply('Mixing set'), supply('Suction tip')])
    expect(pages.map(({ rails }) => rails.map((rail) => rail.sizes.length))).toEqual([[2, 2], [2]])
  })
})

describe('variants', () => {
  test.each([
    { what: 'the plan names one: that one', line: plan(), variant: 'concentric' },
    { what: 'the plan names none: nobody guesses', line: plan({ variant: null }), variant: null },
    { what: 'no plan: nobody guesses', line: null, variant: null },
    {
      what: 'the plan names one that the rail has not: nobody guesses',
      line: plan({ variant: 'giant' }),
      variant: null,
    },
  ])('$what', ({ line, variant }) => {
    expect(firstVariant(HEAD_RAIL, line)).toBe(variant)
  })

  test('a rail with one variant needs no switch', () => {
    expect(needsVariant(aRail('stem', heads('press-fit')))).toBe(false)
    expect(needsVariant(HEAD_RAIL)).toBe(true)
    expect(sizesOf(HEAD_RAIL, 'eccentric')).toHaveLength(10)
  })

  test('two rails of one kind in two systems have two names', () => {
    expect(railKey(aRail('stem', []))).not.toBe(railKey(aRail('stem', [], { system: 'Withyholt' })))
  })
})

describe('rows of keys', () => {
  const many = (count: number) => Array.from({ length: count }, (_, at) => aSize(String(at + 1)))
  const necks = ['28 +0', '28 +4', '32 -4', '32 +0', '32 +4', '36 -4', '36 +0'].map((label) => aSize(label))
  test.each([
    { what: 'twelve where twelve fit', sizes: many(12), most: 12, rows: [12] },
    { what: 'thirteen where twelve fit, evenly', sizes: many(13), most: 12, rows: [7, 6] },
    { what: 'a head and its necks are not torn apart', sizes: necks, most: 6, rows: [2, 3, 2] },
    { what: 'none', sizes: [], most: 12, rows: [] },
  ])('$what', ({ sizes, most, rows }) => {
    expect(rowsOf(sizes, most).map((row) => row.length)).toEqual(rows)
  })

  test('a rule stands only over diameters that grow', () => {
    expect(ruleOf(heads('concentric'))).toEqual(HEADS)
    expect(ruleOf([aSize('36 +0', { diameterMm: 36 }), aSize('36 +4', { diameterMm: 36 })])).toBeNull()
    expect(ruleOf(many(3))).toBeNull()
  })
})

describe('the millimetre rule', () => {
  test.each([
    { mm: 38, at: 0.05 },
    { mm: 50, at: 0.65 },
    { mm: 49, at: 0.6 },
    { mm: 37, at: 0 },
    { mm: 57, at: 1 },
  ])('$mm mm lies at $at of the row', ({ mm, at }) => {
    expect(fractionOf(HEADS, mm)).toBeCloseTo(at, 9)
    expect(mmAt(HEADS, at)).toBeCloseTo(mm, 9)
  })

  test('a touch is read in half millimetres', () => {
    expect(toCutStep(49.7)).toBe(49.5)
    expect(toCutStep(49.8)).toBe(50)
  })

  test('a cut is laid beside heads with a base, not beside balls with a neck', () => {
    expect(isMeasured(HEAD_RAIL, heads('concentric'))).toBe(true)
    expect(isMeasured(aRail('stem', heads('x')), heads('x'))).toBe(false)
    expect(
      isMeasured(aRail('head', []), [aSize('36 +0', { diameterMm: 36 }), aSize('36 +4', { diameterMm: 36 })]),
    ).toBe(false)
  })
})

describe('what the plan and the shelf say of a size', () => {
  test.each([
    { label: '46', variant: 'concentric', mark: null },
    { label: '48', variant: 'concentric', mark: 'inRange' },
    { label: '50', variant: 'concentric', mark: 'planned' },
    { label: '52', variant: 'concentric', mark: 'inRange' },
    { label: '50', variant: 'eccentric', mark: null },
  ])('$label $variant: $mark', ({ label, variant, mark }) => {
    const sizes = heads(variant)
    expect(
      planMark(
        sizes.find((size) => size.label === label)!,
        sizes,
        plan(),
      ),
    ).toBe(mark)
  })

  test.each([
    { on: '2026-12-31', said: '2026-12-31' },
    { on: '2027-01-01', said: null },
    { on: null, said: null },
  ])('soonest use-by $on on 1 December: $said', ({ on, said }) => {
    expect(soonUseBy(aSize('50', { soonestUseByOn: on }), '2026-12-01')).toBe(said)
  })

  test.each([
    { rail: { kind: 'head', label: 'Humeral head' }, label: '50', said: 'head 50' },
    { rail: { kind: 'other', label: 'Drill bit' }, label: '3.2', said: 'drill bit 3.2' },
    { rail: { kind: 'other', label: 'Tray' }, label: 'Humeral tray', said: 'humeral tray' },
    { rail: { kind: 'cement', label: 'Bone cement' }, label: '40', said: 'bone cement 40' },
  ] as const)('$rail.label $label is said "$said"', ({ rail, label, said }) => {
    expect(spokenSize(rail, { label }, rail.kind)).toBe(said)
  })
})
