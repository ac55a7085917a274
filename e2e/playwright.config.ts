import { defineConfig } from '@playwright/test'

/** Quiet and alike on every machine: no sandbox (it needs rights that root in a container lacks), no calls home. */
const CHROMIUM_FLAGS = [
  '--no-sandbox',
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
]

export default defineConfig({
  testDir: 'journeys',
  outputDir: 'test-results',
  globalSetup: './global-setup.ts',
  // Each journey has a house of its own; two cores carry one house, its browser and its database.
  workers: 1,
  retries: 0,
  forbidOnly: true,
  timeout: 180_000,
  expect: { timeout: 15_000 },
  reporter: 'list',
  use: {
    actionTimeout: 20_000,
    navigationTimeout: 30_000,
    contextOptions: { reducedMotion: 'reduce' },
    locale: 'en-GB',
    timezoneId: 'UTC',
    viewport: { width: 1280, height: 800 },
    screenshot: 'only-on-failure',
    trace: 'retain-on-failure',
    launchOptions: {
      executablePath: process.env['BELLPULL_CHROMIUM'] ?? '/usr/bin/chromium',
      args: CHROMIUM_FLAGS,
    },
  },
})
