import type { Plugin } from 'vite'

const SCHEMAS = /\/zod\/v4\/classic\/schemas\.js$/
const METHODS =
  'import { createStandardJSONSchemaMethod, createToJSONSchemaMethod } from "../core/to-json-schema.js";'
const PROCESSOR = /^\s*inst\._zod\.processJSONSchema = \(ctx, json, params\) => processors\.\w+\(.*\);$/gm

/**
 * Leaves JSON Schema out of the schemas that browsers get: the server writes OpenAPI, a screen only parses. It is
 * 8 kB of what a tablet loads first. A zod that is built otherwise fails the build here and is looked at again.
 */
export function leanZod(): Plugin {
  return {
    name: 'bellpull:lean-zod',
    apply: 'build',
    transform(code, id) {
      if (!SCHEMAS.test(id)) return null
      if (!code.includes(METHODS) || code.match(PROCESSOR) === null)
        this.error('zod is built otherwise than this plugin knows: see build/lean-zod.ts')
      const without = code
        .replace(
          METHODS,
          'const createStandardJSONSchemaMethod = () => undefined, createToJSONSchemaMethod = () => () => undefined;',
        )
        .replace(PROCESSOR, '')
      return { code: without, map: null }
    },
  }
}
