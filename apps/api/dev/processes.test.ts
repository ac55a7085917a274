import { spawn, type ChildProcess } from 'node:child_process'
import { once } from 'node:events'
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { identityOf, Processes } from './processes.js'

let folder: string
let processes: Processes
const started: ChildProcess[] = []

beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'bellpull-processes-'))
  processes = new Processes(folder)
})
afterEach(async () => {
  for (const child of started.splice(0)) child.kill('SIGKILL')
  await processes.stop('api')
  await rm(folder, { recursive: true, force: true })
})

/** A process of somebody else: alive until it is killed. */
async function stranger(): Promise<ChildProcess & { pid: number }> {
  const child = spawn(process.execPath, ['-e', 'console.log("here"); setInterval(() => {}, 1000)'])
  started.push(child)
  await once(child.stdout, 'data')
  if (child.pid === undefined) throw new Error('the stranger did not start')
  return child as ChildProcess & { pid: number }
}

const startApi = (script = 'setInterval(() => {}, 1000)') =>
  processes.start(
    'api',
    { args: ['-e', script], cwd: folder, env: process.env, log: join(folder, 'api.log') },
    'as built',
    { api: 8420 },
  )

describe('a process of this folder', () => {
  it('is known again by another command, with what it was started with', () => {
    const { pid } = startApi()
    expect(new Processes(folder).find('api')).toMatchObject({
      pid,
      fingerprint: 'as built',
      ports: { api: 8420 },
    })
  })

  it('is ended by asking, and forgotten', async () => {
    const { pid, identity } = startApi()
    expect(await processes.stop('api')).toBe(true)
    expect(identityOf(pid)).not.toBe(identity)
    expect(processes.find('api')).toBeNull()
    expect(await processes.stop('api')).toBe(false)
  })

  it('is made to end when it does not listen', async () => {
    const deaf = startApi('process.on("SIGTERM", () => {}); console.log("deaf"); setInterval(() => {}, 1000)')
    await expect.poll(() => readFile(join(folder, 'api.log'), 'utf8')).toContain('deaf')
    expect(await processes.stop('api', 200)).toBe(true)
    expect(identityOf(deaf.pid)).not.toBe(deaf.identity)
  })

  it('is no other one that has its number by now', async () => {
    const { pid } = await stranger()
    await writeFile(
      join(folder, 'api.json'),
      JSON.stringify({ pid, identity: 'an earlier boot/1', fingerprint: '', ports: {} }),
    )
    expect(processes.find('api')).toBeNull()
    expect(await processes.stop('api')).toBe(false)
    expect(identityOf(pid)).not.toBeNull()
  })

  it('that has ended is not found, and neither is a record that cannot be read', async () => {
    const child = await stranger()
    processes.write('api', child.pid, '', {})
    child.kill('SIGKILL')
    await once(child, 'exit')
    expect(processes.find('api')).toBeNull()
    await writeFile(join(folder, 'api.json'), '{')
    expect(processes.find('api')).toBeNull()
  })
})

describe('the lock of a folder', () => {
  it('lets one command in; the next is told who is at work and gives up in time', async () => {
    const release = await processes.lock(1000, () => undefined)
    const told: number[] = []
    expect(await new Processes(folder).lock(200, (pid) => told.push(pid))).toBeNull()
    expect(told).toEqual([process.pid])
    release?.()
    expect(await processes.lock(200, () => undefined)).not.toBeNull()
  })

  it('of a command that was killed is no lock', async () => {
    const child = await stranger()
    const identity = identityOf(child.pid)
    child.kill('SIGKILL')
    await once(child, 'exit')
    await writeFile(join(folder, 'lock.json'), JSON.stringify({ pid: child.pid, identity }))
    expect(await processes.lock(200, () => undefined)).not.toBeNull()
  })
})
