import { useI18n } from 'vue-i18n'
import type en from '@/locales/en'

/** The dotted paths of a tree of sentences. */
type Paths<T> = {
  [K in keyof T & string]: T[K] extends string ? K : `${K}.${Paths<T[K]>}`
}[keyof T & string]

/** Every sentence there is, `area.key`. A key that does not exist fails the type-check. */
export type TextKey = Paths<typeof en>

export interface Text {
  /**
   * The sentence of a key.
   *
   * @param named what stands in braces: `t('common.room', { number: 3 })`.
   */
  t(key: TextKey, named?: Record<string, string | number>): string
  /** The sentence for a count; forms are parted by `|`: `'none | one | {n}'` or `'one | {n}'`. */
  n(key: TextKey, count: number, named?: Record<string, string | number>): string
}

/** The only way to sentences on screen. */
export function useText(): Text {
  const { t } = useI18n({ useScope: 'global' })
  return {
    t: (key, named) => (named ? t(key, named) : t(key)),
    n: (key, count, named) => t(key, { n: count, ...named }, count),
  }
}
