import { randomBytes } from 'node:crypto'
import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { InTheWay } from './postgres.js'

/** Where the house of this folder listens, and where it keeps its things. */
export interface Settings {
  readonly root: string
  readonly data: string
  readonly port: number
  /** A port of PostgreSQL that the person asked for; null leaves the choice to us. */
  readonly postgresPort: number | null
}

function portFrom(name: string, fallback: number | null): number | null {
  const text = process.env[name]
  if (text === undefined || text === '') return fallback
  const port = Number(text)
  if (!/^\d+$/.test(text) || port < 1 || port > 65_535)
    throw new InTheWay(`${name} is "${text}"; it has to be a port from 1 to 65535.`)
  return port
}

export function readSettings(root: string): Settings {
  return {
    root,
    data: join(root, '.data'),
    port: portFrom('BELLPULL_PORT', 8420) ?? 8420,
    postgresPort: portFrom('BELLPULL_POSTGRES_PORT', null),
  }
}

/** The secret that signs this house's tokens: made once, readable by its owner alone. */
export function tokenSecret(data: string): string {
  const path = join(data, 'token-secret')
  if (!existsSync(path)) writeFileSync(path, randomBytes(48).toString('base64url'), { mode: 0o600 })
  return readFileSync(path, 'utf8').trim()
}

/** The environment of the API for a house on this machine. */
export function apiEnvironment(
  settings: Settings,
  house: { databaseUrl: string; smtpPort: number; mode: 'production' | 'development' },
): NodeJS.ProcessEnv {
  return {
    ...process.env,
    NODE_ENV: house.mode,
    BELLPULL_HOST: '127.0.0.1',
    BELLPULL_PORT: String(settings.port),
    BELLPULL_DATABASE_URL: house.databaseUrl,
    BELLPULL_TOKEN_SECRET: tokenSecret(settings.data),
    BELLPULL_SMTP_URL: `smtp://127.0.0.1:${house.smtpPort}`,
    BELLPULL_MAIL_FROM: 'Larchwater General stores <stores@larchwater.example>',
    BELLPULL_DEMO: '1',
    BELLPULL_HOUSE_NAME: 'Larchwater General',
    BELLPULL_HOUSE_ZONE: 'UTC',
    // While the sources are watched, Vite serves the pages and asks this server only for data.
    BELLPULL_WEB_DIR: house.mode === 'production' ? join(settings.root, 'apps/web/dist') : '',
    BELLPULL_LOG_LEVEL: process.env['BELLPULL_LOG_LEVEL'] ?? 'info',
  }
}

const PEOPLE = [
  ['juniper', '1301', 'surgeon'],
  ['oswin', '1302', 'surgeon'],
  ['marisol', '1303', 'surgeon'],
  ['pim', '2402', 'scrub'],
  ['lotte', '2403', 'scrub'],
  ['ifeoma', '3501', 'circulating'],
  ['tobiah', '3502', 'circulating'],
  ['wren', '3503', 'circulating, relief'],
  ['jory', '4601', 'runner'],
  ['casimir', '5701', 'core'],
  ['lindy', '5702', 'core'],
  ['magda', '6801', 'charge'],
  ['soren', '7901', 'coordinator'],
  ['nell', '8001', 'administrator'],
] as const

/** What a person needs to know once the house is open. */
export function welcome(addresses: readonly (readonly [label: string, address: string])[]): string {
  const people = PEOPLE.map(
    ([name, pin, role]) => `    ${`${name}@larchwater.example`.padEnd(28)} ${pin}  ${role}`,
  )
  return [
    '',
    ...addresses.map(([label, address]) => `  ${label.padEnd(22)} ${address}`),
    '',
    '  Sign in with the password linen-brass-cord (address, PIN, role):',
    ...people,
    '',
  ].join('\n')
}
