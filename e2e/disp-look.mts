import { chromium } from '@playwright/test'
// who, then jobs "path:w:h:scheme:out"
const [who = 'ifeoma', ...jobs] = process.argv.slice(2)
const browser = await chromium.launch({
  executablePath: '/usr/bin/chromium',
  args: [
    '--no-sandbox',
    '--disable-gpu',
    '--disable-quic',
    '--no-first-run',
    '--disable-background-networking',
    '--disable-component-update',
    '--disable-sync',
  ],
})
const ctx = await browser.newContext({ viewport: { width: 1440, height: 900 }, reducedMotion: 'reduce' })
const page = await ctx.newPage()
page.setDefaultTimeout(90000)
page.on('console', (m) => {
  if (['error', 'warning'].includes(m.type()) && !/intlify|401/.test(m.text()))
    console.log(m.type(), m.text().slice(0, 300))
})
page.on('pageerror', (e) => console.log('PAGEERROR', e.message.slice(0, 400)))
await page.goto('http://127.0.0.1:8562/sign-in', { timeout: 90000 })
await page
  .getByLabel(/e-mail/i)
  .first()
  .fill(`${who}@larchwater.example`)
await page
  .getByLabel(/password/i)
  .first()
  .fill('linen-brass-cord')
await page.keyboard.press('Enter')
await page.waitForURL((u) => !u.pathname.includes('sign-in'), { timeout: 90000 })
let at = ''
for (const job of jobs) {
  const [path, w, h, scheme, out, full] = job.split(':')
  await page.setViewportSize({ width: +w!, height: +h! })
  await page.emulateMedia({ colorScheme: scheme as 'light', reducedMotion: 'reduce' })
  if (path !== at) {
    await page.goto('http://127.0.0.1:8562' + path)
    at = path!
  }
  await page.locator('[data-row], .block.empty').first().waitFor()
  await page.waitForTimeout(700)
  await page.screenshot({ path: `/tmp/disp-shots/${out}.png`, fullPage: full === 'full' })
  const wide = await page.evaluate(() => document.documentElement.scrollWidth - innerWidth)
  if (wide > 0) console.log(out, 'overflows by', wide)
}
await browser.close()
