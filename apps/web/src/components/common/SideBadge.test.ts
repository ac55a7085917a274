import { expect, test } from 'vitest'
import { mountWith } from '../../../test/mount'
import SideBadge from './SideBadge.vue'

test.each([
  { side: 'left', word: 'LEFT', points: 1 },
  { side: 'right', word: 'RIGHT', points: 1 },
  { side: 'either', word: 'EITHER', points: 2 },
])('$side is said by the word $word, a shape and a tone of its own', ({ side, word, points }) => {
  const badge = mountWith(SideBadge, { props: { side } })
  expect(badge.text()).toBe(word)
  expect(badge.findAll('path')).toHaveLength(points)
  expect(badge.classes()).toContain(side)
})

test('the points of left and right lie on opposite ends', () => {
  const html = (side: string) => mountWith(SideBadge, { props: { side } }).html()
  expect(html('left').indexOf('<svg')).toBeLessThan(html('left').indexOf('LEFT'))
  expect(html('right').indexOf('<svg')).toBeGreaterThan(html('right').indexOf('RIGHT'))
})
