import { refuse, type Refusal } from './label.js'

const DIGITS = /^[0-9]+$/

/**
 * The GS1 check digit for the digits before it, as in GTIN, SSCC and GLN: weights 3, 1, 3, ... from the
 * right, then up to the next ten.
 *
 * @param body the digits without the check digit.
 * @throws {RangeError} when `body` is not digits alone.
 * @see GS1, "How to calculate a check digit manually": 629104150021 gives 3.
 */
export function gs1CheckDigit(body: string): number {
  if (!DIGITS.test(body)) throw new RangeError(`needs digits, got ${JSON.stringify(body)}`)
  let sum = 0
  for (let fromRight = 0; fromRight < body.length; fromRight += 1) {
    sum += Number(body[body.length - 1 - fromRight]) * (fromRight % 2 === 0 ? 3 : 1)
  }
  return (10 - (sum % 10)) % 10
}

/** Whether the last of these digits is the check digit of the others. */
export function hasGs1CheckDigit(digits: string): boolean {
  return (
    digits.length > 1 && DIGITS.test(digits) && gs1CheckDigit(digits.slice(0, -1)) === Number(digits.at(-1))
  )
}

/** Digits of an EAN-8, UPC-A, EAN-13 and GTIN-14. */
export const GTIN_LENGTHS: readonly number[] = [8, 12, 13, 14]

/**
 * Any GTIN as the fourteen digits under which the house keeps it: shorter ones get zeros in front, which
 * leaves the check digit as it is.
 */
export function toGtin14(digits: string): { readonly ok: true; readonly gtin: string } | Refusal {
  if (digits === '') return refuse('empty-value', 'There are no digits in the GTIN.')
  if (!DIGITS.test(digits)) return refuse('bad-character', 'A GTIN has digits only.')
  if (!GTIN_LENGTHS.includes(digits.length)) {
    return digits.length > 14
      ? refuse('data-too-long', `A GTIN has at most 14 digits, this has ${digits.length}.`)
      : refuse('truncated', `A GTIN has 8, 12, 13 or 14 digits, this has ${digits.length}.`)
  }
  if (!hasGs1CheckDigit(digits)) return refuse('check-digit', `The check digit of GTIN ${digits} is wrong.`)
  return { ok: true, gtin: digits.padStart(14, '0') }
}
