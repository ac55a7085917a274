import { gs1Day } from './date.js'
import type { Identifier, ValuePart } from './gs1-identifiers.js'
import { hasGs1CheckDigit } from './gtin.js'
import { refuse, type Refusal } from './label.js'

/** One element of a GS1 label: application identifier and value. */
export interface Element {
  readonly ai: string
  readonly value: string
}

const SET_82 = '!"%&\'()*+,-./0123456789:;<=>?ABCDEFGHIJKLMNOPQRSTUVWXYZ_abcdefghijklmnopqrstuvwxyz'

/** Characters that each kind of value may hold (GS1 General Specifications, section 7.11). */
const ALLOWED: Readonly<Record<ValuePart['set'], RegExp>> = {
  N: /^[0-9]*$/,
  X: /^[!"%-?A-Z_a-z]*$/,
  Y: /^[#\-/0-9A-Z]*$/,
  Z: /^[A-Za-z0-9\-_=]*$/,
}

/** What people call the element; the others are named by their identifier. */
const NAMES: Readonly<Record<string, string>> = {
  '01': 'GTIN',
  '10': 'lot',
  '11': 'date of manufacture',
  '17': 'use-by date',
  '21': 'serial number',
}

export const nameOf = (ai: string): string => (NAMES[ai] ? `${NAMES[ai]} (${ai})` : `element (${ai})`)

/** Weights of the check pair of a GMN, from the right: the first primes, one for each character. */
const PRIMES = [2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53, 59, 61, 67, 71, 73, 79, 83]
const PAIR_CHARACTERS = '23456789ABCDEFGHJKLMNPQRSTUVWXYZ'

/**
 * Whether the last two characters are the check pair of the others, as in AI 8013 and 8014: sum of place in
 * set 82 times a prime, modulo 1021, written with 32 characters.
 *
 * @see GS1 General Specifications, section 7.9.5 (the section number is from memory).
 */
export function hasGs1CheckPair(value: string): boolean {
  const body = value.slice(0, -2)
  if (body === '' || body.length > PRIMES.length) return false
  let sum = 0
  for (const [index, character] of [...body].reverse().entries()) {
    sum += SET_82.indexOf(character) * (PRIMES[index] ?? 0)
  }
  const rest = sum % 1021
  return value.slice(-2) === `${PAIR_CHARACTERS[rest >> 5] ?? ''}${PAIR_CHARACTERS[rest & 31] ?? ''}`
}

const isBelow = (limit: number, text: string): boolean => Number(text) < limit

function checkRule(ai: string, part: ValuePart, text: string, today: string): Refusal | null {
  switch (part.rule) {
    case 'csum':
      return hasGs1CheckDigit(text)
        ? null
        : refuse('check-digit', `The check digit of the ${nameOf(ai)} ${text} is wrong.`)
    case 'csumalpha':
      return hasGs1CheckPair(text)
        ? null
        : refuse('check-digit', `The check characters of the ${nameOf(ai)} ${text} are wrong.`)
    case 'yymmd0':
    case 'yymmdd': {
      const found = gs1Day(text, today, part.rule === 'yymmd0')
      return found.ok
        ? null
        : refuse('no-such-date', `The ${nameOf(ai)} ${text} is no date: its ${found.why}.`)
    }
    case 'hhmi':
      return isBelow(24, text.slice(0, 2)) && isBelow(60, text.slice(2))
        ? null
        : refuse('no-such-date', `The time ${text} in ${nameOf(ai)} does not exist.`)
    case 'hh':
      return isBelow(24, text)
        ? null
        : refuse('no-such-date', `The hour ${text} in ${nameOf(ai)} does not exist.`)
    case 'mmss':
      return text.length % 2 === 0 && isBelow(60, text.slice(0, 2)) && isBelow(60, text.slice(2))
        ? null
        : refuse('no-such-date', `The time ${text} in ${nameOf(ai)} does not exist.`)
    case 'zero':
      return text === '0' ? null : refuse('bad-character', `The ${nameOf(ai)} must begin with 0.`)
    default:
      return null
  }
}

function tooLong(identifier: Identifier, length: number): Refusal {
  const detail = `The ${nameOf(identifier.ai)} has ${length} characters, at most ${identifier.maxLength} are allowed.`
  if (identifier.ai === '10')
    return refuse('lot-too-long', `${detail} Perhaps the scanner leaves out the separators.`)
  return refuse(identifier.ai === '21' ? 'serial-too-long' : 'data-too-long', detail)
}

/** Says the character so that a person can find it: by sight, or by its code where there is nothing to see. */
function shown(character: string): string {
  if (character === ' ') return 'a space'
  return /^[!-~]$/.test(character) ? character : `code ${character.codePointAt(0) ?? 0}`
}

/**
 * What is wrong with a value, by length, characters, check digit and date, or `null`.
 * @param today the house's day, `YYYY-MM-DD`; settles the century of dates.
 */
export function checkValue(identifier: Identifier, value: string, today: string): Refusal | null {
  const { ai } = identifier
  if (value === '') return refuse('empty-value', `There is nothing in the ${nameOf(ai)}.`)
  if (value.length > identifier.maxLength) return tooLong(identifier, value.length)
  if (value.length < identifier.minLength) {
    return refuse(
      'truncated',
      `The ${nameOf(ai)} is cut short: ${value.length} of ${identifier.minLength} characters.`,
    )
  }
  let rest = value
  for (const part of identifier.parts) {
    const text = rest.slice(0, part.max)
    rest = rest.slice(part.max)
    if (text === '') continue
    const allowed = ALLOWED[part.set]
    const bad = [...text].find((character) => !allowed.test(character))
    if (bad !== undefined) {
      return refuse('bad-character', `The ${nameOf(ai)} holds ${shown(bad)}, which is not allowed there.`)
    }
    const broken = checkRule(ai, part, text, today)
    if (broken) return broken
  }
  return null
}
