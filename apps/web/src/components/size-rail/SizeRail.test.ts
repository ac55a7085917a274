import type { RailView } from '@bellpull/contracts'
import { afterEach, describe, expect, test } from 'vitest'
import { mountWith } from '../../../test/mount'
import SizeRail from './SizeRail.vue'

afterEach(() => {
  document.body.innerHTML = ''
})

const rail: RailView = {
  kind: 'head',
  label: 'Humeral head',
  system: 'Sallowby',
  sizes: ['concentric', 'eccentric'].flatMap((variant) =>
    [46, 48, 50, 52].map((mm) => ({
      catalogueItemId: `${mm} ${variant}`,
      ref: `SLB-HD-${mm}`,
      label: String(mm),
      variant,
      diameterMm: mm,
      heightMm: mm * 0.387,
      side: 'either' as const,
      inRoom: mm === 48 ? 1 : 0,
      inCore: mm === 52 ? 0 : 3,
      heldElsewhere: mm === 52 ? 1 : 0,
      stocked: true,
      soonestUseByOn: mm === 46 ? '2026-12-27' : '2028-01-01',
    })),
  ),
}
const plan = {
  kind: 'head',
  system: 'Sallowby',
  variant: 'concentric',
  planned: '50',
  from: '48',
  to: '52',
  hint: 'Other shoulder: head 48',
}

const show = (given: Record<string, unknown> = {}) =>
  mountWith(SizeRail, {
    role: 'scrub',
    props: {
      rail,
      plan,
      variant: 'concentric',
      chosen: new Set<string>(),
      several: false,
      arithmetic: true,
      today: '2026-12-01',
      locked: false,
      plain: false,
      ...given,
    },
  })
const names = (view: ReturnType<typeof show>) =>
  view.findAll('[role=option] > .said').map((name) => name.text())

describe('what a screen reader hears', () => {
  test('size, variant, stock, plan and date of every key', () => {
    expect(names(show())).toEqual([
      '46 concentric, 3 in the core, 0 in this room, use by 27 Dec',
      '48 concentric, 3 in the core, 1 in this room, in the plan',
      '50 concentric, 3 in the core, 0 in this room, most likely by the plan',
      '52 concentric, none free, in the plan, 1 held elsewhere',
    ])
  })

  test('the plan in words, and the hint as a hint', () => {
    const words = show().get('.rail__plan').text()
    expect(words).toContain('plan 48 to 52, 50 most likely')
    expect(words).toContain('Other shoulder: head 48')
  })
})

describe('keys', () => {
  test('none free can still be called: the house says who holds it', async () => {
    const view = show()
    await view.findAll('[role=option]')[3]!.trigger('click')
    expect(view.emitted('choose')).toHaveLength(1)
  })

  test.each([
    { what: 'before the kind is said', given: { variant: null } },
    { what: 'in a closed case', given: { locked: true } },
  ])('$what nothing can be chosen', async ({ given }) => {
    const view = show(given)
    await view.findAll('[role=option]')[0]!.trigger('click')
    expect(view.emitted('choose')).toBeUndefined()
  })

  test('before the kind is said each size shows what there is of all of them', () => {
    const view = show({ variant: null })
    expect(names(view)[1]).toBe('48, 6 in the core, 2 in this room')
    expect(view.text()).toContain('Choose which kind first')
  })

  test('one key is in the tab order, the arrows lead from key to key', async () => {
    const view = show({ chosen: new Set(['50 concentric']) })
    const stops = () => view.findAll('[role=option]').filter((key) => key.attributes('tabindex') === '0')
    expect(stops().map((key) => key.get('.said').text())).toEqual([names(view)[2]])
    await view.get('[role=listbox]').trigger('keydown', { key: 'ArrowRight' })
    expect(document.activeElement?.textContent).toContain('52 concentric')
    await view.get('[role=listbox]').trigger('keydown', { key: 'Home' })
    expect(stops().map((key) => key.get('.said').text())).toEqual([names(view)[0]])
  })
})

describe('cut surface', () => {
  test.each([
    { what: 'where the house has settled it', given: {}, there: true },
    { what: 'not where it has not', given: { arithmetic: false }, there: false },
  ])('is offered $what', ({ given, there }) => {
    expect(show(given).find('output').exists()).toBe(there)
  })
})
