import bcrypt from 'bcryptjs'
import { BLOCKED_PASSWORDS } from './blocked-passwords.js'

/** Shortest password, in characters (code points after NFKC). */
export const PASSWORD_MIN = 15

/** bcrypt reads this many bytes and would ignore the rest without a word. */
export const PASSWORD_MAX_BYTES = 72

/** Cost of a hash: 2^10 rounds. */
const ROUNDS = 10

export type PasswordFault = 'too-short' | 'too-long' | 'too-common' | 'holds-own-name'

/** The same characters for everybody, however the keyboard composed them. */
const normal = (password: string): string => password.normalize('NFKC')

/**
 * Why this may not be somebody's password, or `null` when it may. Length and a block list; nothing about
 * capitals, digits or signs, and everything may be pasted.
 *
 * @param about words that name the person or the house: name, e-mail, house name.
 */
export function whyUnfitPassword(password: string, about: readonly string[] = []): PasswordFault | null {
  const text = normal(password)
  if ([...text].length < PASSWORD_MIN) return 'too-short'
  if (Buffer.byteLength(text) > PASSWORD_MAX_BYTES) return 'too-long'
  const plain = text.toLowerCase().replace(/[^\p{L}\p{N}]/gu, '')
  if (BLOCKED_PASSWORDS.has(plain) || isRepeated(text) || isRun(text)) return 'too-common'
  const names = about.map((name) => name.toLowerCase().replace(/[^\p{L}\p{N}]/gu, '')).filter(Boolean)
  // Own names may be part of a longer sentence, but not nearly all of it.
  if (names.some((name) => plain.includes(name) && [...plain.replaceAll(name, '')].length < PASSWORD_MIN / 2))
    return 'holds-own-name'
  return null
}

/** One piece of up to five characters, over and over. */
const isRepeated = (text: string): boolean => /^(.{1,5}?)\1+.{0,4}$/su.test(text) && new Set(text).size <= 5

/** Each character follows the one before it: 123456…, abcdef…, or the same backwards. */
function isRun(text: string): boolean {
  const points = [...text.toLowerCase()].map((character) => character.codePointAt(0) ?? 0)
  const steps = points.slice(1).map((point, index) => point - (points[index] ?? 0))
  // 9 to 0 continues a row of digits.
  const inRow = (step: number): boolean => step === 1 || step === -9
  return steps.every(inRow) || steps.every((step) => inRow(-step))
}

/** @throws {RangeError} when bcrypt would not read all of it. */
export async function hashPassword(password: string): Promise<string> {
  const text = normal(password)
  if (Buffer.byteLength(text) > PASSWORD_MAX_BYTES) throw new RangeError('password is too long to be hashed')
  return await bcrypt.hash(text, ROUNDS)
}

/** A PIN rests like a password. It is short: what protects it is the limit on wrong ones. */
export const hashPin = (pin: string): Promise<string> => bcrypt.hash(pin, ROUNDS)

export const matchesPassword = (password: string, hash: string): Promise<boolean> =>
  bcrypt.compare(normal(password), hash)

export const matchesPin = (pin: string, hash: string): Promise<boolean> => bcrypt.compare(pin, hash)
