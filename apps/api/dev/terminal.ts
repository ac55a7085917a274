import { spawn } from 'node:child_process'
import { closeSync, existsSync, openSync, readFileSync, rmSync } from 'node:fs'
import { InTheWay } from './postgres.js'

/** How often a step that takes long says so where no line can be overwritten, in milliseconds. */
const HEARTBEAT_MS = 15_000

export function say(line = ''): void {
  process.stdout.write(`${line}\n`)
}

const seconds = (sinceMs: number) => `${((Date.now() - sinceMs) / 1000).toFixed(1)} s`

/** Runs one step of a command and keeps the person at the keyboard informed until it is over. */
export async function step<T>(title: string, work: () => Promise<T>): Promise<T> {
  const startedMs = Date.now()
  const overwrite = process.stdout.isTTY
  const progress = () => {
    if (overwrite) process.stdout.write(`\r  … ${title} ${seconds(startedMs)} `)
    else say(`  … ${title}, ${seconds(startedMs)} so far`)
  }
  if (overwrite) progress()
  const ticking = setInterval(progress, overwrite ? 500 : HEARTBEAT_MS)
  let mark = '✗'
  try {
    const result = await work()
    mark = '✓'
    return result
  } finally {
    clearInterval(ticking)
    say(`${overwrite ? '\r' : ''}  ${mark} ${title}, ${seconds(startedMs)}   `)
  }
}

/** The last lines of a log, or nothing. */
export function tail(log: string, lines = 40): string {
  return existsSync(log) ? readFileSync(log, 'utf8').trimEnd().split('\n').slice(-lines).join('\n') : ''
}

/** Opens a log anew. Removed first, because another user (root, say) may have left it. */
export function openLog(log: string): number {
  rmSync(log, { force: true })
  return openSync(log, 'w')
}

/** One program of a step, with what it says kept in a log. */
export interface Errand {
  readonly command: string
  readonly args: readonly string[]
  readonly cwd: string
  readonly env?: NodeJS.ProcessEnv
  readonly log: string
  readonly signal?: AbortSignal
}

/**
 * Runs a program to its end.
 *
 * @throws {InTheWay} with the end of its log when it fails.
 */
export async function runLogged(errand: Errand): Promise<void> {
  const out = openLog(errand.log)
  try {
    const child = spawn(errand.command, errand.args, {
      cwd: errand.cwd,
      env: errand.env ?? process.env,
      stdio: ['ignore', out, out],
      ...(errand.signal && { signal: errand.signal }),
    })
    const code = await new Promise<number | null>((resolve, reject) => {
      child.once('error', reject)
      child.once('exit', resolve)
    })
    if (code !== 0)
      throw new InTheWay(
        `${[errand.command, ...errand.args].join(' ')} failed. The end of ${errand.log}:\n\n${tail(errand.log)}`,
      )
  } finally {
    closeSync(out)
  }
}

/** Asks again and again until the answer is yes; false when `deadlineMs` milliseconds have passed without one. */
export async function until(
  deadlineMs: number,
  question: () => boolean | Promise<boolean>,
): Promise<boolean> {
  const end = Date.now() + deadlineMs
  for (;;) {
    if (await question()) return true
    if (Date.now() >= end) return false
    await new Promise((resolve) => setTimeout(resolve, 50))
  }
}

/** Does this address answer 200 within two seconds? */
export async function answers(address: string): Promise<boolean> {
  try {
    const response = await fetch(address, { signal: AbortSignal.timeout(2000) })
    await response.arrayBuffer()
    return response.status === 200
  } catch {
    return false
  }
}
