import { administer } from '../../apps/api/dev/administer.js'
import { caseOf, client, itemsOf, sizesInCore } from '../api.js'
import { expect, test } from '../fixtures.js'
import { at } from '../people.js'

/** How soon after the line's return every board has to be right. */
const RIGHT_AGAIN_MS = 5_000

test('a killed server: boards say that they are old, and are right within five seconds of its return', async ({
  browser,
  house,
}) => {
  const reader = await client(house, 'magda')
  const shoulder = await caseOf(reader, '0412-6')
  const [head] = await sizesInCore(reader, shoulder, 'head', 'concentric')
  const nurse = await at(browser, house, 'ifeoma', { path: '/dispatch' })

  await house.stopServer()
  await expect(nurse.getByText(/Line lost/).first()).toBeVisible()
  await house.startServer()
  await expect(nurse.getByText('Live', { exact: true }).first()).toBeVisible({ timeout: RIGHT_AGAIN_MS })

  // What was called while this board was away, or right after, is there once and only once.
  const again = await client(house, 'magda')
  await again.post(`/cases/${shoulder.id}/calls`, {
    kind: 'early',
    neededInMinutes: 10,
    calledBy: shoulder.surgeon.id,
    side: shoulder.side,
    items: [{ catalogueItemId: head!.catalogueItemId, quantity: 1 }],
  })
  const rows = nurse.locator('[data-row]', { hasText: `Head ${head!.label} concentric` })
  await expect(rows).toHaveCount(1, { timeout: RIGHT_AGAIN_MS })
  await house.restartServer()
  await expect(nurse.getByText('Live', { exact: true }).first()).toBeVisible({
    timeout: RIGHT_AGAIN_MS + 3_000,
  })
  await expect(rows).toHaveCount(1)
})

test('connections to the database cut: the house goes on, nothing is lost or doubled', async ({
  browser,
  house,
}) => {
  const nurse = await at(browser, house, 'ifeoma', { path: '/dispatch' })
  const before = await client(house, 'magda')
  const shoulder = await caseOf(before, '0412-6')
  const [stem] = await sizesInCore(before, shoulder, 'stem', 'press-fit')
  await administer(
    house.databaseUrl,
    `SELECT pg_terminate_backend(pid) FROM pg_stat_activity WHERE datname = current_database() AND pid <> pg_backend_pid()`,
  )
  await expect
    .poll(async () => (await fetch(`${house.url}/api/v1/health/ready`)).status, { timeout: RIGHT_AGAIN_MS })
    .toBe(200)
  await before.post(`/cases/${shoulder.id}/calls`, {
    kind: 'early',
    neededInMinutes: 10,
    calledBy: shoulder.surgeon.id,
    side: shoulder.side,
    items: [{ catalogueItemId: stem!.catalogueItemId, quantity: 1 }],
  })
  await expect(nurse.locator('[data-row]', { hasText: `Stem ${stem!.label} press-fit` })).toHaveCount(1, {
    timeout: RIGHT_AGAIN_MS,
  })
})

test('a call made while the line is away is kept as not sent, and sent only when a person says so', async ({
  browser,
  house,
}) => {
  const reader = await client(house, 'magda')
  const shoulder = await caseOf(reader, '0412-6')
  const [head] = await sizesInCore(reader, shoulder, 'head', 'concentric')
  const tablet = await at(browser, house, 'pim', { path: '/rooms/2', screen: 'tablet' })
  await tablet.getByRole('option', { name: new RegExp(`^(Head )?${head!.label} concentric,`) }).click()

  const count = async () =>
    (await itemsOf(reader, shoulder.id)).filter(({ item }) => item.catalogueItemId === head!.catalogueItemId)
      .length
  const before = await count()
  await tablet.context().setOffline(true)
  await tablet.getByRole('button', { name: new RegExp(`^Call left: head ${head!.label}`) }).click()
  await expect(tablet.getByText('Not sent').first()).toBeVisible()
  await tablet.context().setOffline(false)
  await expect(tablet.getByText('Live', { exact: true }).first()).toBeVisible({
    timeout: RIGHT_AGAIN_MS + 5_000,
  })
  await expect(tablet.getByText('The line is back. Is it still wanted?')).toBeVisible()
  expect(await count()).toBe(before)

  await tablet.getByRole('button', { name: 'Call it now' }).click()
  await expect.poll(count).toBe(before + 1)
  await expect(tablet.getByText('Waiting to be read back').first()).toBeVisible()
})
