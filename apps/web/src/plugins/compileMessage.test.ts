import { describe, expect, test } from 'vitest'
import { createI18n } from 'vue-i18n'
import en from '@/locales/en'
import { compileMessage } from './compileMessage'

function say(sentence: string, named: Record<string, string | number> = {}, count?: number): string {
  const { t } = createI18n({
    legacy: false,
    locale: 'en',
    messageCompiler: (message) => compileMessage(message as string),
    messages: { en: { sentence } },
  }).global
  return count === undefined ? t('sentence', named) : t('sentence', { n: count, ...named }, count)
}

describe('sentences', () => {
  test.each([
    { sentence: 'Sign in', said: 'Sign in' },
    { sentence: 'Room {number}', named: { number: 3 }, said: 'Room 3' },
    { sentence: '{ a }, {b}', named: { a: 'x', b: 'y' }, said: 'x, y' },
    { sentence: "a {'|'} b {'@'} c {'{x}'}", said: 'a | b @ c {x}' },
    { sentence: 'ifeoma@larchwater.example', said: 'ifeoma@larchwater.example' },
    { sentence: 'gone: {what}', said: 'gone: ' },
  ])('$sentence → $said', ({ sentence, named, said }) => {
    expect(say(sentence, named)).toBe(said)
  })

  test.each([
    { sentence: '1 package | {n} packages', count: 1, said: '1 package' },
    { sentence: '1 package | {n} packages', count: 0, said: '0 packages' },
    { sentence: '1 package | {n} packages', count: 7, said: '7 packages' },
    { sentence: 'none | one | {n} in all', count: 0, said: 'none' },
    { sentence: 'none | one | {n} in all', count: 1, said: 'one' },
    { sentence: 'none | one | {n} in all', count: 2, said: '2 in all' },
  ])('$sentence, counted $count → $said', ({ sentence, count, said }) => {
    expect(say(sentence, {}, count)).toBe(said)
  })

  test.each(['open {name', 'empty {}', 'wrong {1}', 'closed }'])('%s is refused', (sentence) => {
    expect(() => compileMessage(sentence)).toThrow(SyntaxError)
  })
})

test('every sentence of the locale can be read', () => {
  const sentences = (tree: object): string[] =>
    Object.values(tree).flatMap((one: unknown) =>
      typeof one === 'string' ? [one] : sentences(one as object),
    )
  const all = sentences(en)
  expect(all.length).toBeGreaterThan(100)
  for (const sentence of all) expect(() => compileMessage(sentence), sentence).not.toThrow()
})
