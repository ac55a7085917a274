import { describe, expect, test } from 'vitest'
import { CATEGORIES, CATEGORY_RULES, FREE_TEXT_MAX, OUTCOMES, STAGES } from './categories.js'

describe('what may be called', () => {
  test.each([
    { category: 'implant', stages: STAGES, holdsUnit: true, check: 'two-people', doneAs: 'implanted' },
    { category: 'sterile', stages: STAGES, holdsUnit: true, check: 'one-person', doneAs: 'used' },
    { category: 'tray', stages: STAGES, holdsUnit: true, check: 'one-person', doneAs: 'used' },
    {
      category: 'other',
      stages: ['called', 'accepted', 'inRoom'],
      holdsUnit: false,
      check: 'none',
      doneAs: 'used',
    },
  ] as const)(
    '$category: $stages.length stations, check by $check, done as $doneAs',
    ({ category, ...rule }) => {
      expect(CATEGORY_RULES[category]).toEqual(rule)
    },
  )

  test('four categories, six stations, seven ends, 60 characters of free text', () => {
    expect(CATEGORIES).toHaveLength(4)
    expect(STAGES).toEqual(['called', 'accepted', 'pulled', 'inRoom', 'verified', 'opened'])
    expect([...OUTCOMES].sort()).toEqual(
      ['implanted', 'used', 'notImplanted', 'returned', 'changed', 'cancelled', 'enteredInError'].sort(),
    )
    expect(FREE_TEXT_MAX).toBe(60)
  })
})
