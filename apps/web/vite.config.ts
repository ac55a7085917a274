/// <reference types="vitest/config" />
import { fileURLToPath } from 'node:url'
import vue from '@vitejs/plugin-vue'
import { defaultClientConditions, defineConfig } from 'vite'
import vuetify from 'vite-plugin-vuetify'
import { iconFont } from './build/icon-font.ts'
import { leanZod } from './build/lean-zod.ts'

/** Where the API runs while the web is served by Vite for development. */
const api = process.env['BELLPULL_API'] ?? 'http://127.0.0.1:8420'

export default defineConfig({
  plugins: [vue(), vuetify({ autoImport: true }), iconFont(), leanZod()],
  resolve: {
    alias: { '@': fileURLToPath(new URL('src', import.meta.url)) },
    // Workspace packages are read from their sources: no build to wait for, none to be old.
    conditions: ['source', ...defaultClientConditions],
  },
  define: {
    __VUE_OPTIONS_API__: false,
    __VUE_PROD_DEVTOOLS__: false,
    __VUE_I18N_LEGACY_API__: false,
    __VUE_I18N_FULL_INSTALL__: false,
    __INTLIFY_PROD_DEVTOOLS__: false,
    // Sentences are compiled by plugins/compileMessage.ts.
    __INTLIFY_DROP_MESSAGE_COMPILER__: true,
  },
  server: {
    host: '127.0.0.1',
    proxy: {
      '/api': api,
      '/socket.io': { target: api, ws: true },
    },
  },
  // A test reads the tokens' styles; all others are left out of tests.
  test: { css: { include: [/tokens\.css/] } },
  build: { target: 'es2022', assetsInlineLimit: 0, reportCompressedSize: true },
})
