import type { Browser, Page } from '@playwright/test'
import { expect } from '@playwright/test'
import type { House } from './house.js'

/** The people of the demo, by the first name that is their address. */
export const PINS = { juniper: '1301', pim: '2402', lotte: '2403', tobiah: '3502' } as const

const NAMES = {
  juniper: 'Juniper Hathersedge',
  pim: 'Pim Ottershaw',
  lotte: 'Lotte Brackenbury',
  ifeoma: 'Ifeoma Brindlecombe',
  tobiah: 'Tobiah Luskett',
  jory: 'Jory Penhallick',
  casimir: 'Casimir Dolebrook',
  magda: 'Magda Fairweatherly',
  soren: 'Soren Pellowby',
  nell: 'Nell Ashgrovian',
} as const
export type Person = keyof typeof NAMES
export const nameOf = (person: Person): string => NAMES[person]

/** Screens as they are used: the draped tablet, the desk, the core's tablet, a phone. */
export const SCREENS = {
  tablet: { width: 1280, height: 800 },
  desk: { width: 1440, height: 900 },
  core: { width: 834, height: 1112 },
  phone: { width: 390, height: 844 },
  wall: { width: 1920, height: 1080 },
} as const

export interface Opened {
  readonly path: string
  readonly screen?: keyof typeof SCREENS
  readonly theme?: 'light' | 'dark'
}

/** A person at a screen of their own: a browser context each, signed in by the demo's list of people. */
export async function at(browser: Browser, house: House, person: Person, opened: Opened): Promise<Page> {
  const context = await browser.newContext({
    baseURL: house.url,
    viewport: SCREENS[opened.screen ?? 'desk'],
    colorScheme: opened.theme ?? 'light',
    reducedMotion: 'reduce',
    locale: 'en-GB',
    timezoneId: 'UTC',
  })
  const page = await context.newPage()
  await page.goto('/sign-in')
  await page.getByRole('button', { name: `Sign in as ${NAMES[person]}` }).click()
  await expect(page).not.toHaveURL(/sign-in/)
  await page.goto(opened.path)
  await expect(page.getByText('Live', { exact: true }).first()).toBeVisible()
  return page
}

/**
 * What a keyboard-wedge scanner does: a burst of keys, closed by Enter, wherever the focus is. The keys are made
 * in the page, for a burst sent one by one from outside would be too slow to be a scanner's.
 */
export async function scan(page: Page, label: string): Promise<void> {
  await page.evaluate((text) => {
    const target = document.activeElement ?? document.body
    for (const key of [...text, 'Enter'])
      target.dispatchEvent(
        new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true, composed: true }),
      )
  }, label)
}
