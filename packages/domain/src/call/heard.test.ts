import { describe, expect, test } from 'vitest'
import { isAsHeard, type Heard, type Spoken } from './heard.js'

const HEAD: Spoken = { size: '50', side: 'either' }
const FEMUR: Spoken = { size: '5', side: 'left' }
const HIP_HEAD: Spoken = { size: '32 +4', side: 'either' }

describe('what was heard against the part, for a case on the left', () => {
  test.each<[string, Heard, Spoken, boolean]>([
    ['the size, and that it fits either side', { size: '50', side: 'either' }, HEAD, true],
    ['the size, and the side of the case for a part of either', { size: '50', side: 'left' }, HEAD, true],
    ['the other side for a part of either', { size: '50', side: 'right' }, HEAD, false],
    ['spaces and a leading nought', { size: ' 050 ', side: 'either' }, HEAD, true],
    ['another size', { size: '52', side: 'either' }, HEAD, false],
    ['half of the size', { size: '5', side: 'either' }, HEAD, false],
    ['the size with a nought behind it', { size: '500', side: 'either' }, HEAD, false],
    ['a neck with and without the space', { size: '32+4', side: 'either' }, HIP_HEAD, true],
    ['a head without its neck', { size: '32', side: 'either' }, HIP_HEAD, false],
    ['the side of a part that has one', { size: '5', side: 'left' }, FEMUR, true],
    ['either for a part that has a side', { size: '5', side: 'either' }, FEMUR, false],
    ['the other side of a part that has one', { size: '5', side: 'right' }, FEMUR, false],
    ['letters small or large', { size: 'm', side: 'either' }, { size: 'M', side: 'either' }, true],
  ])('%s: $3', (_what, heard, part, expected) => {
    expect(isAsHeard(heard, part, 'left')).toBe(expected)
  })
})
