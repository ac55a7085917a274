import { describe, expect, test } from 'vitest'
import css from '../assets/tokens.css?raw'
import { contrastRatio } from './contrast'
import { DARK, LIGHT, SHAPE_ON, TEXT_ON, TOKEN_NAMES } from './tokens'

describe('contrast ratio (WCAG 2.2)', () => {
  // Published: black on white is 21 to 1 (definition of contrast ratio). #767676 on white is the well-known
  // lightest grey that passes 4.5, and #949494 the one that passes 3 (common practice, no source).
  test.each([
    { a: '#000000', b: '#ffffff', ratio: 21 },
    { a: '#ffffff', b: '#ffffff', ratio: 1 },
    { a: '#767676', b: '#ffffff', ratio: 4.54 },
    { a: '#949494', b: '#ffffff', ratio: 3.03 },
  ])('$a on $b is $ratio to 1, either way round', ({ a, b, ratio }) => {
    expect(contrastRatio(a, b)).toBeCloseTo(ratio, 2)
    expect(contrastRatio(b, a)).toBeCloseTo(ratio, 2)
  })
})

describe.each([
  { name: 'light', tokens: LIGHT },
  { name: 'dark', tokens: DARK },
])('the $name set', ({ tokens }) => {
  test.each(TEXT_ON)('text in %s on %s has at least 4.5 to 1', (text, ground) => {
    expect(contrastRatio(tokens[text], tokens[ground])).toBeGreaterThanOrEqual(4.5)
  })

  test.each(SHAPE_ON)('a shape in %s on %s has at least 3 to 1', (shape, ground) => {
    expect(contrastRatio(tokens[shape], tokens[ground])).toBeGreaterThanOrEqual(3)
  })
})

test('every token reaches the styles as a custom property', () => {
  for (const name of TOKEN_NAMES) expect(css).toContain(`--${name}: rgb(var(--v-theme-${name}));`)
})
