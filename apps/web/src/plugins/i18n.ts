import { createI18n } from 'vue-i18n'
import en from '@/locales/en'
import { compileMessage } from './compileMessage'

/** Sentences live in `locales/`; screens reach them through `useText()`, which knows every key. */
export const i18n = createI18n({
  legacy: false,
  locale: 'en',
  fallbackLocale: 'en',
  messages: { en },
  messageCompiler: (message) => compileMessage(message as string),
  missingWarn: import.meta.env.DEV,
  fallbackWarn: false,
})
