import { gs1CheckDigit } from '@bellpull/domain'

/** Numbers of the makers within the prefix that is kept for examples. */
export const MAKER = { bracklethwaite: 1, gannetholme: 2, tansyhill: 3, hobbinwick: 4 } as const
export type Maker = keyof typeof MAKER

/**
 * GTIN of a demo product: 0, the GS1 prefix 952, 1, maker, family (3 digits), variant (1), size (3), check digit.
 *
 * @param number three digits at most: the size, or what stands for it.
 * @throws {RangeError} when a part does not fit its digits.
 */
export function gtinOf(maker: Maker, family: number, variant: number, number: number): string {
  if (family > 999 || variant > 9 || number > 999) throw new RangeError('part of a GTIN too long')
  const digits = (value: number, length: number) => String(value).padStart(length, '0')
  const body = `09521${MAKER[maker]}${digits(family, 3)}${variant}${digits(number, 3)}`
  return `${body}${gs1CheckDigit(body)}`
}
