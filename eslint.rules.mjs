import { existsSync, readFileSync, statSync } from 'node:fs'
import { dirname, join, posix, relative, resolve, sep } from 'node:path'

/**
 * The house's own rules about who may import whom, as an ESLint plugin without dependencies.
 * The directions are the ones in the map of DEVELOPERS.md; a test plants one violation of each.
 */

/** Server: what stands lower may not import what stands higher. */
const SERVER_FLOORS = [
  [/^platform\//, 0],
  [/^modules\//, 1],
  [/^migrations\//, 1],
  [/^(data-source\.ts$|entities\.ts$|demo\/)/, 2],
  [/^compose\.ts$/, 3],
  [/^app\.ts$/, 4],
  [/^[^/]+$/, 5],
]

/** Web: what each folder may not reach. `components` may reach a store only where the file's name says so. */
const WEB_CLOSED = {
  api: ['stores', 'components', 'views', 'layouts', 'router', 'composables'],
  realtime: ['stores', 'components', 'views', 'layouts', 'router', 'composables'],
  stores: ['components', 'views', 'layouts', 'router'],
  composables: ['components', 'views', 'layouts', 'router'],
  components: ['stores', 'views', 'layouts', 'router', 'api', 'realtime'],
  layouts: ['views', 'router'],
  views: ['router', 'layouts'],
}

/** Workspace packages that each part may name. */
const PACKAGES = {
  'packages/domain': [],
  'packages/contracts': ['@bellpull/domain'],
  'apps/api': ['@bellpull/domain', '@bellpull/contracts'],
  'apps/web': ['@bellpull/domain', '@bellpull/contracts'],
  e2e: ['@bellpull/domain', '@bellpull/contracts'],
}

const isTest = (path) => /\.(test|spec)\.ts$/.test(path)
const partOf = (path) => Object.keys(PACKAGES).find((part) => path.startsWith(`${part}/`))

/** `from` and `to` are paths from the project's root with `/`; `to` is null for a package. */
function whyNot(from, to, specifier) {
  const part = partOf(from)
  if (part === undefined) return null
  if (to === null) return whyNotPackage(part, from, specifier)
  const other = partOf(to)
  if (other !== part) {
    const lent = part === 'e2e' && /^apps\/api\/(test|dev)\//.test(to)
    return lent ? null : `${part} may not reach into ${other ?? 'files outside its package'} by path.`
  }
  if (part === 'apps/api') return whyNotServer(from.slice(9), to.slice(9))
  if (part === 'apps/web') return whyNotWeb(from.slice(9), to.slice(9))
  return null
}

function whyNotPackage(part, from, specifier) {
  if (specifier.startsWith('@bellpull/') && !PACKAGES[part].includes(specifier))
    return `${part} may not import ${specifier}: domain ← contracts ← applications.`
  const pure = part === 'packages/domain' && from.startsWith('packages/domain/src/') && !isTest(from)
  return pure ? 'packages/domain is pure: it imports nothing from outside itself.' : null
}

function whyNotServer(from, to) {
  if (isTest(from) || !from.startsWith('src/')) return null
  if (!to.startsWith('src/')) return 'The server may not import its tests or tools.'
  const [inner, target] = [from.slice(4), to.slice(4)]
  const floor = (path) => SERVER_FLOORS.find(([pattern]) => pattern.test(path))?.[1] ?? 1
  if (floor(target) > floor(inner))
    return 'Imports go platform ← modules ← data-source, demo ← compose ← app ← main, never back.'
  const [mine, theirs] = [moduleOf(inner), moduleOf(target)]
  if (mine !== null && theirs !== null && mine !== theirs && target !== `modules/${theirs}/index.ts`)
    return `Reach module "${theirs}" through its index.ts only.`
  return null
}

const moduleOf = (path) => /^modules\/([^/]+)\//.exec(path)?.[1] ?? null

function whyNotWeb(from, to) {
  if (isTest(from) || !from.startsWith('src/')) return null
  const [mine, theirs] = [from.split('/')[1], to.split('/')[1]]
  if (!(WEB_CLOSED[mine] ?? []).includes(theirs)) return null
  const saysSo = mine === 'components' && theirs === 'stores' && /Store/.test(posix.basename(from))
  return saysSo ? null : `${mine} may not import ${theirs}.`
}

/** The file that a specifier means, or null where it names a package. Follows `.js` to `.ts`, and the web's `@/`. */
function fileOf(specifier, importer, root) {
  const base = specifier.startsWith('@/')
    ? join(root, 'apps/web/src', specifier.slice(2))
    : specifier.startsWith('.')
      ? resolve(dirname(importer), specifier)
      : null
  if (base === null) return null
  const plain = base.replace(/\?.*$/, '')
  const typescript = plain.replace(/\.js$/, '.ts')
  const candidates = [typescript, `${plain}.ts`, `${plain}.vue`, join(plain, 'index.ts'), plain]
  return candidates.find((path) => existsSync(path) && statSync(path).isFile()) ?? typescript
}

const fromRoot = (path, root) => relative(root, path).split(sep).join('/')

const sourcesOf = (visit) => ({
  ImportDeclaration: (node) => visit(node.source),
  ExportAllDeclaration: (node) => visit(node.source),
  ExportNamedDeclaration: (node) => node.source && visit(node.source),
  ImportExpression: (node) => node.source.type === 'Literal' && visit(node.source),
})

const importDirection = {
  meta: { type: 'problem', schema: [] },
  create(context) {
    const root = context.cwd
    const from = fromRoot(context.filename, root)
    return {
      Program(node) {
        if (/^apps\/api\/src\/(.*\/)?(utils|helpers|common)\//.test(from))
          context.report({
            node,
            message: 'Name the folder after what is in it: no utils, helpers or common in the server.',
          })
      },
      ...sourcesOf((source) => {
        const file = fileOf(source.value, context.filename, root)
        const message = whyNot(from, file && fromRoot(file, root), source.value)
        if (message) context.report({ node: source, message })
      }),
    }
  },
}

/** What each file imports when it is loaded. Types alone and lazy imports make no cycle at load time. */
const edges = new Map()
const STATIC = /^[ \t]*(?:import|export)\s+(?!type\b)(?:[\w*\s{},$]*?\sfrom\s+)?['"]([^'"\n]+)['"]/gm

function importsOf(file, root) {
  if (!/\.(ts|vue|mjs|js)$/.test(file) || !existsSync(file)) return []
  const { mtimeMs } = statSync(file)
  const known = edges.get(file)
  if (known?.mtimeMs === mtimeMs) return known.targets
  const targets = [...readFileSync(file, 'utf8').matchAll(STATIC)]
    .map((match) => fileOf(match[1], file, root))
    .filter((target) => target !== null)
  edges.set(file, { mtimeMs, targets })
  return targets
}

/** The shortest way from `start` back to `goal` along imports, both ends named, or null. */
function wayBack(start, goal, root) {
  const cameFrom = new Map([[start, null]])
  const queue = [start]
  for (const file of queue) {
    if (file === goal) {
      const way = []
      for (let step = file; step !== null; step = cameFrom.get(step)) way.unshift(fromRoot(step, root))
      return way
    }
    for (const next of importsOf(file, root)) {
      if (cameFrom.has(next)) continue
      cameFrom.set(next, file)
      queue.push(next)
    }
  }
  return null
}

const noCycle = {
  meta: { type: 'problem', schema: [] },
  create(context) {
    const root = context.cwd
    const visit = (node) => {
      if (!node.source || node.importKind === 'type' || node.exportKind === 'type') return
      const file = fileOf(node.source.value, context.filename, root)
      const way = file && wayBack(file, context.filename, root)
      if (way)
        context.report({
          node: node.source,
          message: `Imports go in a circle: ${[fromRoot(context.filename, root), ...way].join(' → ')}`,
        })
    }
    return { ImportDeclaration: visit, ExportAllDeclaration: visit, ExportNamedDeclaration: visit }
  },
}

export default { rules: { 'import-direction': importDirection, 'no-cycle': noCycle } }
