import { existsSync } from 'node:fs'
import { join } from 'node:path'
import { defineConfig, type TestProjectConfiguration } from 'vitest/config'

/** Workspace packages are read from their sources, so that no test waits for a build or sees an old one. */
const conditions = ['source', 'module', 'node', 'development|production']

/** A wait that is not over after this long has failed; tests on a loaded machine stay far below it. */
const timeouts = { testTimeout: 20_000, hookTimeout: 60_000, teardownTimeout: 20_000 }

function nodeProject(name: string, root: string, test: object = {}): TestProjectConfiguration {
  return {
    root,
    resolve: { conditions },
    ssr: { resolve: { conditions } },
    // Global set-ups are loaded in an environment of Vitest's own.
    environments: { __vitest__: { resolve: { conditions } } },
    test: { name, environment: 'node', include: ['{src,test}/**/*.test.ts'], ...timeouts, ...test },
  }
}

const projects: TestProjectConfiguration[] = [
  nodeProject('domain', 'packages/domain'),
  nodeProject('contracts', 'packages/contracts'),
  nodeProject('api', 'apps/api', { globalSetup: ['./test/global-setup.ts'] }),
  nodeProject('dev', 'apps/api', { include: ['dev/**/*.test.ts'] }),
]

if (existsSync(join(import.meta.dirname, 'apps/web/vite.config.ts'))) {
  projects.push({
    extends: 'apps/web/vite.config.ts',
    root: 'apps/web',
    test: {
      name: 'web',
      environment: 'happy-dom',
      include: ['{src,test}/**/*.test.ts'],
      ...(existsSync(join(import.meta.dirname, 'apps/web/test/setup.ts')) && {
        setupFiles: ['./test/setup.ts'],
      }),
      server: { deps: { inline: ['vuetify'] } },
      ...timeouts,
    },
  })
}

export default defineConfig({ test: { projects, passWithNoTests: false } })
