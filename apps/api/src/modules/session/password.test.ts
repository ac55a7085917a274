import { describe, expect, it } from 'vitest'
import { BLOCKED_PASSWORDS } from './blocked-passwords.js'
import { hashPassword, matchesPassword, PASSWORD_MIN, whyUnfitPassword } from './password.js'

describe('a password', () => {
  it.each([
    ['three plain words', 'linen brass cord', null],
    ['fifteen small letters', 'gkwpmzqxvbtrnlc', null],
    ['fourteen of them', 'gkwpmzqxvbtrnl', 'too-short'],
    ['fifteen letters of two code units each', '🜁🜂🜃🜄🜅🜆🜇🜈🜉🜊🜋🜌🜍🜎🜐', null],
    ['fourteen of them', '🜁🜂🜃🜄🜅🜆🜇🜈🜉🜊🜋🜌🜍🜎', 'too-short'],
    ['seventy-two bytes', 'gkwpmzqxvbtr'.repeat(5) + 'abcdefghijkq', null],
    [
      'seventy-three, of which the last would not count',
      'gkwpmzqxvbtr'.repeat(5) + 'abcdefghijkqz',
      'too-long',
    ],
    ['one letter over and over', 'aaaaaaaaaaaaaaaa', 'too-common'],
    ['one syllable over and over', 'lalalalalalalalala', 'too-common'],
    ['digits in a row', '123456789012345', 'too-common'],
    ['letters in a row, backwards', 'zyxwvutsrqponmlk', 'too-common'],
    ['a listed one, dressed up', 'Correct-Horse Battery!Staple', 'too-common'],
    ['a name and a year', 'IfeomaBrindlecombe26', 'holds-own-name'],
    ['a name in a sentence', 'why brindlecombe carries nine umbrellas', null],
  ] as const)('%s: %s', (_what, password, fault) => {
    expect(whyUnfitPassword(password, ['Ifeoma Brindlecombe', 'brindlecombe'])).toBe(fault)
  })

  it('needs no capital, digit or sign', () => {
    expect(whyUnfitPassword('walnut gravel orchid')).toBeNull()
  })

  it('is the same however the keyboard composed its letters (NFKC)', async () => {
    const hash = await hashPassword('caf\u00e9 by the harbour')
    expect(await matchesPassword('cafe\u0301 by the harbour', hash)).toBe(true)
    expect(await matchesPassword('cafe by the harbour', hash)).toBe(false)
  })

  it('is never hashed in part', async () => {
    await expect(hashPassword('x'.repeat(73))).rejects.toThrow(RangeError)
  })
})

describe('the block list', () => {
  it('holds only what would be long enough, in the form that is compared', () => {
    for (const listed of BLOCKED_PASSWORDS) {
      expect(listed).toMatch(/^[a-z0-9]+$/)
      expect(listed.length).toBeGreaterThanOrEqual(PASSWORD_MIN)
      expect(whyUnfitPassword(listed)).toBe('too-common')
    }
  })
})
