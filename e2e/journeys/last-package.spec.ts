import { caseOf, client, itemCalled, sizesInCore } from '../api.js'
import { expect, test } from '../fixtures.js'
import { at } from '../people.js'

test('two rooms call the last package at the same instant: one has it, the other is told who and what else there is', async ({
  browser,
  house,
}) => {
  const reader = await client(house, 'magda')
  const left = await caseOf(reader, '0412-6')
  const right = await caseOf(reader, '0412-5')
  const last = (await sizesInCore(reader, left, 'head', 'concentric')).find((size) => size.inCore === 1)
  expect(last, 'a head of which one package is left').toBeTruthy()

  const rooms = [
    await at(browser, house, 'pim', { path: '/rooms/2', screen: 'tablet' }),
    await at(browser, house, 'lotte', { path: '/rooms/6', screen: 'tablet' }),
  ]
  const watching = await at(browser, house, 'magda', { path: '/dispatch' })
  for (const room of rooms)
    await room.getByRole('option', { name: new RegExp(`^(Head )?${last!.label} concentric,`) }).click()
  await Promise.all(
    rooms.map((room) =>
      room.getByRole('button', { name: new RegExp(`^Call (left|right): head ${last!.label}`) }).click(),
    ),
  )
  for (const room of rooms) await expect(room.getByText('Waiting to be read back').first()).toBeVisible()

  const label = `Head ${last!.label}`
  const both = [
    { of: left, ...(await itemCalled(reader, left.id, label)) },
    { of: right, ...(await itemCalled(reader, right.id, label)) },
  ]
  expect(both.map(({ item }) => item.hold).sort()).toEqual(['held', 'noneFree'])
  const without = both.find(({ item }) => item.hold === 'noneFree')!
  const holder = both.find(({ item }) => item.hold === 'held')!
  expect(without.item.heldBy).toEqual([
    { room: { id: holder.of.room.id, number: holder.of.room.number }, kind: 'early' },
  ])

  const told = rooms[without.of === left ? 0 : 1]!
  await expect(told.getByText(`Room ${holder.of.room.number} holds one, early.`)).toBeVisible()
  const alternative = without.item.alternatives[0]!
  const instead = told.getByRole('button', { name: `Call ${alternative.label.replace('Head ', '')} instead` })
  await expect(instead).toBeVisible()
  await expect(watching.locator('[data-row]', { hasText: `${label} concentric` })).toHaveCount(2)
})
