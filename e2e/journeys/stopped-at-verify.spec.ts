import { administer } from '../../apps/api/dev/administer.js'
import { broughtToRoom, caseOf, client, itemsOf, labelOf, sizesInCore } from '../api.js'
import { expect, test } from '../fixtures.js'
import { at, scan } from '../people.js'
import type { RailView } from '@bellpull/contracts'

test('the femur of the other side is stopped, with both values shown', async ({ browser, house }) => {
  const reader = await client(house, 'magda')
  const knee = await caseOf(reader, '0412-8')
  const rails = await reader.get<RailView[]>(`/cases/${knee.id}/sizes`)
  const femur = rails
    .find((rail) => rail.kind === 'femur')!
    .sizes.find((size) => size.inCore > 1 && size.side === knee.side)!
  const { item } = await broughtToRoom(house, knee, femur.catalogueItemId)

  const other = knee.side === 'left' ? 'R' : 'L'
  const [wrong] = await administer<{ gtin: string; lot: string; serial: string; use_by: string }>(
    house.databaseUrl,
    `SELECT c.gtin, u.lot, u.serial, to_char(u.use_by_on, 'YYMMDD') AS use_by
       FROM unit u JOIN catalogue_item c ON c.id = u.catalogue_item_id
      WHERE c.ref = $1 AND u.state = 'available' LIMIT 1`,
    [femur.ref.replace(/-[LR]$/, `-${other}`)],
  )
  const nurse = await at(browser, house, 'ifeoma', { path: `/verify/${item.id}`, screen: 'tablet' })
  await nurse.getByRole('radio', { name: 'PIN' }).check({ force: true })
  await scan(nurse, `(01)${wrong!.gtin}(17)${wrong!.use_by}(10)${wrong!.lot}(21)${wrong!.serial}`)

  await expect(nurse.getByRole('heading', { name: /Wrong side/ })).toBeVisible()
  await expect(nurse.getByRole('button', { name: 'Verified by both' })).toBeHidden()
  const after = (await itemsOf(reader, knee.id)).find((one) => one.item.id === item.id)
  expect(after!.item.stage).toBe('inRoom')
})

test('a package that expired since it was pulled is stopped', async ({ browser, house }) => {
  const reader = await client(house, 'magda')
  const shoulder = await caseOf(reader, '0412-6')
  const [stem] = await sizesInCore(reader, shoulder, 'stem', 'press-fit')
  const { item } = await broughtToRoom(house, shoulder, stem!.catalogueItemId)
  await administer(house.databaseUrl, `UPDATE unit SET use_by_on = current_date - 1 WHERE id = $1`, [
    item.unit!.id,
  ])
  const yesterday = new Date(Date.now() - 86_400_000).toISOString().slice(0, 10)

  const nurse = await at(browser, house, 'ifeoma', { path: `/verify/${item.id}`, screen: 'tablet' })
  await nurse.getByRole('radio', { name: 'PIN' }).check({ force: true })
  await scan(nurse, labelOf(item, { useByOn: yesterday }))
  await expect(nurse.getByRole('heading', { name: /Expired/ })).toBeVisible()
  await expect(nurse.getByRole('button', { name: 'Verified by both' })).toBeHidden()
})

test('a spoken check that does not match the label is stopped and nothing is verified', async ({
  browser,
  house,
}) => {
  const reader = await client(house, 'magda')
  const shoulder = await caseOf(reader, '0412-6')
  const [head] = await sizesInCore(reader, shoulder, 'head', 'concentric')
  const { item } = await broughtToRoom(house, shoulder, head!.catalogueItemId)

  const nurse = await at(browser, house, 'ifeoma', { path: `/verify/${item.id}`, screen: 'tablet' })
  await nurse.getByRole('radio', { name: 'Spoken' }).check({ force: true })
  await nurse.getByLabel('Who checks').selectOption({ label: 'P. Ottershaw, scrub' })
  await scan(nurse, labelOf(item))
  await nurse.getByLabel('Size heard').fill('39')
  await nurse.getByRole('radio', { name: 'EITHER' }).check({ force: true })
  await nurse.getByRole('button', { name: 'That is what I heard' }).click()
  await expect(nurse.getByRole('heading', { name: /Not as heard/ })).toBeVisible()
  const after = (await itemsOf(reader, shoulder.id)).find((one) => one.item.id === item.id)
  expect(after!.item.stage).toBe('inRoom')
})
