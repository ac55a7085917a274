import { createHash } from 'node:crypto'
import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs'
import { dirname, join } from 'node:path'
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

const stampOf = (root: string) => join(root, '.data/stamp/build')

/** Is what the last build that went through made of these sources still there? */
function isBuilt(root: string, hash: string): boolean {
  const stamp = stampOf(root)
  const same = existsSync(stamp) && readFileSync(stamp, 'utf8') === hash
  return same && RESULTS.every((file) => existsSync(join(root, file)))
}

/** Writes down that the sources of this hash have been built. */
export function stampBuild(root: string, hash: string): void {
  mkdirSync(dirname(stampOf(root)), { recursive: true })
  writeFileSync(stampOf(root), hash)
}

/**
 * Builds packages, server and web where their sources changed since the last build that went through.
 *
 * @returns the hash of the sources that the result was made from.
 */
export async function build(root: string, log: string, signal?: AbortSignal): Promise<string> {
  const hash = sourceHash(root)
  if (isBuilt(root, hash)) {
    say('  · built already')
    return hash
  }
  await step('building packages, server and web', () =>
    runLogged({ command: 'pnpm', args: ['run', 'build'], cwd: root, log, ...(signal && { signal }) }),
  )
  stampBuild(root, hash)
  return hash
}
