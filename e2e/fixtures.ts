import { test as base } from '@playwright/test'
import { openHouse, type House } from './house.js'

/** Each journey runs in a house of its own, so that none can see what another one did. */
export const test = base.extend<{ house: House }>({
  house: async ({}, use) => {
    const house = await openHouse()
    await use(house)
    await house.close()
  },
  baseURL: async ({ house }, use) => {
    await use(house.url)
  },
})

export { expect } from '@playwright/test'
