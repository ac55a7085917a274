import type { Page } from '@playwright/test'
import { join } from 'node:path'

/** Takes a picture for the documents, only when asked for: `BELLPULL_PICTURES=1`. */
export async function picture(page: Page, name: string): Promise<void> {
  if (process.env['BELLPULL_PICTURES'] === undefined) return
  await page.screenshot({ path: join(import.meta.dirname, 'pictures', `${name}.png`) })
}
