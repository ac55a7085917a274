import AxeBuilder from '@axe-core/playwright'
import type { Page } from '@playwright/test'
import { broughtToRoom, caseOf, client, sizesInCore } from '../api.js'
import { expect, test } from '../fixtures.js'
import { at, SCREENS } from '../people.js'
import { picture } from '../pictures.js'

/** Serious and critical findings of axe (WCAG 2.2 A and AA rules), by rule. */
async function findings(page: Page): Promise<string[]> {
  const { violations } = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa'])
    .analyze()
  return violations
    .filter(({ impact }) => impact === 'serious' || impact === 'critical')
    .map(({ id, nodes }) => `${id}: ${nodes.map((node) => node.target.join(' ')).join('; ')}`)
}

/** Nothing may stick out to the side, at any width that a screen is made for. */
const sticksOut = (page: Page): Promise<number> =>
  page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth)

for (const theme of ['light', 'dark'] as const) {
  test(`every screen, ${theme}: fits its widths and has no serious accessibility finding`, async ({
    browser,
    house,
  }) => {
    test.setTimeout(240_000)
    const reader = await client(house, 'magda')
    const shoulder = await caseOf(reader, '0412-6')
    const [head] = await sizesInCore(reader, shoulder, 'head', 'concentric')
    const { item } = await broughtToRoom(house, shoulder, head!.catalogueItemId)

    const outside = await browser.newContext({
      baseURL: house.url,
      colorScheme: theme,
      reducedMotion: 'reduce',
    })
    const door = await outside.newPage()
    await door.goto('/sign-in')
    await expect(door.getByRole('button', { name: /^Sign in as Pim/ })).toBeVisible()
    expect.soft(await findings(door), 'sign-in').toEqual([])
    await outside.close()

    const screens = [
      {
        name: 'room-tablet',
        person: 'pim',
        path: '/rooms/2',
        shown: 'Called for this case',
        widths: ['tablet', 'desk', 'phone'],
      },
      {
        name: 'dispatch',
        person: 'ifeoma',
        path: '/dispatch',
        shown: 'Dispatch',
        widths: ['desk', 'tablet', 'phone', 'wall'],
      },
      {
        name: 'to-fetch',
        person: 'casimir',
        path: '/fetch',
        shown: 'To fetch',
        widths: ['core', 'tablet', 'phone'],
      },
      {
        name: 'verify',
        person: 'ifeoma',
        path: `/verify/${item.id}`,
        shown: 'Verify before opening',
        widths: ['tablet', 'core', 'phone'],
      },
      {
        name: 'case',
        person: 'magda',
        path: `/cases/${shoulder.id}`,
        shown: 'Shoulder, anatomic total',
        widths: ['desk', 'tablet', 'phone'],
      },
      { name: 'cases', person: 'soren', path: '/cases', shown: 'Cases', widths: ['desk', 'phone'] },
    ] as const
    for (const screen of screens) {
      const page = await at(browser, house, screen.person, {
        path: screen.path,
        screen: screen.widths[0],
        theme,
      })
      await expect(page.getByText(screen.shown).first()).toBeVisible()
      for (const width of screen.widths) {
        await page.setViewportSize(SCREENS[width])
        expect.soft(await sticksOut(page), `${screen.name} at ${width}`).toBeLessThanOrEqual(0)
        if (width === screen.widths[0] || width === 'phone')
          expect.soft(await findings(page), `${screen.name} at ${width}`).toEqual([])
        await picture(page, `${screen.name}-${width}-${theme}`)
      }
      await page.context().close()
    }
  })
}
