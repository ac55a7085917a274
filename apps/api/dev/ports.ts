import { readdirSync, readFileSync, readlinkSync } from 'node:fs'
import { createServer } from 'node:net'
import { freePort } from './postgres.js'

const LOOPBACK = '127.0.0.1'

/** Distances from the house's own port, far apart so that houses on neighbouring ports do not meet. */
export const DISTANCE = { mailPage: 1000, smtp: 2000, postgres: 3000, web: 4000 } as const

/** The port at a fixed distance from the house's, counted downwards where there is none above. */
export function following(port: number, distance: number): number {
  return port + distance <= 65_535 ? port + distance : port - distance
}

export async function isFree(port: number): Promise<boolean> {
  return await new Promise((resolve) => {
    const probe = createServer()
    probe.once('error', () => resolve(false))
    probe.listen(port, LOOPBACK, () => probe.close(() => resolve(true)))
  })
}

/** The wanted port, or any free one where somebody else has it. */
export async function freeOrOther(wanted: number): Promise<number> {
  return (await isFree(wanted)) ? wanted : await freePort()
}

/** Who listens on a port, in words for a message; null where this machine does not tell us. */
export function holderOf(port: number): string | null {
  const inodes = new Set(['/proc/net/tcp', '/proc/net/tcp6'].flatMap((table) => listening(table, port)))
  for (const pid of attempt(() => readdirSync('/proc')) ?? []) {
    if (!/^\d+$/.test(pid)) continue
    for (const fd of attempt(() => readdirSync(`/proc/${pid}/fd`)) ?? []) {
      const target = attempt(() => readlinkSync(`/proc/${pid}/fd/${fd}`))
      const inode = /^socket:\[(\d+)\]$/.exec(target ?? '')?.[1]
      if (inode === undefined || !inodes.has(inode)) continue
      const words = (attempt(() => readFileSync(`/proc/${pid}/cmdline`, 'utf8')) ?? '')
        .split('\0')
        .join(' ')
        .trim()
      const folder = attempt(() => readlinkSync(`/proc/${pid}/cwd`))
      return `process ${pid} (${words.slice(0, 120)})${folder === null ? '' : ` in ${folder}`}`
    }
  }
  return null
}

function listening(table: string, port: number): string[] {
  const lines = (attempt(() => readFileSync(table, 'utf8')) ?? '').split('\n').slice(1)
  const fields = lines.map((line) => line.trim().split(/\s+/))
  const suffix = `:${port.toString(16).toUpperCase().padStart(4, '0')}`
  return fields.flatMap(([, local, , state, , , , , , inode]) =>
    state === '0A' && local?.endsWith(suffix) === true && inode !== undefined ? [inode] : [],
  )
}

function attempt<T>(read: () => T): T | null {
  try {
    return read()
  } catch {
    return null
  }
}
