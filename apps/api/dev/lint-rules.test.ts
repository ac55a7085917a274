import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { dirname, join } from 'node:path'
import { ESLint } from 'eslint'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { projectRoot } from './postgres.js'

const eslint = new ESLint({ cwd: projectRoot })

async function complaints(filePath: string, code: string): Promise<string[]> {
  const results = await eslint.lintText(`${code}\n`, { filePath: join(projectRoot, filePath) })
  return results.flatMap((result) => result.messages.map((message) => message.ruleId ?? message.message))
}

const uses = (specifier: string) => `import { thing } from '${specifier}'\nexport const used = thing`

describe('import directions', () => {
  const refused: [title: string, file: string, specifier: string][] = [
    ['domain names contracts', 'packages/domain/src/call/planted.ts', '@bellpull/contracts'],
    ['domain names a framework', 'packages/domain/src/call/planted.ts', 'zod'],
    ['domain reads a file', 'packages/domain/src/call/planted.ts', 'node:fs'],
    ['contracts name the server', 'packages/contracts/src/planted.ts', '@bellpull/api'],
    ['the web reaches into the server by path', 'apps/web/src/stores/planted.ts', '../../../api/src/app.js'],
    ['platform imports a module', 'apps/api/src/platform/http/planted.ts', '../../modules/calls/index.js'],
    ['a module imports compose', 'apps/api/src/modules/calls/planted.ts', '../../compose.js'],
    ['a module passes by an index', 'apps/api/src/modules/calls/planted.ts', '../stock/stock.service.js'],
    ['compose imports main', 'apps/api/src/compose.ts', './main.js'],
    ['the server imports its tests', 'apps/api/src/compose.ts', '../test/database.js'],
    ['a component imports a store', 'apps/web/src/components/cord/planted.ts', '../../stores/board.js'],
    ['a component imports the client', 'apps/web/src/components/cord/planted.ts', '@/api/calls'],
    ['a store imports a view', 'apps/web/src/stores/planted.ts', '@/views/room/RoomView.vue'],
    ['a view imports the router', 'apps/web/src/views/room/planted.ts', '@/router'],
    ['the client imports a store', 'apps/web/src/api/planted.ts', '@/stores/board'],
  ]
  it.each(refused)('refuses when %s', async (_title, file, specifier) => {
    expect(await complaints(file, uses(specifier))).toContain('bellpull/import-direction')
  })

  const allowed: [title: string, file: string, specifier: string][] = [
    ['contracts name domain', 'packages/contracts/src/planted.ts', '@bellpull/domain'],
    ['a domain test names fast-check', 'packages/domain/src/call/planted.test.ts', 'fast-check'],
    ['a module imports platform', 'apps/api/src/modules/calls/planted.ts', '../../platform/clock.js'],
    ['a module goes through an index', 'apps/api/src/modules/calls/planted.ts', '../stock/index.js'],
    ['a module imports its own file', 'apps/api/src/modules/calls/planted.ts', './calls.service.js'],
    ['a module test imports compose', 'apps/api/src/modules/calls/planted.test.ts', '../../compose.js'],
    ['a view imports a store', 'apps/web/src/views/room/planted.ts', '@/stores/board'],
    ['a component says it knows a store', 'apps/web/src/components/calls/StorePlanted.ts', '@/stores/board'],
    ['a journey borrows the test cluster', 'e2e/planted.ts', '../apps/api/test/cluster.js'],
  ]
  it.each(allowed)('allows that %s', async (_title, file, specifier) => {
    expect(await complaints(file, uses(specifier))).toEqual([])
  })

  it('refuses a server folder that is named after nothing', async () => {
    expect(await complaints('apps/api/src/utils/planted.ts', 'export const x = 1')).toEqual([
      'bellpull/import-direction',
    ])
  })
})

