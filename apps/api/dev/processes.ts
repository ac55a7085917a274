import { spawn } from 'node:child_process'
import { closeSync, existsSync, linkSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { openLog, until } from './terminal.js'

/** A process that this folder started, as written down in `.data/run/<name>.json`. */
export interface ProcessRecord {
  readonly pid: number
  /** Boot and start time. A process number alone may belong to somebody else by now. */
  readonly identity: string
  /** What it was started with; another value means that it has to be started anew. */
  readonly fingerprint: string
  readonly ports: Readonly<Record<string, number>>
}

const PROCESS_NAMES = ['launcher', 'api', 'web', 'mail'] as const
export type ProcessName = (typeof PROCESS_NAMES)[number]

/** Boot and start time of a living process; null for one that has ended. */
export function identityOf(pid: number): string | null {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8')
    // The second field is the program's name in brackets and may hold anything, so fields are counted after it.
    const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ')
    const boot = readFileSync('/proc/sys/kernel/random/boot_id', 'utf8').trim()
    return fields[0] === 'Z' || fields[0] === 'X' ? null : `${boot}/${fields[19]}`
  } catch {
    return null
  }
}

/** The processes of one folder: starts them, knows them again, ends them, and never touches another one. */
export class Processes {
  constructor(private readonly folder: string) {}

  private path(name: string): string {
    return join(this.folder, `${name}.json`)
  }

  /** The process of that name if it still lives. */
  find(name: ProcessName | 'lock'): ProcessRecord | null {
    try {
      const record = JSON.parse(readFileSync(this.path(name), 'utf8')) as ProcessRecord
      return identityOf(record.pid) === record.identity ? record : null
    } catch {
      return null
    }
  }

  /** The numbers of all that lives now. */
  living(): number[] {
    return PROCESS_NAMES.flatMap((name) => this.find(name)?.pid ?? [])
  }

  write(
    name: ProcessName,
    pid: number,
    fingerprint: string,
    ports: Readonly<Record<string, number>>,
  ): ProcessRecord {
    const record: ProcessRecord = { pid, identity: identityOf(pid) ?? 'ended', fingerprint, ports }
    writeFileSync(this.path(name), JSON.stringify(record))
    return record
  }

  /** Starts a program that outlives this one, in a process group of its own, with its words in a log. */
  start(
    name: ProcessName,
    program: { args: readonly string[]; cwd: string; env: NodeJS.ProcessEnv; log: string },
    fingerprint: string,
    ports: Readonly<Record<string, number>>,
  ): ProcessRecord {
    const out = openLog(program.log)
    try {
      const child = spawn(process.execPath, program.args, {
        cwd: program.cwd,
        env: program.env,
        detached: true,
        stdio: ['ignore', out, out],
      })
      child.unref()
      if (child.pid === undefined) throw new Error(`${name} could not be started`)
      return this.write(name, child.pid, fingerprint, ports)
    } finally {
      closeSync(out)
    }
  }

  /** Ends the process of that name and its children: asked first, made to after `patienceMs`. True if there was one. */
  async stop(name: ProcessName, patienceMs = 15_000): Promise<boolean> {
    const record = this.find(name)
    if (record === null) {
      rmSync(this.path(name), { force: true })
      return false
    }
    const gone = () => identityOf(record.pid) !== record.identity
    // The launcher shares its group with the shell that called it; the others have a group of their own.
    const target = name === 'launcher' ? record.pid : -record.pid
    signal(target, 'SIGTERM')
    if (!(await until(patienceMs, gone))) {
      signal(target, 'SIGKILL')
      await until(5000, gone)
    }
    rmSync(this.path(name), { force: true })
    return true
  }

  forget(name: ProcessName): void {
    rmSync(this.path(name), { force: true })
  }

  /**
   * Lets one command at a time change what runs in this folder. Waits for another one, at most `patienceMs`.
   *
   * @returns what gives the right back, or null when the other command is still at work.
   */
  async lock(patienceMs: number, waiting: (pid: number) => void): Promise<(() => void) | null> {
    const path = this.path('lock')
    const mine = join(this.folder, `lock.${process.pid}`)
    writeFileSync(mine, JSON.stringify({ pid: process.pid, identity: identityOf(process.pid) }))
    let told = false
    const got = await until(patienceMs, () => {
      const other = this.find('lock')
      if (other === null && existsSync(path)) rmSync(path, { force: true })
      try {
        // A link appears whole or not at all, and refuses to replace what is there.
        linkSync(mine, path)
        return true
      } catch {
        if (other !== null && !told) waiting(other.pid)
        told ||= other !== null
        return false
      }
    })
    rmSync(mine, { force: true })
    if (!got) return null
    return () => {
      if (this.find('lock')?.pid === process.pid) rmSync(path, { force: true })
    }
  }
}

function signal(target: number, name: NodeJS.Signals): void {
  try {
    process.kill(target, name)
  } catch {
    // It ended by itself in the meantime.
  }
}
