import { caseOf, client, itemCalled, labelOf, sizesInCore } from '../api.js'
import { expect, test } from '../fixtures.js'
import { at, PINS, scan } from '../people.js'
import { picture } from '../pictures.js'

test('head and stem: called early in three touches, read back, pulled, brought, verified by two, implanted', async ({
  browser,
  house,
}) => {
  const reader = await client(house, 'magda')
  const today = await caseOf(reader, '0412-6')
  const [head] = await sizesInCore(reader, today, 'head', 'concentric')
  const [stem] = await sizesInCore(reader, today, 'stem', 'press-fit')

  const tablet = await at(browser, house, 'pim', { path: '/rooms/2', screen: 'tablet' })
  const nurse = await at(browser, house, 'ifeoma', { path: '/dispatch' })
  const core = await at(browser, house, 'casimir', { path: '/fetch', screen: 'core' })
  const runner = await at(browser, house, 'jory', { path: '/dispatch', screen: 'phone' })

  await test.step('the scrub person calls: head, stem, Call', async () => {
    await tablet.getByRole('option', { name: new RegExp(`^(Head )?${head!.label} concentric,`) }).click()
    await tablet.getByRole('option', { name: new RegExp(`^(Stem )?${stem!.label}( press-fit)?,`) }).click()
    await picture(tablet, 'room-tablet')
    await tablet.getByRole('button', { name: new RegExp(`^Call left: head ${head!.label}`) }).click()
    await expect(tablet.getByText('Waiting to be read back').first()).toBeVisible()
  })
  const headName = `Head ${head!.label} concentric`
  const stemName = `Stem ${stem!.label} press-fit`

  await test.step('the circulating nurse sees it at once and reads it back; the tablet shows who did', async () => {
    const row = nurse.locator('[data-row]', { hasText: headName })
    await row.getByRole('button', { name: 'Read back' }).click()
    const dialog = nurse.getByRole('dialog')
    await expect(dialog).toContainText(`Head ${head!.label}`)
    await expect(dialog).toContainText('LEFT')
    await dialog.getByRole('button', { name: 'Said back and confirmed' }).click()
    await expect(tablet.getByText(/Read back by IB/)).toBeVisible()
  })

  await test.step('it is confirmed on the tablet', async () => {
    const confirm = tablet.getByRole('button', { name: 'Confirm', exact: true })
    // A button that has just appeared under a finger does not act for a moment: touch it as a person would.
    await expect(async () => {
      if (await confirm.isVisible()) await confirm.click({ timeout: 2_000 })
      await expect(confirm).toBeHidden({ timeout: 3_000 })
    }).toPass({ timeout: 20_000 })
  })

  await test.step('the core pulls both by scan; they lie in the hatch', async () => {
    for (const [name, label] of [
      [headName, `Head ${head!.label}`],
      [stemName, `Stem ${stem!.label}`],
    ] as const) {
      await expect(core.locator('[data-row]', { hasText: name })).toBeVisible()
      const { item } = await itemCalled(reader, today.id, label)
      await scan(core, labelOf(item))
      await expect(core.getByText('Pulled: lay it in the hatch')).toBeVisible()
      await expect(core.getByRole('region', { name: 'In the hatch' })).toContainText(name)
    }
  })

  await test.step('the runner takes both over and delivers them from a phone', async () => {
    await runner
      .getByRole('button', { name: 'All rooms' })
      .or(runner.getByRole('tab', { name: 'All rooms' }))
      .first()
      .click()
    for (const name of [headName, stemName]) {
      const card = runner.locator('[data-row]', { hasText: name })
      const takeOver = card.getByRole('button', { name: 'Take over' })
      if (await takeOver.isVisible()) await takeOver.click()
      await card.getByRole('button', { name: 'Deliver' }).click()
      await expect(card.getByRole('button', { name: 'Deliver' })).toBeHidden()
    }
    await expect(tablet.getByText(/in the room/).first()).toBeVisible()
  })

  await test.step('the head is verified: heard first, shown after; then opened and implanted', async () => {
    const { item } = await itemCalled(reader, today.id, `Head ${head!.label}`)
    await nurse.goto(`/verify/${item.id}`)
    await expect(nurse.getByText('Scan the label of this package')).toBeVisible()
    await nurse.getByRole('radio', { name: 'Spoken' }).check({ force: true })
    await nurse.getByLabel('Who checks').selectOption({ label: 'P. Ottershaw, scrub' })
    await scan(nurse, labelOf(item))
    const table = nurse.getByRole('table', { name: 'Verify before opening' })
    await expect(table).not.toContainText('in date')
    await nurse.getByLabel('Size heard').fill(head!.label)
    await nurse.getByRole('radio', { name: 'EITHER' }).check({ force: true })
    await nurse.getByRole('button', { name: 'That is what I heard' }).click()
    await expect(table).toContainText('in date')
    await nurse.getByRole('button', { name: 'Looked at it: dry, whole, sealed' }).click()
    await nurse.getByRole('button', { name: 'Verified by both' }).click()
    await nurse.getByRole('button', { name: 'Open', exact: true }).click()
    await nurse.getByRole('button', { name: 'Implanted', exact: true }).click()
  })

  await test.step('the stem is verified with a PIN, opened and implanted', async () => {
    const { item } = await itemCalled(reader, today.id, `Stem ${stem!.label}`)
    await nurse.goto(`/verify/${item.id}`)
    await nurse.getByRole('radio', { name: 'PIN' }).check({ force: true })
    await nurse.getByLabel('Who checks').selectOption({ label: 'P. Ottershaw, scrub' })
    await scan(nurse, labelOf(item))
    await nurse.getByRole('button', { name: 'Looked at it: dry, whole, sealed' }).click()
    await nurse.getByRole('button', { name: 'Key the PIN' }).click()
    const pad = nurse.getByRole('dialog')
    for (const digit of PINS.pim) await pad.getByRole('button', { name: digit, exact: true }).click()
    await pad.getByRole('button', { name: 'Done' }).click()
    await nurse.getByRole('button', { name: 'Verified by both' }).click()
    await nurse.getByRole('button', { name: 'Open', exact: true }).click()
    await nurse.getByRole('button', { name: 'Implanted', exact: true }).click()
    await expect
      .poll(async () => (await itemCalled(reader, today.id, `Stem ${stem!.label}`)).item.outcome)
      .toBe('implanted')
  })

  await test.step('the case tells who did what', async () => {
    await nurse.goto(`/cases/${today.id}`)
    await expect(nurse.getByText(/read back/i).first()).toBeVisible()
    await expect(nurse.getByText(/Implanted/).first()).toBeVisible()
  })
})