describe('one place for the environment, the clock and requests', () => {
  const restricted = 'no-restricted-syntax'
  it.each([
    [
      'the environment outside config.ts',
      'apps/api/src/modules/calls/planted.ts',
      'export const x = process.env',
      restricted,
    ],
    [
      'the environment through its module',
      'apps/api/src/app.ts',
      uses('node:process'),
      'no-restricted-imports',
    ],
    [
      'the instant outside clock.ts',
      'apps/api/src/modules/calls/planted.ts',
      'export const x = Date.now()',
      restricted,
    ],
    [
      'a new date outside clock.ts',
      'packages/domain/src/call/planted.ts',
      'export const x = new Date()',
      restricted,
    ],
    ['the clock in config.ts', 'apps/api/src/platform/config.ts', 'export const x = new Date()', restricted],
    [
      'a request outside http.ts',
      'apps/web/src/stores/planted.ts',
      "export const x = fetch('/')",
      restricted,
    ],
    [
      'a request by way of window',
      'apps/web/src/views/planted.ts',
      "export const x = window.fetch('/')",
      restricted,
    ],
    [
      'a switched-off rule',
      'apps/api/src/app.ts',
      'export const x = process.env // eslint-disable-line',
      restricted,
    ],
  ])('refuses %s', async (_title, file, code, rule) => {
    expect(await complaints(file, code)).toContain(rule)
  })

  it.each([
    ['the environment in config.ts', 'apps/api/src/platform/config.ts', 'export const x = process.env'],
    ['the instant in clock.ts', 'apps/api/src/platform/clock.ts', 'export const x = () => new Date()'],
    ['a given date anywhere', 'apps/api/src/modules/calls/planted.ts', 'export const x = new Date(0)'],
    ['a request in http.ts', 'apps/web/src/api/http.ts', "export const x = fetch('/')"],
    [
      'the environment in a test',
      'apps/api/src/modules/calls/planted.test.ts',
      'export const x = process.env',
    ],
  ])('allows %s', async (_title, file, code) => {
    expect(await complaints(file, code)).toEqual([])
  })
})

describe('imports in a circle', () => {
  let root: string
  beforeAll(async () => {
    root = await mkdtemp(join(tmpdir(), 'bellpull-lint-'))
  })
  afterAll(() => rm(root, { recursive: true, force: true }))

  async function circles(files: Record<string, string>): Promise<string[]> {
    const folder = await mkdtemp(join(root, 'case-'))
    for (const [name, text] of Object.entries(files)) {
      await mkdir(dirname(join(folder, name)), { recursive: true })
      await writeFile(join(folder, name), `${text}\n`)
    }
    const plugin = (await import(join(projectRoot, 'eslint.rules.mjs'))) as { default: ESLint.Plugin }
    const parser = (await import('typescript-eslint')).parser as never
    const config = {
      files: ['**/*.ts'],
      plugins: { bellpull: plugin.default },
      languageOptions: { parser },
      rules: { 'bellpull/no-cycle': 'error' as const },
    }
    const lint = new ESLint({ cwd: folder, overrideConfigFile: true, overrideConfig: [config] })
    return (await lint.lintFiles('.')).flatMap((result) => result.messages.map((message) => message.message))
  }

  it('is refused at every file of the circle, and the way is named', async () => {
    const found = await circles({
      'a.ts': "import { b } from './b.js'\nexport const a = b",
      'b.ts': "export * from './deep/c.js'",
      'deep/c.ts': "import {\n  a,\n} from '../a.js'\nexport const b = a",
    })
    expect(found).toHaveLength(3)
    expect(found[0]).toBe('Imports go in a circle: a.ts → b.ts → deep/c.ts → a.ts')
  })

  it('is not seen where only a type or a lazy import closes it', async () => {
    const found = await circles({
      'a.ts': "import type { B } from './b.js'\nexport const a: B = 1",
      'b.ts': "import { c } from './c.js'\nexport type B = number\nexport const b = c",
      'c.ts': "export const c = () => import('./a.js')",
    })
    expect(found).toEqual([])
  })
})
