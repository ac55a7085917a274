import { spawn } from 'node:child_process'
import { readFileSync } from 'node:fs'
import { mkdir, rm } from 'node:fs/promises'
import { join } from 'node:path'
import { sourceHash, stampBuild } from './build.js'
import { projectRoot } from './postgres.js'
import { closingLine, one, tallyPlaywright, tallyVitest, total, type Tally } from './tally.js'
import { say } from './terminal.js'

/** Runs every rung of the tests, the later ones also after a failure, and closes with one line for all together. */

const reports = join(projectRoot, '.data/test')
await rm(reports, { recursive: true, force: true })
await mkdir(reports, { recursive: true })

const sources = sourceHash(projectRoot)

interface Rung {
  readonly title: string
  readonly args: readonly string[]
  /** The project's root where nothing else is said. */
  readonly cwd?: string
  readonly env?: NodeJS.ProcessEnv
  readonly count: (exitCode: number | null) => Tally
}

const check = (title: string, script: string): Rung => ({
  title,
  args: ['run', script],
  count: (exitCode) => one(exitCode === 0),
})

function report(name: string): unknown {
  try {
    return JSON.parse(readFileSync(join(reports, name), 'utf8'))
  } catch {
    return null
  }
}

const rungs: readonly Rung[] = [
  {
    title: 'build',
    args: ['run', 'build'],
    count: (exitCode) => {
      // The journeys run what was built here and need not build it again.
      if (exitCode === 0) stampBuild(projectRoot, sources)
      return one(exitCode === 0)
    },
  },
  check('types', 'typecheck'),
  check('lint', 'lint'),
  check('format', 'format:check'),
  {
    title: 'domain, contracts, server and web',
    args: [
      'exec',
      'vitest',
      'run',
      '--reporter=dot',
      '--reporter=json',
      `--outputFile.json=${join(reports, 'vitest.json')}`,
    ],
    count: (exitCode) => tallyVitest(report('vitest.json'), exitCode),
  },
  {
    title: 'journeys in a browser',
    cwd: join(projectRoot, 'e2e'),
    args: ['exec', 'playwright', 'test', '--reporter=list,json'],
    env: { PLAYWRIGHT_JSON_OUTPUT_FILE: join(reports, 'playwright.json') },
    count: (exitCode) => tallyPlaywright(report('playwright.json'), exitCode),
  },
]

let stopped: NodeJS.Signals | null = null
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, () => (stopped = signal))

async function run({ title, args, cwd, env, count }: Rung): Promise<Tally> {
  const startedMs = Date.now()
  say(`\n── ${title}`)
  // A runner shares our process group: Ctrl-C reaches it and it cleans up after itself. Other signals are passed on.
  const child = spawn('pnpm', args, {
    cwd: cwd ?? projectRoot,
    env: { ...process.env, ...env },
    stdio: ['ignore', 'inherit', 'inherit'],
  })
  const passOn = (signal: NodeJS.Signals) => child.kill(signal)
  process.on('SIGTERM', passOn).on('SIGHUP', passOn)
  const exitCode = await new Promise<number | null>((resolve) => {
    child.once('error', () => resolve(null))
    child.once('exit', resolve)
  })
  process.removeListener('SIGTERM', passOn).removeListener('SIGHUP', passOn)
  const tally = count(exitCode)
  say(
    `── ${title}: ${tally.failed === 0 ? 'good' : 'FAILED'}, ${((Date.now() - startedMs) / 1000).toFixed(1)} s`,
  )
  return tally
}

const tallies: { title: string; tally: Tally }[] = []
for (const rung of rungs) {
  if (stopped !== null) break
  tallies.push({ title: rung.title, tally: await run(rung) })
}

say()
for (const { title, tally } of tallies)
  say(
    `  ${tally.failed === 0 ? '✓' : '✗'} ${title.padEnd(36)} ${String(tally.passed).padStart(5)} of ${tally.passed + tally.failed + tally.skipped}`,
  )
if (stopped !== null) {
  say('\nStopped before the end.')
  process.exitCode = 130
} else {
  const all = total(tallies.map(({ tally }) => tally))
  say(`\n${closingLine(all)}`)
  process.exitCode = all.failed === 0 ? 0 : 1
}
