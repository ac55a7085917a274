import type { Refusal } from '@/composables/useCommand'
import type { Text } from '@/composables/useText'

/** "SLB-HD-50C, lot L26A014": whatever a refusal says of one side of the comparison. */
function inWords(value: unknown): string {
  if (typeof value !== 'object' || value === null) return ''
  return Object.values(value)
    .filter((one): one is string => typeof one === 'string' && one !== '' && one !== 'either')
    .join(', ')
}

const dayOf = (value: unknown): string | null =>
  typeof value === 'object' && value !== null && 'useByOn' in value && typeof value.useByOn === 'string'
    ? value.useByOn
    : null

/**
 * Both values of a refusal that compares two, each on a line of its own; else what the house says of it.
 *
 * @param day puts a day `YYYY-MM-DD` into words.
 */
export function differences(
  problem: Refusal['problem'],
  t: Text['t'],
  day: (on: string) => string,
): string[] {
  const [called, read] = [problem?.members['expected'], problem?.members['scanned']]
  const [inRecord, onLabel] = [dayOf(called), dayOf(read)]
  if (inRecord !== null && onLabel !== null)
    return [
      t('fetch.inRecord', { what: t('fetch.useBy', { day: day(inRecord) }) }),
      t('fetch.scanned', { what: t('fetch.useBy', { day: day(onLabel) }) }),
    ]
  const [expected, scanned] = [inWords(called), inWords(read)]
  return [
    ...(expected ? [t('fetch.expected', { what: expected })] : []),
    ...(scanned ? [t('fetch.scanned', { what: scanned })] : []),
    ...(!expected && !scanned && problem?.detail ? [problem.detail] : []),
  ]
}
