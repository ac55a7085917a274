import { makeCall } from '@bellpull/contracts'
import { describe, expect, test } from 'vitest'
import { id } from '../../../../test/views'
import {
  bodyOf,
  instead,
  isEmpty,
  minutesOf,
  newDraft,
  rangesIn,
  sayLines,
  stepMinutes,
  touch,
  withMinutes,
  withQuantity,
  type Draft,
  type DraftLine,
} from './draft'

const empty = newDraft({ surgeon: { id: id(901), name: 'Juniper Hathersedge' } })
const head = (size: number, variant = 'concentric'): DraftLine => ({
  railKey: 'Sallowby/head',
  kind: 'head',
  catalogueItemId: id(size + (variant === 'concentric' ? 500 : 600)),
  part: 'Head',
  size: String(size),
  variant,
  said: `head ${size} ${variant}`,
  quantity: 1,
  inNumber: false,
})
const stem: DraftLine = {
  ...head(9),
  railKey: 'Sallowby/stem',
  kind: 'stem',
  catalogueItemId: id(709),
  part: 'Stem',
  variant: 'press-fit',
  said: 'stem 9',
}
const cement: DraftLine = {
  ...stem,
  railKey: '/cement',
  kind: 'cement',
  catalogueItemId: id(801),
  part: 'Cement',
  size: '40',
  said: 'bone cement 40 standard',
  inNumber: true,
}
const touched = (draft: Draft, ...lines: DraftLine[]): Draft => lines.reduce(touch, draft)
const sizesOf = (draft: Draft): string[] => draft.lines.map(({ size }) => size)

describe('three touches', () => {
  test('head, stem: early in 10 minutes, called by the surgeon of the case, and nothing else chosen', () => {
    const draft = touched(empty, head(50), stem)
    expect(draft).toMatchObject({ kind: 'early', calledBy: id(901) })
    expect(minutesOf(draft)).toBe(10)
    expect(sayLines(draft.lines)).toBe('head 50 concentric, stem 9')
    expect(makeCall.parse(bodyOf(draft, { side: 'left' }))).toEqual({
      kind: 'early',
      neededInMinutes: 10,
      calledBy: id(901),
      side: 'left',
      items: [
        { catalogueItemId: id(550), quantity: 1 },
        { catalogueItemId: id(709), quantity: 1 },
      ],
    })
  })

  test.each([
    { what: 'a second touch lets go', lines: [head(50), head(50)], left: [] },
    { what: 'a rail gives one size', lines: [head(50), head(48)], left: ['48'] },
    { what: 'the other variant takes its place', lines: [head(50), head(50, 'eccentric')], left: ['50'] },
    {
      what: 'cement stands beside other cement',
      lines: [cement, { ...cement, catalogueItemId: id(802) }],
      left: ['40', '40'],
    },
  ])('$what', ({ lines, left }) => {
    expect(sizesOf(touched(empty, ...lines))).toEqual(left)
  })
})

describe('stand by', () => {
  const range = touched({ ...empty, kind: 'standby' }, head(48), head(50), head(52))
  test('takes a range, said in one breath, and has no time', () => {
    expect(sizesOf(range)).toEqual(['48', '50', '52'])
    expect(sayLines(range.lines)).toBe('head 48, 50, 52 concentric')
    expect(makeCall.safeParse(bodyOf(range, { side: 'left' })).success).toBe(true)
    expect(bodyOf(range, { side: 'left' }).neededInMinutes).toBeNull()
  })

  test('a range does not become another kind of call by itself', () => {
    expect(rangesIn({ ...range, kind: 'confirmed' }).map((group) => group.map(({ size }) => size))).toEqual([
      ['48', '50', '52'],
    ])
    expect(rangesIn(touched(empty, cement, { ...cement, catalogueItemId: id(802) }))).toEqual([])
  })
})

describe('times and numbers', () => {
  test('each kind keeps its own minutes', () => {
    const early = withMinutes(empty, 20)
    expect(minutesOf(early)).toBe(20)
    expect(minutesOf({ ...early, kind: 'confirmed' })).toBe(0)
    expect(withMinutes({ ...early, kind: 'standby' }, 5).minutes).toEqual(early.minutes)
  })

  test.each([
    { from: 0, by: -1, to: 0 },
    { from: 0, by: 1, to: 5 },
    { from: 20, by: 1, to: 30 },
    { from: 45, by: 1, to: 45 },
  ] as const)('from $from, $by: $to minutes', ({ from, by, to }) => {
    expect(stepMinutes(from, by)).toBe(to)
  })

  test.each([
    { asked: 0, kept: 1 },
    { asked: 2, kept: 2 },
    { asked: 10, kept: 9 },
  ])('$asked asked, $kept kept', ({ asked, kept }) => {
    const draft = withQuantity(touched(empty, cement), cement.catalogueItemId, asked)
    expect(draft.lines[0]?.quantity).toBe(kept)
  })

  test('a number is said before what it counts, and words stand last', () => {
    const draft = withQuantity(touched(empty, stem, cement), cement.catalogueItemId, 2)
    expect(sayLines(draft.lines, ' long retractor ')).toBe(
      'stem 9, 2 × bone cement 40 standard, long retractor',
    )
  })

  test('words alone are a call too', () => {
    expect(isEmpty({ ...empty, text: '  ' })).toBe(true)
    expect(bodyOf({ ...empty, text: ' long retractor ' }, { side: 'right' }).items).toEqual([
      { text: 'long retractor' },
    ])
  })
})

test('what there is instead takes the place of the choice on its rail, and of nothing else', () => {
  expect(sizesOf(instead(touched(empty, head(48, 'eccentric'), stem), head(48)))).toEqual(['9', '48'])
})
