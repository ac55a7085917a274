import { createHash } from 'node:crypto'
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { runLogged, say, step } from './terminal.js'

const SOURCES = [
  'packages/domain',
  'packages/contracts',
  'apps/api/src',
  'apps/web',
  'pnpm-lock.yaml',
  'tsconfig.base.json',
]
const NOT_BUILT = new Set(['node_modules', 'dist', 'test', 'coverage'])
const RESULTS = ['apps/api/dist/main.js', 'apps/web/dist/index.html']

function filesUnder(path: string): string[] {
  const entries = readdirSync(path, { withFileTypes: true }).sort((a, b) => (a.name < b.name ? -1 : 1))
  return entries.flatMap((entry) => {
    if (NOT_BUILT.has(entry.name) || entry.name.endsWith('.test.ts')) return []
    const inside = join(path, entry.name)
    return entry.isDirectory() ? filesUnder(inside) : [inside]
  })
}

/** One value for the content of everything that a build reads, so that an unchanged house is not built again. */
export function sourceHash(root: string): string {
  const hash = createHash('sha256').update(process.version)
  for (const source of SOURCES) {
    const path = join(root, source)
    const files = source.includes('.') ? [path] : filesUnder(path)
    for (const file of files)
      hash.update(file.slice(root.length)).update('\0').update(readFileSync(file)).update('\0')
  }
  return hash.digest('hex')
}

/**
 * Builds packages, server and web where their sources changed since the last build that went through.
 *
 * @returns the hash of the sources that the result was made from.
 */
export async function build(root: string, log: string, signal: AbortSignal): Promise<string> {
  const stamp = join(root, '.data/stamp/build')
  const hash = sourceHash(root)
  const fresh = existsSync(stamp) && readFileSync(stamp, 'utf8') === hash
  if (fresh && RESULTS.every((file) => existsSync(join(root, file)))) {
    say('  · built already')
    return hash
  }
  await step('building packages, server and web', () =>
    runLogged({ command: 'pnpm', args: ['run', 'build'], cwd: root, log, signal }),
  )
  writeFileSync(stamp, hash)
  return hash
}
