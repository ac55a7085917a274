import { readFileSync, readdirSync } from 'node:fs'
import { createRequire } from 'node:module'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import subsetFont from 'subset-font'
import type { Plugin } from 'vite'

const STYLES = 'virtual:icons.css'
const SOURCES = fileURLToPath(new URL('../src', import.meta.url))

/** Glyphs that Vuetify's own components draw (alert, select, text field, checkbox, dialog). */
const BY_VUETIFY = [
  'mdi-alert-circle',
  'mdi-check',
  'mdi-check-circle',
  'mdi-checkbox-blank-outline',
  'mdi-checkbox-marked',
  'mdi-chevron-down',
  'mdi-chevron-left',
  'mdi-chevron-right',
  'mdi-chevron-up',
  'mdi-close',
  'mdi-close-circle',
  'mdi-information',
  'mdi-menu-down',
  'mdi-minus-box',
  'mdi-radiobox-blank',
  'mdi-radiobox-marked',
]

/**
 * `import 'virtual:icons.css'` gives the icon font, cut down to the glyphs whose names (`mdi-…`) stand in the
 * sources, and the styles for exactly those. The whole font is 400 kB and its styles 350 kB; this is a few kB.
 */
export function iconFont(): Plugin {
  let serving = false
  return {
    name: 'bellpull:icon-font',
    configResolved(config) {
      serving = config.command === 'serve'
    },
    resolveId(id) {
      return id === STYLES ? `\0${STYLES}` : null
    },
    async load(id) {
      if (id !== `\0${STYLES}`) return null
      const glyphs = glyphsInUse()
      const font = await cut(glyphs)
      const url = serving
        ? `data:font/woff2;base64,${font.toString('base64')}`
        : placeholder(this.emitFile({ type: 'asset', name: 'icons.woff2', source: font }))
      return stylesFor(glyphs, url)
    },
    /** Styles are written by Vite itself, so the address of the font is put in at the very end. */
    generateBundle(_options, bundle) {
      for (const file of Object.values(bundle)) {
        if (file.type !== 'asset' || !file.fileName.endsWith('.css')) continue
        const text = typeof file.source === 'string' ? file.source : Buffer.from(file.source).toString('utf8')
        file.source = text.replace(
          PLACEHOLDER,
          (_match, reference: string) => `/${this.getFileName(reference)}`,
        )
      }
    },
  }
}

/** A data address, for Vite leaves those alone until the end. */
const placeholder = (reference: string): string => `data:icon-font,${reference},`
const PLACEHOLDER = /data:icon-font,([^,]+),/g

interface Glyph {
  readonly name: string
  readonly codePoint: number
}

/** @throws {Error} when a source names an icon that the font does not have. */
function glyphsInUse(): Glyph[] {
  const known = codePoints()
  const named = new Set(BY_VUETIFY)
  for (const file of sourceFiles(SOURCES))
    for (const [name] of readFileSync(file, 'utf8').matchAll(/\bmdi-[a-z0-9]+(?:-[a-z0-9]+)*\b/g))
      named.add(name)
  return [...named].sort().map((name) => {
    const codePoint = known.get(name)
    if (codePoint === undefined) throw new Error(`There is no icon ${name}`)
    return { name, codePoint }
  })
}

function sourceFiles(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    const path = join(folder, entry.name)
    if (entry.isDirectory()) return sourceFiles(path)
    return /\.(vue|ts)$/.test(entry.name) ? [path] : []
  })
}

const packageFolder = (): string => dirname(createRequire(import.meta.url).resolve('@mdi/font/package.json'))

function codePoints(): Map<string, number> {
  const css = readFileSync(join(packageFolder(), 'css/materialdesignicons.css'), 'utf8')
  const pairs = css.matchAll(/\.(mdi-[a-z0-9-]+)::before\s*\{\s*content:\s*"\\([0-9A-F]+)"/g)
  return new Map([...pairs].map(([, name = '', hex = '']) => [name, Number.parseInt(hex, 16)]))
}

async function cut(glyphs: readonly Glyph[]): Promise<Buffer> {
  const font = readFileSync(join(packageFolder(), 'fonts/materialdesignicons-webfont.woff2'))
  const text = String.fromCodePoint(...glyphs.map(({ codePoint }) => codePoint))
  return await subsetFont(font, text, { targetFormat: 'woff2' })
}

function stylesFor(glyphs: readonly Glyph[], url: string): string {
  const rules = glyphs.map(
    ({ name, codePoint }) => `.${name}::before{content:"\\${codePoint.toString(16).toUpperCase()}"}`,
  )
  return `@font-face{font-family:"Material Design Icons";src:url("${url}") format("woff2");font-weight:400;font-style:normal;font-display:block}
.mdi::before{display:inline-block;font:normal normal normal 24px/1 "Material Design Icons";font-size:inherit;text-rendering:auto;line-height:inherit;-webkit-font-smoothing:antialiased}
${rules.join('\n')}`
}
